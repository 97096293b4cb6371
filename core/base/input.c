/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/base/input.h"

#include "core/base/base_error.h"

#include <errno.h>
#include <fcntl.h>
#include <stdint.h>
#include <sys/stat.h>
#include <unistd.h>

char *
hw_input_read_fd(int fd, const char *label, size_t max_bytes, size_t *size, GError **error)
{
    struct stat about;
    if (fstat(fd, &about) != 0) {
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_IO, "%s cannot be read: %s.", label,
                    g_strerror(errno));
        return NULL;
    }
    if (!S_ISREG(about.st_mode)) {
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_UNSAFE, "%s is not a regular file; name one.", label);
        return NULL;
    }
    if ((uint64_t)about.st_size > max_bytes) {
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_RANGE,
                    "%s is longer than %" G_GSIZE_FORMAT
                    " bytes, more than is read of such a file; check that it is "
                    "the right one.",
                    label, max_bytes);
        return NULL;
    }
    size_t wanted = (size_t)about.st_size;
    g_autofree char *data = g_try_malloc(wanted + 1);
    if (data == NULL) {
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_RANGE, "%s does not fit into memory.", label);
        return NULL;
    }
    size_t have = 0;
    while (have < wanted) {
        ssize_t got = read(fd, data + have, wanted - have);
        if (got < 0 && errno == EINTR)
            continue;
        if (got < 0) {
            g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_IO, "%s cannot be read: %s.", label,
                        g_strerror(errno));
            return NULL;
        }
        if (got == 0)
            break;
        have += (size_t)got;
    }
    data[have] = '\0';
    *size = have;
    return g_steal_pointer(&data);
}

char *
hw_input_read(const char *path, size_t max_bytes, size_t *size, GError **error)
{
    /* Not blocking, so that a FIFO put in the file's place is refused and not waited for. */
    int fd = open(path, O_RDONLY | O_CLOEXEC | O_NONBLOCK);
    if (fd < 0) {
        g_set_error(error, HW_BASE_ERROR, errno == ENOENT ? HW_BASE_ERROR_NOT_FOUND : HW_BASE_ERROR_IO,
                    "%s cannot be opened: %s; check the name.", path, g_strerror(errno));
        return NULL;
    }
    char *data = hw_input_read_fd(fd, path, max_bytes, size, error);
    close(fd);
    return data;
}
