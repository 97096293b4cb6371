/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A document of a case: a start list, race, rule set or calibration as it stood when the case was made, byte
 * for byte, with the name it went by. Kept as the fact "document" with the key "start_list", "race", "rules"
 * or "calibration". */
#pragma once

#include "core/base/json.h"

#include <glib.h>
#include <stdbool.h>

typedef struct {
    char *name; /* path or id, for sentences */
    char *map;  /* what a start list's headers were said to mean; NULL: nothing said */
    char *data; /* NUL-ended beyond `size` */
    gsize size;
} HwDocument;

/* The fact's value (new reference): as text where it is UTF-8, else in base64. `map` may be NULL. */
json_t *hw_document_to_fact(const char *name, const char *map, const char *data, gsize size);

/* Fails where the fact is of another form or its bytes are not those of its digest (HW_CASE_ERROR_FALSE);
 * `where` begins the sentence. */
bool hw_document_from_fact(const json_t *fact, const char *where, HwDocument *document, GError **error);
void hw_document_clear(HwDocument *document);

G_DEFINE_AUTO_CLEANUP_CLEAR_FUNC(HwDocument, hw_document_clear)
