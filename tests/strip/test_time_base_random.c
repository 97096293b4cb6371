/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Properties of the time base on recordings drawn at random (fixed seed), and its stamps against arithmetic
 * of another kind: exact rationals compared by cross-multiplication, nothing divided. */
#include "core/strip/axis.h"
#include "core/strip/time_base.h"

#include <math.h>

enum { N_RECORDINGS = 4000, MAX_BLOCKS = 6, N_POSITIONS = 12, SEED = 20270613 };

__extension__ typedef __int128 Wide;

typedef struct {
    HwScan scan;
    guint n_blocks;
    HwTimedBlock blocks[MAX_BLOCKS];
    int64_t *times_ns[MAX_BLOCKS];
    int64_t first_cols[MAX_BLOCKS + 1];
    int64_t offset_fs; /* of the middle of the exposure, × 2 */
} Drawn;

static int64_t
draw_between(GRand *rand, int64_t low, int64_t high)
{
    return low + (int64_t)floor(g_rand_double(rand) * (double)(high - low + 1));
}

static int64_t
draw_times(GRand *rand, Drawn *drawn, guint index, int64_t start_ns, int64_t n, int64_t period_ns)
{
    int64_t *times_ns = g_new(int64_t, n);
    int64_t at_ns = start_ns;
    for (int64_t i = 0; i < n; i++) {
        times_ns[i] = at_ns;
        int what = g_rand_int_range(rand, 0, 20);
        if (what == 0)
            at_ns += draw_between(rand, 1, 40) * period_ns; /* dropped scans */
        else if (what == 1)
            at_ns -= draw_between(rand, 0, 3) * period_ns; /* a step back, or none */
        else
            at_ns += draw_between(rand, MAX(period_ns / 3, 1), period_ns * 4 / 3);
    }
    drawn->times_ns[index] = times_ns;
    drawn->blocks[index].times_ns = times_ns;
    return times_ns[n - 1];
}

static Drawn
draw(GRand *rand)
{
    Drawn drawn = { 0 };
    drawn.scan.rate_nhz = (int64_t)pow(10.0, g_rand_double_range(rand, 11.0, 15.0)); /* 100 Hz … 1 MHz */
    drawn.scan.rate_hz = (double)drawn.scan.rate_nhz / 1e9;
    drawn.scan.stamp = (HwStampPlace)g_rand_int_range(rand, 0, 3);
    drawn.scan.exposure_fs = draw_between(rand, 0, (int64_t)(1e24 / (double)drawn.scan.rate_nhz));
    drawn.offset_fs = drawn.scan.stamp == HW_STAMP_START ? drawn.scan.exposure_fs
                      : drawn.scan.stamp == HW_STAMP_END ? -drawn.scan.exposure_fs
                                                         : 0;
    int64_t period_ns = (int64_t)(1e18 / (double)drawn.scan.rate_nhz);
    int64_t at_ns = draw_between(rand, INT64_C(-1000000000000), INT64_C(1000000000000000));
    drawn.n_blocks = (guint)g_rand_int_range(rand, 1, MAX_BLOCKS + 1);
    for (guint i = 0; i < drawn.n_blocks; i++) {
        HwTimedBlock *block = &drawn.blocks[i];
        int64_t n = g_rand_int_range(rand, 1, 60);
        *block = (HwTimedBlock){ .stamps = (HwStampKind)g_rand_int_range(rand, 0, 3),
                                 .n_columns = n,
                                 .file = "f" };
        block->first_ns = at_ns;
        int64_t last_ns = at_ns;
        if (block->stamps == HW_STAMPS_TIMES)
            last_ns = draw_times(rand, &drawn, i, at_ns, n, period_ns);
        else if (block->stamps == HW_STAMPS_RATE)
            last_ns += (int64_t)((double)(n - 1) * 1e18 / (double)drawn.scan.rate_nhz) + 1;
        else if (n > 1)
            last_ns += draw_between(rand, (n - 1) * period_ns * 2 / 3, (n - 1) * period_ns * 5 / 4) + n;
        block->last_ns = last_ns;
        if (drawn.n_blocks > 1 && g_rand_int_range(rand, 0, 6) == 0)
            block->damage = "f is missing";
        drawn.first_cols[i + 1] = drawn.first_cols[i] + n;
        bool gap = g_rand_boolean(rand);
        at_ns = last_ns + (gap ? draw_between(rand, 1, 50) * period_ns
                               : draw_between(rand, MAX(period_ns / 4, 2), period_ns * 3 / 2));
    }
    return drawn;
}

static void
drop(Drawn *drawn)
{
    for (guint i = 0; i < drawn->n_blocks; i++)
        g_free(drawn->times_ns[i]);
}

/* |given − numerator/denominator| ≤ 1/2, and on a tie given is even. */
static void
assert_half_even(int64_t given, Wide numerator, Wide denominator)
{
    Wide twice_off = 2 * ((Wide)given * denominator - numerator);
    Wide size = twice_off < 0 ? -twice_off : twice_off;
    g_assert_true(size <= denominator);
    g_assert_true(size < denominator || given % 2 == 0);
}

static int64_t
half_exposure_ns(const Drawn *drawn)
{
    /* Nearest whole ns of offset_fs / 2·10^6, told by its remainder. */
    int64_t whole = drawn->offset_fs / 2000000, rest = drawn->offset_fs % 2000000;
    int64_t size = rest < 0 ? -rest : rest;
    if (size > 1000000 || (size == 1000000 && whole % 2 != 0))
        whole += drawn->offset_fs < 0 ? -1 : 1;
    return whole;
}

static void
check_stamps(const Drawn *drawn, const HwTimeBase *base)
{
    int64_t moved_ns = half_exposure_ns(drawn);
    for (guint k = 0; k < drawn->n_blocks; k++) {
        const HwTimedBlock *block = &drawn->blocks[k];
        for (int64_t i = 0; i < block->n_columns; i++) {
            int64_t ns;
            bool there = hw_time_base_instant(base, (double)(drawn->first_cols[k] + i) + 0.5, &ns);
            g_assert_cmpint(there, ==, block->damage == NULL);
            if (!there)
                continue;
            int64_t past_ns = ns - moved_ns - block->first_ns;
            if (block->stamps == HW_STAMPS_TIMES)
                g_assert_cmpint(ns - moved_ns, ==, block->times_ns[i]);
            else if (block->stamps == HW_STAMPS_RATE)
                assert_half_even(past_ns, (Wide)i * INT64_C(1000000000000000000), drawn->scan.rate_nhz);
            else
                assert_half_even(past_ns, (Wide)i * (block->last_ns - block->first_ns),
                                 MAX(block->n_columns - 1, 1));
        }
    }
}

/* The local slope at worst: how many columns half a ns can be. */
static double
columns_of_half_a_ns(const HwTimeBase *base, const HwRun *run, double column)
{
    double low = fmax((double)run->first_col, floor(column - 0.5) + 0.5);
    double high = fmin((double)(run->first_col + run->n_cols), low + 1.0);
    if (column < (double)run->first_col + 0.5)
        high = (double)run->first_col + 0.5;
    if (high == (double)(run->first_col + run->n_cols))
        high = nextafter(high, 0.0);
    int64_t low_ns = 0, high_ns = 0;
    g_assert_true(hw_time_base_instant(base, low, &low_ns));
    g_assert_true(hw_time_base_instant(base, high, &high_ns));
    return high_ns > low_ns ? 0.5 * (high - low) / (double)(high_ns - low_ns) * 1.01 : 1.0;
}

static void
check_run(GRand *rand, const HwTimeBase *base, guint index, bool one_clock)
{
    const HwRun *run = hw_time_base_get_run(base, index);
    double stop = nextafter((double)(run->first_col + run->n_cols), 0.0);
    int64_t former_ns = G_MININT64;
    for (int i = 0; i <= N_POSITIONS; i++) {
        double position = fmin((double)run->first_col + (double)run->n_cols * i / N_POSITIONS, stop);
        if (i > 0 && i < N_POSITIONS)
            position = fmin(position + g_rand_double(rand) * (double)run->n_cols / N_POSITIONS, stop);
        if (i < N_POSITIONS / 2 && i > 0)
            position = floor(position) + (i % 2 == 0 ? 0.5 : 0.0);
        int64_t ns = 0;
        g_assert_true(hw_time_base_instant(base, position, &ns));
        g_assert_cmpint(hw_time_base_run_at(base, position), ==, (int)index);
        g_assert_cmpint(ns, >=, run->start_ns);
        g_assert_cmpint(ns, <=, run->end_ns);
        double back = 0.0;
        g_assert_true(hw_time_base_column(base, ns, &back));
        if (!one_clock)
            continue;
        double allowed = columns_of_half_a_ns(base, run, position) + 1e-9;
        g_assert_cmpfloat(fabs(back - position), <=, allowed);
        int64_t again_ns = 0;
        g_assert_true(hw_time_base_instant(base, back, &again_ns));
        g_assert_cmpint(ABS(again_ns - ns), <=, 1);
    }
    for (int i = 0; i < N_POSITIONS; i++) {
        int64_t length_ns = run->end_ns - run->start_ns;
        int64_t ns = run->start_ns + (int64_t)((double)length_ns * i / (N_POSITIONS - 1));
        double position = 0.0;
        int64_t back_ns = 0;
        g_assert_true(hw_time_base_column(base, ns, &position));
        g_assert_true(hw_time_base_instant(base, position, &back_ns));
        g_assert_cmpint(ABS(back_ns - ns), <=, 1);
        if (one_clock)
            g_assert_cmpint(hw_time_base_run_at(base, position), ==, (int)index);
    }
    for (double position = (double)run->first_col; position < stop; position += 0.25) {
        int64_t ns = 0;
        g_assert_true(hw_time_base_instant(base, position, &ns));
        g_assert_cmpint(ns, >=, former_ns);
        former_ns = ns;
    }
}

/* Runs and voids of one clock tile the time from first to last without a gap or an overlap. */
static void
check_tiling(const HwTimeBase *base)
{
    guint n_runs = hw_time_base_get_n_runs(base);
    for (guint i = 0; i + 1 < n_runs; i++) {
        const HwRun *run = hw_time_base_get_run(base, i), *next = hw_time_base_get_run(base, i + 1);
        g_assert_cmpint(next->first_col, >=, run->first_col + run->n_cols);
        if (next->clock != run->clock)
            continue;
        int64_t at_ns = run->end_ns, at_col = run->first_col + run->n_cols;
        for (guint k = 0; k < hw_time_base_get_n_voids(base); k++) {
            const HwVoid *empty = hw_time_base_get_void(base, k);
            if (empty->after_column < run->first_col + run->n_cols ||
                empty->after_column + empty->n_cols > next->first_col)
                continue;
            g_assert_cmpint(empty->start_ns, ==, at_ns);
            g_assert_cmpint(empty->after_column, ==, at_col);
            g_assert_cmpint(empty->duration_ns, >=, 0);
            at_ns += empty->duration_ns;
            at_col += empty->n_cols;
            double none = 0.0;
            if (empty->duration_ns > 2)
                g_assert_false(hw_time_base_column(base, empty->start_ns + empty->duration_ns / 2, &none) &&
                               hw_time_base_get_run(base, (guint)hw_time_base_run_at(base, none))->clock ==
                                   run->clock);
        }
        g_assert_cmpint(next->start_ns, ==, at_ns);
        g_assert_cmpint(next->first_col, ==, at_col);
    }
}

/* Every column is one cell; no void is closed up; the way to the axis and back is exact. */
static void
check_axis(GRand *rand, const HwTimeBase *base)
{
    g_autoptr(HwAxis) axis = hw_axis_new(base);
    int64_t cells = 0;
    for (guint i = 0; i < hw_axis_get_n_spans(axis); i++) {
        const HwAxisSpan *span = hw_axis_get_span(axis, i);
        g_assert_cmpint(span->first_cell, ==, cells);
        g_assert_cmpint(span->n_cells, >=, 1);
        cells += span->n_cells;
        double inside = (double)span->first_cell + g_rand_double(rand) * (double)span->n_cells;
        double column = -1.0;
        g_assert_cmpuint(hw_axis_span_at(axis, inside), ==, i);
        g_assert_cmpint(hw_axis_column(axis, inside, &column), ==, span->void_index < 0);
        if (span->void_index < 0)
            g_assert_cmpfloat_with_epsilon(hw_axis_position(axis, column), inside, 1e-9);
    }
    g_assert_cmpint(hw_axis_get_n_cells(axis), ==, cells);
}

static void
what_holds_for_every_recording(void)
{
    g_test_message("seed %d", SEED);
    g_autoptr(GRand) rand = g_rand_new_with_seed(SEED);
    guint n_voids = 0, n_clocks = 0;
    for (int i = 0; i < N_RECORDINGS; i++) {
        Drawn drawn = draw(rand);
        g_autoptr(GError) error = NULL;
        g_autoptr(HwTimeBase) base = hw_time_base_new(&drawn.scan, drawn.blocks, drawn.n_blocks, &error);
        g_assert_no_error(error);
        g_assert_cmpint(hw_time_base_get_n_columns(base), ==, drawn.first_cols[drawn.n_blocks]);
        check_stamps(&drawn, base);
        guint n_runs = hw_time_base_get_n_runs(base);
        bool one_clock = n_runs > 0 && hw_time_base_get_run(base, 0)->clock ==
                                           hw_time_base_get_run(base, n_runs - 1)->clock;
        for (guint k = 0; k < n_runs; k++)
            check_run(rand, base, k, one_clock);
        check_tiling(base);
        check_axis(rand, base);
        n_voids += hw_time_base_get_n_voids(base);
        n_clocks += !one_clock;
        drop(&drawn);
    }
    /* The draw is worth something only while it brings all of these. */
    g_assert_cmpuint(n_voids, >, N_RECORDINGS);
    g_assert_cmpuint(n_clocks, >, N_RECORDINGS / 10);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
    g_test_add_func("/strip/time_base/what_holds_for_every_recording", what_holds_for_every_recording);
    return g_test_run();
}
