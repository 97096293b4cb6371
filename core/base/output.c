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
    int fd;       /* of it, or of the device; −1 for standard output and once closed */
    bool force;
    GByteArray *kept; /* what standard output or a device gets at the commit; NULL for a file */
};

struct HwOutputFolder {
    char *path;
    char *beside;
    char *sign;
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
        return errno == EACCES; /* a drop box: may be written to, not looked into */
    /* Some file systems know no fsync of folders; they keep renames in order by themselves. */
    bool synced = fsync(fd) == 0 || errno == EINVAL || errno == EROFS;
    close(fd);
    return synced;
}

/* Puts a file at a free place. Network and user-space file systems know no RENAME_NOREPLACE: there a second
 * name does it, which is refused in one step too where the place is taken. */
static int
put_new(const char *from, const char *to)
{
    if (renameat2(AT_FDCWD, from, AT_FDCWD, to, RENAME_NOREPLACE) == 0)
        return 0;
    if (errno != EINVAL && errno != ENOSYS)
        return -1;
    if (link(from, to) == 0) {
        unlink(from);
        return 0;
    }
    if (errno == EEXIST)
        return -1;
    /* No second names either (FAT): looked at, then renamed. */
    if (exists(to)) {
        errno = EEXIST;
        return -1;
    }
    return rename(from, to);
}

/* A device or pipe at the output's place is written to; a rename would put a file where it stood. */
static bool
open_device(HwOutput *output, GError **error)
{
    output->fd = open(output->path, O_WRONLY | O_CLOEXEC | O_NOCTTY);
    if (output->fd < 0)
        return io_error(output->path, "written", error);
    output->kept = g_byte_array_new();
    return true;
}

static const char *
name_of(const HwOutput *output)
{
    return output->fd < 0 ? "Standard output" : output->path;
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
    struct stat about;
    if (stat(path, &about) == 0 && S_ISDIR(about.st_mode)) {
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_EXISTS, "%s is a folder; name a file.", path);
        return NULL;
    }
    if (stat(path, &about) == 0 && !S_ISREG(about.st_mode))
        return open_device(output, error) ? g_steal_pointer(&output) : NULL;
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
            return io_error(name_of(output), "written", error);
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
        return write_all(output->fd >= 0 ? output->fd : STDOUT_FILENO, output->kept->data,
                         output->kept->len) ||
               io_error(name_of(output), "written", error);

    bool flushed = fsync(output->fd) == 0;
    int saved = errno;
    bool closed = close(output->fd) == 0;
    output->fd = -1;
    if (!flushed)
        errno = saved;
    if (!flushed || !closed)
        return io_error(output->path, "written", error);
    if ((output->force ? rename(output->beside, output->path) : put_new(output->beside, output->path)) != 0)
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

static bool
refuse_foreign(const char *path, const char *sign, GError **error)
{
    g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_EXISTS,
                "%s is there and holds no %s, so it is not replaced even with --force; name another.", path,
                sign);
    return false;
}

/* Renames the folder to its free place. Where the file system knows no RENAME_NOREPLACE the place is looked
 * at first; a folder with anything in it can't be lost even so, since rename replaces empty ones only. */
static int
put_new_folder(const char *from, const char *to)
{
    if (renameat2(AT_FDCWD, from, AT_FDCWD, to, RENAME_NOREPLACE) == 0)
        return 0;
    if (errno != EINVAL && errno != ENOSYS)
        return -1;
    if (exists(to)) {
        errno = EEXIST;
        return -1;
    }
    return rename(from, to);
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
        refuse_foreign(trimmed, sign, error);
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
    folder->sign = g_strdup(sign);
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
    if (!replace && put_new_folder(folder->beside, folder->path) != 0)
        return errno == EEXIST ? refuse_existing(folder->path, error) : io_error(folder->path, "made", error);
    /* Looked at again: since it was opened another folder may have come to its place. */
    if (replace && !is_replaceable(folder->path, folder->sign))
        return refuse_foreign(folder->path, folder->sign, error);
    if (replace) {
        if (renameat2(AT_FDCWD, folder->beside, AT_FDCWD, folder->path, RENAME_EXCHANGE) != 0) {
            if (errno != EINVAL && errno != ENOSYS)
                return io_error(folder->path, "made", error);
            g_set_error(
                error, HW_BASE_ERROR, HW_BASE_ERROR_IO,
                "%s lies on a file system that cannot exchange two folders in one step; name another.",
                folder->path);
            return false;
        }
        remove_tree(folder->beside);
    }
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
    g_free(folder->sign);
    g_free(folder);
}
