/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What the stamps of even blocks imply: a rate common to them, and blocks that miss columns by it. */
#include "core/base/number.h"
#include "core/strip/time_base_private.h"

#include <math.h>

/* A crystal keeps within this (common practice), so more is said, once. */
#define COMMON_DEVIATION_PPM 100.0

__extension__ typedef __int128 Wide;

/* Steps from the first column to the last, and the time they took: a period is span_ns / steps. */
typedef struct {
    int64_t steps;
    int64_t span_ns;
} Pace;

static int
compare_paces(gconstpointer a, gconstpointer b)
{
    const Pace *first = a, *second = b;
    Wide left = (Wide)first->span_ns * second->steps;
    Wide right = (Wide)second->span_ns * first->steps;
    return left < right ? -1 : left > right;
}

static double
deviation_ppm(const HwTimeBase *base, const Pace *pace)
{
    double period_ns = (double)pace->span_ns / (double)pace->steps;
    return (hw_time_base_get_period_ns(base) / period_ns - 1.0) * 1e6;
}

/* Of an even number the one of the middle two that is nearer to the nominal rate: their mean would lay one
 * block's missing column half on the other. */
static Pace
median_pace(const HwTimeBase *base, GArray *paces)
{
    g_array_sort(paces, compare_paces);
    const Pace *upper = &g_array_index(paces, Pace, paces->len / 2);
    const Pace *lower = &g_array_index(paces, Pace, (paces->len - 1) / 2);
    return fabs(deviation_ppm(base, lower)) <= fabs(deviation_ppm(base, upper)) ? *lower : *upper;
}

static bool
pace_of(const HwTimedBlock *block, Pace *pace)
{
    *pace = (Pace){ block->n_columns - 1, block->last_ns - block->first_ns };
    return block->stamps == HW_STAMPS_EVEN && block->damage == NULL && block->n_columns >= 2;
}

/* Columns that the median pace would have made beyond those there are, rounded, halves away from 0. */
static int64_t
missing_columns(const Pace *pace, const Pace *median)
{
    Wide excess = (Wide)pace->span_ns * median->steps - (Wide)pace->steps * median->span_ns;
    Wide size = excess < 0 ? -excess : excess;
    Wide rounded = (2 * size + median->span_ns) / (2 * (Wide)median->span_ns);
    return (int64_t)(excess < 0 ? -rounded : rounded);
}

static void
add_drop(HwTimeBase *base, const HwTimedBlock *block, guint index, int64_t first_col, int64_t missing)
{
    HwDrop drop = { index, first_col, block->n_columns, missing };
    g_array_append_val(base->drops, drop);
    hw_time_base_add_problem(
        base, g_strdup_printf("%s: its stamps imply %" G_GINT64_FORMAT " columns %s than it has; "
                              "a time read in it may be off by as much.",
                              block->file, missing > 0 ? missing : -missing, missing > 0 ? "more" : "fewer"));
}

void
hw_time_base_judge_rates(HwTimeBase *base, const HwTimedBlock *blocks, const int64_t *first_cols,
                         guint n_blocks)
{
    g_autoptr(GArray) paces = g_array_new(FALSE, FALSE, sizeof(Pace));
    Pace pace;
    for (guint i = 0; i < n_blocks; i++) {
        if (pace_of(&blocks[i], &pace))
            g_array_append_val(paces, pace);
    }
    if (paces->len == 0)
        return;
    Pace median = median_pace(base, paces);
    for (guint i = 0; i < n_blocks; i++) {
        int64_t missing = pace_of(&blocks[i], &pace) ? missing_columns(&pace, &median) : 0;
        if (missing != 0)
            add_drop(base, &blocks[i], i, first_cols[i], missing);
    }
    double ppm = deviation_ppm(base, &median);
    if (fabs(ppm) <= COMMON_DEVIATION_PPM)
        return;
    g_autofree char *implied = hw_number_dup_fixed(1e9 * (double)median.steps / (double)median.span_ns, 3);
    g_autofree char *nominal = hw_number_dup_fixed((double)base->rate_nhz / 1e9, 3);
    g_autofree char *size = hw_number_dup_fixed(fabs(ppm), 0);
    hw_time_base_add_problem(base,
                             g_strdup_printf("The stamps imply %s Hz where the camera claims %s Hz, %s ppm "
                                             "%s; calibrate the scan rate before speeds are relied on.",
                                             implied, nominal, size, ppm > 0.0 ? "more" : "less"));
}
