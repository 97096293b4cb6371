/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/base/output.h"

#include "core/base/base_error.h"

#include <errno.h>
#include <fcntl.h>
#include <ftw.h>
#include <glib/gstdio.h>
#include <stdio.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

struct HwOutput {
    char *path;
    char *beside; /* the temporary file, NULL for standard output and once committed */
    int fd;       /* of it, or −1 */
    bool force;
    GByteArray *kept; /* for standard output */
};

struct HwOutputFolder {
    char *path;
    char *beside;
    bool force;
};

static bool
io_error(const char *path, const char *doing, GError **error)
{
    int code = errno;
    const char *mend =
        code == ENOSPC || code == EDQUOT ? "make room and try again" : "check the place and try again";
    g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_IO, "%s cannot be %s: %s; %s.", path, doing,
                g_strerror(code), mend);
    return false;
}

static bool
refuse_existing(const char *path, GError **error)
{
    g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_EXISTS,
                "%s is there already; name another, or add --force.", path);
    return false;
}

static bool
exists(const char *path)
{
    struct stat about;
    return lstat(path, &about) == 0;
}

static bool
write_all(int fd, const void *data, size_t size)
{
    const char *p = data;
    while (size > 0) {
        ssize_t done = write(fd, p, size);
        if (done < 0 && errno == EINTR)
            continue;
        if (done < 0)
            return false;
        p += done;
        size -= (size_t)done;
    }
    return true;
}

/* The folder's own entry on the disk; without it a rename can be lost with the power. */
static bool
sync_parent(const char *path)
{
    g_autofree char *parent = g_path_get_dirname(path);
    int fd = open(parent, O_RDONLY | O_DIRECTORY | O_CLOEXEC);
    if (fd < 0)
        return false;
    /* Some file systems know no fsync of folders; they keep renames in order by themselves. */
    bool synced = fsync(fd) == 0 || errno == EINVAL || errno == EROFS;
    close(fd);
    return synced;
}

static int
rename_new(const char *from, const char *to, bool force)
{
    return force ? rename(from, to) : renameat2(AT_FDCWD, from, AT_FDCWD, to, RENAME_NOREPLACE);
}

HwOutput *
hw_output_open(const char *path, bool force, GError **error)
{
    g_autoptr(HwOutput) output = g_new0(HwOutput, 1);
    output->path = g_strdup(path);
    output->force = force;
    output->fd = -1;
    if (strcmp(path, "-") == 0) {
        output->kept = g_byte_array_new();
        return g_steal_pointer(&output);
    }
    if (!force && exists(path)) {
        refuse_existing(path, error);
        return NULL;
    }
    output->beside = g_strconcat(path, ".XXXXXX", NULL);
    output->fd = g_mkstemp_full(output->beside, O_WRONLY | O_CLOEXEC, 0666);
    if (output->fd < 0) {
        g_clear_pointer(&output->beside, g_free);
        io_error(path, "written", error);
        return NULL;
    }
    return g_steal_pointer(&output);
}

bool
hw_output_write(HwOutput *output, const void *data, size_t size, GError **error)
{
    if (output->kept != NULL) {
        if (size > G_MAXUINT - output->kept->len) {
            errno = EFBIG;
            return io_error("Standard output", "written", error);
        }
        g_byte_array_append(output->kept, data, (guint)size);
        return true;
    }
    return write_all(output->fd, data, size) || io_error(output->path, "written", error);
}

bool
hw_output_commit(HwOutput *output, GError **error)
{
    if (output->kept != NULL)
        return write_all(STDOUT_FILENO, output->kept->data, output->kept->len) ||
               io_error("Standard output", "written", error);

    bool flushed = fsync(output->fd) == 0;
    int saved = errno;
    bool closed = close(output->fd) == 0;
    output->fd = -1;
    if (!flushed)
        errno = saved;
    if (!flushed || !closed)
        return io_error(output->path, "written", error);
    if (rename_new(output->beside, output->path, output->force) != 0)
        return errno == EEXIST ? refuse_existing(output->path, error)
                               : io_error(output->path, "written", error);
    g_clear_pointer(&output->beside, g_free);
    return sync_parent(output->path) || io_error(output->path, "kept for sure", error);
}

void
hw_output_free(HwOutput *output)
{
    if (output == NULL)
        return;
    if (output->fd >= 0)
        close(output->fd);
    if (output->beside != NULL)
        g_unlink(output->beside);
    g_free(output->beside);
    g_free(output->path);
    g_clear_pointer(&output->kept, g_byte_array_unref);
    g_free(output);
}

bool
hw_output_write_file(const char *path, bool force, const void *data, size_t size, GError **error)
{
    g_autoptr(HwOutput) output = hw_output_open(path, force, error);
    return output != NULL && hw_output_write(output, data, size, error) && hw_output_commit(output, error);
}

static int
remove_entry(const char *path, const struct stat *about, int kind, struct FTW *walk)
{
    (void)about;
    (void)kind;
    (void)walk;
    return remove(path);
}

static void
remove_tree(const char *path)
{
    nftw(path, remove_entry, 16, FTW_DEPTH | FTW_PHYS);
}

/* A folder of the kind that is being made, or an empty one. */
static bool
is_replaceable(const char *path, const char *sign)
{
    g_autofree char *signed_by = g_build_filename(path, sign, NULL);
    if (exists(signed_by))
        return true;
    g_autoptr(GDir) folder = g_dir_open(path, 0, NULL);
    return folder != NULL && g_dir_read_name(folder) == NULL;
}

HwOutputFolder *
hw_output_folder_open(const char *path, const char *sign, bool force, GError **error)
{
    g_autofree char *trimmed = g_strdup(path);
    for (size_t n = strlen(trimmed); n > 1 && trimmed[n - 1] == '/'; n--)
        trimmed[n - 1] = '\0';
    if (!force && exists(trimmed)) {
        refuse_existing(trimmed, error);
        return NULL;
    }
    if (exists(trimmed) && !is_replaceable(trimmed, sign)) {
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_EXISTS,
                    "%s is there and holds no %s, so it is not replaced even with --force; name another.",
                    trimmed, sign);
        return NULL;
    }
    g_autofree char *beside = g_strconcat(trimmed, ".XXXXXX", NULL);
    if (g_mkdtemp_full(beside, 0777) == NULL) {
        io_error(trimmed, "made", error);
        return NULL;
    }
    HwOutputFolder *folder = g_new0(HwOutputFolder, 1);
    folder->path = g_steal_pointer(&trimmed);
    folder->beside = g_steal_pointer(&beside);
    folder->force = force;
    return folder;
}

const char *
hw_output_folder_get_path(const HwOutputFolder *folder)
{
    return folder->beside;
}

bool
hw_output_folder_commit(HwOutputFolder *folder, GError **error)
{
    sync_parent(folder->beside);
    bool replace = folder->force && exists(folder->path);
    unsigned how = replace ? RENAME_EXCHANGE : RENAME_NOREPLACE;
    if (renameat2(AT_FDCWD, folder->beside, AT_FDCWD, folder->path, how) != 0)
        return errno == EEXIST ? refuse_existing(folder->path, error) : io_error(folder->path, "made", error);
    if (replace)
        remove_tree(folder->beside);
    g_clear_pointer(&folder->beside, g_free);
    return sync_parent(folder->path) || io_error(folder->path, "kept for sure", error);
}

void
hw_output_folder_free(HwOutputFolder *folder)
{
    if (folder == NULL)
        return;
    if (folder->beside != NULL)
        remove_tree(folder->beside);
    g_free(folder->beside);
    g_free(folder->path);
    g_free(folder);
}
