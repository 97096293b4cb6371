/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/base/csv.h"
#include "core/base/duration.h"
#include "core/base/number.h"
#include "core/ruling/finish_list.h"

#include <math.h>

static const char *const columns[] = { "rank",          "bib",           "name",        "team",
                                       "nation",        "category",      "uci_id",      "status",
                                       "laps_behind",   "start",         "time_ns",     "time",
                                       "gap_ns",        "gap",           "gap_prev_ns", "distance_prev_m",
                                       "u_gap_prev_ns", "p_order_wrong", "separated",   "group" };

static char *
dup_integer(bool known, int64_t value)
{
    return known ? g_strdup_printf("%" G_GINT64_FORMAT, value) : g_strdup("");
}

static char *
dup_number(double value)
{
    return isfinite(value) ? hw_number_dup_double(value) : g_strdup("");
}

static void
append_row(GString *text, const HwFinishList *list, const HwFinishRow *row)
{
    const HwGap *prev = row->has_prev ? &row->prev : NULL;
    g_autofree char *rank = dup_integer(row->rank > 0, row->rank);
    g_autofree char *laps = dup_integer(row->laps_behind > 0, row->laps_behind);
    g_autofree char *time_ns = dup_integer(row->crossed, row->time_ns);
    g_autofree char *time =
        row->has_official ? hw_duration_dup_text(row->official_ns, list->decimals) : g_strdup("");
    g_autofree char *gap_ns = dup_integer(row->has_gap, row->gap_ns);
    g_autofree char *gap =
        row->has_official_gap ? hw_duration_dup_gap(row->official_gap_ns, list->decimals) : g_strdup("");
    g_autofree char *gap_prev = dup_integer(prev != NULL, prev != NULL ? prev->gap_ns : 0);
    g_autofree char *distance = dup_number(prev != NULL ? prev->distance_m : NAN);
    g_autofree char *u_gap = dup_number(prev != NULL ? prev->u_gap_ns : NAN);
    g_autofree char *p_wrong = dup_number(prev != NULL ? prev->p_order_wrong : NAN);
    g_autofree char *group = dup_integer(row->group > 0, row->group);
    const char *fields[G_N_ELEMENTS(columns)] = {
        rank,
        row->bib,
        row->name,
        row->team,
        row->nation,
        row->category,
        row->uci_id,
        hw_status_get_word(row->status),
        laps,
        row->start_source != HW_START_NONE ? hw_start_source_get_word(row->start_source) : "",
        time_ns,
        time,
        gap_ns,
        gap,
        gap_prev,
        distance,
        u_gap,
        p_wrong,
        prev != NULL ? hw_separated_get_word(prev->separated) : "",
        group,
    };
    hw_csv_append_record(text, fields, G_N_ELEMENTS(fields));
}

char *
hw_finish_list_dup_csv(const HwFinishList *list)
{
    GString *text = g_string_new(NULL);
    hw_csv_append_record(text, columns, G_N_ELEMENTS(columns));
    for (guint i = 0; i < list->rows->len; i++)
        append_row(text, list, g_ptr_array_index(list->rows, i));
    return g_string_free(text, FALSE);
}
