/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A small input file as a whole: regular, and no longer than its reader bears. */
#pragma once

#include <glib.h>
#include <stdbool.h>
#include <stddef.h>

/* Owned by the caller, NUL-ended beyond *size. NULL with a sentence that names the path and the mend. */
char *hw_input_read(const char *path, size_t max_bytes, size_t *size, GError **error);

/* The rest of an open descriptor, at most max_bytes; `label` names it. The descriptor stays the caller's. */
char *hw_input_read_fd(int fd, const char *label, size_t max_bytes, size_t *size, GError **error);
