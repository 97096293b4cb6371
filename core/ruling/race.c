/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/ruling/race.h"

#include "core/base/input.h"
#include "core/base/json.h"
#include "core/base/limits.h"
#include "core/ruling/ruling_error.h"

#include <string.h>

enum { RACE_VERSION = 1, MAX_LAPS = 9999 };

static const char *const kind_words[] = { "finish", "sprint", "lap", "elimination", "final_sprint", NULL };

const char *
hw_passage_kind_get_word(HwPassageKind kind)
{
    return kind_words[kind];
}

static void
wave_clear(gpointer data)
{
    g_free(((HwWave *)data)->category);
}

static void
status_clear(gpointer data)
{
    HwRaceStatus *status = data;
    g_free(status->bib);
    g_free(status->category);
}

static void
official_clear(gpointer data)
{
    HwOfficial *official = data;
    g_free(official->role);
    g_free(official->name);
}

static GArray *
array_of(guint size, GDestroyNotify clear)
{
    GArray *array = g_array_new(FALSE, TRUE, size);
    g_array_set_clear_func(array, clear);
    return array;
}

void
hw_race_free(HwRace *race)
{
    if (race == NULL)
        return;
    g_free(race->path);
    g_free(race->event);
    g_free(race->passage_name);
    g_array_unref(race->waves);
    g_array_unref(race->neutralised);
    g_array_unref(race->statuses);
    g_array_unref(race->officials);
    g_ptr_array_unref(race->breakaway);
    g_free(race);
}

static bool
get_instant(const json_t *object, const char *key, const char *where, HwInstant *instant, GError **error)
{
    const char *text = NULL;
    if (!hw_json_get_string(object, key, HW_JSON_REQUIRED, where, &text, error))
        return false;
    g_autoptr(GError) fault = NULL;
    if (hw_instant_parse(text, instant, &fault))
        return true;
    g_set_error(error, HW_RULING_ERROR, HW_RULING_ERROR_RACE, "%s: “%s” %s.", where, key, fault->message);
    return false;
}

typedef bool (*ReadItem)(const json_t *item, const char *where, HwRace *race, GError **error);

/* Calls `read` for each object of the list at `key`, if there is one. */
static bool
read_list(const json_t *root, const char *key, HwRace *race, ReadItem read, GError **error)
{
    json_t *list = NULL;
    if (!hw_json_get_array(root, key, HW_JSON_OPTIONAL, race->path, &list, error))
        return false;
    for (size_t i = 0; i < json_array_size(list); i++) {
        g_autofree char *where = g_strdup_printf("%s: %s[%zu]", race->path, key, i);
        const json_t *item = json_array_get(list, i);
        if (!json_is_object(item)) {
            g_set_error(error, HW_RULING_ERROR, HW_RULING_ERROR_RACE, "%s must be an object.", where);
            return false;
        }
        if (!read(item, where, race, error))
            return false;
    }
    return true;
}

static bool
read_wave(const json_t *item, const char *where, HwRace *race, GError **error)
{
    const char *category = "*";
    HwWave wave = { 0 };
    if (!hw_json_get_string(item, "category", HW_JSON_OPTIONAL, where, &category, error) ||
        !get_instant(item, "instant", where, &wave.instant, error))
        return false;
    for (guint i = 0; i < race->waves->len; i++) {
        if (strcmp(g_array_index(race->waves, HwWave, i).category, category) == 0) {
            g_set_error(error, HW_RULING_ERROR, HW_RULING_ERROR_RACE,
                        "%s: category “%s” has two starts; keep one.", where, category);
            return false;
        }
    }
    wave.category = g_strdup(category);
    g_array_append_val(race->waves, wave);
    return true;
}

static bool
read_neutralised(const json_t *item, const char *where, HwRace *race, GError **error)
{
    HwNeutralised stretch;
    if (!get_instant(item, "from", where, &stretch.from, error) ||
        !get_instant(item, "to", where, &stretch.to, error))
        return false;
    if (hw_instant_compare(&stretch.to, &stretch.from) <= 0) {
        g_set_error(error, HW_RULING_ERROR, HW_RULING_ERROR_RACE,
                    "%s: the neutralised stretch ends before it begins; exchange “from” and “to”.", where);
        return false;
    }
    for (guint i = 0; i < race->neutralised->len; i++) {
        const HwNeutralised *other = &g_array_index(race->neutralised, HwNeutralised, i);
        if (hw_instant_compare(&stretch.from, &other->to) < 0 &&
            hw_instant_compare(&other->from, &stretch.to) < 0) {
            g_set_error(error, HW_RULING_ERROR, HW_RULING_ERROR_RACE,
                        "%s overlaps neutralised[%u], and its time would be taken off twice; join the two.",
                        where, i);
            return false;
        }
    }
    g_array_append_val(race->neutralised, stretch);
    return true;
}

static bool
read_status(const json_t *item, const char *where, HwRace *race, GError **error)
{
    const char *bib = NULL, *category = "", *word = NULL;
    int64_t laps = 0;
    HwRaceStatus status = { 0 };
    if (!hw_json_get_string(item, "bib", HW_JSON_REQUIRED, where, &bib, error) ||
        !hw_json_get_string(item, "category", HW_JSON_OPTIONAL, where, &category, error) ||
        !hw_json_get_string(item, "status", HW_JSON_REQUIRED, where, &word, error) ||
        !hw_json_get_int64(item, "laps_behind", HW_JSON_OPTIONAL, 1, MAX_LAPS, where, &laps, error))
        return false;
    if (!hw_status_parse(word, &status.status, &status.laps_behind)) {
        g_set_error(error, HW_RULING_ERROR, HW_RULING_ERROR_RACE,
                    "%s: “%s” is no status; write DNS, DNF, ABD, OTL, DSQ or LAP.", where, word);
        return false;
    }
    if (laps > 0)
        status.laps_behind = (int)laps;
    for (guint i = 0; i < race->statuses->len; i++) {
        const HwRaceStatus *other = &g_array_index(race->statuses, HwRaceStatus, i);
        if (strcmp(other->bib, bib) == 0 && strcmp(other->category, category) == 0) {
            g_set_error(error, HW_RULING_ERROR, HW_RULING_ERROR_RACE,
                        "%s: bib %s has two statuses; keep one.", where, bib);
            return false;
        }
    }
    status.bib = g_strdup(bib);
    status.category = g_strdup(category);
    g_array_append_val(race->statuses, status);
    return true;
}

static bool
read_official(const json_t *item, const char *where, HwRace *race, GError **error)
{
    const char *role = "", *name = NULL;
    if (!hw_json_get_string(item, "role", HW_JSON_OPTIONAL, where, &role, error) ||
        !hw_json_get_string(item, "name", HW_JSON_REQUIRED, where, &name, error))
        return false;
    HwOfficial official = { .role = g_strdup(role), .name = g_strdup(name) };
    g_array_append_val(race->officials, official);
    return true;
}

static bool
read_breakaway(const json_t *root, HwRace *race, GError **error)
{
    json_t *bibs = NULL;
    if (!hw_json_get_array(root, "breakaway", HW_JSON_OPTIONAL, race->path, &bibs, error))
        return false;
    for (size_t i = 0; i < json_array_size(bibs); i++) {
        const json_t *bib = json_array_get(bibs, i);
        if (!json_is_string(bib)) {
            g_set_error(error, HW_RULING_ERROR, HW_RULING_ERROR_RACE,
                        "%s: breakaway[%zu] must be a bib, as a text.", race->path, i);
            return false;
        }
        g_ptr_array_add(race->breakaway, g_strdup(json_string_value(bib)));
    }
    return true;
}

static bool
read_passage(const json_t *root, HwRace *race, GError **error)
{
    json_t *passage = NULL;
    const char *name = "";
    int kind = HW_PASSAGE_FINISH;
    int64_t laps_to_go = -1;
    g_autofree char *where = g_strconcat(race->path, ": passage", NULL);
    if (!hw_json_get_object(root, "passage", HW_JSON_OPTIONAL, race->path, &passage, error))
        return false;
    if (passage != NULL &&
        (!hw_json_get_string(passage, "name", HW_JSON_OPTIONAL, where, &name, error) ||
         !hw_json_get_word(passage, "kind", HW_JSON_OPTIONAL, kind_words, where, &kind, error) ||
         !hw_json_get_int64(passage, "laps_to_go", HW_JSON_OPTIONAL, 0, MAX_LAPS, where, &laps_to_go, error)))
        return false;
    race->has_passage = passage != NULL;
    race->passage_name = g_strdup(name);
    race->passage_kind = (HwPassageKind)kind;
    race->laps_to_go = (int)laps_to_go;
    return true;
}

HwRace *
hw_race_parse(const char *text, gsize size, const char *label, GError **error)
{
    g_autoptr(json_t) root = hw_json_parse(text, size, label, error);
    if (root == NULL)
        return NULL;
    if (!json_is_object(root) || json_object_get(root, "halfwheel_race") == NULL) {
        g_set_error(error, HW_RULING_ERROR, HW_RULING_ERROR_RACE,
                    "%s is no race file: “halfwheel_race” is missing; name the right file.", label);
        return NULL;
    }
    g_autoptr(HwRace) race = g_new0(HwRace, 1);
    race->path = g_strdup(label);
    race->waves = array_of(sizeof(HwWave), wave_clear);
    race->neutralised = array_of(sizeof(HwNeutralised), NULL);
    race->statuses = array_of(sizeof(HwRaceStatus), status_clear);
    race->officials = array_of(sizeof(HwOfficial), official_clear);
    race->breakaway = g_ptr_array_new_with_free_func(g_free);

    int64_t version = 0;
    const char *event = "";
    if (!hw_json_get_int64(root, "halfwheel_race", HW_JSON_REQUIRED, RACE_VERSION, RACE_VERSION, label,
                           &version, error) ||
        !hw_json_get_string(root, "event", HW_JSON_OPTIONAL, label, &event, error) ||
        !hw_json_get_double(root, "distance_km", HW_JSON_OPTIONAL, 0.0, 100000.0, label, &race->distance_km,
                            error) ||
        !read_passage(root, race, error) || !read_list(root, "starts", race, read_wave, error) ||
        !read_list(root, "neutralised", race, read_neutralised, error) ||
        !read_list(root, "status", race, read_status, error) ||
        !read_list(root, "officials", race, read_official, error) || !read_breakaway(root, race, error))
        return NULL;
    race->event = g_strdup(event);
    return g_steal_pointer(&race);
}

HwRace *
hw_race_read(const char *path, GError **error)
{
    size_t size;
    g_autofree char *text = hw_input_read(path, HW_MAX_MANIFEST_BYTES, &size, error);
    return text != NULL ? hw_race_parse(text, size, path, error) : NULL;
}

const HwRaceStatus *
hw_race_find_status(const HwRace *race, const char *bib, const char *category)
{
    const HwRaceStatus *found = NULL;
    for (guint i = 0; race != NULL && i < race->statuses->len; i++) {
        const HwRaceStatus *status = &g_array_index(race->statuses, HwRaceStatus, i);
        if (strcmp(status->bib, bib) != 0)
            continue;
        if (strcmp(status->category, category) == 0)
            return status;
        if (*status->category == '\0')
            found = status;
    }
    return found;
}

bool
hw_race_in_breakaway(const HwRace *race, const char *bib)
{
    for (guint i = 0; race != NULL && i < race->breakaway->len; i++) {
        if (strcmp(g_ptr_array_index(race->breakaway, i), bib) == 0)
            return true;
    }
    return false;
}
