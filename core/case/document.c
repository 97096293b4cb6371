/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/case/document.h"

#include "core/base/digest.h"
#include "core/case/case_error.h"

#include <string.h>

void
hw_document_clear(HwDocument *document)
{
    g_clear_pointer(&document->name, g_free);
    g_clear_pointer(&document->map, g_free);
    g_clear_pointer(&document->data, g_free);
}

json_t *
hw_document_to_fact(const char *name, const char *map, const char *data, gsize size)
{
    g_autofree char *shown = g_filename_display_name(name);
    HwDigest digest = hw_digest_bytes(data, size);
    json_t *fact = json_object();
    json_object_set_new(fact, "name", json_string(shown));
    json_object_set_new(fact, "map", map != NULL ? json_string(map) : json_null());
    json_object_set_new(fact, "sha256", json_string(digest.hex));
    if (memchr(data, '\0', size) == NULL && g_utf8_validate(data, (gssize)size, NULL)) {
        json_object_set_new(fact, "text", json_stringn(data, size));
    } else {
        g_autofree char *coded = g_base64_encode((const guchar *)data, size);
        json_object_set_new(fact, "base64", json_string(coded));
    }
    return fact;
}

bool
hw_document_from_fact(const json_t *fact, const char *where, HwDocument *document, GError **error)
{
    const char *name = NULL, *map = NULL, *sha256 = NULL, *text = NULL, *coded = NULL;
    if (!hw_json_get_string(fact, "name", HW_JSON_REQUIRED, where, &name, error) ||
        !hw_json_get_string(fact, "map", HW_JSON_OPTIONAL, where, &map, error) ||
        !hw_json_get_string(fact, "sha256", HW_JSON_REQUIRED, where, &sha256, error) ||
        !hw_json_get_string(fact, "text", HW_JSON_OPTIONAL, where, &text, error) ||
        !hw_json_get_string(fact, "base64", text != NULL ? HW_JSON_OPTIONAL : HW_JSON_REQUIRED, where, &coded,
                            error))
        return false;
    g_auto(HwDocument) read = { .name = g_strdup(name), .map = g_strdup(map) };
    if (text != NULL) {
        read.data = g_strdup(text);
        read.size = strlen(text);
    } else {
        g_autofree guchar *bytes = g_base64_decode(coded, &read.size);
        read.data = g_malloc(read.size + 1);
        memcpy(read.data, bytes, read.size);
        read.data[read.size] = '\0';
    }
    HwDigest digest = hw_digest_bytes(read.data, read.size);
    if (!hw_digest_equal_hex(&digest, sha256)) {
        g_set_error(error, HW_CASE_ERROR, HW_CASE_ERROR_FALSE,
                    "%s is not the text its digest was taken of; use a copy of the case that is whole.",
                    where);
        return false;
    }
    *document = read;
    read = (HwDocument){ 0 };
    return true;
}
