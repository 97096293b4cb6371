/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/strip/time_base.h"

#include "core/base/wide.h"
#include "core/strip/time_base_private.h"

#include <math.h>

HwTimeBase *
hw_time_base_ref(HwTimeBase *base)
{
    g_atomic_int_inc(&base->references);
    return base;
}

void
hw_time_base_unref(HwTimeBase *base)
{
    if (base == NULL || !g_atomic_int_dec_and_test(&base->references))
        return;
    g_array_unref(base->segments);
    g_array_unref(base->times_ns);
    g_array_unref(base->runs);
    g_array_unref(base->run_segments);
    g_array_unref(base->clocks);
    g_array_unref(base->voids);
    g_array_unref(base->drops);
    g_ptr_array_unref(base->problems);
    g_string_chunk_free(base->reasons);
    g_free(base);
}

int64_t
hw_segment_stamp(const HwTimeBase *base, const HwSegment *segment, int64_t column)
{
    switch (segment->stamps) {
    case HW_STAMPS_EVEN:
        return segment->n_cols < 2
                   ? segment->first_ns
                   : segment->first_ns + hw_muldiv_known(column, segment->span_ns, segment->n_cols - 1);
    case HW_STAMPS_RATE:
        return segment->first_ns + hw_muldiv_known(column, HW_PERIOD_NUMERATOR, base->rate_nhz);
    case HW_STAMPS_TIMES:
        break;
    }
    return g_array_index(base->times_ns, int64_t, segment->times_from + (gsize)column);
}

int64_t
hw_time_base_get_n_columns(const HwTimeBase *base)
{
    return base->n_columns;
}

double
hw_time_base_get_period_ns(const HwTimeBase *base)
{
    return 1e18 / (double)base->rate_nhz;
}

static const HwRun *
run_at(const HwTimeBase *base, guint index)
{
    return &g_array_index(base->runs, HwRun, index);
}

static const HwSegment *
segment_at(const HwTimeBase *base, guint index)
{
    return &g_array_index(base->segments, HwSegment, index);
}

/* The segments of a run: [*from, *to). */
static void
segments_of_run(const HwTimeBase *base, guint run, guint *from, guint *to)
{
    *from = g_array_index(base->run_segments, guint, run);
    *to = g_array_index(base->run_segments, guint, run + 1);
}

/* The segment of a run that holds a column of it. */
static guint
segment_of_column(const HwTimeBase *base, guint run, int64_t column)
{
    guint low, high;
    segments_of_run(base, run, &low, &high);
    while (high - low > 1) {
        guint middle = low + (high - low) / 2;
        if (segment_at(base, middle)->first_col <= column)
            low = middle;
        else
            high = middle;
    }
    return low;
}

int
hw_time_base_run_at(const HwTimeBase *base, double column)
{
    guint low = 0, high = base->runs->len;
    if (high == 0 || !(column >= (double)run_at(base, 0)->first_col))
        return -1;
    while (high - low > 1) {
        guint middle = low + (high - low) / 2;
        if ((double)run_at(base, middle)->first_col <= column)
            low = middle;
        else
            high = middle;
    }
    const HwRun *run = run_at(base, low);
    return column <= (double)(run->first_col + run->n_cols) ? (int)low : -1;
}

bool
hw_time_base_instant(const HwTimeBase *base, double column, int64_t *ns)
{
    int index = hw_time_base_run_at(base, column);
    if (index < 0)
        return false;
    const HwRun *run = run_at(base, (guint)index);
    int64_t last_col = run->first_col + run->n_cols - 1;
    int64_t before = (int64_t)floor(column - 0.5); /* the column whose centre is at or before the position */
    int64_t inside = CLAMP(before, run->first_col, last_col);
    guint place = segment_of_column(base, (guint)index, inside);
    const HwSegment *segment = segment_at(base, place);
    int64_t centre_ns = hw_segment_stamp(base, segment, inside - segment->first_col);
    if (before < run->first_col) {
        double share = (column - (double)run->first_col) / 0.5;
        *ns = run->start_ns + llrint(share * (double)(centre_ns - run->start_ns));
        return true;
    }
    double past = column - ((double)inside + 0.5);
    if (before >= last_col) {
        *ns = centre_ns + llrint(past / 0.5 * (double)(run->end_ns - centre_ns));
        return true;
    }
    bool same = inside + 1 < segment->first_col + segment->n_cols;
    int64_t next_ns = same ? hw_segment_stamp(base, segment, inside + 1 - segment->first_col)
                           : segment_at(base, place + 1)->first_ns;
    *ns = centre_ns + llrint(past * (double)(next_ns - centre_ns));
    return true;
}

/* The last column of a segment whose centre is not after ns; its first one's is not. */
static int64_t
last_column_until(const HwTimeBase *base, const HwSegment *segment, int64_t ns)
{
    int64_t column = 0;
    int64_t past_ns = ns - segment->first_ns;
    if (segment->stamps == HW_STAMPS_TIMES) {
        int64_t end = segment->n_cols;
        while (end - column > 1) {
            int64_t middle = column + (end - column) / 2;
            if (hw_segment_stamp(base, segment, middle) <= ns)
                column = middle;
            else
                end = middle;
        }
        return column;
    }
    /* An estimate that is off by one at most, set right by the stamps themselves. */
    if (segment->stamps == HW_STAMPS_EVEN && segment->n_cols > 1)
        past_ns = MIN(past_ns, segment->span_ns);
    if (segment->n_cols > 1 &&
        !(segment->stamps == HW_STAMPS_EVEN
              ? hw_muldiv_half_even(past_ns, segment->n_cols - 1, segment->span_ns, &column)
              : hw_muldiv_half_even(past_ns, base->rate_nhz, HW_PERIOD_NUMERATOR, &column)))
        column = segment->n_cols - 1;
    column = CLAMP(column, 0, segment->n_cols - 1);
    while (column > 0 && hw_segment_stamp(base, segment, column) > ns)
        column--;
    while (column + 1 < segment->n_cols && hw_segment_stamp(base, segment, column + 1) <= ns)
        column++;
    return column;
}

static double
share_of(int64_t part_ns, int64_t whole_ns)
{
    return whole_ns > 0 ? (double)part_ns / (double)whole_ns : 0.0;
}

/* Column position of an instant that lies in the run. */
static double
column_in_run(const HwTimeBase *base, guint index, int64_t ns)
{
    const HwRun *run = run_at(base, index);
    guint low, high;
    segments_of_run(base, index, &low, &high);
    guint end = high;
    int64_t first_ns = segment_at(base, low)->first_ns;
    if (ns < first_ns)
        return (double)run->first_col + 0.5 * share_of(ns - run->start_ns, first_ns - run->start_ns);
    while (high - low > 1) {
        guint middle = low + (high - low) / 2;
        if (segment_at(base, middle)->first_ns <= ns)
            low = middle;
        else
            high = middle;
    }
    const HwSegment *segment = segment_at(base, low);
    int64_t column = last_column_until(base, segment, ns);
    int64_t centre_ns = hw_segment_stamp(base, segment, column);
    double centre = (double)(segment->first_col + column) + 0.5;
    if (column + 1 < segment->n_cols) {
        int64_t step_ns = hw_segment_stamp(base, segment, column + 1) - centre_ns;
        return centre + share_of(ns - centre_ns, step_ns);
    }
    if (low + 1 < end)
        return centre + share_of(ns - centre_ns, segment_at(base, low + 1)->first_ns - centre_ns);
    double position = centre + 0.5 * share_of(ns - centre_ns, run->end_ns - centre_ns);
    /* Where the next run begins at the same number, that number is the next run's: stay in this one. */
    double stop = (double)(run->first_col + run->n_cols);
    if (position >= stop && index + 1 < base->runs->len &&
        run_at(base, index + 1)->first_col == run->first_col + run->n_cols)
        position = nextafter(stop, 0.0);
    return position;
}

bool
hw_time_base_column(const HwTimeBase *base, int64_t ns, double *column)
{
    /* One clock but for recordings whose stamps step backwards. */
    for (guint clock = 0; clock + 1 < base->clocks->len; clock++) {
        guint low = g_array_index(base->clocks, guint, clock);
        guint high = g_array_index(base->clocks, guint, clock + 1);
        if (ns < run_at(base, low)->start_ns)
            continue;
        while (high - low > 1) {
            guint middle = low + (high - low) / 2;
            if (run_at(base, middle)->start_ns <= ns)
                low = middle;
            else
                high = middle;
        }
        if (ns <= run_at(base, low)->end_ns) {
            *column = column_in_run(base, low, ns);
            return true;
        }
    }
    return false;
}

guint
hw_time_base_get_n_runs(const HwTimeBase *base)
{
    return base->runs->len;
}

const HwRun *
hw_time_base_get_run(const HwTimeBase *base, guint index)
{
    g_return_val_if_fail(index < base->runs->len, NULL);
    return run_at(base, index);
}

guint
hw_time_base_get_n_voids(const HwTimeBase *base)
{
    return base->voids->len;
}

const HwVoid *
hw_time_base_get_void(const HwTimeBase *base, guint index)
{
    g_return_val_if_fail(index < base->voids->len, NULL);
    return &g_array_index(base->voids, HwVoid, index);
}

guint
hw_time_base_get_n_drops(const HwTimeBase *base)
{
    return base->drops->len;
}

const HwDrop *
hw_time_base_get_drop(const HwTimeBase *base, guint index)
{
    g_return_val_if_fail(index < base->drops->len, NULL);
    return &g_array_index(base->drops, HwDrop, index);
}

int64_t
hw_time_base_get_duration_ns(const HwTimeBase *base)
{
    int64_t sum_ns = 0;
    for (guint clock = 0; clock + 1 < base->clocks->len; clock++) {
        const HwRun *first = run_at(base, g_array_index(base->clocks, guint, clock));
        const HwRun *last = run_at(base, g_array_index(base->clocks, guint, clock + 1) - 1);
        sum_ns += last->end_ns - first->start_ns;
    }
    return sum_ns;
}

guint
hw_time_base_get_n_problems(const HwTimeBase *base)
{
    return base->problems->len;
}

const char *
hw_time_base_get_problem(const HwTimeBase *base, guint index)
{
    g_return_val_if_fail(index < base->problems->len, NULL);
    return base->problems->pdata[index];
}
