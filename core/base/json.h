/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Strict JSON (RFC 8259): one root, no repeated key, no NUL, at most HW_MAX_JSON_DEPTH levels. jansson does
 * the reading; this adds the limits and accessors whose errors name the file and the place. */
#pragma once

#include <glib.h>
#include <jansson.h>
#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

typedef enum { HW_JSON_OPTIONAL, HW_JSON_REQUIRED } HwJsonNeed;

/* Text in memory; `label` names it in errors. */
json_t *hw_json_parse(const char *text, size_t size, const char *label, GError **error);

/* Values of an object. `where` is "file" or "file: blocks[3]" and begins each error. An absent optional key,
 * or null, leaves *value as it was and returns true; so does any failure leave it, returning false. Strings
 * and containers are borrowed. */
bool hw_json_get_string(const json_t *object, const char *key, HwJsonNeed need, const char *where,
                        const char **value, GError **error);
bool hw_json_get_int64(const json_t *object, const char *key, HwJsonNeed need, int64_t min, int64_t max,
                       const char *where, int64_t *value, GError **error);
bool hw_json_get_double(const json_t *object, const char *key, HwJsonNeed need, double min, double max,
                        const char *where, double *value, GError **error);
bool hw_json_get_bool(const json_t *object, const char *key, const char *where, bool *value, GError **error);
bool hw_json_get_array(const json_t *object, const char *key, HwJsonNeed need, const char *where,
                       json_t **value, GError **error);
bool hw_json_get_object(const json_t *object, const char *key, HwJsonNeed need, const char *where,
                        json_t **value, GError **error);

/* One of the NULL-ended `words`; *index is its place. */
bool hw_json_get_word(const json_t *object, const char *key, HwJsonNeed need, const char *const *words,
                      const char *where, int *index, GError **error);

/* Two-space text with a final newline, numbers with at most 15 digits. Owned by the caller (g_free). */
char *hw_json_dup_text(const json_t *value);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(json_t, json_decref)
