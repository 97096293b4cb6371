/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/base/safe_path.h"

#include "core/base/base_error.h"

#include <errno.h>
#include <fcntl.h>
#include <string.h>
#include <unistd.h>

enum { MAX_NAME_BYTES = 4095 };

/* Letters of any script stay as they are; what could move a terminal's cursor, and bytes that are no UTF-8,
 * are written as escapes. */
static char *
dup_printable(const char *name)
{
    GString *shown = g_string_new(NULL);
    for (const char *p = name; *p != '\0';) {
        gunichar c = g_utf8_get_char_validated(p, -1);
        bool is_text = c != (gunichar)-1 && c != (gunichar)-2;
        gsize bytes = is_text ? (gsize)(g_utf8_next_char(p) - p) : 1;
        if (is_text && g_unichar_isprint(c))
            g_string_append_len(shown, p, (gssize)bytes);
        else
            for (gsize i = 0; i < bytes; i++)
                g_string_append_printf(shown, "\\x%02x", (guchar)p[i]);
        p += bytes;
    }
    return g_string_free(shown, FALSE);
}

static bool
refuse(const char *where, const char *name, const char *reason, GError **error)
{
    g_autofree char *shown = dup_printable(name);
    g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_UNSAFE, "%s: the file name “%s” %s; rename the file.",
                where, shown, reason);
    return false;
}

bool
hw_safe_path_check(const char *name, const char *where, GError **error)
{
    if (*name == '\0')
        return refuse(where, name, "is empty", error);
    if (strlen(name) > MAX_NAME_BYTES)
        return refuse(where, "…", "is too long", error);
    if (!g_utf8_validate(name, -1, NULL))
        return refuse(where, name, "is not UTF-8", error);
    if (*name == '/')
        return refuse(where, name, "is absolute", error);
    if (strpbrk(name, "%\\") != NULL)
        return refuse(where, name, "holds “%” or “\\”", error);
    for (const char *p = name; *p != '\0'; p = g_utf8_next_char(p)) {
        if (g_unichar_iscntrl(g_utf8_get_char(p)))
            return refuse(where, name, "holds a control character", error);
    }
    for (const char *part = name;;) {
        size_t length = strcspn(part, "/");
        if (length == 0)
            return refuse(where, name, "has an empty part", error);
        if ((length == 1 && part[0] == '.') || (length == 2 && part[0] == '.' && part[1] == '.'))
            return refuse(where, name, "has a part “.” or “..”", error);
        if (part[length] == '\0')
            return true;
        part += length + 1;
    }
}

char *
hw_safe_path_dup_folded(const char *name)
{
    if (g_str_is_ascii(name))
        return g_ascii_strdown(name, -1);
    g_autofree char *composed = g_utf8_normalize(name, -1, G_NORMALIZE_NFC);
    return g_utf8_casefold(composed != NULL ? composed : name, -1);
}

/* Opens the folder that holds the last part of the name; *last is that part. The folder itself is given back
 * as a duplicate, so that the caller always closes what it gets. */
static int
open_parent(int folder_fd, const char *name, const char **last)
{
    int fd = fcntl(folder_fd, F_DUPFD_CLOEXEC, 0);
    for (const char *slash = strchr(name, '/'); fd >= 0 && slash != NULL; slash = strchr(name, '/')) {
        g_autofree char *part = g_strndup(name, (gsize)(slash - name));
        int next = openat(fd, part, O_PATH | O_DIRECTORY | O_NOFOLLOW | O_CLOEXEC);
        int saved = errno;
        close(fd);
        errno = saved;
        fd = next;
        name = slash + 1;
    }
    *last = name;
    return fd;
}

static void
set_open_error(const char *where, const char *name, GError **error)
{
    int code = errno;
    if (code == ENOENT)
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_NOT_FOUND,
                    "%s: the file “%s” is missing; put it back.", where, name);
    else if (code == ELOOP || code == ENOTDIR)
        g_set_error(
            error, HW_BASE_ERROR, HW_BASE_ERROR_UNSAFE,
            "%s: “%s” leads through a link, or through a file as if it were a folder; put the file itself "
            "there.",
            where, name);
    else if (code == ENXIO) /* a socket */
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_UNSAFE,
                    "%s: “%s” is not a regular file; put the file itself there.", where, name);
    else
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_IO, "%s: “%s” cannot be opened: %s.", where, name,
                    g_strerror(code));
}

static bool
is_regular(const struct stat *about, const char *where, const char *name, GError **error)
{
    if (S_ISREG(about->st_mode))
        return true;
    g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_UNSAFE, "%s: “%s” is %s; put the file itself there.",
                where, name, S_ISLNK(about->st_mode) ? "a link" : "not a regular file");
    return false;
}

bool
hw_safe_path_stat(int folder_fd, const char *name, const char *where, struct stat *about, GError **error)
{
    const char *last = name;
    bool nested = strchr(name, '/') != NULL;
    int parent = nested ? open_parent(folder_fd, name, &last) : folder_fd;
    int result = parent < 0 ? -1 : fstatat(parent, last, about, AT_SYMLINK_NOFOLLOW);
    int saved = errno;
    if (nested && parent >= 0)
        close(parent);
    errno = saved;
    if (result != 0) {
        set_open_error(where, name, error);
        return false;
    }
    return is_regular(about, where, name, error);
}

int
hw_safe_path_open(int folder_fd, const char *name, const char *where, GError **error)
{
    const char *last;
    int parent = open_parent(folder_fd, name, &last);
    /* Not blocking: a FIFO must not hold the reader up before it is refused. */
    int fd = parent < 0 ? -1 : openat(parent, last, O_RDONLY | O_NOFOLLOW | O_CLOEXEC | O_NONBLOCK);
    int saved = errno;
    if (parent >= 0)
        close(parent);
    errno = saved;
    if (fd < 0) {
        set_open_error(where, name, error);
        return -1;
    }
    struct stat about;
    if (fstat(fd, &about) != 0 || !is_regular(&about, where, name, error)) {
        if (error != NULL && *error == NULL)
            set_open_error(where, name, error);
        close(fd);
        return -1;
    }
    return fd;
}
