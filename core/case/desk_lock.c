/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/case/desk_lock.h"

#include "core/case/case_error.h"

#include <errno.h>
#include <fcntl.h>
#include <stdbool.h>
#include <sys/file.h>
#include <sys/stat.h>
#include <unistd.h>

struct HwDeskLock {
    char *path;
    int fd;
};

/* The file locked is still the one at its name, and not one that its last holder has just removed. */
static bool
is_in_place(int fd, const char *path)
{
    struct stat held, named;
    return fstat(fd, &held) == 0 && stat(path, &named) == 0 && held.st_ino == named.st_ino &&
           held.st_dev == named.st_dev;
}

HwDeskLock *
hw_desk_lock_take(const char *case_path, GError **error)
{
    g_autofree char *path = g_strconcat(case_path, ".lock", NULL);
    for (;;) {
        int fd = open(path, O_RDWR | O_CREAT | O_CLOEXEC | O_NOFOLLOW, 0644);
        if (fd < 0) {
            g_set_error(error, HW_CASE_ERROR, HW_CASE_ERROR_READ_ONLY,
                        "%s can only be read: nothing can be written beside it (%s).", case_path,
                        g_strerror(errno));
            return NULL;
        }
        if (flock(fd, LOCK_EX | LOCK_NB) != 0) {
            close(fd);
            g_set_error(error, HW_CASE_ERROR, HW_CASE_ERROR_READ_ONLY,
                        "%s can only be read: another window or desk has it open for writing.", case_path);
            return NULL;
        }
        if (is_in_place(fd, path)) {
            HwDeskLock *lock = g_new(HwDeskLock, 1);
            *lock = (HwDeskLock){ g_steal_pointer(&path), fd };
            return lock;
        }
        close(fd);
    }
}

void
hw_desk_lock_release(HwDeskLock *lock)
{
    if (lock == NULL)
        return;
    unlink(lock->path);
    close(lock->fd);
    g_free(lock->path);
    g_free(lock);
}
