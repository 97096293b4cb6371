/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/ruling/finish_list.h"

#include "core/base/duration.h"
#include "core/base/limits.h"
#include "core/base/number.h"
#include "core/ruling/finish_build.h"

#include <math.h>
#include <string.h>

/* Times that no rule set rounds are shown to the microsecond, finer than any camera reads. */
enum { DECIMALS_UNROUNDED = 6 };

static void
row_free(gpointer data)
{
    HwFinishRow *row = data;
    g_free(row->bib);
    g_free(row->name);
    g_free(row->team);
    g_free(row->nation);
    g_free(row->category);
    g_free(row->uci_id);
    g_free(row);
}

void
hw_finish_list_free(HwFinishList *list)
{
    if (list == NULL)
        return;
    g_ptr_array_unref(list->rows);
    g_clear_pointer(&list->teams, g_ptr_array_unref);
    g_ptr_array_unref(list->problems);
    g_free(list->passage);
    g_free(list->rules_id);
    g_free(list->rules_title);
    g_free(list->rules_article);
    g_free(list->rules_edition);
    g_free(list);
}

void
hw_finish_list_say(HwFinishList *list, const char *format, ...)
{
    va_list arguments;
    va_start(arguments, format);
    g_ptr_array_add(list->problems, g_strdup_vprintf(format, arguments));
    va_end(arguments);
}

static void
say_what_recording_lacks(HwFinishList *list, const HwFinishInput *input)
{
    const HwTimeBase *base = hw_strip_get_time_base(input->strip);
    for (guint i = 0; i < hw_time_base_get_n_voids(base); i++) {
        const HwVoid *gap = hw_time_base_get_void(base, i);
        if (gap->kind == HW_VOID_DAMAGED)
            hw_finish_list_say(list, "The recording is incomplete: %s.", gap->reason);
    }
    for (guint i = 0; i < hw_time_base_get_n_drops(base); i++) {
        const HwDrop *drop = hw_time_base_get_drop(base, i);
        const HwBlock *block = hw_recording_get_block(hw_strip_get_recording(input->strip), drop->block);
        hw_finish_list_say(list,
                           "In %s the stamps imply %" G_GINT64_FORMAT
                           " column%s %s than it has: times in it are "
                           "uncertain by as much.",
                           block->file, ABS(drop->missing), ABS(drop->missing) == 1 ? "" : "s",
                           drop->missing > 0 ? "more" : "fewer");
    }
    if (!hw_recording_is_complete(hw_strip_get_recording(input->strip)))
        hw_finish_list_say(list, "The recording is still being written; riders may follow.");
    if (input->n_unchecked_blocks > 0)
        hw_finish_list_say(
            list, "Blocks without a marker were not checked for damage (%u of %u); inspect checks them all.",
            input->n_unchecked_blocks, hw_strip_get_n_blocks(input->strip));
}

static void
say_what_input_lacks(HwFinishList *list, const HwFinishInput *input)
{
    if (input->rules == NULL)
        hw_finish_list_say(
            list, "No rule set is named: this is the measured order with times as measured, not rounded.");
    if (input->start_list == NULL)
        hw_finish_list_say(list, "There is no start list, so nobody can be missed and no bib checked.");
    if (!input->markers->names_recording)
        hw_finish_list_say(
            list, "The markers do not say which recording they were made on; that they belong to this one "
                  "could not be checked.");
    if (input->calibration != NULL)
        hw_finish_list_say(
            list, "The calibration's uncertainty of the scan rate is in the gaps' ±; times themselves are "
                  "those of the recording's stamps.");
    if (input->race != NULL && input->race->neutralised->len > 0)
        hw_finish_list_say(list, "%u neutralised stretch%s taken off the times.",
                           input->race->neutralised->len,
                           input->race->neutralised->len == 1 ? " is" : "es are");
}

static bool
crossed_before_start(const HwFinishRow *row)
{
    return row->crossed && row->start_source != HW_START_NONE && !row->has_elapsed;
}

static bool
took_more_than_a_day(const HwFinishRow *row)
{
    return row->has_elapsed && row->time_ns >= HW_NS_PER_DAY;
}

/* One sentence for however many riders it is true of: "Bib 12 and 29 others …". */
static void
say_of_riders(HwFinishList *list, bool (*is_true)(const HwFinishRow *), const char *what)
{
    const HwFinishRow *first = NULL;
    guint n = 0;
    for (guint i = 0; i < list->rows->len; i++) {
        const HwFinishRow *row = g_ptr_array_index(list->rows, i);
        if (!is_true(row))
            continue;
        first = first != NULL ? first : row;
        n++;
    }
    if (n == 0)
        return;
    g_autofree char *others = n == 1   ? g_strdup("")
                              : n == 2 ? g_strdup(" and one other")
                                       : g_strdup_printf(" and %u others", n - 1);
    hw_finish_list_say(list, "Bib %s%s %s.", first->bib, others, what);
}

static void
say_about_starts(HwFinishList *list)
{
    guint without = 0, crossed = 0, own = 0;
    for (guint i = 0; i < list->rows->len; i++) {
        const HwFinishRow *row = g_ptr_array_index(list->rows, i);
        crossed += row->crossed;
        without += row->crossed && row->start_source == HW_START_NONE;
        own +=
            row->crossed && (row->start_source == HW_START_SCHEDULED || row->start_source == HW_START_GATE);
    }
    say_of_riders(list, crossed_before_start,
                  "crossed before the start, so there is no time; check the start's day and offset");
    say_of_riders(list, took_more_than_a_day, "took more than a day from the start; check the start's day");
    if (own > 0 && list->unrounded)
        hw_finish_list_say(
            list, "Riders have starts of their own: the order across the line is no ranking by time; name a "
                  "rule set that ranks by it, such as itt-100th.");
    if (without == 0)
        return;
    if (without == crossed)
        hw_finish_list_say(
            list, "No start is known, so times count from the recording's epoch and are no race times.");
    else
        hw_finish_list_say(
            list,
            "For %u of %u riders no start is known; their times count from the recording's epoch and "
            "are no race times.",
            without, crossed);
}

/* A crossing next to where the picture ends or a void begins may have happened in it. */
static void
say_beside_voids(HwFinishList *list, const HwFinishInput *input)
{
    const HwTimeBase *base = hw_strip_get_time_base(input->strip);
    for (guint i = 0; i < list->rows->len; i++) {
        const HwFinishRow *row = g_ptr_array_index(list->rows, i);
        int run_index = row->crossed ? hw_time_base_run_at(base, row->column) : -1;
        if (run_index < 0)
            continue;
        const HwRun *run = hw_time_base_get_run(base, (guint)run_index);
        if (row->column - (double)run->first_col < 1.0 ||
            (double)(run->first_col + run->n_cols) - row->column < 1.0) {
            g_autofree char *column = hw_number_dup_fixed(row->column, 3);
            hw_finish_list_say(
                list,
                "Bib %s at column %s stands beside a place without picture; the crossing itself may "
                "lie in it.",
                row->bib, column);
        }
    }
}

static void
say_about_certainty(HwFinishList *list, const HwFinishInput *input)
{
    guint rough = 0;
    for (guint i = 0; i < input->markers->markers->len; i++)
        rough += ((const HwMarker *)g_ptr_array_index(input->markers->markers, i))->state == HW_MARKER_ROUGH;
    if (rough > 0)
        hw_finish_list_say(list, "%u marker%s rough and %s to be read again.", rough,
                           rough == 1 ? " is" : "s are", rough == 1 ? "has" : "have");
    int matter = input->rules != NULL ? input->rules->places_that_matter : 0;
    bool not_established = false;
    const HwFinishRow *before = NULL;
    for (guint i = 0; i < list->rows->len; i++) {
        const HwFinishRow *row = g_ptr_array_index(list->rows, i);
        not_established |= row->has_prev && row->prev.separated == HW_SEPARATED_NOT_ESTABLISHED;
        if (row->has_prev && !row->tied && row->prev.separated == HW_SEPARATED_NO && before != NULL &&
            before->rank <= matter)
            hw_finish_list_say(list, "This recording does not tell bibs %s and %s apart (places %d and %d).",
                               before->bib, row->bib, before->rank, row->rank);
        before = row;
    }
    if (not_established)
        hw_finish_list_say(
            list,
            "Alignment%s never measured, so stated worst cases stand in: where they prevent it, riders "
            "count as not established to be apart.",
            input->calibration != NULL ? " was" : " and scan rate were");
}

static HwFinishList *
list_new(const HwFinishInput *input)
{
    HwFinishList *list = g_new0(HwFinishList, 1);
    list->rows = g_ptr_array_new_with_free_func(row_free);
    list->problems = g_ptr_array_new_with_free_func(g_free);
    list->has_start_list = input->start_list != NULL;
    list->recording_whole = hw_strip_is_whole(input->strip);
    list->unrounded = input->rules == NULL;
    list->decimals = DECIMALS_UNROUNDED;
    if (input->rules != NULL) {
        list->decimals = input->rules->places_only ? 0 : hw_duration_decimals(input->rules->precision_ns);
        list->places_only = input->rules->places_only;
        list->rules_id = g_strdup(input->rules->id);
        list->rules_title = g_strdup(input->rules->title);
        list->rules_article = g_strdup(input->rules->article);
        list->rules_edition = g_strdup(input->rules->edition);
    }
    return list;
}

HwFinishList *
hw_finish_list_new(const HwFinishInput *input, GError **error)
{
    g_autoptr(HwCrossings) crossings = hw_crossings_make(input, error);
    if (crossings == NULL)
        return NULL;
    g_autoptr(HwFinishList) list = list_new(input);
    list->passage = g_strdup(crossings->passage);
    say_what_recording_lacks(list, input);
    say_what_input_lacks(list, input);
    for (guint i = 0; i < crossings->problems->len; i++)
        hw_finish_list_say(list, "%s", (const char *)g_ptr_array_index(crossings->problems, i));
    hw_finish_rows_make(list, input, crossings);
    say_about_starts(list);
    hw_finish_rank(list, input, crossings);
    hw_team_result_make(list, input);
    say_beside_voids(list, input);
    say_about_certainty(list, input);
    list->check = hw_rider_check_make(list, input->start_list, NULL);
    return g_steal_pointer(&list);
}

HwFinishList *
hw_finish_list_derive(HwFinishInput *input, GCancellable *cancellable, GError **error)
{
    if (!hw_markers_check_places(input->markers, input->strip, error))
        return NULL;
    HwStrip *checked =
        hw_markers_check_blocks(input->markers, input->strip, &input->n_unchecked_blocks, cancellable, error);
    if (checked == NULL)
        return NULL;
    hw_strip_unref(input->strip);
    input->strip = checked;
    if (!hw_markers_check_places(input->markers, input->strip, error))
        return NULL;
    return hw_finish_list_new(input, error);
}

char *
hw_finish_row_dup_time(const HwFinishList *list, const HwFinishRow *row)
{
    if (!row->has_official)
        return g_strdup("");
    return row->same_time ? g_strdup("s.t.") : hw_duration_dup_text(row->official_ns, list->decimals);
}

char *
hw_finish_row_dup_gap(const HwFinishList *list, const HwFinishRow *row)
{
    if (!row->has_official_gap)
        return g_strdup("");
    return row->official_gap_ns == 0 && row->rank > 1 && row->same_time
               ? g_strdup("s.t.")
               : hw_duration_dup_gap(row->official_gap_ns, list->decimals);
}
