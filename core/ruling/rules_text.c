/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/base/duration.h"
#include "core/base/limits.h"
#include "core/base/number.h"
#include "core/ruling/rules.h"

#include <string.h>

char *
hw_rules_dup_line(const HwRules *rules)
{
    return g_strdup_printf("%s: %s (%s; %s)", rules->id, rules->title, rules->article, rules->edition);
}

/* "1 s", "0.01 s", "30 days". */
static char *
dup_span(int64_t ns)
{
    const int64_t day = HW_NS_PER_DAY;
    if (ns >= day && ns % day == 0)
        return g_strdup_printf("%" G_GINT64_FORMAT " days", ns / day);
    g_autofree char *seconds =
        hw_number_dup_fixed((double)ns / (double)HW_NS_PER_S, hw_duration_decimals(ns));
    return g_strdup_printf("%s s", seconds);
}

static void
append_times(GString *text, const HwRules *rules)
{
    static const char *const rounding_words[] = { "down to", "up to the next",
                                                  "to the nearest (a half upwards)",
                                                  "to the nearest (a half to the even one)" };
    if (rules->places_only) {
        g_string_append(text, "Times: none are published, only places.\n");
        return;
    }
    g_autofree char *precision = dup_span(rules->precision_ns);
    g_string_append_printf(
        text,
        "Times: elapsed times are rounded %s %s; differences are taken between rounded times and "
        "never rounded themselves.\n",
        rounding_words[rules->rounding], precision);
}

static void
append_order(GString *text, const HwRules *rules)
{
    static const char *const edges[] = { "the front of the front tyre", "the back of the rear tyre" };
    g_string_append_printf(text, "Order: by when %s reaches the line",
                           edges[rules->order_edge[HW_PASSAGE_FINISH]]);
    for (int kind = 0; kind <= HW_PASSAGE_FINAL_SPRINT; kind++) {
        if (rules->order_edge[kind] != rules->order_edge[HW_PASSAGE_FINISH])
            g_string_append_printf(text, "; in a passage of kind %s by %s",
                                   hw_passage_kind_get_word((HwPassageKind)kind),
                                   edges[rules->order_edge[kind]]);
    }
    g_string_append(text, ".\n");
    if (rules->time_on_rider > 0)
        g_string_append_printf(text,
                               "Ranking: teams, by the time of their rider number %d across the line.\n",
                               rules->time_on_rider);
    else
        g_string_append_printf(text, "Ranking: %s.\n",
                               rules->rank_by == HW_RANK_BY_CROSSING ? "by the order across the line"
                                                                     : "by official time");
}

static void
append_groups(GString *text, const HwRules *rules)
{
    if (!rules->has_groups)
        return;
    g_autofree char *gap = dup_span(rules->group_gap_ns);
    g_string_append_printf(
        text,
        "Groups: riders of one group share the time of its first; a new time is taken where %s or "
        "more lie between the back of the last rear wheel and the front of the next front wheel.\n",
        gap);
    if (rules->breakaway_gap_ns > 0) {
        g_autofree char *breakaway = dup_span(rules->breakaway_gap_ns);
        g_string_append_printf(
            text,
            "Breakaway: where one is declared and wins, %s inside it and to the first group "
            "behind it.\n",
            breakaway);
    }
}

static void
append_rest(GString *text, const HwRules *rules)
{
    static const char *const ties[] = { "riders share the place, and as many next places stay empty",
                                        "the race is run again",
                                        "the commissaires decide; the list says so" };
    g_string_append_printf(text, "Ties: %s.\n", ties[rules->tie]);
    if (rules->team_riders > 0)
        g_string_append_printf(
            text,
            "Teams: sum of the times of the best %d; then sum of their places, then the best "
            "rider's place.\n",
            rules->team_riders);
    if (rules->time_limit_percent > 0) {
        g_autofree char *percent = hw_number_dup_double(rules->time_limit_percent);
        g_string_append_printf(
            text, "Time limit: the winner's time and %s %% (applied by the commissaires, not by the list).\n",
            percent);
    }
    if (rules->places_that_matter > 0)
        g_string_append_printf(text, "Places that matter most: 1 to %d.\n", rules->places_that_matter);
    if (rules->correction_limit_ns > 0) {
        g_autofree char *limit = dup_span(rules->correction_limit_ns);
        g_string_append_printf(text, "Corrections: within %s.\n", limit);
    }
    g_autofree char *chance = hw_number_dup_double(rules->p_order_limit * 100);
    g_string_append_printf(text, "Told apart: where the chance of the wrong order is at most %s %%.\n",
                           chance);
}

char *
hw_rules_dup_text(const HwRules *rules)
{
    GString *text = g_string_new(NULL);
    g_string_append_printf(text, "%s: %s\n%s\n%s\n\n", rules->id, rules->title, rules->article,
                           rules->edition);
    append_order(text, rules);
    append_times(text, rules);
    append_groups(text, rules);
    append_rest(text, rules);
    if (*rules->note != '\0')
        g_string_append_printf(text, "Note: %s\n", rules->note);
    g_string_append(text,
                    "\nThe regulations in force and the commissaires' decisions prevail over this file.\n");
    return g_string_free(text, FALSE);
}
