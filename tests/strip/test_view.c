/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Columns to cells, cells to pixels, codes to light. */
#include "core/strip/axis.h"
#include "core/strip/transfer.h"
#include "core/strip/view_map.h"

#include <math.h>

#define P INT64_C(500000)

static HwTimeBase *
base_with_voids(void)
{
    /* 10 columns; 4.2 periods of nothing; 10 columns; 3 damaged; 10 columns. */
    HwScan scan = { .rate_nhz = INT64_C(2000000000000), .rate_hz = 2000.0, .stamp = HW_STAMP_MIDDLE };
    HwTimedBlock blocks[] = {
        { .stamps = HW_STAMPS_RATE, .n_columns = 10, .first_ns = 0, .file = "a" },
        { .stamps = HW_STAMPS_RATE, .n_columns = 10, .first_ns = 14 * P + P / 5, .file = "b" },
        { .stamps = HW_STAMPS_RATE,
          .n_columns = 3,
          .first_ns = 24 * P + P / 5,
          .file = "c",
          .damage = "c is cut" },
        { .stamps = HW_STAMPS_RATE, .n_columns = 10, .first_ns = 27 * P + P / 5, .file = "d" },
    };
    g_autoptr(GError) error = NULL;
    HwTimeBase *base = hw_time_base_new(&scan, blocks, G_N_ELEMENTS(blocks), &error);
    g_assert_no_error(error);
    return base;
}

static void
voids_stand_open_on_the_axis(void)
{
    g_autoptr(HwTimeBase) base = base_with_voids();
    g_autoptr(HwAxis) axis = hw_axis_new(base);
    static const struct {
        int64_t first_cell, n_cells, first_col;
        int void_index;
    } wanted[] = {
        { 0, 10, 0, -1 }, { 10, 4, 10, 0 }, { 14, 10, 10, -1 }, { 24, 3, 20, 1 }, { 27, 10, 23, -1 }
    };
    g_assert_cmpuint(hw_axis_get_n_spans(axis), ==, G_N_ELEMENTS(wanted));
    for (guint i = 0; i < G_N_ELEMENTS(wanted); i++) {
        const HwAxisSpan *span = hw_axis_get_span(axis, i);
        g_assert_cmpint(span->first_cell, ==, wanted[i].first_cell);
        g_assert_cmpint(span->n_cells, ==, wanted[i].n_cells);
        g_assert_cmpint(span->first_col, ==, wanted[i].first_col);
        g_assert_cmpint(span->void_index, ==, wanted[i].void_index);
    }
    g_assert_cmpint(hw_axis_get_n_cells(axis), ==, 37);
}

static void
a_void_shorter_than_a_column_still_takes_a_cell(void)
{
    HwScan scan = { .rate_nhz = INT64_C(2000000000000), .rate_hz = 2000.0, .stamp = HW_STAMP_MIDDLE };
    HwTimedBlock blocks[] = {
        { .stamps = HW_STAMPS_RATE, .n_columns = 2, .first_ns = 0, .file = "a" },
        { .stamps = HW_STAMPS_RATE, .n_columns = 2, .first_ns = P + P * 3 / 2 + 1, .file = "b" },
    };
    g_autoptr(HwTimeBase) base = hw_time_base_new(&scan, blocks, 2, NULL);
    g_autoptr(HwAxis) axis = hw_axis_new(base);
    g_assert_cmpint(hw_axis_get_n_cells(axis), ==, 5);
}

static void
columns_and_instants_find_their_cells(void)
{
    g_autoptr(HwTimeBase) base = base_with_voids();
    g_autoptr(HwAxis) axis = hw_axis_new(base);
    static const struct {
        double column, cell;
    } cases[] = { { 0.0, 0.0 },   { 9.5, 9.5 },   { 10.0, 14.0 }, { 19.75, 23.75 }, { 20.0, 24.0 },
                  { 21.5, 25.5 }, { 23.0, 27.0 }, { 33.0, 37.0 }, { -5.0, 0.0 },    { 99.0, 37.0 } };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++)
        g_assert_cmpfloat_with_epsilon(hw_axis_position(axis, cases[i].column), cases[i].cell, 1e-12);
    double column = 77.0;
    g_assert_false(hw_axis_column(axis, 12.0, &column));
    g_assert_false(hw_axis_column(axis, 25.0, &column));
    g_assert_false(hw_axis_column(axis, -0.1, &column));
    g_assert_false(hw_axis_column(axis, 37.1, &column));
    g_assert_cmpfloat(column, ==, 77.0);
    g_assert_true(hw_axis_column(axis, 14.0, &column));
    g_assert_cmpfloat(column, ==, 10.0);
    g_assert_true(hw_axis_column(axis, nextafter(10.0, 0.0), &column));
    g_assert_cmpfloat(column, <, 10.0);
    g_assert_true(hw_axis_column(axis, 37.0, &column));
    g_assert_cmpfloat(column, ==, 33.0);

    /* The first void: from 9.5 P to 13.7 P on 4 cells; its middle at 11.6 P. */
    g_assert_cmpint(hw_axis_instant(axis, 12.0), ==, 11 * P + P * 3 / 5);
    g_assert_cmpfloat_with_epsilon(hw_axis_position_of_instant(axis, 11 * P + P * 3 / 5), 12.0, 1e-9);
    g_assert_cmpint(hw_axis_instant(axis, 9.5), ==, 9 * P);
    g_assert_cmpint(hw_axis_instant(axis, -2.0), ==, -2 * P - P / 2);
    g_assert_cmpint(hw_axis_instant(axis, 39.0), ==, 36 * P + P / 5 + P / 2 + 2 * P);
    g_assert_cmpfloat(hw_axis_position_of_instant(axis, -99 * P), ==, 0.0);
    g_assert_cmpfloat(hw_axis_position_of_instant(axis, 99 * P), ==, 37.0);
    g_assert_cmpfloat_with_epsilon(hw_axis_position_of_instant(axis, 25 * P + P / 5), 25.5, 1e-9);
}

/* Guard: a mirrored bib. Riders face the way they rode: riding right, the first to cross stand to the right.
 */
static void
time_runs_against_the_travel(void)
{
    g_assert_true(hw_view_later_left(HW_SIDE_RIGHT, false));
    g_assert_false(hw_view_later_left(HW_SIDE_LEFT, false));
    g_assert_false(hw_view_later_left(HW_SIDE_UNKNOWN, false));
    g_assert_false(hw_view_later_left(HW_SIDE_RIGHT, true));
    g_assert_true(hw_view_later_left(HW_SIDE_LEFT, true));
    g_assert_true(hw_view_later_left(HW_SIDE_UNKNOWN, true));
}

/* Powers of two, so that every sum is exact. */
static void
pixels_and_cells_undo_each_other_at_every_zoom(void)
{
    for (double zoom = 1.0 / 64.0; zoom <= 256.0; zoom *= 2.0) {
        for (int mirrored = 0; mirrored < 2; mirrored++) {
            HwViewMap map = { .first_cell = 1000.25,
                              .cells_per_px = 1.0 / zoom,
                              .first_row = -3.5,
                              .rows_per_px = 0.25,
                              .width_px = 1280,
                              .height_px = 400,
                              .later_left = mirrored == 1 };
            double earlier_px = mirrored ? 1280.0 : 0.0, later_px = mirrored ? 0.0 : 1280.0;
            g_assert_cmpfloat(hw_view_map_x(&map, 1000.25), ==, earlier_px);
            g_assert_cmpfloat(hw_view_map_last_cell(&map), ==, 1000.25 + 1280.0 / zoom);
            g_assert_cmpfloat(hw_view_map_x(&map, hw_view_map_last_cell(&map)), ==, later_px);
            g_assert_cmpfloat(hw_view_map_cell(&map, earlier_px), ==, 1000.25);
            for (double x_px = 0.0; x_px <= 1280.0; x_px += 160.0)
                g_assert_cmpfloat(hw_view_map_x(&map, hw_view_map_cell(&map, x_px)), ==, x_px);
            /* A cell covers `zoom` pixels, to the later side. */
            double width_px = hw_view_map_x(&map, 1006.25) - hw_view_map_x(&map, 1005.25);
            g_assert_cmpfloat(width_px, ==, mirrored ? -zoom : zoom);
            HwViewMap zoomed = hw_view_map_zoomed(&map, 320.0, 0.5);
            g_assert_cmpfloat(hw_view_map_cell(&zoomed, 320.0), ==, hw_view_map_cell(&map, 320.0));
            g_assert_cmpfloat(zoomed.cells_per_px, ==, 0.5);
            g_assert_cmpfloat(hw_view_map_y(&map, -3.5), ==, 0.0);
            g_assert_cmpfloat(hw_view_map_row(&map, hw_view_map_y(&map, 20.5)), ==, 20.5);
        }
    }
}

/* IEC 61966-2-1: code 0.5 is light 0.2140, code 0.04045 is 0.0031308 (worked from its formula:
 * ((0.5 + 0.055) / 1.055)^2.4 and 0.04045 / 12.92). */
static void
srgb_is_the_standards_curve(void)
{
    HwTransfer srgb = { .kind = HW_TRANSFER_SRGB }, unknown = { .kind = HW_TRANSFER_UNKNOWN };
    g_assert_cmpfloat_with_epsilon(hw_transfer_to_light(&srgb, 0.5), 0.21404114, 1e-8);
    g_assert_cmpfloat_with_epsilon(hw_transfer_to_light(&srgb, 0.04045), 0.0031308, 1e-7);
    g_assert_cmpfloat(hw_transfer_to_light(&srgb, 1.0), ==, 1.0);
    g_assert_cmpfloat(hw_transfer_to_light(&unknown, 0.3), ==, hw_transfer_to_light(&srgb, 0.3));
    g_assert_cmpfloat(hw_transfer_to_light(&srgb, -1.0), ==, 0.0);
    g_assert_cmpfloat(hw_transfer_to_light(&srgb, 2.0), ==, 1.0);
}

static void
light_and_code_undo_each_other_and_json_reads_back(void)
{
    HwTransfer transfers[] = { { .kind = HW_TRANSFER_LINEAR },
                               { .kind = HW_TRANSFER_SRGB },
                               { .kind = HW_TRANSFER_GAMMA, .gamma = 2.2 },
                               { .kind = HW_TRANSFER_TABLE } };
    for (int i = 0; i < 256; i++)
        transfers[3].table[i] = (float)pow(i / 255.0, 1.8);
    for (guint k = 0; k < G_N_ELEMENTS(transfers); k++) {
        for (int i = 0; i <= 1000; i++) {
            double light = hw_transfer_to_light(&transfers[k], i / 1000.0);
            g_assert_cmpfloat_with_epsilon(hw_transfer_to_code(&transfers[k], light), i / 1000.0, 1e-6);
        }
        g_autoptr(json_t) json = hw_transfer_to_json(&transfers[k]);
        HwTransfer back = { .kind = HW_TRANSFER_UNKNOWN };
        g_autoptr(GError) error = NULL;
        g_assert_true(hw_transfer_from_json(json, "here", &back, &error));
        g_assert_no_error(error);
        g_assert_cmpint(back.kind, ==, transfers[k].kind);
        g_assert_cmpfloat(hw_transfer_to_light(&back, 0.37), ==, hw_transfer_to_light(&transfers[k], 0.37));
    }
}

static void
a_bad_transfer_is_refused_and_nothing_changes(void)
{
    static const char *const texts[] = { "",           "sRGB",    "gamma",     "gamma:", "gamma:0.05",
                                         "gamma:10.1", "gamma:x", "gamma:nan", "table" };
    for (guint i = 0; i < G_N_ELEMENTS(texts); i++) {
        HwTransfer kept = { .kind = HW_TRANSFER_LINEAR };
        g_autoptr(GError) error = NULL;
        g_assert_false(hw_transfer_parse(texts[i], &kept, &error));
        g_assert_nonnull(error);
        g_assert_cmpint(kept.kind, ==, HW_TRANSFER_LINEAR);
    }
    HwTransfer read = { .kind = HW_TRANSFER_UNKNOWN };
    g_assert_true(hw_transfer_parse("gamma:2.2", &read, NULL));
    g_assert_cmpfloat(read.gamma, ==, 2.2);
    g_autoptr(json_t) level = json_array();
    for (int i = 0; i < 256; i++)
        json_array_append_new(level, json_integer(i == 100 ? 99 : i));
    g_autoptr(GError) error = NULL;
    g_assert_false(hw_transfer_from_json(level, "here", &read, &error));
    g_assert_true(g_str_has_prefix(error->message, "here: “transfer”"));
    g_assert_cmpint(read.kind, ==, HW_TRANSFER_GAMMA);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
#define CASE(name) g_test_add_func("/strip/view/" #name, name)
    CASE(voids_stand_open_on_the_axis);
    CASE(a_void_shorter_than_a_column_still_takes_a_cell);
    CASE(columns_and_instants_find_their_cells);
    CASE(time_runs_against_the_travel);
    CASE(pixels_and_cells_undo_each_other_at_every_zoom);
    CASE(srgb_is_the_standards_curve);
    CASE(light_and_code_undo_each_other_and_json_reads_back);
    CASE(a_bad_transfer_is_refused_and_nothing_changes);
#undef CASE
    return g_test_run();
}
