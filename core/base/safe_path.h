/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Names that a manifest gives: what they may look like, and opening them without ever leaving the folder. */
#pragma once

#include <glib.h>
#include <stdbool.h>
#include <sys/stat.h>

/* UTF-8, relative, parts parted by "/", none empty, "." or ".."; no "%", "\", control character; at most
 * 4,095 bytes. `where` begins the error's sentence. */
bool hw_safe_path_check(const char *name, const char *where, GError **error);

/* What a name is compared by where two may not differ in case only. Owned by the caller. */
char *hw_safe_path_dup_folded(const char *name);

/* Opens a checked name below the folder for reading: a regular file, no link at any component.
 * −1 with error; ENOENT gives HW_BASE_ERROR_NOT_FOUND, a link or another kind of file HW_BASE_ERROR_UNSAFE.
 */
int hw_safe_path_open(int folder_fd, const char *name, const char *where, GError **error);

/* Its status without opening it, under the same rules. */
bool hw_safe_path_stat(int folder_fd, const char *name, const char *where, struct stat *about,
                       GError **error);
