/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/ruling/finish_build.h"

#include <string.h>

static void
team_row_free(gpointer data)
{
    HwTeamRow *row = data;
    g_free(row->team);
    g_ptr_array_unref(row->bibs);
    g_free(row);
}

static HwTeamRow *
team_row_new(const char *team)
{
    HwTeamRow *row = g_new0(HwTeamRow, 1);
    row->team = g_strdup(team);
    row->bibs = g_ptr_array_new_with_free_func(g_free);
    return row;
}

/* Teams with a name, in the order in which their first rider stands in the list. */
static GPtrArray *
dup_team_names(const GPtrArray *rows)
{
    GPtrArray *names = g_ptr_array_new_with_free_func(g_free);
    for (guint i = 0; i < rows->len; i++) {
        const HwFinishRow *row = g_ptr_array_index(rows, i);
        if (*row->team != '\0' && !g_ptr_array_find_with_equal_func(names, row->team, g_str_equal, NULL))
            g_ptr_array_add(names, g_strdup(row->team));
    }
    return names;
}

/* The day's team result: the first n riders' official times; ties by the sum of their places, then by the
 * best rider's (UCI 2.3.044). */
static HwTeamRow *
count_team(const HwFinishList *list, const char *team, int n_riders)
{
    HwTeamRow *counted = team_row_new(team);
    for (guint i = 0; i < list->rows->len && (int)counted->bibs->len < n_riders; i++) {
        const HwFinishRow *row = g_ptr_array_index(list->rows, i);
        if (strcmp(row->team, team) != 0 || row->rank == 0 || row->status != HW_STATUS_OK ||
            !row->has_official)
            continue;
        counted->time_ns += row->official_ns;
        counted->place_sum += row->rank;
        counted->best_place = counted->best_place == 0 ? row->rank : MIN(counted->best_place, row->rank);
        g_ptr_array_add(counted->bibs, g_strdup(row->bib));
    }
    counted->rank = (int)counted->bibs->len == n_riders; /* for now: counts or not */
    return counted;
}

static gint
compare_teams(gconstpointer pa, gconstpointer pb)
{
    const HwTeamRow *a = *(HwTeamRow *const *)pa;
    const HwTeamRow *b = *(HwTeamRow *const *)pb;
    if ((a->rank > 0) != (b->rank > 0))
        return a->rank > 0 ? -1 : 1;
    if (a->rank > 0 && a->time_ns != b->time_ns)
        return a->time_ns < b->time_ns ? -1 : 1;
    if (a->rank > 0 && a->place_sum != b->place_sum)
        return a->place_sum < b->place_sum ? -1 : 1;
    if (a->rank > 0 && a->best_place != b->best_place)
        return a->best_place < b->best_place ? -1 : 1;
    return strcmp(a->team, b->team);
}

static bool
teams_are_level(const HwTeamRow *a, const HwTeamRow *b)
{
    return a->time_ns == b->time_ns && a->place_sum == b->place_sum && a->best_place == b->best_place;
}

static void
place_teams(HwFinishList *list)
{
    g_ptr_array_sort(list->teams, compare_teams);
    for (guint i = 0; i < list->teams->len; i++) {
        HwTeamRow *row = g_ptr_array_index(list->teams, i);
        if (row->rank == 0)
            continue;
        const HwTeamRow *first = g_ptr_array_index(list->teams, 0);
        const HwTeamRow *before = i > 0 ? g_ptr_array_index(list->teams, i - 1) : NULL;
        bool level = before != NULL && teams_are_level(before, row);
        row->rank = level ? before->rank : (int)i + 1;
        row->gap_ns = row->time_ns - first->time_ns;
        if (level)
            hw_finish_list_say(
                list, "Teams %s and %s are level in time, places and best rider; the commissaires decide.",
                before->team, row->team);
    }
}

void
hw_team_result_make(HwFinishList *list, const HwFinishInput *input)
{
    list->teams = g_ptr_array_new_with_free_func(team_row_free);
    const HwRules *rules = input->rules;
    int n_riders = rules == NULL ? 0 : rules->time_on_rider > 0 ? rules->time_on_rider : rules->team_riders;
    if (n_riders == 0)
        return;
    g_autoptr(GPtrArray) names = dup_team_names(list->rows);
    for (guint i = 0; i < names->len; i++) {
        HwTeamRow *row = count_team(list, g_ptr_array_index(names, i), n_riders);
        if (rules->time_on_rider > 0 && row->rank > 0) {
            row->time_ns /= n_riders; /* the riders that count all bear the team's time */
            row->place_sum = row->best_place = 0;
        }
        g_ptr_array_add(list->teams, row);
    }
    place_teams(list);
}

static gint
compare_crossing(gconstpointer pa, gconstpointer pb)
{
    const HwFinishRow *a = *(HwFinishRow *const *)pa;
    const HwFinishRow *b = *(HwFinishRow *const *)pb;
    if (a->crossing_ns != b->crossing_ns)
        return a->crossing_ns < b->crossing_ns ? -1 : 1;
    return hw_bib_compare(a->bib, b->bib);
}

void
hw_team_time_apply(HwFinishList *list, const HwFinishInput *input, GPtrArray *category_rows)
{
    guint nth = (guint)input->rules->time_on_rider;
    g_autoptr(GPtrArray) names = dup_team_names(category_rows);
    for (guint t = 0; t < names->len; t++) {
        const char *team = g_ptr_array_index(names, t);
        g_autoptr(GPtrArray) riders = g_ptr_array_new();
        for (guint i = 0; i < category_rows->len; i++) {
            HwFinishRow *row = g_ptr_array_index(category_rows, i);
            if (strcmp(row->team, team) == 0 && row->crossed && row->status == HW_STATUS_OK)
                g_ptr_array_add(riders, row);
        }
        g_ptr_array_sort(riders, compare_crossing);
        const HwFinishRow *decides = riders->len >= nth ? g_ptr_array_index(riders, nth - 1) : NULL;
        if (decides == NULL || !decides->has_official) {
            hw_finish_list_say(list, "Team %s has %u of the %u riders its time needs; it has no time.", team,
                               riders->len, nth);
            for (guint i = 0; i < riders->len; i++)
                ((HwFinishRow *)g_ptr_array_index(riders, i))->has_official = false;
            continue;
        }
        for (guint i = 0; i < nth; i++) {
            HwFinishRow *row = g_ptr_array_index(riders, i);
            row->official_ns = decides->official_ns;
            row->same_time = i > 0;
        }
    }
}
