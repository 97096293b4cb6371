/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The axis that pictures are laid out on: the strip's columns in order, with voids opened to their length in
 * nominal columns (whole, at least 1), so that no void is ever closed up and yet each column is one cell. A
 * position is a double in cells. Immutable, reference-counted. */
#pragma once

#include "core/strip/time_base.h"

#include <glib.h>
#include <stdbool.h>
#include <stdint.h>

typedef struct {
    int64_t first_cell;
    int64_t n_cells;
    int64_t first_col; /* of a run; for a void, its after_column */
    int void_index;    /* −1: readable columns */
    int64_t start_ns;
    int64_t end_ns;
} HwAxisSpan;

typedef struct HwAxis HwAxis;

HwAxis *hw_axis_new(const HwTimeBase *base);
HwAxis *hw_axis_ref(HwAxis *axis);
void hw_axis_unref(HwAxis *axis);

int64_t hw_axis_get_n_cells(const HwAxis *axis);
guint hw_axis_get_n_spans(const HwAxis *axis);
const HwAxisSpan *hw_axis_get_span(const HwAxis *axis, guint index);

/* Span that holds a position; positions off the axis give the first or last. */
guint hw_axis_span_at(const HwAxis *axis, double position);

/* Position of a column position (clamped to the axis). */
double hw_axis_position(const HwAxis *axis, double column);

/* Column position at a position; false in a void or off the axis. */
bool hw_axis_column(const HwAxis *axis, double position, double *column);

/* Instant at a position, voids included (linear in them), beyond the ends by the nominal period. For rulers.
 */
int64_t hw_axis_instant(const HwAxis *axis, double position);

/* Position of an instant, voids included; clamped to the axis. */
double hw_axis_position_of_instant(const HwAxis *axis, int64_t ns);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwAxis, hw_axis_unref)
