/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/base/duration.h"
#include "core/base/json.h"
#include "core/ruling/finish_list.h"

#include <math.h>

static json_t *
text_or_null(const char *text)
{
    return text != NULL && *text != '\0' ? json_string(text) : json_null();
}

static json_t *
number_or_null(double value)
{
    return isfinite(value) ? json_real(value) : json_null();
}

static json_t *
integer_or_null(bool known, int64_t value)
{
    return known ? json_integer(value) : json_null();
}

/* An official time or gap as text; null where there is none. */
static json_t *
clock_or_null(bool known, char *(*dup)(int64_t, int), int64_t ns, int decimals)
{
    if (!known)
        return json_null();
    g_autofree char *text = dup(ns, decimals);
    return json_string(text);
}

static json_t *
row_to_json(const HwFinishList *list, const HwFinishRow *row)
{
    const HwGap *prev = row->has_prev ? &row->prev : NULL;
    json_t *object = json_object();
    json_object_set_new(object, "rank", integer_or_null(row->rank > 0, row->rank));
    json_object_set_new(object, "bib", json_string(row->bib));
    json_object_set_new(object, "name", text_or_null(row->name));
    json_object_set_new(object, "team", text_or_null(row->team));
    json_object_set_new(object, "category", text_or_null(row->category));
    json_object_set_new(object, "status", json_string(hw_status_get_word(row->status)));
    json_object_set_new(object, "laps_behind", integer_or_null(row->laps_behind > 0, row->laps_behind));
    json_object_set_new(object, "start",
                        row->start_source != HW_START_NONE
                            ? json_string(hw_start_source_get_word(row->start_source))
                            : json_null());
    json_object_set_new(object, "time_ns", integer_or_null(row->crossed, row->time_ns));
    json_object_set_new(
        object, "time",
        clock_or_null(row->has_official, hw_duration_dup_text, row->official_ns, list->decimals));
    json_object_set_new(object, "gap_ns", integer_or_null(row->has_gap, row->gap_ns));
    json_object_set_new(
        object, "gap",
        clock_or_null(row->has_official_gap, hw_duration_dup_gap, row->official_gap_ns, list->decimals));
    json_object_set_new(object, "gap_prev_ns",
                        integer_or_null(prev != NULL, prev != NULL ? prev->gap_ns : 0));
    json_object_set_new(object, "distance_prev_m", number_or_null(prev != NULL ? prev->distance_m : NAN));
    json_object_set_new(object, "u_gap_prev_ns", number_or_null(prev != NULL ? prev->u_gap_ns : NAN));
    json_object_set_new(object, "p_order_wrong", number_or_null(prev != NULL ? prev->p_order_wrong : NAN));
    json_object_set_new(object, "separated",
                        prev != NULL ? json_string(hw_separated_get_word(prev->separated)) : json_null());
    json_object_set_new(object, "group", integer_or_null(row->group > 0, row->group));
    return object;
}

static json_t *
rules_to_json(const HwFinishList *list)
{
    if (list->rules_id == NULL)
        return json_null();
    return json_pack("{s:s, s:s, s:s, s:s}", "id", list->rules_id, "title", list->rules_title, "article",
                     list->rules_article, "edition", list->rules_edition);
}

static json_t *
team_to_json(const HwFinishList *list, const HwTeamRow *team)
{
    bool ranked = team->rank > 0;
    json_t *bibs = json_array();
    for (guint i = 0; i < team->bibs->len; i++)
        json_array_append_new(bibs, json_string(g_ptr_array_index(team->bibs, i)));
    json_t *object = json_object();
    json_object_set_new(object, "rank", integer_or_null(ranked, team->rank));
    json_object_set_new(object, "team", json_string(team->team));
    json_object_set_new(object, "time_ns", integer_or_null(ranked, team->time_ns));
    json_object_set_new(object, "time",
                        clock_or_null(ranked, hw_duration_dup_text, team->time_ns, list->decimals));
    json_object_set_new(object, "gap",
                        clock_or_null(ranked, hw_duration_dup_gap, team->gap_ns, list->decimals));
    json_object_set_new(object, "bibs", bibs);
    return object;
}

static json_t *
check_to_json(const HwFinishList *list)
{
    const HwRiderCheck *check = &list->check;
    if (!list->has_start_list)
        return json_null();
    return json_pack("{s:i, s:i, s:i, s:i, s:i, s:i, s:i, s:i, s:i, s:i, s:i, s:i}", "entered",
                     check->entered, "DNS", check->dns, "starters", check->starters, "ranked", check->ranked,
                     "LAP", check->lap, "OTL", check->otl, "DNF", check->dnf, "ABD", check->abd, "DSQ",
                     check->dsq, "missing", check->missing, "unnamed", check->unnamed, "not_in_start_list",
                     check->not_in_list);
}

char *
hw_finish_list_dup_json(const HwFinishList *list)
{
    g_autoptr(json_t) root = json_object();
    json_object_set_new(root, "halfwheel", json_string("rank/1"));
    json_object_set_new(root, "rules", rules_to_json(list));
    json_object_set_new(root, "passage", text_or_null(list->passage));
    json_t *rows = json_array();
    for (guint i = 0; i < list->rows->len; i++)
        json_array_append_new(rows, row_to_json(list, g_ptr_array_index(list->rows, i)));
    json_object_set_new(root, "list", rows);
    json_t *teams = json_array();
    for (guint i = 0; i < list->teams->len; i++)
        json_array_append_new(teams, team_to_json(list, g_ptr_array_index(list->teams, i)));
    json_object_set_new(root, "teams", teams);
    json_object_set_new(root, "check", check_to_json(list));
    json_t *problems = json_array();
    for (guint i = 0; i < list->problems->len; i++)
        json_array_append_new(problems, json_string(g_ptr_array_index(list->problems, i)));
    json_object_set_new(root, "problems", problems);
    return hw_json_dup_text(root);
}
