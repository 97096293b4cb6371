/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The rail of a sheet and the lines of text on it: nothing overlaps, nothing is clipped. */
#include "core/sheet/entry.h"
#include "core/sheet/labels.h"
#include "core/sheet/text.h"
#include "tests/sheet/fixture.h"

#define WIDTH 900

static uint32_t
plain(int64_t column, int row)
{
    (void)column;
    (void)row;
    return 0x808080;
}

/* Riders `apart` columns from each other, each with both gaps to tell. */
static GPtrArray *
entries_of(int n, double apart)
{
    GPtrArray *entries = g_ptr_array_new();
    for (int i = 0; i < n; i++) {
        HwEntry *entry = g_new0(HwEntry, 1);
        entry->column = 100 + apart * i;
        entry->bib = g_strdup_printf("%d", 101 + i);
        entry->place = g_strdup_printf("%d", i + 1);
        entry->before = g_strdup("to 100: 18.35 ± 0.41 ms");
        entry->winner = g_strdup("to winner: 120.21 ± 0.41 ms");
        g_ptr_array_add(entries, entry);
    }
    return entries;
}

static void
free_entries(GPtrArray *entries)
{
    for (guint i = 0; i < entries->len; i++) {
        HwEntry *entry = g_ptr_array_index(entries, i);
        g_free(entry->bib);
        g_free(entry->place);
        g_free(entry->before);
        g_free(entry->winner);
        g_free(entry);
    }
    g_ptr_array_unref(entries);
}

/* All boxes of a rail apart from each other and inside it. Returns the height of the first label. */
static double
check_boxes(const HwLabels *labels, int n)
{
    double height = hw_labels_get_height(labels), first = 0;
    guint count = 0;
    double a[4], b[4];
    for (guint i = 0; hw_labels_get_box(labels, i, &a[0], &a[1], &a[2], &a[3]); i++, count++) {
        if (i == 0)
            first = a[3];
        g_assert_true(a[0] >= -1e-9 && a[0] + a[2] <= WIDTH + 1e-9 && a[1] >= 0 && a[1] + a[3] <= height);
        for (guint j = i + 1; hw_labels_get_box(labels, j, &b[0], &b[1], &b[2], &b[3]); j++)
            g_assert_true(a[0] >= b[0] + b[2] || b[0] >= a[0] + a[2] || a[1] >= b[1] + b[3] ||
                          b[1] >= a[1] + a[3]);
    }
    /* Each label has a box of its own, or is counted in a "+n". */
    g_assert_cmpuint(count, >=, (guint)(n - hw_labels_get_n_hidden(labels)));
    return first;
}

static void
labels_lose_gaps_before_they_lose_their_place(void)
{
    static const struct {
        int n;
        double apart;
        double max_height;
        double least_height; /* of a label: both gaps, one, none */
        double most_height;
        bool hides;
    } cases[] = {
        { 3, 200, 300, 40, 60, false }, /* room for all */
        { 10, 25, 290, 30, 38, false }, /* one gap each */
        { 10, 25, 140, 15, 20, false }, /* bib and place */
        { 60, 4, 80, 15, 20, true },    /* some only counted */
    };
    FixtureWish wish = {
        .columns_per_block = WIDTH, .n_blocks = 1, .rows = 4, .travel = "left", .pixel = plain
    };
    g_autoptr(Fixture) fixture = fixture_new(&wish);
    HwAxis *axis = hw_axis_new(hw_strip_get_time_base(fixture->strip));
    PangoContext *context = hw_text_context_new();
    HwInk ink = hw_ink_paper();
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++)
        for (int later_left = 0; later_left < 2; later_left++) {
            HwViewMap map = { .cells_per_px = 1,
                              .rows_per_px = 1,
                              .width_px = WIDTH,
                              .height_px = 4,
                              .later_left = later_left };
            GPtrArray *entries = entries_of(cases[i].n, cases[i].apart);
            g_autoptr(HwLabels) labels =
                hw_labels_new(context, &ink, entries, axis, &map, cases[i].max_height, NULL);
            g_assert_cmpfloat(hw_labels_get_height(labels), <=, cases[i].max_height);
            double height = check_boxes(labels, cases[i].n);
            g_assert_cmpfloat(height, >=, cases[i].least_height);
            g_assert_cmpfloat(height, <=, cases[i].most_height);
            g_assert_true((hw_labels_get_n_hidden(labels) > 0) == cases[i].hides);
            free_entries(entries);
        }
    g_object_unref(context);
    hw_axis_unref(axis);
}

static void
text_too_long_ends_in_an_ellipsis_within_its_room(void)
{
    static const char *const names[] = {
        "Anselm Großkreutz-Wohlleben von Hagenried zu Obertannen",
        "יואב בן־אברהם ברנע מירושלים הבירה ומחיפה",
        "Nguyễn Hữu Thắng Nguyễn Hữu Thắng Nguyễn",
    };
    PangoContext *context = hw_text_context_new();
    HwType type = { "Sans", 12, false, true };
    for (guint i = 0; i < G_N_ELEMENTS(names); i++) {
        g_autoptr(PangoLayout) cut = hw_text_layout(context, &type, names[i], 120);
        g_autoptr(PangoLayout) whole = hw_text_layout(context, &type, names[i], 2000);
        g_assert_true(pango_layout_is_ellipsized(cut));
        g_assert_false(pango_layout_is_ellipsized(whole));
        PangoRectangle inked;
        pango_layout_get_extents(cut, &inked, NULL);
        g_assert_cmpint(inked.x, >=, -PANGO_SCALE);
        g_assert_cmpint(inked.x + inked.width, <=, 121 * PANGO_SCALE);
        g_assert_cmpint(pango_layout_get_unknown_glyphs_count(whole), ==, 0);
    }
    g_object_unref(context);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
#define CASE(name) g_test_add_func("/sheet/labels/" #name, name)
    CASE(labels_lose_gaps_before_they_lose_their_place);
    CASE(text_too_long_ends_in_an_ellipsis_within_its_room);
    return g_test_run();
}
