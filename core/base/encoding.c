/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/base/encoding.h"

#include "core/base/base_error.h"

#include <string.h>

static const char *const names[] = { "UTF-8", "UTF-16LE", "UTF-16BE", "windows-1252" };

const char *
hw_encoding_get_name(HwEncoding encoding)
{
    return names[encoding];
}

/* Zero bytes at odd places mean little-endian UTF-16, at even places big-endian: more than a third of the
 * pairs. */
static bool
looks_like_utf16(const char *data, gsize size, HwEncoding *encoding)
{
    gsize zeros[2] = { 0, 0 };
    gsize looked = MIN(size, 4096);
    for (gsize i = 0; i < looked; i++)
        zeros[i % 2] += data[i] == '\0';
    gsize needed = looked / 6 + 1;
    if (zeros[0] < needed && zeros[1] < needed)
        return false;
    *encoding = zeros[1] > zeros[0] ? HW_ENCODING_UTF16_LE : HW_ENCODING_UTF16_BE;
    return true;
}

static HwEncoding
guess(const char *data, gsize size, gsize *bom_bytes)
{
    static const struct {
        const char *mark;
        gsize bytes;
        HwEncoding encoding;
    } marks[] = {
        { "\xEF\xBB\xBF", 3, HW_ENCODING_UTF8 },
        { "\xFF\xFE", 2, HW_ENCODING_UTF16_LE },
        { "\xFE\xFF", 2, HW_ENCODING_UTF16_BE },
    };
    for (guint i = 0; i < G_N_ELEMENTS(marks); i++) {
        if (size >= marks[i].bytes && memcmp(data, marks[i].mark, marks[i].bytes) == 0) {
            *bom_bytes = marks[i].bytes;
            return marks[i].encoding;
        }
    }
    *bom_bytes = 0;
    HwEncoding encoding;
    if (looks_like_utf16(data, size, &encoding))
        return encoding;
    return g_utf8_validate_len(data, size, NULL) ? HW_ENCODING_UTF8 : HW_ENCODING_WINDOWS_1252;
}

char *
hw_encoding_to_utf8(const char *data, gsize size, const char *label, HwEncoding *encoding, bool *had_bom,
                    GError **error)
{
    gsize bom_bytes;
    HwEncoding found = guess(data, size, &bom_bytes);
    g_autoptr(GError) fault = NULL;
    gsize written = 0;
    g_autofree char *text = g_convert(data + bom_bytes, (gssize)(size - bom_bytes), "UTF-8", names[found],
                                      NULL, &written, &fault);
    if (text == NULL || memchr(text, '\0', written) != NULL) {
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_SYNTAX,
                    "%s is not readable text (taken for %s); save it as UTF-8.", label, names[found]);
        return NULL;
    }
    /* A mark once more, as joined files have it, would hide in the first header. */
    while (g_str_has_prefix(text, "\xEF\xBB\xBF"))
        memmove(text, text + 3, strlen(text + 3) + 1);
    *encoding = found;
    *had_bom = bom_bytes > 0;
    return g_steal_pointer(&text);
}
