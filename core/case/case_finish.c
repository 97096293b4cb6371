/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/case/case_finish.h"

#include "core/case/case_error.h"
#include "core/case/document.h"
#include "core/case/marker_fact.h"
#include "core/case/recording_fact.h"

#include <string.h>

#define CACHE_BYTES ((size_t)64 << 20)

void
hw_case_finish_free(HwCaseFinish *finish)
{
    if (finish == NULL)
        return;
    g_clear_pointer(&finish->strip, hw_strip_unref);
    g_clear_pointer(&finish->recording, hw_recording_unref);
    hw_markers_free(finish->markers);
    hw_start_list_free(finish->start_list);
    hw_race_free(finish->race);
    hw_rules_free(finish->rules);
    hw_calibration_free(finish->calibration);
    g_free(finish->gun);
    g_free(finish->passage);
    g_ptr_array_unref(finish->problems);
    g_free(finish);
}

static bool
refuse(const HwCase *held, const char *what, GError **error)
{
    g_set_error(error, HW_CASE_ERROR, HW_CASE_ERROR_FORMAT, "%s %s.", hw_case_get_path(held), what);
    return false;
}

/* ---- settings ---- */

static bool
check_derivation(const HwCase *held, GError **error)
{
    const json_t *version = hw_case_get_fact(held, "setting", "derivation");
    if (json_is_integer(version) && json_integer_value(version) == HW_DERIVATION_VERSION)
        return true;
    return refuse(held,
                  version == NULL ? "holds no finish to derive a list from; make it with make-case"
                                  : "derives its list in a way this program does not know; use the "
                                    "program it was made with, or a newer one",
                  error);
}

/* NULL where the case has no such setting. */
static bool
read_setting(const HwCase *held, const char *key, const char **text, GError **error)
{
    const json_t *value = hw_case_get_fact(held, "setting", key);
    *text = json_string_value(value);
    if (value == NULL || *text != NULL)
        return true;
    g_autofree char *what = g_strdup_printf("has a setting “%s” that is no text; use a whole copy", key);
    return refuse(held, what, error);
}

static bool
read_settings(const HwCase *held, HwCaseFinish *finish, GError **error)
{
    const char *gun, *passage;
    if (!check_derivation(held, error) || !read_setting(held, "gun", &gun, error) ||
        !read_setting(held, "passage", &passage, error))
        return false;
    finish->passage = g_strdup(passage);
    if (gun == NULL)
        return true;
    finish->gun = g_new0(HwInstant, 1);
    g_autoptr(GError) fault = NULL;
    if (hw_instant_parse(gun, finish->gun, &fault))
        return true;
    g_autofree char *what =
        g_strdup_printf("has a start that is no instant (%s); use a whole copy", fault->message);
    return refuse(held, what, error);
}

/* ---- documents ---- */

/* *found is false where the case has no such document. */
static bool
read_document(const HwCase *held, const char *key, bool *found, HwDocument *document, GError **error)
{
    const json_t *fact = hw_case_get_fact(held, "document", key);
    *found = fact != NULL;
    g_autofree char *where = g_strdup_printf("%s: the document %s", hw_case_get_path(held), key);
    return fact == NULL || hw_document_from_fact(fact, where, document, error);
}

static bool
read_start_list(const HwCase *held, HwCaseFinish *finish, GError **error)
{
    g_auto(HwDocument) text = { 0 };
    bool found;
    if (!read_document(held, "start_list", &found, &text, error))
        return false;
    if (found)
        finish->start_list = hw_start_list_parse(text.data, text.size, text.name, text.map, error);
    return !found || finish->start_list != NULL;
}

static bool
read_race(const HwCase *held, HwCaseFinish *finish, GError **error)
{
    g_auto(HwDocument) text = { 0 };
    bool found;
    if (!read_document(held, "race", &found, &text, error))
        return false;
    if (found)
        finish->race = hw_race_parse(text.data, text.size, text.name, error);
    return !found || finish->race != NULL;
}

static bool
read_rules(const HwCase *held, HwCaseFinish *finish, GError **error)
{
    g_auto(HwDocument) text = { 0 };
    bool found;
    if (!read_document(held, "rules", &found, &text, error))
        return false;
    if (found)
        finish->rules = hw_rules_parse(text.data, text.size, text.name, error);
    return !found || finish->rules != NULL;
}

static bool
read_calibration(const HwCase *held, HwCaseFinish *finish, GError **error)
{
    g_auto(HwDocument) text = { 0 };
    bool found;
    if (!read_document(held, "calibration", &found, &text, error))
        return false;
    if (!found)
        return true;
    finish->calibration = hw_calibration_parse(text.data, text.size, text.name, error);
    return finish->calibration != NULL &&
           hw_calibration_check(finish->calibration, finish->recording, text.name, error);
}

/* ---- recording and markers ---- */

/* Bibs of the markers that stand on a block, "7, 12"; NULL where none does. */
static char *
dup_bibs_on(const GArray *markers, const char *file)
{
    g_autoptr(GString) bibs = g_string_new(NULL);
    for (guint i = 0; i < markers->len; i++) {
        const json_t *fact = g_array_index(markers, HwFact, i).value;
        const char *block = json_string_value(json_object_get(fact, "block"));
        const char *bib = json_string_value(json_object_get(fact, "bib"));
        if (block != NULL && bib != NULL && strcmp(block, file) == 0)
            g_string_append_printf(bibs, "%s%s", bibs->len > 0 ? ", " : "", *bib != '\0' ? bib : "?");
    }
    return bibs->len > 0 ? g_strdup(bibs->str) : NULL;
}

static void
say_change(HwCaseFinish *finish, const HwChangedFile *changed, const GArray *markers)
{
    g_autofree char *bibs = dup_bibs_on(markers, changed->file);
    GString *problem =
        g_string_new(strcmp(changed->file, HW_RECORDING_MANIFEST) == 0
                         ? "Since the case was made, what the recording says of its columns and times has "
                           "changed: "
                         : "Since the case was made, a block of the recording has changed: ");
    g_string_append_printf(problem, "%s %s", changed->file, changed->what);
    if (bibs != NULL)
        g_string_append_printf(problem, "; markers on it (bib %s) were read on the former one", bibs);
    g_string_append_c(problem, '.');
    g_ptr_array_add(finish->problems, g_string_free(problem, FALSE));
}

static bool
read_recording(const HwCase *held, HwCaseFinish *finish, GCancellable *cancellable, GError **error)
{
    g_autoptr(GArray) recordings = hw_case_dup_facts(held, "recording");
    if (recordings->len != 1)
        return refuse(held, "does not name the one recording its list is made from; use a whole copy", error);
    const json_t *fact = g_array_index(recordings, HwFact, 0).value;
    finish->recording = hw_recording_open_fact(fact, hw_case_get_path(held), error);
    if (finish->recording == NULL)
        return false;
    g_autoptr(GArray) changes =
        hw_recording_find_changes(finish->recording, fact, hw_case_get_path(held), cancellable, error);
    if (changes == NULL)
        return false;
    g_autoptr(GArray) markers = hw_case_dup_facts(held, "marker");
    for (guint i = 0; i < changes->len; i++)
        say_change(finish, &g_array_index(changes, HwChangedFile, i), markers);
    g_autoptr(HwBlockCache) cache = hw_block_cache_new(CACHE_BYTES);
    finish->strip = hw_strip_new(finish->recording, cache, error);
    return finish->strip != NULL;
}

static bool
read_markers(const HwCase *held, HwCaseFinish *finish, GError **error)
{
    g_autoptr(GArray) facts = hw_case_dup_facts(held, "marker");
    finish->markers = hw_markers_new();
    g_free(finish->markers->path);
    finish->markers->path = g_strdup(hw_case_get_path(held));
    for (guint i = 0; i < facts->len; i++) {
        const HwFact *fact = &g_array_index(facts, HwFact, i);
        g_autofree char *where = g_strdup_printf("%s: marker %s", hw_case_get_path(held), fact->key);
        bool names_recording = false;
        HwMarker *marker = hw_marker_from_fact(fact->value, finish->strip, where, &names_recording, error);
        if (marker == NULL)
            return false;
        finish->markers->names_recording &= names_recording;
        g_ptr_array_add(finish->markers->markers, marker);
    }
    return true;
}

HwCaseFinish *
hw_case_finish_read(const HwCase *held, GCancellable *cancellable, GError **error)
{
    g_autoptr(HwCaseFinish) finish = g_new0(HwCaseFinish, 1);
    finish->problems = g_ptr_array_new_with_free_func(g_free);
    if (!read_settings(held, finish, error) || !read_start_list(held, finish, error) ||
        !read_race(held, finish, error) || !read_rules(held, finish, error) ||
        !read_recording(held, finish, cancellable, error) || !read_calibration(held, finish, error) ||
        !read_markers(held, finish, error))
        return NULL;
    return g_steal_pointer(&finish);
}

HwFinishList *
hw_case_finish_derive(HwCaseFinish *finish, GCancellable *cancellable, GError **error)
{
    HwFinishInput input = {
        .strip = finish->strip,
        .markers = finish->markers,
        .start_list = finish->start_list,
        .race = finish->race,
        .rules = finish->rules,
        .gun = finish->gun,
        .calibration = finish->calibration,
        .passage = finish->passage,
    };
    HwFinishList *list = hw_finish_list_derive(&input, cancellable, error);
    finish->strip = input.strip;
    for (guint i = 0; list != NULL && i < finish->problems->len; i++)
        g_ptr_array_add(list->problems, g_strdup(g_ptr_array_index(finish->problems, i)));
    return list;
}
