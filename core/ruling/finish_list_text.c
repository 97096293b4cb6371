/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The list for a terminal: a table, the account of the riders, what has to be known about it. */
#include "core/base/duration.h"
#include "core/base/limits.h"
#include "core/base/number.h"
#include "core/ruling/finish_list.h"

#include <math.h>
#include <string.h>

enum { N_CELLS = 9 };

static const char *const heads[N_CELLS] = {
    "Place", "Bib", "Name", "Team", "Time", "Gap", "To the one before", "", "Told apart"
};
static const bool flush_right[N_CELLS] = { true, true, false, false, true, true, true, true, false };

/* Cells of a terminal: wide characters take two, combining marks none. */
static glong
width_of(const char *text)
{
    glong width = 0;
    for (const char *p = text; *p != '\0'; p = g_utf8_next_char(p)) {
        gunichar c = g_utf8_get_char(p);
        width += g_unichar_iszerowidth(c) ? 0 : g_unichar_iswide(c) ? 2 : 1;
    }
    return width;
}

/* "3.812 ± 0.408 ms": a figure with its U. */
static char *
dup_figure(double value, double expanded, int decimals, const char *unit)
{
    g_autofree char *figure = hw_number_dup_fixed(value, decimals);
    if (isnan(expanded))
        return g_strdup_printf("%s %s, ± unknown", figure, unit);
    g_autofree char *sure = hw_number_dup_fixed(expanded, decimals);
    return g_strdup_printf("%s ± %s %s", figure, sure, unit);
}

/* The measured gap with U, k = 2. */
static char *
dup_measured_gap(const HwGap *gap)
{
    return dup_figure((double)gap->gap_ns * 1e-6, 2.0 * gap->u_gap_ns * 1e-6, 3, "ms");
}

/* Likewise; "" without a speed, and over a second, where speed times gap says little. */
static char *
dup_distance(const HwGap *gap)
{
    if (isnan(gap->distance_m) || ABS(gap->gap_ns) > HW_NS_PER_S)
        return g_strdup("");
    return dup_figure(gap->distance_m * 100, 200.0 * gap->u_distance_m, 1, "cm");
}

static char *
dup_place(const HwFinishRow *row)
{
    bool shows_status = row->status != HW_STATUS_OK && row->status != HW_STATUS_UNKNOWN;
    if (row->status == HW_STATUS_NOT_SEEN)
        return g_strdup("not seen");
    if (row->status == HW_STATUS_LAP && row->laps_behind > 0)
        return g_strdup_printf("%d −%d", row->rank, row->laps_behind);
    if (shows_status)
        return g_strdup(hw_status_get_word(row->status));
    return row->rank > 0 ? g_strdup_printf("%d%s", row->rank, row->tied ? "=" : "") : g_strdup("–");
}

static GStrv
dup_cells(const HwFinishList *list, const HwFinishRow *row)
{
    GStrv cells = g_new0(char *, N_CELLS + 1);
    int i = 0;
    cells[i++] = dup_place(row);
    cells[i++] = g_strdup(*row->bib != '\0' ? row->bib : "?");
    cells[i++] = g_strdup(row->name);
    cells[i++] = g_strdup(row->team);
    cells[i++] = hw_finish_row_dup_time(list, row);
    cells[i++] = hw_finish_row_dup_gap(list, row);
    cells[i++] = row->has_prev ? dup_measured_gap(&row->prev) : g_strdup("");
    cells[i++] = row->has_prev ? dup_distance(&row->prev) : g_strdup("");
    cells[i++] = g_strdup(row->has_prev ? hw_separated_get_told_apart(row->prev.separated) : "");
    return cells;
}

static void
append_cells(GString *text, const char *const *cells, const glong *widths)
{
    for (int i = 0; i < N_CELLS; i++) {
        if (widths[i] == 0)
            continue;
        int fill = (int)(widths[i] - width_of(cells[i]));
        if (flush_right[i])
            g_string_append_printf(text, "%*s", fill, "");
        g_string_append(text, cells[i]);
        if (!flush_right[i])
            g_string_append_printf(text, "%*s", fill, "");
        g_string_append(text, "  ");
    }
    while (text->len > 0 && text->str[text->len - 1] == ' ')
        g_string_truncate(text, text->len - 1);
    g_string_append_c(text, '\n');
}

static void
append_table(GString *text, const HwFinishList *list)
{
    g_autoptr(GPtrArray) table = g_ptr_array_new_with_free_func((GDestroyNotify)g_strfreev);
    glong widths[N_CELLS] = { 0 };
    for (guint r = 0; r < list->rows->len; r++) {
        GStrv cells = dup_cells(list, g_ptr_array_index(list->rows, r));
        for (int i = 0; i < N_CELLS; i++)
            widths[i] = MAX(widths[i], width_of(cells[i]));
        g_ptr_array_add(table, cells);
    }
    for (int i = 0; i < N_CELLS; i++)
        widths[i] = widths[i] > 0 ? MAX(widths[i], width_of(heads[i])) : 0;
    append_cells(text, heads, widths);
    const char *category = "";
    for (guint r = 0; r < list->rows->len; r++) {
        const HwFinishRow *row = g_ptr_array_index(list->rows, r);
        /* Who is not in the start list but has a place stands under the heading of those around. */
        bool stays = !row->in_start_list && row->rank > 0;
        if (!stays && strcmp(category, row->category) != 0) {
            g_string_append_printf(text, "\n%s\n", *row->category != '\0' ? row->category : "No category");
            category = row->category;
        }
        append_cells(text, g_ptr_array_index(table, r), widths);
    }
}

static void
append_check(GString *text, const HwFinishList *list)
{
    const HwRiderCheck *check = &list->check;
    g_string_append_printf(
        text,
        "\nRider check: %d entered − %d DNS = %d starters = %d ranked + %d LAP + %d OTL + %d DNF + "
        "%d ABD + %d DSQ + %d still missing",
        check->entered, check->dns, check->starters, check->ranked, check->lap, check->otl, check->dnf,
        check->abd, check->dsq, check->missing);
    if (check->unnamed > 0)
        g_string_append_printf(text, "; beside them %d unnamed marker%s", check->unnamed,
                               check->unnamed == 1 ? "" : "s");
    if (check->not_in_list > 0)
        g_string_append_printf(text, "; %d not in the start list", check->not_in_list);
    g_string_append_c(text, '\n');
}

static void
append_teams(GString *text, const HwFinishList *list)
{
    if (list->teams->len == 0)
        return;
    g_string_append(text, "\nTeams\n");
    for (guint i = 0; i < list->teams->len; i++) {
        const HwTeamRow *team = g_ptr_array_index(list->teams, i);
        if (team->rank == 0) {
            g_string_append_printf(text, "   –  %s (%u riders count)\n", team->team, team->bibs->len);
            continue;
        }
        g_autofree char *time = hw_duration_dup_text(team->time_ns, list->decimals);
        g_autofree char *gap = hw_duration_dup_gap(team->gap_ns, list->decimals);
        g_string_append_printf(text, "%4d  %s  %s  %s\n", team->rank, team->team, time, gap);
    }
}

char *
hw_finish_list_dup_text(const HwFinishList *list)
{
    GString *text = g_string_new(NULL);
    if (list->rules_id != NULL)
        g_string_append_printf(text, "%s: %s (%s; %s)\n", list->rules_id, list->rules_title,
                               list->rules_article, list->rules_edition);
    else
        g_string_append(text, "Measured order, not rounded: no rule set\n");
    if (*list->passage != '\0')
        g_string_append_printf(text, "Passage: %s\n", list->passage);
    g_string_append_printf(text, "Provisional%s. The commissaires decide.\n\n",
                           list->recording_whole ? "" : "; the recording is incomplete");
    append_table(text, list);
    append_teams(text, list);
    if (list->has_start_list)
        append_check(text, list);
    if (list->problems->len > 0)
        g_string_append(text, "\nTo be known about this list\n");
    for (guint i = 0; i < list->problems->len; i++)
        g_string_append_printf(text, "- %s\n", (const char *)g_ptr_array_index(list->problems, i));
    return g_string_free(text, FALSE);
}
