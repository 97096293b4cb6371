/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/ruling/rules.h"

#include "core/base/input.h"
#include "core/base/json.h"
#include "core/base/limits.h"
#include "core/ruling/hw-rules.h"
#include "core/ruling/ruling_error.h"

#include <gio/gio.h>
#include <string.h>

enum { RULES_VERSION = 1, N_KINDS = HW_PASSAGE_FINAL_SPRINT + 1 };

#define RESOURCE_PREFIX "/org/halfwheel/rules/"
#define DEFAULT_P_ORDER_LIMIT 0.01

static const char *const shipped_ids[] = { "road-1s",     "road-3s",           "itt-10th",    "itt-100th",
                                           "ttt-10th",    "ttt-100th",         "track-timed", "track-sprint",
                                           "track-bunch", "track-elimination", "bmx",         "cross-country",
                                           "cyclo-cross", "downhill",          NULL };

const char *const *
hw_rules_get_ids(void)
{
    return shipped_ids;
}

void
hw_rules_free(HwRules *rules)
{
    if (rules == NULL)
        return;
    g_free(rules->id);
    g_free(rules->title);
    g_free(rules->article);
    g_free(rules->edition);
    g_free(rules->note);
    g_free(rules->json);
    g_free(rules);
}

static bool
refuse(GError **error, const char *label, const char *reason)
{
    g_set_error(error, HW_RULING_ERROR, HW_RULING_ERROR_RULES, "%s: %s.", label, reason);
    return false;
}

/* A misspelt key would leave a rule out without a word, so a key that is not known is refused. */
static bool
keys_are_known(const json_t *object, const char *const *known, const char *where, GError **error)
{
    const char *key;
    json_t *value;
    json_object_foreach((json_t *)object, key, value)
    {
        if (!g_strv_contains(known, key)) {
            g_set_error(error, HW_RULING_ERROR, HW_RULING_ERROR_RULES,
                        "%s: “%s” is no key of a rule set; mend its spelling or take it out.", where, key);
            return false;
        }
    }
    return true;
}

static bool
read_texts(const json_t *root, const char *label, HwRules *rules, GError **error)
{
    const char *id = NULL, *title = NULL, *article = NULL, *edition = NULL, *note = "";
    if (!hw_json_get_string(root, "id", HW_JSON_REQUIRED, label, &id, error) ||
        !hw_json_get_string(root, "title", HW_JSON_REQUIRED, label, &title, error) ||
        !hw_json_get_string(root, "article", HW_JSON_REQUIRED, label, &article, error) ||
        !hw_json_get_string(root, "edition", HW_JSON_REQUIRED, label, &edition, error) ||
        !hw_json_get_string(root, "note", HW_JSON_OPTIONAL, label, &note, error))
        return false;
    if (*id == '\0' || *title == '\0' || *article == '\0' || *edition == '\0')
        return refuse(error, label,
                      "“id”, “title”, “article” and “edition” must not be empty; a list has to name them");
    rules->id = g_strdup(id);
    rules->title = g_strdup(title);
    rules->article = g_strdup(article);
    rules->edition = g_strdup(edition);
    rules->note = g_strdup(note);
    return true;
}

static bool
read_times(const json_t *root, const char *label, HwRules *rules, GError **error)
{
    int rounding = HW_ROUND_DOWN;
    if (!hw_json_get_bool(root, "places_only", label, &rules->places_only, error))
        return false;
    HwJsonNeed need = rules->places_only ? HW_JSON_OPTIONAL : HW_JSON_REQUIRED;
    if (!hw_json_get_int64(root, "precision_ns", need, 1, HW_NS_PER_HOUR, label, &rules->precision_ns,
                           error) ||
        !hw_json_get_word(root, "rounding", need, hw_rounding_words, label, &rounding, error))
        return false;
    rules->rounding = (HwRounding)rounding;
    return true;
}

/* One word for all kinds of passage, or an object that names each. */
static bool
read_order_edge(const json_t *root, const char *label, HwRules *rules, GError **error)
{
    static const char *const words[] = { "front", "rear", NULL };
    const json_t *value = json_object_get(root, "order_edge");
    int edge = HW_EDGE_FRONT;
    if (!json_is_object(value)) {
        if (!hw_json_get_word(root, "order_edge", HW_JSON_REQUIRED, words, label, &edge, error))
            return false;
        for (int kind = 0; kind < N_KINDS; kind++)
            rules->order_edge[kind] = (HwEdge)edge;
        return true;
    }
    g_autofree char *where = g_strconcat(label, ": order_edge", NULL);
    const char *kinds[N_KINDS + 1] = { NULL };
    for (int kind = 0; kind < N_KINDS; kind++) {
        kinds[kind] = hw_passage_kind_get_word((HwPassageKind)kind);
        if (!hw_json_get_word(value, kinds[kind], HW_JSON_REQUIRED, words, where, &edge, error))
            return false;
        rules->order_edge[kind] = (HwEdge)edge;
    }
    return keys_are_known(value, kinds, where, error);
}

static bool
read_group(const json_t *root, const char *label, HwRules *rules, GError **error)
{
    static const char *const known[] = { "gap_ns", "compare", "breakaway_gap_ns", NULL };
    static const char *const compare_words[] = { ">=", NULL };
    json_t *group = NULL;
    int compare = 0;
    if (!hw_json_get_object(root, "group", HW_JSON_OPTIONAL, label, &group, error))
        return false;
    if (group == NULL)
        return true;
    g_autofree char *where = g_strconcat(label, ": group", NULL);
    rules->has_groups = true;
    return keys_are_known(group, known, where, error) &&
           hw_json_get_int64(group, "gap_ns", HW_JSON_REQUIRED, 1, HW_NS_PER_HOUR, where,
                             &rules->group_gap_ns, error) &&
           hw_json_get_word(group, "compare", HW_JSON_OPTIONAL, compare_words, where, &compare, error) &&
           hw_json_get_int64(group, "breakaway_gap_ns", HW_JSON_OPTIONAL, 1, HW_NS_PER_HOUR, where,
                             &rules->breakaway_gap_ns, error);
}

static bool
read_ranking(const json_t *root, const char *label, HwRules *rules, GError **error)
{
    static const char *const rank_words[] = { "crossing", "official_time", NULL };
    static const char *const tie_words[] = { "share", "rerun", "ask", NULL };
    int rank_by = 0, tie = 0;
    int64_t time_on_rider = 0, team_riders = 0, places = 0;
    rules->p_order_limit = DEFAULT_P_ORDER_LIMIT;
    if (!hw_json_get_word(root, "rank_by", HW_JSON_REQUIRED, rank_words, label, &rank_by, error) ||
        !hw_json_get_word(root, "tie", HW_JSON_REQUIRED, tie_words, label, &tie, error) ||
        !hw_json_get_int64(root, "time_on_rider", HW_JSON_OPTIONAL, 1, 99, label, &time_on_rider, error) ||
        !hw_json_get_int64(root, "team_riders", HW_JSON_OPTIONAL, 1, 99, label, &team_riders, error) ||
        !hw_json_get_int64(root, "places_that_matter", HW_JSON_OPTIONAL, 0, 9999, label, &places, error) ||
        !hw_json_get_double(root, "time_limit_percent", HW_JSON_OPTIONAL, 0, 1000, label,
                            &rules->time_limit_percent, error) ||
        !hw_json_get_int64(root, "correction_limit_ns", HW_JSON_OPTIONAL, 0, HW_MAX_JSON_INTEGER, label,
                           &rules->correction_limit_ns, error) ||
        !hw_json_get_double(root, "p_order_limit", HW_JSON_OPTIONAL, 1e-12, 0.5, label, &rules->p_order_limit,
                            error))
        return false;
    rules->rank_by = (HwRankBy)rank_by;
    rules->tie = (HwTie)tie;
    rules->time_on_rider = (int)time_on_rider;
    rules->team_riders = (int)team_riders;
    rules->places_that_matter = (int)places;
    return true;
}

static bool
is_consistent(const HwRules *rules, const char *label, GError **error)
{
    if (rules->places_only && (rules->has_groups || rules->rank_by == HW_RANK_BY_OFFICIAL_TIME ||
                               rules->time_on_rider > 0 || rules->team_riders > 0))
        return refuse(error, label,
                      "with “places_only” there are no times to group, rank or add by; take one out");
    if (rules->rank_by == HW_RANK_BY_OFFICIAL_TIME && rules->has_groups)
        return refuse(error, label, "riders ranked by their own times share none; take “group” out");
    return true;
}

HwRules *
hw_rules_parse(const char *text, gsize size, const char *label, GError **error)
{
    static const char *const known[] = { "halfwheel_rules",
                                         "id",
                                         "title",
                                         "article",
                                         "edition",
                                         "note",
                                         "precision_ns",
                                         "rounding",
                                         "order_edge",
                                         "rank_by",
                                         "places_only",
                                         "time_on_rider",
                                         "team_riders",
                                         "group",
                                         "tie",
                                         "time_limit_percent",
                                         "places_that_matter",
                                         "correction_limit_ns",
                                         "p_order_limit",
                                         NULL };
    g_autoptr(json_t) root = hw_json_parse(text, size, label, error);
    if (root == NULL)
        return NULL;
    if (!json_is_object(root) || json_object_get(root, "halfwheel_rules") == NULL) {
        refuse(error, label, "“halfwheel_rules” is missing, so it is no rule set; name the right file");
        return NULL;
    }
    int64_t version = 0;
    g_autoptr(HwRules) rules = g_new0(HwRules, 1);
    rules->json = g_strndup(text, size);
    if (!hw_json_get_int64(root, "halfwheel_rules", HW_JSON_REQUIRED, RULES_VERSION, RULES_VERSION, label,
                           &version, error) ||
        !keys_are_known(root, known, label, error) || !read_texts(root, label, rules, error) ||
        !read_times(root, label, rules, error) || !read_order_edge(root, label, rules, error) ||
        !read_ranking(root, label, rules, error) || !read_group(root, label, rules, error) ||
        !is_consistent(rules, label, error))
        return NULL;
    return g_steal_pointer(&rules);
}

HwRules *
hw_rules_read(const char *id_or_path, GError **error)
{
    if (g_strv_contains(shipped_ids, id_or_path)) {
        g_autofree char *path = g_strconcat(RESOURCE_PREFIX, id_or_path, NULL);
        g_autoptr(GBytes) bytes = g_resource_lookup_data(hw_rules_get_resource(), path, 0, error);
        if (bytes == NULL)
            return NULL;
        gsize size;
        const char *text = g_bytes_get_data(bytes, &size);
        return hw_rules_parse(text, size, id_or_path, error);
    }
    if (strpbrk(id_or_path, "/.") == NULL && !g_file_test(id_or_path, G_FILE_TEST_EXISTS)) {
        g_autofree char *ids = g_strjoinv(", ", (char **)shipped_ids);
        g_set_error(error, HW_RULING_ERROR, HW_RULING_ERROR_RULES,
                    "“%s” is neither a rule set nor a file; choose one of %s, or give a file.", id_or_path,
                    ids);
        return NULL;
    }
    size_t size;
    g_autofree char *text = hw_input_read(id_or_path, HW_MAX_MANIFEST_BYTES, &size, error);
    return text != NULL ? hw_rules_parse(text, size, id_or_path, error) : NULL;
}
