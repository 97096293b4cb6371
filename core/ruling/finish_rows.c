/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/base/duration.h"
#include "core/base/limits.h"
#include "core/ruling/finish_build.h"

#include <math.h>
#include <string.h>

static HwFinishRow *
row_new(const char *bib, const HwRider *rider)
{
    HwFinishRow *row = g_new0(HwFinishRow, 1);
    row->bib = g_strdup(bib);
    row->name = g_strdup(rider != NULL ? rider->name : "");
    row->team = g_strdup(rider != NULL ? rider->team : "");
    row->nation = g_strdup(rider != NULL ? rider->nation : "");
    row->category = g_strdup(rider != NULL ? rider->category : "");
    row->uci_id = g_strdup(rider != NULL ? rider->uci_id : "");
    row->in_start_list = rider != NULL;
    row->u_ns = row->speed_mps = row->u_speed_mps = NAN;
    return row;
}

/* What start list and race file say of a rider; the race file is the later word. */
static HwStatus
given_status(const HwFinishInput *input, const char *bib, const HwRider *rider, int *laps_behind)
{
    const HwRaceStatus *given = hw_race_find_status(input->race, bib, rider != NULL ? rider->category : "");
    *laps_behind = given != NULL ? given->laps_behind : rider != NULL ? rider->laps_behind : 0;
    return given != NULL ? given->status : rider != NULL ? rider->status : HW_STATUS_OK;
}

static void
set_elapsed(HwFinishList *list, const HwFinishInput *input, const HwRider *rider, HwFinishRow *row)
{
    const HwInstant *epoch = hw_recording_get_epoch(hw_strip_get_recording(input->strip));
    HwElapsed elapsed;
    row->time_ns = row->crossing_ns;
    if (!hw_elapsed_make(epoch, row->crossing_ns, rider, row->category, input->race, input->gun, &elapsed)) {
        hw_finish_list_say(list, "Bib %s: its start is centuries away from its crossing; mend the start.",
                           row->bib);
        return;
    }
    row->start_source = elapsed.source;
    row->gate_refused = elapsed.gate_refused;
    if (elapsed.source == HW_START_NONE)
        return;
    row->time_ns = elapsed.elapsed_ns;
    row->has_elapsed = elapsed.elapsed_ns >= 0;
    if (row->gate_refused) {
        g_autofree char *start = hw_instant_dup_text(&elapsed.start, 3);
        hw_finish_list_say(
            list,
            "Bib %s: the gate's start time is not within 1 s before and 5 s after the scheduled "
            "one, so the scheduled one counts (%s).",
            row->bib, start);
    }
}

/* The status of somebody who crossed, from what was given. */
static HwStatus
crossed_status(HwFinishList *list, const HwCrossing *crossing, HwStatus given, const char *bib)
{
    switch (given) {
    case HW_STATUS_DNS:
    case HW_STATUS_DNF:
    case HW_STATUS_ABD:
        hw_finish_list_say(
            list,
            "Bib %s is marked at the line but has the status %s; it is not ranked until one of the "
            "two is mended.",
            bib, hw_status_get_word(given));
        return given;
    case HW_STATUS_OK:
    case HW_STATUS_NOT_SEEN:
    case HW_STATUS_UNKNOWN:
        return crossing->is_ordered ? HW_STATUS_OK : HW_STATUS_UNKNOWN;
    case HW_STATUS_LAP:
    case HW_STATUS_OTL:
    case HW_STATUS_DSQ:
        break;
    }
    return given;
}

static void
set_crossing(HwFinishRow *row, const HwCrossing *crossing)
{
    const HwMarker *shown = crossing->front != NULL ? crossing->front : crossing->rear;
    bool by_front =
        crossing->is_ordered && crossing->front != NULL && crossing->order_ns == crossing->front_ns;
    if (crossing->is_ordered && !by_front)
        shown = crossing->rear;
    row->crossed = crossing->is_ordered;
    row->column = shown->column;
    row->row = shown->row;
    row->edge = shown->edge;
    row->crossing_ns = crossing->order_ns;
    row->clock = crossing->clock;
    row->u_ns = crossing->u_ns;
    row->speed_mps = shown->speed_mps;
    row->u_speed_mps = shown->u_speed_mps;
}

static void
add_crossing_row(HwFinishList *list, const HwFinishInput *input, const HwCrossing *crossing)
{
    const HwMarker *marker = crossing->front != NULL ? crossing->front : crossing->rear;
    HwFinishRow *row = row_new(marker->bib, crossing->rider);
    int laps_behind;
    HwStatus given = given_status(input, marker->bib, crossing->rider, &laps_behind);
    row->unnamed = crossing->unnamed;
    row->status = crossed_status(list, crossing, given, row->bib);
    row->laps_behind = laps_behind;
    if (crossing->rider == NULL && *marker->category != '\0') {
        g_free(row->category);
        row->category = g_strdup(marker->category);
    }
    set_crossing(row, crossing);
    if (row->crossed)
        set_elapsed(list, input, crossing->rider, row);
    if (!row->in_start_list && !row->unnamed && input->start_list != NULL)
        hw_finish_list_say(list, "Bib %s is not in the start list; correct the bib or add the rider.",
                           row->bib);
    if (row->status == HW_STATUS_OK && !row->in_start_list && (row->unnamed || input->start_list != NULL))
        row->status = HW_STATUS_UNKNOWN;
    g_ptr_array_add(list->rows, row);
}

static bool
has_row(const HwCrossings *crossings, const HwRider *rider)
{
    for (guint i = 0; i < crossings->crossings->len; i++) {
        if (g_array_index(crossings->crossings, HwCrossing, i).rider == rider)
            return true;
    }
    return false;
}

void
hw_finish_rows_make(HwFinishList *list, const HwFinishInput *input, const HwCrossings *crossings)
{
    for (guint i = 0; i < crossings->crossings->len; i++)
        add_crossing_row(list, input, &g_array_index(crossings->crossings, HwCrossing, i));
    for (guint i = 0; input->start_list != NULL && i < input->start_list->riders->len; i++) {
        const HwRider *rider = g_ptr_array_index(input->start_list->riders, i);
        if (has_row(crossings, rider))
            continue;
        HwFinishRow *row = row_new(rider->bib, rider);
        row->status = given_status(input, rider->bib, rider, &row->laps_behind);
        if (row->status == HW_STATUS_OK)
            row->status = HW_STATUS_NOT_SEEN;
        g_ptr_array_add(list->rows, row);
    }
}
