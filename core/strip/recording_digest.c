/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/base/base_error.h"
#include "core/base/safe_path.h"
#include "core/strip/recording_private.h"

#include <errno.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

typedef struct {
    HwProgress progress;
    gpointer user_data;
    GCancellable *cancellable;
    double files;      /* how many there are */
    double files_done; /* whole ones */
} Work;

static int
compare_bytes(gconstpointer a, gconstpointer b)
{
    return strcmp(*(const char *const *)a, *(const char *const *)b);
}

static GPtrArray *
sorted_names(const HwRecording *recording)
{
    GPtrArray *names = g_ptr_array_new();
    g_ptr_array_add(names, (gpointer)HW_RECORDING_MANIFEST);
    for (guint i = 0; i < recording->blocks->len; i++) {
        const HwBlock *block = &g_array_index(recording->blocks, HwBlock, i);
        g_ptr_array_add(names, (gpointer)block->file);
        if (block->times_file != NULL)
            g_ptr_array_add(names, (gpointer)block->times_file);
    }
    g_ptr_array_sort(names, compare_bytes);
    return names;
}

/* One file, in pieces, so that a cancel is heard within a piece. */
static bool
digest_file(Work *work, int fd, const char *name, HwDigest *digest, GError **error)
{
    enum { PIECE = 1 << 18 };
    struct stat about;
    double size = fstat(fd, &about) == 0 && about.st_size > 0 ? (double)about.st_size : 1.0;
    double done = 0.0;
    g_autoptr(HwDigestSum) sum = hw_digest_sum_new();
    g_autofree unsigned char *piece = g_malloc(PIECE);
    for (;;) {
        if (g_cancellable_set_error_if_cancelled(work->cancellable, error))
            return false;
        ssize_t got = read(fd, piece, PIECE);
        if (got < 0 && errno == EINTR)
            continue;
        if (got < 0) {
            g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_IO, "%s cannot be read: %s; check the medium.",
                        name, g_strerror(errno));
            return false;
        }
        if (got == 0)
            break;
        hw_digest_sum_add(sum, piece, (size_t)got);
        done += (double)got;
        if (work->progress != NULL)
            work->progress((work->files_done + MIN(done / size, 1.0)) / work->files, work->user_data);
    }
    *digest = hw_digest_sum_finish(g_steal_pointer(&sum));
    return true;
}

bool
hw_recording_digest(const HwRecording *recording, HwProgress progress, gpointer user_data,
                    GCancellable *cancellable, bool *known, HwDigest *digest, GError **error)
{
    if (recording->folder_fd < 0) {
        *known = false;
        return true;
    }
    g_autoptr(GPtrArray) names = sorted_names(recording);
    Work work = { progress, user_data, cancellable, (double)names->len, 0.0 };
    g_autoptr(HwDigestSum) sum = hw_digest_sum_new();
    for (guint i = 0; i < names->len; i++) {
        const char *name = names->pdata[i];
        g_autoptr(GError) cause = NULL;
        int fd = hw_safe_path_open(recording->folder_fd, name, recording->path, &cause);
        if (fd < 0 && g_error_matches(cause, HW_BASE_ERROR, HW_BASE_ERROR_NOT_FOUND)) {
            *known = false;
            return true;
        }
        if (fd < 0) {
            g_propagate_error(error, g_steal_pointer(&cause));
            return false;
        }
        HwDigest file_digest;
        bool read_whole = digest_file(&work, fd, name, &file_digest, error);
        close(fd);
        if (!read_whole)
            return false;
        work.files_done += 1.0;
        /* The line of sha256sum: digest, two spaces, name. Names that it would escape are refused on opening.
         */
        hw_digest_sum_add(sum, file_digest.hex, HW_DIGEST_HEX);
        hw_digest_sum_add(sum, "  ", 2);
        hw_digest_sum_add(sum, name, strlen(name));
        hw_digest_sum_add(sum, "\n", 1);
    }
    *known = true;
    *digest = hw_digest_sum_finish(g_steal_pointer(&sum));
    return true;
}
