/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/base/duration.h"
#include "core/base/limits.h"
#include "core/base/number.h"
#include "core/ruling/finish_build.h"
#include "core/ruling/groups.h"

#include <math.h>
#include <string.h>

/* One category while it is ranked. `rows` are its rows, borrowed, in the order they end up in. */
typedef struct {
    HwFinishList *list;
    const HwFinishInput *input;
    const HwCrossings *crossings;
    const char *name;
    GPtrArray *rows;
    bool by_time;
} Category;

static HwFinishRow *
row_at(const GPtrArray *rows, guint index)
{
    return g_ptr_array_index(rows, index);
}

/* Ranked by where or when they crossed: everybody whose status leaves them a place. */
static bool
is_contender(const HwFinishRow *row)
{
    return row->crossed && (row->status == HW_STATUS_OK || row->status == HW_STATUS_UNKNOWN);
}

/* Order in a list: contenders, then LAP, OTL, DNF, ABD, DSQ, DNS, not seen, then those nothing can be said
 * of. */
static int
section(const HwFinishRow *row)
{
    return is_contender(row) ? -1 : (int)row->status;
}

static gint
compare_rows(gconstpointer pa, gconstpointer pb, gpointer data)
{
    const HwFinishRow *a = *(HwFinishRow *const *)pa;
    const HwFinishRow *b = *(HwFinishRow *const *)pb;
    bool by_time = GPOINTER_TO_INT(data);
    if (section(a) != section(b))
        return section(a) < section(b) ? -1 : 1;
    if (a->status == HW_STATUS_LAP && a->laps_behind != b->laps_behind) {
        if (a->laps_behind == 0 || b->laps_behind == 0) /* unknown: last */
            return a->laps_behind == 0 ? 1 : -1;
        return a->laps_behind < b->laps_behind ? -1 : 1;
    }
    if (a->crossed != b->crossed)
        return a->crossed ? -1 : 1;
    if (a->crossed && by_time && a->has_official != b->has_official)
        return a->has_official ? -1 : 1;
    if (a->crossed && by_time && a->official_ns != b->official_ns)
        return a->official_ns < b->official_ns ? -1 : 1;
    if (a->crossed && !by_time && a->clock != b->clock)
        return a->clock < b->clock ? -1 : 1;
    if (a->crossed && !by_time && a->crossing_ns != b->crossing_ns)
        return a->crossing_ns < b->crossing_ns ? -1 : 1;
    return hw_bib_compare(a->bib, b->bib);
}

static void
sort_rows(Category *category)
{
    g_ptr_array_sort_with_data(category->rows, compare_rows, GINT_TO_POINTER(category->by_time));
}

static void
set_official(const Category *category, HwFinishRow *row)
{
    const HwRules *rules = category->input->rules;
    /* A lapped rider's time is of another distance, and who was disqualified has none. */
    bool bears_time = is_contender(row) || row->status == HW_STATUS_OTL;
    row->has_official = bears_time && row->has_elapsed && !category->list->places_only;
    if (row->has_official)
        row->official_ns = rules != NULL
                               ? hw_round_elapsed(row->time_ns, rules->precision_ns, rules->rounding)
                               : row->time_ns;
}

static bool
same_place(const Category *category, const HwFinishRow *a, const HwFinishRow *b)
{
    if (category->by_time)
        return a->official_ns == b->official_ns;
    return a->clock == b->clock && a->crossing_ns == b->crossing_ns;
}

static const char *
tie_consequence(const HwRules *rules)
{
    switch (rules != NULL ? rules->tie : HW_TIE_ASK) {
    case HW_TIE_SHARE:
        return "they share the place, and as many next places stay empty";
    case HW_TIE_RERUN:
        return "the rule set has such a race run again";
    case HW_TIE_ASK:
        break;
    }
    return "the commissaires decide";
}

/* Places of contenders and, behind them, of lapped riders. */
static void
set_places(Category *category)
{
    int place = 0;
    guint unknown_laps = 0;
    HwFinishRow *before = NULL;
    for (guint i = 0; i < category->rows->len; i++) {
        HwFinishRow *row = row_at(category->rows, i);
        bool lapped = row->status == HW_STATUS_LAP;
        unknown_laps += lapped && row->laps_behind == 0;
        if (!is_contender(row) && !lapped)
            continue;
        if (is_contender(row) && category->by_time && !row->has_official) {
            hw_finish_list_say(category->list,
                               "Bib %s has no time, by which the rule set ranks; it has no place.", row->bib);
            continue;
        }
        place++;
        row->rank = place;
        if (before != NULL && !lapped && same_place(category, before, row)) {
            row->rank = before->rank;
            row->tied = before->tied = true;
            hw_finish_list_say(category->list, "Bibs %s and %s are level at place %d: %s.", before->bib,
                               row->bib, row->rank, tie_consequence(category->input->rules));
        }
        before = lapped ? NULL : row;
    }
    if (unknown_laps > 1)
        hw_finish_list_say(category->list,
                           "%u lapped riders%s%s have no number of laps behind; their places follow "
                           "their order only.",
                           unknown_laps, *category->name != '\0' ? " of " : "", category->name);
}

/* Gap to the winner and to the rider before: measured ones from crossings, or from elapsed times where they
 * are ranked by them; never between two clocks. */
static void
set_gaps(Category *category)
{
    const HwFinishInput *input = category->input;
    HwSetup setup = hw_setup_unmeasured();
    double p_limit = input->rules != NULL ? input->rules->p_order_limit : 0.01;
    if (input->calibration != NULL) {
        setup.rate_known = true;
        setup.u_rate = input->calibration->u_rate_hz / input->calibration->rate_hz;
    }
    const HwFinishRow *winner = NULL, *before = NULL;
    for (guint i = 0; i < category->rows->len; i++) {
        HwFinishRow *row = row_at(category->rows, i);
        if (row->rank == 0 || !is_contender(row))
            continue;
        if (winner == NULL)
            winner = row;
        bool same_clock = category->by_time || row->clock == winner->clock;
        row->has_gap = same_clock && row->has_elapsed == winner->has_elapsed;
        row->gap_ns = row->time_ns - winner->time_ns;
        if (before != NULL && (category->by_time || row->clock == before->clock)) {
            HwLead ahead = { before->time_ns, before->u_ns, before->speed_mps, before->u_speed_mps };
            HwLead behind = { row->time_ns, row->u_ns, row->speed_mps, row->u_speed_mps };
            if (!category->by_time) {
                ahead.time_ns = before->crossing_ns;
                behind.time_ns = row->crossing_ns;
            }
            row->has_prev = true;
            row->prev = hw_gap_between(&ahead, &behind, &setup, p_limit);
            if (category->by_time) /* they were never on the road side by side */
                row->prev.distance_m = row->prev.u_distance_m = NAN;
        } else if (before != NULL) {
            hw_finish_list_say(category->list,
                               "Between bibs %s and %s the camera's clock steps back: no gap can be given "
                               "across it, and their order is that of the picture only.",
                               before->bib, row->bib);
        }
        before = row;
    }
}

static void
set_official_gaps(Category *category)
{
    const HwFinishRow *winner = NULL;
    for (guint i = 0; i < category->rows->len; i++) {
        HwFinishRow *row = row_at(category->rows, i);
        if (row->rank == 0 || !is_contender(row))
            continue;
        if (winner == NULL)
            winner = row;
        row->has_official_gap = row->has_official && winner->has_official;
        row->official_gap_ns = row->official_ns - winner->official_ns;
    }
}

/* ---- groups ---- */

static const HwCrossing *
find_crossing(const Category *category, const HwFinishRow *row)
{
    for (guint i = 0; i < category->crossings->crossings->len; i++) {
        const HwCrossing *crossing = &g_array_index(category->crossings->crossings, HwCrossing, i);
        const HwMarker *marker = crossing->front != NULL ? crossing->front : crossing->rear;
        if (crossing->is_ordered && crossing->order_column == row->column &&
            strcmp(marker->bib, row->bib) == 0)
            return crossing;
    }
    return NULL;
}

/* Riders who were in the race for this category and lap when they crossed: ranked ones, and those a ruling
 * took out. */
static bool
joins_groups(const HwFinishRow *row, bool with_taken_out)
{
    return is_contender(row) ||
           (with_taken_out && row->crossed && (row->status == HW_STATUS_DSQ || row->status == HW_STATUS_OTL));
}

static gint
compare_crossing_time(gconstpointer pa, gconstpointer pb)
{
    const HwFinishRow *a = *(HwFinishRow *const *)pa;
    const HwFinishRow *b = *(HwFinishRow *const *)pb;
    if (a->crossing_ns != b->crossing_ns)
        return a->crossing_ns < b->crossing_ns ? -1 : 1;
    return hw_bib_compare(a->bib, b->bib);
}

typedef struct {
    GPtrArray *rows; /* HwFinishRow*, borrowed, in order of crossing */
    HwGroupState *states;
    int *needs;
} Grouping;

static void
grouping_clear(Grouping *grouping)
{
    g_ptr_array_unref(grouping->rows);
    g_free(grouping->states);
    g_free(grouping->needs);
}

static Grouping
find_groups(const Category *category, bool with_taken_out)
{
    const HwRules *rules = category->input->rules;
    HwGroupRule rule = { rules->group_gap_ns, rules->breakaway_gap_ns, HW_BICYCLE_LENGTH_M };
    Grouping grouping = { .rows = g_ptr_array_new() };
    for (guint i = 0; i < category->rows->len; i++) {
        if (joins_groups(row_at(category->rows, i), with_taken_out))
            g_ptr_array_add(grouping.rows, row_at(category->rows, i));
    }
    g_ptr_array_sort(grouping.rows, compare_crossing_time);
    guint n = grouping.rows->len;
    g_autofree HwGroupRider *riders = g_new0(HwGroupRider, n);
    for (guint i = 0; i < n; i++) {
        const HwFinishRow *row = row_at(grouping.rows, i);
        const HwCrossing *crossing = find_crossing(category, row);
        double u_speed = isnan(row->u_speed_mps) ? 0.0 : row->u_speed_mps;
        riders[i] = (HwGroupRider){ .front_ns = row->crossing_ns,
                                    .u_ns = isnan(row->u_ns) ? 0.0 : row->u_ns,
                                    .has_rear = crossing != NULL && crossing->rear != NULL,
                                    .rear_ns = crossing != NULL ? crossing->rear_ns : 0,
                                    .speed_mps = row->speed_mps - 2.0 * u_speed,
                                    .in_breakaway = hw_race_in_breakaway(category->input->race, row->bib) };
    }
    grouping.states = g_new0(HwGroupState, n);
    grouping.needs = g_new0(int, n);
    hw_groups_find(riders, (int)n, &rule, grouping.states, grouping.needs);
    return grouping;
}

/* Group numbers and shared times. From where a rear wheel is needed up to the next certain group, number and
 * time stay open: a guess there would be a ruling. */
static void
apply_groups(const Category *category, const Grouping *grouping)
{
    const HwFinishRow *first = NULL;
    int number = 0;
    bool open = false;
    for (guint i = 0; i < grouping->rows->len; i++) {
        HwFinishRow *row = row_at(grouping->rows, i);
        if (grouping->states[i] == HW_GROUP_NEW) {
            first = row;
            number++;
            open = false;
        } else if (grouping->states[i] == HW_GROUP_REAR_NEEDED) {
            const HwFinishRow *ahead = row_at(grouping->rows, (guint)grouping->needs[i]);
            hw_finish_list_say(
                category->list,
                "Rear wheel needed between bibs %s and %s: mark where the rear tyre of bib %s leaves the "
                "line%s; until then "
                "group and time are open from bib %s on.",
                row_at(grouping->rows, i - 1)->bib, row->bib, ahead->bib,
                isnan(ahead->speed_mps) ? " (its speed was not measured; it may have been on foot)" : "",
                row->bib);
            number++; /* there may be one group more: numbers behind are not reused */
            open = true;
        }
        if (!is_contender(row))
            continue;
        row->group = open ? 0 : number;
        if (open)
            row->has_official = false;
        else if (first->has_elapsed && row != first) {
            row->official_ns = hw_round_elapsed(first->time_ns, category->input->rules->precision_ns,
                                                category->input->rules->rounding);
            row->same_time = true;
        }
    }
}

/* The first ranked rider who stands otherwise towards the ranked rider before it in the two groupings, or
 * NULL. */
static const HwFinishRow *
first_difference(const Grouping *with, const Grouping *without)
{
    HwGroupState between = HW_GROUP_SAME; /* since the last ranked rider, those taken out included */
    guint j = 0;
    for (guint i = 0; i < with->rows->len; i++) {
        between = MAX(between, with->states[i]);
        if (!is_contender(row_at(with->rows, i)))
            continue;
        if (j > 0 && between != without->states[j])
            return row_at(with->rows, i);
        between = HW_GROUP_SAME;
        j++;
    }
    return NULL;
}

static void
set_groups(Category *category)
{
    const HwRules *rules = category->input->rules;
    const HwRace *race = category->input->race;
    if (rules->breakaway_gap_ns > 0 && (race == NULL || race->breakaway->len == 0))
        hw_finish_list_say(category->list,
                           "The rule set's gap for a breakaway that wins was not considered, since none is "
                           "declared.");
    for (guint i = 0; i < category->rows->len; i++) {
        const HwFinishRow *row = row_at(category->rows, i);
        if (is_contender(row) &&
            (row->start_source == HW_START_SCHEDULED || row->start_source == HW_START_GATE)) {
            hw_finish_list_say(category->list,
                               "Riders have starts of their own, so none share a time; the rule set's "
                               "groups were not formed.");
            return;
        }
    }
    Grouping with = find_groups(category, true);
    Grouping without = find_groups(category, false);
    if (with.rows->len > 0 && rules->breakaway_gap_ns > 0 && race != NULL && race->breakaway->len > 0 &&
        !hw_race_in_breakaway(race, row_at(with.rows, 0)->bib))
        hw_finish_list_say(category->list,
                           "The declared breakaway did not win (bib %s did), so its gap was not used.",
                           row_at(with.rows, 0)->bib);
    const HwFinishRow *differs = first_difference(&with, &without);
    if (differs != NULL)
        hw_finish_list_say(category->list,
                           "Without the riders taken out (DSQ, OTL) bib %s would stand otherwise towards the "
                           "group before it; the groups are kept as they crossed. The commissaires decide.",
                           differs->bib);
    apply_groups(category, &with);
    grouping_clear(&with);
    grouping_clear(&without);
}

/* ---- categories ---- */

static void
rank_category(HwFinishList *list, const HwFinishInput *input, const HwCrossings *crossings, const char *name,
              GPtrArray *rows)
{
    const HwRules *rules = input->rules;
    Category category = { list, input, crossings,
                          name, rows,  rules != NULL && rules->rank_by == HW_RANK_BY_OFFICIAL_TIME };
    for (guint i = 0; i < rows->len; i++)
        set_official(&category, row_at(rows, i));
    if (rules != NULL && rules->time_on_rider > 0)
        hw_team_time_apply(list, input, rows);
    sort_rows(&category);
    set_places(&category);
    if (rules != NULL && rules->has_groups)
        set_groups(&category);
    set_gaps(&category);
    set_official_gaps(&category);
}

/* Riders nobody can put into a category have no place in one, and may stand before others there. */
static void
report_without_category(HwFinishList *list, const GPtrArray *rows)
{
    for (guint i = 0; i < rows->len; i++) {
        HwFinishRow *row = row_at(rows, i);
        row->status = row->status == HW_STATUS_OK ? HW_STATUS_UNKNOWN : row->status;
        if (!row->crossed)
            continue;
        g_autofree char *column = hw_number_dup_fixed(row->column, 3);
        hw_finish_list_say(
            list,
            "Bib %s at column %s belongs to no known category, so it has no place, and places behind it "
            "are not certain.",
            *row->bib != '\0' ? row->bib : "?", column);
    }
}

void
hw_finish_rank(HwFinishList *list, const HwFinishInput *input, const HwCrossings *crossings)
{
    /* Categories in the order of the start list; without any, all riders are one. */
    g_autoptr(GPtrArray) names = g_ptr_array_new_with_free_func(g_free);
    for (guint i = 0; input->start_list != NULL && i < input->start_list->riders->len; i++) {
        const HwRider *rider = g_ptr_array_index(input->start_list->riders, i);
        if (!g_ptr_array_find_with_equal_func(names, rider->category, g_str_equal, NULL))
            g_ptr_array_add(names, g_strdup(rider->category));
    }
    bool several = names->len > 1;
    g_autoptr(GPtrArray) sorted = g_ptr_array_new();
    for (guint c = 0; c < MAX(names->len, 1); c++) {
        g_autoptr(GPtrArray) rows = g_ptr_array_new();
        const char *name = names->len > 0 ? g_ptr_array_index(names, c) : "";
        for (guint i = 0; i < list->rows->len; i++) {
            HwFinishRow *row = row_at(list->rows, i);
            if (!several || (row->in_start_list && strcmp(row->category, name) == 0) ||
                (!row->in_start_list && *row->category != '\0' && strcmp(row->category, name) == 0))
                g_ptr_array_add(rows, row);
        }
        rank_category(list, input, crossings, several ? name : "", rows);
        for (guint i = 0; i < rows->len; i++)
            g_ptr_array_add(sorted, row_at(rows, i));
    }
    g_autoptr(GPtrArray) rest = g_ptr_array_new();
    for (guint i = 0; i < list->rows->len; i++) {
        if (!g_ptr_array_find(sorted, row_at(list->rows, i), NULL))
            g_ptr_array_add(rest, row_at(list->rows, i));
    }
    report_without_category(list, rest);
    for (guint i = 0; i < rest->len; i++)
        g_ptr_array_add(sorted, row_at(rest, i));
    for (guint i = 0; i < sorted->len; i++)
        list->rows->pdata[i] = sorted->pdata[i];
}
