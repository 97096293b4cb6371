/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Text of unknown encoding into UTF-8, and the name of what was found, to be shown. */
#pragma once

#include <glib.h>
#include <stdbool.h>

typedef enum {
    HW_ENCODING_UTF8,
    HW_ENCODING_UTF16_LE,
    HW_ENCODING_UTF16_BE,
    HW_ENCODING_WINDOWS_1252
} HwEncoding;

/* "UTF-8", "UTF-16LE", "UTF-16BE", "windows-1252". */
const char *hw_encoding_get_name(HwEncoding encoding);

/* A byte order mark decides; else zero bytes at every other place (UTF-16 of mostly Latin text); else valid
 * UTF-8; else Windows-1252. The BOM is taken off; *had_bom says whether there was one. `label` names the text
 * in errors: a NUL that remains, or UTF-16 that breaks off. The result is NUL-ended UTF-8, owned by the
 * caller. */
char *hw_encoding_to_utf8(const char *data, gsize size, const char *label, HwEncoding *encoding,
                          bool *had_bom, GError **error);
