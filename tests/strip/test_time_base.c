/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The time base against tables worked by hand, at 2,000 Hz unless said: one column is 500,000 ns. */
#include "core/strip/strip_error.h"
#include "core/strip/time_base.h"

#include <math.h>
#include <string.h>

#define P INT64_C(500000)

static HwScan
scan_of(int64_t rate_hz, HwStampPlace stamp, int64_t exposure_us)
{
    return (HwScan){ .rate_nhz = rate_hz * INT64_C(1000000000),
                     .rate_hz = (double)rate_hz,
                     .exposure_fs = exposure_us * INT64_C(1000000000),
                     .exposure_known = true,
                     .stamp = stamp };
}

static HwTimedBlock
even(const char *file, int64_t n, int64_t first_ns, int64_t last_ns)
{
    return (HwTimedBlock){
        .stamps = HW_STAMPS_EVEN, .n_columns = n, .first_ns = first_ns, .last_ns = last_ns, .file = file
    };
}

static HwTimedBlock
by_rate(const char *file, int64_t n, int64_t first_ns)
{
    return (HwTimedBlock){ .stamps = HW_STAMPS_RATE, .n_columns = n, .first_ns = first_ns, .file = file };
}

static HwTimedBlock
by_times(const char *file, int64_t n, const int64_t *times_ns)
{
    return (HwTimedBlock){ .stamps = HW_STAMPS_TIMES, .n_columns = n, .times_ns = times_ns, .file = file };
}

static HwTimedBlock
damaged(HwTimedBlock block, const char *reason)
{
    block.damage = reason;
    return block;
}

static HwTimeBase *
base_of(const HwScan *scan, const HwTimedBlock *blocks, guint n)
{
    g_autoptr(GError) error = NULL;
    HwTimeBase *base = hw_time_base_new(scan, blocks, n, &error);
    g_assert_no_error(error);
    return base;
}

static int64_t
instant(const HwTimeBase *base, double column)
{
    int64_t ns = G_MININT64;
    g_assert_true(hw_time_base_instant(base, column, &ns));
    return ns;
}

static void
assert_nothing_at(const HwTimeBase *base, double column)
{
    int64_t ns = 77;
    g_assert_false(hw_time_base_instant(base, column, &ns));
    g_assert_cmpint(ns, ==, 77);
    g_assert_cmpint(hw_time_base_run_at(base, column), ==, -1);
}

static void
assert_no_column_at(const HwTimeBase *base, int64_t ns)
{
    double column = 77.0;
    g_assert_false(hw_time_base_column(base, ns, &column));
    g_assert_cmpfloat(column, ==, 77.0);
}

static double
column(const HwTimeBase *base, int64_t ns)
{
    double position = -1.0;
    g_assert_true(hw_time_base_column(base, ns, &position));
    return position;
}

static void
assert_void(const HwTimeBase *base, guint index, HwVoidKind kind, int64_t after, int64_t n_cols,
            int64_t start_ns, int64_t duration_ns)
{
    const HwVoid *found = hw_time_base_get_void(base, index);
    g_assert_cmpint(found->kind, ==, kind);
    g_assert_cmpint(found->after_column, ==, after);
    g_assert_cmpint(found->n_cols, ==, n_cols);
    g_assert_cmpint(found->start_ns, ==, start_ns);
    g_assert_cmpint(found->duration_ns, ==, duration_ns);
}

static bool
has_problem(const HwTimeBase *base, const char *text)
{
    for (guint i = 0; i < hw_time_base_get_n_problems(base); i++) {
        if (strstr(hw_time_base_get_problem(base, i), text) != NULL)
            return true;
    }
    return false;
}

/* Guard: columns shifted by half an exposure. */
static void
stamps_move_to_the_middle_of_the_exposure_once(void)
{
    static const struct {
        HwStampPlace stamp;
        int64_t centre_ns; /* of column 0, stamp 1,000,000, exposure 400 µs */
    } cases[] = { { HW_STAMP_START, 1200000 }, { HW_STAMP_MIDDLE, 1000000 }, { HW_STAMP_END, 800000 } };
    const int64_t times_ns[] = { 1000000, 1500000, 2000000 };
    HwTimedBlock kinds[] = { even("a", 3, 1000000, 2000000), by_rate("a", 3, 1000000),
                             by_times("a", 3, times_ns) };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        for (guint k = 0; k < G_N_ELEMENTS(kinds); k++) {
            HwScan scan = scan_of(2000, cases[i].stamp, 400);
            g_autoptr(HwTimeBase) base = base_of(&scan, &kinds[k], 1);
            g_assert_cmpint(instant(base, 0.5), ==, cases[i].centre_ns);
            g_assert_cmpint(instant(base, 2.5), ==, cases[i].centre_ns + 2 * P);
            g_assert_cmpint(instant(base, 0.0), ==, cases[i].centre_ns - P / 2);
            g_assert_cmpint(instant(base, 3.0), ==, cases[i].centre_ns + 2 * P + P / 2);
            g_assert_cmpfloat(column(base, cases[i].centre_ns + P), ==, 1.5);
        }
    }
}

/* An exposure of 3 ns has its middle 1.5 ns after its start: 2 by half to even; of 5 ns 2.5: 2 as well. */
static void
half_an_exposure_rounds_half_to_even(void)
{
    static const struct {
        int64_t exposure_fs, moved_ns;
    } cases[] = { { 3000000, 2 }, { 5000000, 2 }, { 1000000, 0 }, { 1000001, 1 }, { 7000000, 4 } };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        HwScan scan = scan_of(2000, HW_STAMP_START, 0);
        scan.exposure_fs = cases[i].exposure_fs;
        HwTimedBlock block = by_rate("a", 2, 1000);
        g_autoptr(HwTimeBase) base = base_of(&scan, &block, 1);
        g_assert_cmpint(instant(base, 0.5), ==, 1000 + cases[i].moved_ns);
        scan.stamp = HW_STAMP_END;
        g_autoptr(HwTimeBase) ended = base_of(&scan, &block, 1);
        g_assert_cmpint(instant(ended, 0.5), ==, 1000 - cases[i].moved_ns);
    }
}

/* first + 10·i/4 = 0, 2.5, 5, 7.5, 10: half to even gives 0, 2, 5, 8, 10. */
static void
even_stamps_round_half_to_even(void)
{
    HwScan scan = scan_of(1000000, HW_STAMP_MIDDLE, 0);
    HwTimedBlock block = even("a", 5, 0, 10);
    g_autoptr(HwTimeBase) base = base_of(&scan, &block, 1);
    static const int64_t wanted_ns[] = { 0, 2, 5, 8, 10 };
    for (int i = 0; i < 5; i++)
        g_assert_cmpint(instant(base, i + 0.5), ==, wanted_ns[i]);
}

/* 3,000 Hz: i·333,333⅓. And the last of ten million columns: 9,999,999 · 10^9 / 3000 = 3,333,333,000,000. */
static void
rate_stamps_do_not_drift(void)
{
    HwScan scan = scan_of(3000, HW_STAMP_MIDDLE, 0);
    HwTimedBlock block = by_rate("a", 10000000, 0);
    g_autoptr(HwTimeBase) base = base_of(&scan, &block, 1);
    g_assert_cmpint(instant(base, 1.5), ==, 333333);
    g_assert_cmpint(instant(base, 2.5), ==, 666667);
    g_assert_cmpint(instant(base, 3.5), ==, 1000000);
    g_assert_cmpint(instant(base, 9999999.5), ==, INT64_C(3333333000000));
}

/* Guard: a void closed up. Five columns at 0 … 2 ms, the next at 4.5 ms: 2.5 ms apart, a void of 2.0 ms. */
static void
a_gap_between_blocks_is_a_void(void)
{
    HwScan scan = scan_of(2000, HW_STAMP_MIDDLE, 0);
    HwTimedBlock blocks[] = { even("a.png", 5, 0, 4 * P), by_rate("b.png", 5, 9 * P) };
    g_autoptr(HwTimeBase) base = base_of(&scan, blocks, 2);
    g_assert_cmpuint(hw_time_base_get_n_runs(base), ==, 2);
    g_assert_cmpuint(hw_time_base_get_n_voids(base), ==, 1);
    assert_void(base, 0, HW_VOID_NOT_SCANNED, 5, 0, 4 * P + P / 2, 4 * P);
    g_assert_cmpint(hw_time_base_get_n_columns(base), ==, 10);
    g_assert_cmpint(instant(base, 5.0), ==, 9 * P - P / 2);
    g_assert_cmpint(instant(base, 4.999), ==, 4 * P + P / 2 - P / 1000);
    assert_no_column_at(base, 6 * P);
    g_assert_cmpint(hw_time_base_get_duration_ns(base), ==, 14 * P);
    g_assert_true(has_problem(base, "a.png and b.png"));
    /* The very end of the first run is still a place in it, not the start of the next. */
    g_assert_cmpfloat(column(base, 4 * P + P / 2), <, 5.0);
    g_assert_cmpint(hw_time_base_run_at(base, column(base, 4 * P + P / 2)), ==, 0);
    g_assert_cmpint(hw_time_base_get_run(base, 0)->clock, ==, hw_time_base_get_run(base, 1)->clock);
}

/* 1.5 periods are no void, one ns more is. */
static void
a_void_begins_above_one_and_a_half_periods(void)
{
    for (int64_t more_ns = 0; more_ns < 2; more_ns++) {
        HwScan scan = scan_of(2000, HW_STAMP_MIDDLE, 0);
        HwTimedBlock blocks[] = { by_rate("a", 2, 0), by_rate("b", 2, P + P + P / 2 + more_ns) };
        const int64_t times_ns[] = { 0, P, P + P + P / 2 + more_ns, 4 * P };
        HwTimedBlock times = by_times("t", 4, times_ns);
        g_autoptr(HwTimeBase) between = base_of(&scan, blocks, 2);
        g_autoptr(HwTimeBase) inside = base_of(&scan, &times, 1);
        g_assert_cmpuint(hw_time_base_get_n_voids(between), ==, more_ns);
        g_assert_cmpuint(hw_time_base_get_n_voids(inside), ==, more_ns);
        if (more_ns == 0) {
            g_assert_cmpint(instant(between, 2.0), ==, P + 3 * P / 4);
            g_assert_cmpint(instant(inside, 2.0), ==, P + 3 * P / 4);
        } else {
            assert_void(between, 0, HW_VOID_NOT_SCANNED, 2, 0, P + P / 2, P / 2 + 1);
            assert_void(inside, 0, HW_VOID_NOT_SCANNED, 2, 0, P + P / 2, P / 2 + 1);
        }
    }
}

static void
scans_closer_than_half_a_period_are_reported_once_a_block(void)
{
    HwScan scan = scan_of(2000, HW_STAMP_MIDDLE, 0);
    const int64_t close_ns[] = { 0, 249999, 499998, 749997, 1249997 };
    const int64_t just_ns[] = { 0, 250000, 500000, 750000 };
    HwTimedBlock close = by_times("t", 5, close_ns), just = by_times("t", 4, just_ns);
    g_autoptr(HwTimeBase) told = base_of(&scan, &close, 1);
    g_assert_cmpuint(hw_time_base_get_n_problems(told), ==, 1);
    g_assert_true(has_problem(told, "t: 3 times"));
    g_autoptr(HwTimeBase) silent = base_of(&scan, &just, 1);
    g_assert_cmpuint(hw_time_base_get_n_problems(silent), ==, 0);
    HwTimedBlock blocks[] = { by_rate("a", 2, 0), by_rate("b.png", 2, P + 249999) };
    g_autoptr(HwTimeBase) between = base_of(&scan, blocks, 2);
    g_assert_true(has_problem(between, "b.png: 1 times"));
    g_assert_cmpuint(hw_time_base_get_n_voids(between), ==, 0);
}

/* Guard: a clock set back. The second column at 5 P is not the first one's neighbour. */
static void
a_step_that_does_not_advance_splits_run_and_clock(void)
{
    HwScan scan = scan_of(2000, HW_STAMP_MIDDLE, 0);
    const int64_t times_ns[] = { 4 * P, 5 * P, 6 * P, 5 * P, 6 * P, 7 * P, 7 * P };
    HwTimedBlock block = by_times("t.png", 7, times_ns);
    g_autoptr(HwTimeBase) base = base_of(&scan, &block, 1);
    g_assert_cmpuint(hw_time_base_get_n_runs(base), ==, 3);
    g_assert_cmpuint(hw_time_base_get_n_voids(base), ==, 0);
    for (guint i = 0; i < 3; i++)
        g_assert_cmpuint(hw_time_base_get_run(base, i)->clock, ==, i);
    g_assert_cmpint(instant(base, 2.5), ==, 6 * P);
    g_assert_cmpint(instant(base, 3.5), ==, 5 * P);
    g_assert_cmpint(instant(base, 3.0), ==, 5 * P - P / 2);
    /* An instant that stands twice is given in the earlier run. */
    g_assert_cmpfloat(column(base, 5 * P), ==, 1.5);
    g_assert_cmpfloat(column(base, 6 * P + P / 2), <, 3.0);
    g_assert_cmpfloat(column(base, 7 * P), ==, 5.5);
    g_assert_true(has_problem(base, "t.png: its stamps do not advance in 2 places"));
}

/* Guard: blocks out of order. */
static void
a_block_that_starts_before_the_former_ones_end_is_refused(void)
{
    HwScan scan = scan_of(2000, HW_STAMP_MIDDLE, 0);
    const int64_t times_ns[] = { 0, P, 2 * P };
    HwTimedBlock formers[] = { even("a", 3, 0, 2 * P), by_rate("a", 3, 0), by_times("a", 3, times_ns),
                               damaged(by_rate("a", 3, 0), "a is missing") };
    for (guint i = 0; i < G_N_ELEMENTS(formers); i++) {
        for (int64_t start_ns = 2 * P - 1; start_ns <= 2 * P + 1; start_ns++) {
            HwTimedBlock blocks[] = { formers[i], by_rate("later.png", 2, start_ns) };
            g_autoptr(GError) error = NULL;
            g_autoptr(HwTimeBase) base = hw_time_base_new(&scan, blocks, 2, &error);
            if (start_ns > 2 * P) {
                g_assert_no_error(error);
                continue;
            }
            g_assert_null(base);
            g_assert_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_MANIFEST);
            g_assert_nonnull(strstr(error->message, "later.png"));
        }
    }
}

/* Guard: a hidden drop. Block c took one, two, … periods more than its 100 columns take. */
static void
an_even_block_that_took_too_long_is_a_suspected_drop(void)
{
    static const struct {
        int64_t extra_ns, missing;
    } cases[] = { { 0, 0 },     { P / 2 - 1, 0 },  { P / 2, 1 },   { P, 1 },      { P + P / 2, 2 },
                  { 3 * P, 3 }, { -P / 2 + 1, 0 }, { -P / 2, -1 }, { -2 * P, -2 } };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        HwScan scan = scan_of(2000, HW_STAMP_MIDDLE, 0);
        HwTimedBlock blocks[] = { even("a", 100, 0, 99 * P), even("b", 100, 100 * P, 199 * P),
                                  even("c.png", 100, 200 * P, 299 * P + cases[i].extra_ns),
                                  even("d", 100, 310 * P, 409 * P) };
        g_autoptr(HwTimeBase) base = base_of(&scan, blocks, 4);
        g_assert_cmpuint(hw_time_base_get_n_drops(base), ==, cases[i].missing != 0);
        g_assert_cmpint(has_problem(base, "c.png: its stamps imply"), ==, cases[i].missing != 0);
        if (cases[i].missing == 0)
            continue;
        const HwDrop *drop = hw_time_base_get_drop(base, 0);
        g_assert_cmpuint(drop->block, ==, 2);
        g_assert_cmpint(drop->first_col, ==, 200);
        g_assert_cmpint(drop->n_cols, ==, 100);
        g_assert_cmpint(drop->missing, ==, cases[i].missing);
    }
}

/* Of two blocks the one that fits the nominal rate is believed. */
static void
of_two_blocks_the_slower_one_has_the_drop(void)
{
    HwScan scan = scan_of(2000, HW_STAMP_MIDDLE, 0);
    HwTimedBlock blocks[] = { even("a", 100, 0, 100 * P), even("b", 100, 101 * P, 200 * P) };
    g_autoptr(HwTimeBase) base = base_of(&scan, blocks, 2);
    g_assert_cmpuint(hw_time_base_get_n_drops(base), ==, 1);
    g_assert_cmpuint(hw_time_base_get_drop(base, 0)->block, ==, 0);
    g_assert_cmpint(hw_time_base_get_drop(base, 0)->missing, ==, 1);
}

/* 2,000 Hz claimed, 1,999.6 Hz kept: 1 period of 500,100 ns in all blocks, −200 ppm. */
static void
a_deviation_common_to_all_is_reported_once_and_is_no_drop(void)
{
    HwScan scan = scan_of(2000, HW_STAMP_MIDDLE, 0);
    HwTimedBlock blocks[5];
    for (int i = 0; i < 5; i++)
        blocks[i] = even("a", 10000, i * INT64_C(10000) * 500100, (i * INT64_C(10000) + 9999) * 500100);
    g_autoptr(HwTimeBase) base = base_of(&scan, blocks, 5);
    g_assert_cmpuint(hw_time_base_get_n_drops(base), ==, 0);
    g_assert_cmpuint(hw_time_base_get_n_voids(base), ==, 0);
    g_assert_cmpuint(hw_time_base_get_n_problems(base), ==, 1);
    g_assert_true(has_problem(base, "1999.600 Hz"));
    g_assert_true(has_problem(base, "200 ppm less"));
    /* 50 ppm are within what a crystal keeps. */
    for (int i = 0; i < 5; i++)
        blocks[i] = even("a", 10000, i * INT64_C(10000) * 500025, (i * INT64_C(10000) + 9999) * 500025);
    g_autoptr(HwTimeBase) usual = base_of(&scan, blocks, 5);
    g_assert_cmpuint(hw_time_base_get_n_problems(usual), ==, 0);
}

static void
a_damaged_block_is_a_void_that_keeps_its_columns(void)
{
    HwScan scan = scan_of(2000, HW_STAMP_MIDDLE, 0);
    HwTimedBlock blocks[] = { even("a", 10, 0, 9 * P), damaged(even("b", 10, 10 * P, 19 * P), "b is missing"),
                              even("c", 10, 20 * P, 29 * P) };
    g_autoptr(HwTimeBase) base = base_of(&scan, blocks, 3);
    g_assert_cmpuint(hw_time_base_get_n_voids(base), ==, 1);
    assert_void(base, 0, HW_VOID_DAMAGED, 10, 10, 10 * P - P / 2, 10 * P);
    g_assert_cmpstr(hw_time_base_get_void(base, 0)->reason, ==, "b is missing");
    g_assert_cmpint(hw_time_base_get_n_columns(base), ==, 30);
    g_assert_cmpint(instant(base, 20.5), ==, 20 * P);
    g_assert_cmpint(instant(base, 10.0), ==, 10 * P - P / 2);
    assert_nothing_at(base, 10.5);
    assert_nothing_at(base, 19.9);
    assert_no_column_at(base, 15 * P);
    g_assert_true(has_problem(base, "b is missing"));
    /* Damage found later shifts no number and no time. */
    blocks[1].damage = NULL;
    g_autoptr(HwTimeBase) sound = base_of(&scan, blocks, 3);
    g_assert_cmpint(instant(sound, 20.5), ==, instant(base, 20.5));
    g_assert_cmpint(hw_time_base_get_duration_ns(sound), ==, hw_time_base_get_duration_ns(base));
}

static void
dropped_scans_beside_a_damaged_block_are_a_void_of_their_own(void)
{
    HwScan scan = scan_of(2000, HW_STAMP_MIDDLE, 0);
    HwTimedBlock blocks[] = { even("a", 10, 0, 9 * P), damaged(even("b", 10, 15 * P, 24 * P), "b is missing"),
                              even("c", 10, 30 * P, 39 * P) };
    g_autoptr(HwTimeBase) base = base_of(&scan, blocks, 3);
    g_assert_cmpuint(hw_time_base_get_n_voids(base), ==, 3);
    assert_void(base, 0, HW_VOID_NOT_SCANNED, 10, 0, 9 * P + P / 2, 5 * P);
    assert_void(base, 1, HW_VOID_DAMAGED, 10, 10, 14 * P + P / 2, 10 * P);
    assert_void(base, 2, HW_VOID_NOT_SCANNED, 20, 0, 24 * P + P / 2, 5 * P);
}

static void
damage_that_nothing_counts_reaches_to_the_next_block(void)
{
    HwScan scan = scan_of(2000, HW_STAMP_MIDDLE, 0);
    HwTimedBlock no_stamps = { .stamps = HW_STAMPS_TIMES, .file = "b", .damage = "b.csv is missing" };
    HwTimedBlock lost[] = { damaged(by_rate("b", 0, 10 * P), "b is missing"), no_stamps };
    for (guint i = 0; i < G_N_ELEMENTS(lost); i++) {
        HwTimedBlock blocks[] = { even("a", 10, 0, 9 * P), lost[i], even("c", 10, 20 * P, 29 * P) };
        g_autoptr(HwTimeBase) base = base_of(&scan, blocks, 3);
        g_assert_cmpuint(hw_time_base_get_n_voids(base), ==, 1);
        assert_void(base, 0, HW_VOID_DAMAGED, 10, 0, 10 * P - P / 2, 10 * P);
        g_assert_cmpint(hw_time_base_get_n_columns(base), ==, 20);
        g_assert_cmpint(instant(base, 10.5), ==, 20 * P);
        /* As the last one it is not there: the strip ends before it. */
        g_autoptr(HwTimeBase) ended = base_of(&scan, blocks, 2);
        g_assert_cmpuint(hw_time_base_get_n_voids(ended), ==, 0);
        g_assert_cmpint(hw_time_base_get_duration_ns(ended), ==, 10 * P);
        g_assert_true(has_problem(ended, "the strip ends before it"));
        /* As the first one it leaves a sentence. */
        g_autoptr(HwTimeBase) begun = base_of(&scan, &blocks[1], 2);
        g_assert_cmpint(hw_time_base_get_n_columns(begun), ==, 10);
        g_assert_true(has_problem(begun, "is missing"));
        g_assert_cmpint(instant(begun, 0.5), ==, 20 * P);
    }
}

static void
damage_at_the_ends_keeps_its_columns(void)
{
    HwScan scan = scan_of(2000, HW_STAMP_MIDDLE, 0);
    HwTimedBlock unplaced = {
        .stamps = HW_STAMPS_TIMES, .n_columns = 4, .file = "t", .damage = "t.csv is missing"
    };
    HwTimedBlock blocks[] = { unplaced, even("a", 10, 20 * P, 29 * P),
                              damaged(by_rate("z", 5, 30 * P), "z is cut") };
    g_autoptr(HwTimeBase) base = base_of(&scan, blocks, 3);
    g_assert_cmpint(hw_time_base_get_n_columns(base), ==, 19);
    g_assert_cmpuint(hw_time_base_get_n_voids(base), ==, 2);
    assert_void(base, 0, HW_VOID_DAMAGED, 0, 4, 15 * P + P / 2, 4 * P);
    assert_void(base, 1, HW_VOID_DAMAGED, 14, 5, 29 * P + P / 2, 5 * P);
    assert_nothing_at(base, 2.0);
    assert_nothing_at(base, 15.0);
    g_assert_cmpint(instant(base, 4.5), ==, 20 * P);
    g_assert_cmpint(hw_time_base_get_duration_ns(base), ==, 10 * P);
}

/* Centres at 9 P, (9.3 P damaged) and 9.6 P: what stands between them is shared out, and nothing overlaps. */
static void
damage_between_scans_too_close_takes_no_time(void)
{
    HwScan scan = scan_of(2000, HW_STAMP_MIDDLE, 0);
    HwTimedBlock unplaced = { .stamps = HW_STAMPS_TIMES, .n_columns = 1, .file = "b", .damage = "b is cut" };
    HwTimedBlock middles[] = { damaged(by_rate("b", 1, 9 * P + 3 * P / 10), "b is cut"), unplaced };
    for (guint i = 0; i < G_N_ELEMENTS(middles); i++) {
        HwTimedBlock blocks[] = { by_rate("a", 10, 0), middles[i], by_rate("c", 10, 9 * P + 6 * P / 10) };
        g_autoptr(HwTimeBase) base = base_of(&scan, blocks, 3);
        int64_t boundary_ns = 9 * P + 3 * P / 10;
        assert_void(base, 0, HW_VOID_DAMAGED, 10, 1, boundary_ns, 0);
        g_assert_cmpint(hw_time_base_get_run(base, 0)->end_ns, ==, boundary_ns);
        g_assert_cmpint(hw_time_base_get_run(base, 1)->start_ns, ==, boundary_ns);
        g_assert_cmpint(instant(base, 9.75), ==, 9 * P + 3 * P / 20);
        g_assert_cmpint(instant(base, 11.5), ==, 9 * P + 6 * P / 10);
    }
    /* With nothing readable before: placed damage, then one that only follows it. */
    HwTimedBlock blocks[] = { damaged(by_rate("a", 2, 0), "a is cut"), unplaced,
                              by_rate("c", 10, P + P / 4) };
    g_autoptr(HwTimeBase) base = base_of(&scan, blocks, 3);
    assert_void(base, 0, HW_VOID_DAMAGED, 0, 2, -P / 2, P + P / 2 + P / 4);
    assert_void(base, 1, HW_VOID_DAMAGED, 2, 1, P + P / 4, 0);
    g_assert_cmpint(hw_time_base_get_run(base, 0)->start_ns, ==, P + P / 4);
    g_assert_cmpint(instant(base, 3.5), ==, P + P / 4);
}

static void
all_blocks_damaged_leaves_an_empty_base(void)
{
    HwScan scan = scan_of(2000, HW_STAMP_MIDDLE, 0);
    HwTimedBlock blocks[] = { damaged(by_rate("a", 5, 0), "a is missing"),
                              { .stamps = HW_STAMPS_TIMES, .file = "b", .damage = "b is missing" } };
    g_autoptr(HwTimeBase) base = base_of(&scan, blocks, 2);
    g_assert_cmpuint(hw_time_base_get_n_runs(base), ==, 0);
    g_assert_cmpint(hw_time_base_get_n_columns(base), ==, 5);
    g_assert_cmpint(hw_time_base_get_duration_ns(base), ==, 0);
    assert_nothing_at(base, 1.0);
    assert_no_column_at(base, 0);
    g_autoptr(HwTimeBase) only = base_of(&scan, &blocks[1], 1);
    g_assert_true(has_problem(only, "b is missing"));
    g_autoptr(HwTimeBase) none = base_of(&scan, NULL, 0);
    assert_nothing_at(none, 0.0);
}

static void
nothing_stands_off_the_strip(void)
{
    HwScan scan = scan_of(2000, HW_STAMP_MIDDLE, 0);
    HwTimedBlock block = even("a", 10, 0, 9 * P);
    g_autoptr(HwTimeBase) base = base_of(&scan, &block, 1);
    assert_nothing_at(base, -1e-9);
    assert_nothing_at(base, 10.0000001);
    assert_nothing_at(base, (double)NAN);
    assert_nothing_at(base, (double)INFINITY);
    assert_nothing_at(base, -1e300);
    assert_nothing_at(base, 1e300);
    assert_no_column_at(base, -P / 2 - 1);
    assert_no_column_at(base, 9 * P + P / 2 + 1);
    assert_no_column_at(base, G_MININT64);
    assert_no_column_at(base, G_MAXINT64);
    g_assert_cmpfloat(column(base, -P / 2), ==, 0.0);
    g_assert_cmpfloat(column(base, 9 * P + P / 2), ==, 10.0);
    g_assert_cmpfloat(hw_time_base_get_period_ns(base), ==, 500000.0);
}

static void
impossible_blocks_are_refused(void)
{
    HwScan slow = { .rate_nhz = 1, .rate_hz = 1e-9, .stamp = HW_STAMP_MIDDLE };
    HwScan scan = scan_of(2000, HW_STAMP_MIDDLE, 0);
    struct {
        const HwScan *scan;
        HwTimedBlock block;
    } cases[] = { { &slow, by_rate("bad.png", 10, 0) },       { &scan, even("bad.png", 10, 0, 8) },
                  { &scan, even("bad.png", 1, 0, 8) },        { &scan, by_rate("bad.png", 0, 0) },
                  { &scan, by_rate("bad.png", -1, 0) },       { &scan, by_times("bad.png", 3, NULL) },
                  { &scan, by_rate("bad.png", INT64_MAX, 0) } };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        g_autoptr(GError) error = NULL;
        g_assert_null(hw_time_base_new(cases[i].scan, &cases[i].block, 1, &error));
        g_assert_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_MANIFEST);
        g_assert_nonnull(strstr(error->message, "bad.png"));
    }
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
#define CASE(name) g_test_add_func("/strip/time_base/" #name, name)
    CASE(stamps_move_to_the_middle_of_the_exposure_once);
    CASE(half_an_exposure_rounds_half_to_even);
    CASE(even_stamps_round_half_to_even);
    CASE(rate_stamps_do_not_drift);
    CASE(a_gap_between_blocks_is_a_void);
    CASE(a_void_begins_above_one_and_a_half_periods);
    CASE(scans_closer_than_half_a_period_are_reported_once_a_block);
    CASE(a_step_that_does_not_advance_splits_run_and_clock);
    CASE(a_block_that_starts_before_the_former_ones_end_is_refused);
    CASE(an_even_block_that_took_too_long_is_a_suspected_drop);
    CASE(of_two_blocks_the_slower_one_has_the_drop);
    CASE(a_deviation_common_to_all_is_reported_once_and_is_no_drop);
    CASE(a_damaged_block_is_a_void_that_keeps_its_columns);
    CASE(dropped_scans_beside_a_damaged_block_are_a_void_of_their_own);
    CASE(damage_that_nothing_counts_reaches_to_the_next_block);
    CASE(damage_at_the_ends_keeps_its_columns);
    CASE(damage_between_scans_too_close_takes_no_time);
    CASE(all_blocks_damaged_leaves_an_empty_base);
    CASE(nothing_stands_off_the_strip);
    CASE(impossible_blocks_are_refused);
#undef CASE
    return g_test_run();
}
