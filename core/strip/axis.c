/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/strip/axis.h"

#include <math.h>

struct HwAxis {
    gint references;
    HwTimeBase *base;
    GArray *spans; /* of HwAxisSpan */
    int64_t n_cells;
    bool one_clock; /* then spans are in order of time too */
};

static void
add_run(HwAxis *axis, const HwRun *run)
{
    HwAxisSpan span = { axis->n_cells, run->n_cols, run->first_col, -1, run->start_ns, run->end_ns };
    g_array_append_val(axis->spans, span);
    axis->n_cells += span.n_cells;
}

static void
add_void(HwAxis *axis, const HwVoid *empty, guint index)
{
    int64_t cells = llrint((double)empty->duration_ns / hw_time_base_get_period_ns(axis->base));
    HwAxisSpan span = { axis->n_cells, MAX(cells, 1),   empty->after_column,
                        (int)index,    empty->start_ns, empty->start_ns + empty->duration_ns };
    g_array_append_val(axis->spans, span);
    axis->n_cells += span.n_cells;
}

HwAxis *
hw_axis_new(const HwTimeBase *base)
{
    HwAxis *axis = g_new0(HwAxis, 1);
    axis->references = 1;
    axis->base = hw_time_base_ref((HwTimeBase *)base);
    axis->spans = g_array_new(FALSE, FALSE, sizeof(HwAxisSpan));
    guint n_runs = hw_time_base_get_n_runs(base), run = 0;
    axis->one_clock =
        n_runs == 0 || hw_time_base_get_run(base, 0)->clock == hw_time_base_get_run(base, n_runs - 1)->clock;
    for (guint i = 0; i < hw_time_base_get_n_voids(base); i++) {
        const HwVoid *empty = hw_time_base_get_void(base, i);
        for (; run < n_runs && hw_time_base_get_run(base, run)->first_col < empty->after_column; run++)
            add_run(axis, hw_time_base_get_run(base, run));
        add_void(axis, empty, i);
    }
    for (; run < n_runs; run++)
        add_run(axis, hw_time_base_get_run(base, run));
    return axis;
}

HwAxis *
hw_axis_ref(HwAxis *axis)
{
    g_atomic_int_inc(&axis->references);
    return axis;
}

void
hw_axis_unref(HwAxis *axis)
{
    if (axis == NULL || !g_atomic_int_dec_and_test(&axis->references))
        return;
    hw_time_base_unref(axis->base);
    g_array_unref(axis->spans);
    g_free(axis);
}

int64_t
hw_axis_get_n_cells(const HwAxis *axis)
{
    return axis->n_cells;
}

guint
hw_axis_get_n_spans(const HwAxis *axis)
{
    return axis->spans->len;
}

const HwAxisSpan *
hw_axis_get_span(const HwAxis *axis, guint index)
{
    g_return_val_if_fail(index < axis->spans->len, NULL);
    return &g_array_index(axis->spans, HwAxisSpan, index);
}

guint
hw_axis_span_at(const HwAxis *axis, double position)
{
    guint low = 0, high = axis->spans->len;
    while (high - low > 1) {
        guint middle = low + (high - low) / 2;
        if ((double)hw_axis_get_span(axis, middle)->first_cell <= position)
            low = middle;
        else
            high = middle;
    }
    return low;
}

/* Columns that a span numbers: none for scans that were never made. */
static int64_t
columns_of(const HwAxis *axis, const HwAxisSpan *span)
{
    return span->void_index < 0 ? span->n_cells
                                : hw_time_base_get_void(axis->base, (guint)span->void_index)->n_cols;
}

double
hw_axis_position(const HwAxis *axis, double column)
{
    guint low = 0, high = axis->spans->len;
    if (high == 0)
        return 0.0;
    /* The last span that starts at or before the column: of several at one number the run, for it comes last.
     */
    while (high - low > 1) {
        guint middle = low + (high - low) / 2;
        if ((double)hw_axis_get_span(axis, middle)->first_col <= column)
            low = middle;
        else
            high = middle;
    }
    const HwAxisSpan *span = hw_axis_get_span(axis, low);
    int64_t columns = columns_of(axis, span);
    double past = column - (double)span->first_col;
    /* The end of the last run, where voids without numbers of their own follow it. */
    while (columns == 0 && low > 0 && past >= 0.0 &&
           span->first_col == hw_time_base_get_n_columns(axis->base)) {
        span = hw_axis_get_span(axis, --low);
        columns = columns_of(axis, span);
        past = column - (double)span->first_col;
    }
    double share = columns > 0 ? CLAMP(past / (double)columns, 0.0, 1.0) : 0.0;
    double within = span->void_index < 0 ? CLAMP(past, 0.0, (double)columns) : share * (double)span->n_cells;
    return (double)span->first_cell + within;
}

bool
hw_axis_column(const HwAxis *axis, double position, double *column)
{
    if (!(position >= 0.0 && position <= (double)axis->n_cells) || axis->spans->len == 0)
        return false;
    guint index = hw_axis_span_at(axis, position);
    const HwAxisSpan *span = hw_axis_get_span(axis, index);
    if (span->void_index >= 0)
        return false;
    double stop = (double)(span->first_col + span->n_cells);
    double found = (double)span->first_col + (position - (double)span->first_cell);
    /* A position before the span's end is a column before it, whatever the sum rounds to. */
    *column = found >= stop && index + 1 < axis->spans->len ? nextafter(stop, 0.0) : MIN(found, stop);
    return true;
}

int64_t
hw_axis_instant(const HwAxis *axis, double position)
{
    if (axis->spans->len == 0)
        return 0;
    double period_ns = hw_time_base_get_period_ns(axis->base);
    const HwAxisSpan *first = hw_axis_get_span(axis, 0);
    const HwAxisSpan *last = hw_axis_get_span(axis, axis->spans->len - 1);
    if (position < 0.0)
        return first->start_ns + llrint(position * period_ns);
    if (position >= (double)axis->n_cells)
        return last->end_ns + llrint((position - (double)axis->n_cells) * period_ns);
    double column;
    int64_t ns;
    if (hw_axis_column(axis, position, &column) && hw_time_base_instant(axis->base, column, &ns))
        return ns;
    const HwAxisSpan *span = hw_axis_get_span(axis, hw_axis_span_at(axis, position));
    double share = (position - (double)span->first_cell) / (double)span->n_cells;
    return span->start_ns + llrint(share * (double)(span->end_ns - span->start_ns));
}

static const HwAxisSpan *
span_of_instant(const HwAxis *axis, int64_t ns)
{
    guint low = 0, high = axis->spans->len;
    if (!axis->one_clock) {
        for (guint i = 0; i < high; i++) {
            const HwAxisSpan *span = hw_axis_get_span(axis, i);
            if (span->start_ns <= ns && ns <= span->end_ns)
                return span;
        }
        return hw_axis_get_span(axis, ns < hw_axis_get_span(axis, 0)->start_ns ? 0 : high - 1);
    }
    while (high - low > 1) {
        guint middle = low + (high - low) / 2;
        if (hw_axis_get_span(axis, middle)->start_ns <= ns)
            low = middle;
        else
            high = middle;
    }
    return hw_axis_get_span(axis, low);
}

double
hw_axis_position_of_instant(const HwAxis *axis, int64_t ns)
{
    double column;
    if (axis->spans->len == 0)
        return 0.0;
    if (hw_time_base_column(axis->base, ns, &column))
        return hw_axis_position(axis, column);
    const HwAxisSpan *span = span_of_instant(axis, ns);
    int64_t length_ns = span->end_ns - span->start_ns;
    double share = length_ns > 0 ? (double)(ns - span->start_ns) / (double)length_ns : 0.0;
    return (double)span->first_cell + CLAMP(share, 0.0, 1.0) * (double)span->n_cells;
}
