/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/case/entry.h"

#include "core/base/limits.h"
#include "core/case/case_error.h"

#include <string.h>

HwDigest
hw_entry_first_digest(void)
{
    HwDigest zeros;
    memset(zeros.hex, '0', HW_DIGEST_HEX);
    zeros.hex[HW_DIGEST_HEX] = '\0';
    return zeros;
}

HwDigest
hw_entry_digest(const HwDigest *previous, const char *line)
{
    HwDigestSum *sum = hw_digest_sum_new();
    hw_digest_sum_add(sum, previous->hex, HW_DIGEST_HEX);
    hw_digest_sum_add(sum, "\n", 1);
    hw_digest_sum_add(sum, line, strlen(line));
    return hw_digest_sum_finish(sum);
}

void
hw_entry_clear(HwEntry *entry)
{
    g_clear_pointer(&entry->root, json_decref);
}

static bool
read_fields(HwEntry *entry, const char *where, GError **error)
{
    json_t *changes = NULL;
    entry->by = "";
    if (!hw_json_get_int64(entry->root, "seq", HW_JSON_REQUIRED, 1, HW_MAX_JSON_INTEGER, where, &entry->seq,
                           error) ||
        !hw_json_get_string(entry->root, "at", HW_JSON_REQUIRED, where, &entry->at, error) ||
        !hw_json_get_string(entry->root, "by", HW_JSON_OPTIONAL, where, &entry->by, error) ||
        !hw_json_get_string(entry->root, "act", HW_JSON_REQUIRED, where, &entry->act, error) ||
        !hw_json_get_bool(entry->root, "kept", where, &entry->kept, error) ||
        !hw_json_get_int64(entry->root, "undoes", HW_JSON_OPTIONAL, 1, entry->seq - 1, where, &entry->undoes,
                           error) ||
        !hw_json_get_int64(entry->root, "redoes", HW_JSON_OPTIONAL, 1, entry->seq - 1, where, &entry->redoes,
                           error) ||
        !hw_json_get_array(entry->root, "changes", HW_JSON_REQUIRED, where, &changes, error))
        return false;
    for (size_t i = 0; i < json_array_size(changes); i++) {
        const json_t *change = json_array_get(changes, i);
        const char *kind, *key;
        if (!hw_json_get_string(change, "kind", HW_JSON_REQUIRED, where, &kind, error) ||
            !hw_json_get_string(change, "key", HW_JSON_REQUIRED, where, &key, error))
            return false;
    }
    entry->changes = changes;
    return true;
}

bool
hw_entry_parse(const char *line, const char *where, HwEntry *entry, GError **error)
{
    g_auto(HwEntry) parsed = { 0 };
    g_autoptr(GError) fault = NULL;
    parsed.root = hw_json_parse(line, strlen(line), where, &fault);
    if (parsed.root == NULL || !read_fields(&parsed, where, &fault)) {
        g_set_error_literal(error, HW_CASE_ERROR, HW_CASE_ERROR_FALSE, fault->message);
        return false;
    }
    *entry = parsed;
    parsed.root = NULL;
    return true;
}

char *
hw_entry_dup_line(const HwEntry *entry)
{
    g_autoptr(json_t) root = json_object();
    json_object_set_new(root, "seq", json_integer(entry->seq));
    json_object_set_new(root, "at", json_string(entry->at));
    json_object_set_new(root, "by", *entry->by != '\0' ? json_string(entry->by) : json_null());
    json_object_set_new(root, "act", json_string(entry->act));
    if (entry->kept)
        json_object_set_new(root, "kept", json_true());
    if (entry->undoes > 0)
        json_object_set_new(root, "undoes", json_integer(entry->undoes));
    if (entry->redoes > 0)
        json_object_set_new(root, "redoes", json_integer(entry->redoes));
    json_object_set(root, "changes", (json_t *)entry->changes);
    char *dumped = json_dumps(root, JSON_COMPACT | JSON_REAL_PRECISION(17));
    char *line = g_strdup(dumped);
    free(dumped);
    return line;
}
