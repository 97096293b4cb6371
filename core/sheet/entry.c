/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/sheet/entry.h"

#include "core/base/limits.h"
#include "core/base/number.h"
#include "core/measure/gap.h"

#include <math.h>
#include <string.h>

#define NBSP "\u00a0"

/* Decimals that show two figures of U. */
static int
decimals_of(double expanded)
{
    if (!(expanded > 0))
        return 3;
    return (int)CLAMP(1 - floor(log10(expanded)), 0, 9);
}

static char *
dup_with_unit(double value, double expanded, const char *unit)
{
    int decimals = decimals_of(expanded);
    g_autofree char *magnitude = hw_number_dup_fixed(fabs(value), decimals);
    const char *sign = value < 0 ? "−" : "";
    if (isnan(expanded))
        return g_strdup_printf("%s%s" NBSP "%s, ±" NBSP "unknown", sign, magnitude, unit);
    g_autofree char *spread = hw_number_dup_fixed(expanded, decimals);
    return g_strdup_printf("%s%s" NBSP "±" NBSP "%s" NBSP "%s", sign, magnitude, spread, unit);
}

char *
hw_entry_dup_measured(int64_t value_ns, double u_ns)
{
    bool long_one = value_ns >= HW_NS_PER_S || value_ns <= -HW_NS_PER_S;
    double unit_ns = long_one ? 1e9 : 1e6;
    return dup_with_unit((double)value_ns / unit_ns, 2.0 * u_ns / unit_ns, long_one ? "s" : "ms");
}

static void
entry_free(gpointer data)
{
    HwEntry *entry = data;
    g_free(entry->bib);
    g_free(entry->place);
    g_free(entry->before);
    g_free(entry->winner);
    for (int i = 0; i < HW_N_CELLS; i++)
        g_free(entry->cells[i]);
    g_free(entry);
}

static bool
has_categories(const HwFinishList *list)
{
    for (guint i = 1; list != NULL && i < list->rows->len; i++) {
        const HwFinishRow *a = g_ptr_array_index(list->rows, i - 1), *b = g_ptr_array_index(list->rows, i);
        if (strcmp(a->category, b->category) != 0)
            return true;
    }
    return false;
}

static HwSetup
setup_of(const HwPicture *picture)
{
    HwSetup setup = hw_setup_unmeasured();
    if (picture->calibration != NULL) {
        setup.rate_known = true;
        setup.u_rate = picture->calibration->u_rate_hz / picture->calibration->rate_hz;
    }
    return setup;
}

/* The row that rests on a marker: its bib, at its very column. */
static const HwFinishRow *
row_of_marker(const HwFinishList *list, const HwMarker *marker)
{
    for (guint i = 0; list != NULL && i < list->rows->len; i++) {
        const HwFinishRow *row = g_ptr_array_index(list->rows, i);
        if (row->crossed && row->edge == marker->edge && row->column == marker->column &&
            strcmp(row->bib, marker->bib) == 0)
            return row;
    }
    return NULL;
}

/* Place of the rider before in the category, and the winner; NULL where none. */
static void
neighbours(const HwFinishList *list, const HwFinishRow *row, const HwFinishRow **before,
           const HwFinishRow **winner)
{
    *before = *winner = NULL;
    for (guint i = 0; i < list->rows->len; i++) {
        const HwFinishRow *other = g_ptr_array_index(list->rows, i);
        if (other == row)
            break;
        if (strcmp(other->category, row->category) != 0 || other->rank == 0 ||
            (other->status != HW_STATUS_OK && other->status != HW_STATUS_UNKNOWN))
            continue;
        if (*winner == NULL)
            *winner = other;
        *before = other;
    }
}

static char *
dup_place(const HwFinishRow *row)
{
    if (row->rank > 0)
        return g_strdup_printf("%d%s", row->rank, row->tied ? "=" : "");
    if (row->status == HW_STATUS_OK || row->status == HW_STATUS_UNKNOWN)
        return g_strdup("–");
    return g_strdup(hw_status_get_word(row->status));
}

static void
describe_ranked(HwEntry *entry, const HwPicture *picture, bool with_category)
{
    const HwFinishRow *row = entry->finish;
    const HwFinishRow *before, *winner;
    neighbours(picture->list, row, &before, &winner);
    g_autofree char *place = dup_place(row);
    entry->place = with_category && *row->category != '\0' ? g_strdup_printf("%s %s", place, row->category)
                                                           : g_strdup(place);
    g_autofree char *to_before =
        row->has_prev ? hw_entry_dup_measured(row->prev.gap_ns, row->prev.u_gap_ns) : g_strdup("");
    g_autofree char *to_winner = g_strdup("");
    if (row->has_gap && winner != NULL) {
        HwLead ahead = { winner->time_ns, winner->u_ns, winner->speed_mps, winner->u_speed_mps };
        HwLead behind = { row->time_ns, row->u_ns, row->speed_mps, row->u_speed_mps };
        HwSetup setup = setup_of(picture);
        HwGap gap = hw_gap_between(&ahead, &behind, &setup, picture->p_order_limit);
        g_free(to_winner);
        to_winner = hw_entry_dup_measured(row->gap_ns, gap.u_gap_ns);
    }
    entry->before =
        row->has_prev && before != NULL ? g_strdup_printf("to %s: %s", before->bib, to_before) : g_strdup("");
    entry->winner =
        *to_winner != '\0' && before != winner ? g_strdup_printf("to winner: %s", to_winner) : g_strdup("");
    entry->cells[HW_CELL_PLACE] = g_strdup(place);
    entry->cells[HW_CELL_NAME] = g_strdup(row->name);
    bool categorised = with_category && *row->category != '\0';
    entry->cells[HW_CELL_TEAM] =
        categorised ? g_strjoin(*row->team != '\0' ? " · " : "", row->category, row->team, NULL)
                    : g_strdup(row->team);
    entry->cells[HW_CELL_TIME] = hw_finish_row_dup_time(picture->list, row);
    entry->cells[HW_CELL_GAP] = row->rank > 1 ? hw_finish_row_dup_gap(picture->list, row) : g_strdup("");
    entry->cells[HW_CELL_BEFORE] = g_strdup(to_before);
    entry->cells[HW_CELL_WINNER] = g_strdup(to_winner);
    entry->cells[HW_CELL_APART] =
        g_strdup(row->has_prev ? hw_separated_get_told_apart(row->prev.separated) : "");
}

static void
describe_unranked(HwEntry *entry, const HwPicture *picture)
{
    HwStrip *strip = picture->strip;
    entry->place = g_strdup("");
    entry->before = g_strdup("");
    entry->winner = g_strdup("");
    if (entry->rear)
        return;
    int64_t ns;
    for (int i = 0; i < HW_N_CELLS; i++)
        entry->cells[i] = g_strdup("");
    if (hw_time_base_instant(hw_strip_get_time_base(strip), entry->column, &ns)) {
        HwInstant instant = hw_instant_plus(hw_recording_get_epoch(hw_strip_get_recording(strip)), ns);
        g_free(entry->cells[HW_CELL_TIME]);
        entry->cells[HW_CELL_TIME] = hw_instant_dup_time_of_day(&instant, 4);
    }
}

static HwEntry *
entry_new(const HwPicture *picture, const char *bib, double column, double row, HwEdge edge,
          HwPennantState state, const HwFinishRow *finish, bool with_category)
{
    HwEntry *entry = g_new0(HwEntry, 1);
    entry->bib = g_strdup(*bib != '\0' ? bib : "?");
    entry->column = column;
    entry->row = row;
    entry->rear = edge == HW_EDGE_REAR;
    entry->state = state;
    entry->finish = finish;
    if (finish != NULL)
        describe_ranked(entry, picture, with_category);
    else
        describe_unranked(entry, picture);
    if (entry->cells[HW_CELL_PLACE] != NULL) {
        g_free(entry->cells[HW_CELL_BIB]);
        entry->cells[HW_CELL_BIB] = g_strdup(entry->bib);
    }
    return entry;
}

static gint
by_column(gconstpointer a, gconstpointer b)
{
    const HwEntry *x = *(const HwEntry *const *)a, *y = *(const HwEntry *const *)b;
    if (x->column != y->column)
        return x->column < y->column ? -1 : 1;
    return strcmp(x->bib, y->bib);
}

static bool
of_another_passage(const HwPicture *picture, const HwMarker *marker)
{
    return picture->list != NULL && *marker->passage != '\0' && *picture->list->passage != '\0' &&
           strcmp(marker->passage, picture->list->passage) != 0;
}

GPtrArray *
hw_entries_new(const HwPicture *picture, double from_col, double to_col)
{
    GPtrArray *entries = g_ptr_array_new_with_free_func(entry_free);
    bool with_category = has_categories(picture->list);
    for (guint i = 0; picture->markers != NULL && i < picture->markers->markers->len; i++) {
        const HwMarker *marker = g_ptr_array_index(picture->markers->markers, i);
        if (marker->column < from_col || marker->column > to_col || of_another_passage(picture, marker))
            continue;
        HwPennantState state = marker->state == HW_MARKER_ROUGH ? HW_PENNANT_ROUGH : HW_PENNANT_READ;
        g_ptr_array_add(entries, entry_new(picture, marker->bib, marker->column, marker->row, marker->edge,
                                           state, row_of_marker(picture->list, marker), with_category));
    }
    for (guint i = 0; picture->markers == NULL && picture->list != NULL && i < picture->list->rows->len;
         i++) {
        const HwFinishRow *row = g_ptr_array_index(picture->list->rows, i);
        if (row->crossed && row->column >= from_col && row->column <= to_col)
            g_ptr_array_add(entries, entry_new(picture, row->bib, row->column, row->row, row->edge,
                                               HW_PENNANT_READ, row, with_category));
    }
    g_ptr_array_sort(entries, by_column);
    return entries;
}

const HwEntry *
hw_entries_find(const GPtrArray *entries, const char *bib)
{
    const HwEntry *found = NULL;
    for (guint i = 0; i < entries->len; i++) {
        const HwEntry *entry = g_ptr_array_index(entries, i);
        if (strcmp(entry->bib, bib) != 0)
            continue;
        if (entry->finish != NULL)
            return entry;
        if (!entry->rear && found == NULL)
            found = entry;
    }
    return found;
}

static bool
lead_of(const HwPicture *picture, const HwEntry *entry, HwLead *lead)
{
    const HwTimeBase *base = hw_strip_get_time_base(picture->strip);
    *lead = (HwLead){ .u_ns = hw_u_by_eye_ns(hw_time_base_get_period_ns(base)),
                      .speed_mps = NAN,
                      .u_speed_mps = NAN };
    if (entry->finish != NULL) {
        lead->u_ns = entry->finish->u_ns;
        lead->speed_mps = entry->finish->speed_mps;
        lead->u_speed_mps = entry->finish->u_speed_mps;
    } else if (entry->state == HW_PENNANT_ROUGH) {
        lead->u_ns = NAN;
    }
    return hw_time_base_instant(base, entry->column, &lead->time_ns);
}

static char *
dup_chance(double p)
{
    if (p < 1e-4)
        return g_strdup("below 0.01" NBSP "%");
    g_autofree char *percent = hw_number_dup_fixed(100 * p, p < 0.01 ? 2 : p < 0.1 ? 1 : 0);
    return g_strdup_printf("%s" NBSP "%%", percent);
}

char *
hw_entries_dup_pair(const HwPicture *picture, const HwEntry *a, const HwEntry *b)
{
    const HwTimeBase *base = hw_strip_get_time_base(picture->strip);
    const HwEntry *first = a->column <= b->column ? a : b, *second = first == a ? b : a;
    HwLead ahead, behind;
    int run_a = hw_time_base_run_at(base, first->column), run_b = hw_time_base_run_at(base, second->column);
    if (!lead_of(picture, first, &ahead) || !lead_of(picture, second, &behind) || run_a < 0 || run_b < 0 ||
        hw_time_base_get_run(base, (guint)run_a)->clock != hw_time_base_get_run(base, (guint)run_b)->clock)
        return g_strdup_printf("%s and %s stand on two clocks: no gap can be given.", first->bib,
                               second->bib);
    HwSetup setup = setup_of(picture);
    HwGap gap = hw_gap_between(&ahead, &behind, &setup, picture->p_order_limit);
    GString *text = g_string_new(NULL);
    g_autofree char *measured = hw_entry_dup_measured(gap.gap_ns, gap.u_gap_ns);
    g_string_printf(text, "%s ahead of %s by %s", first->bib, second->bib, measured);
    if (!isnan(gap.distance_m)) {
        g_autofree char *distance = dup_with_unit(100 * gap.distance_m, 200 * gap.u_distance_m, "cm");
        g_string_append_printf(text, ", %s", distance);
    }
    g_string_append_printf(text, " (measured, k" NBSP "=" NBSP "2). Told apart by this recording: %s",
                           hw_separated_get_told_apart(gap.separated));
    if (gap.separated == HW_SEPARATED_NOT_ESTABLISHED)
        g_string_append_printf(text, ", as %s was not measured",
                               setup.rate_known ? "the camera’s alignment"
                                                : "the camera’s alignment or scan rate");
    if (!isnan(gap.p_order_wrong)) {
        g_autofree char *chance = dup_chance(gap.p_order_wrong);
        g_string_append_printf(text, " (chance of the other order by the readings alone: %s).", chance);
    } else {
        g_string_append(text, ".");
    }
    return g_string_free(text, FALSE);
}
