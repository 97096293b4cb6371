/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Pennants, ruler, voids and reading line, to the pixel where it matters. */
#include "core/sheet/pennant.h"
#include "core/sheet/reading_line.h"
#include "core/sheet/ruler.h"
#include "core/sheet/text.h"
#include "core/sheet/void_hatch.h"
#include "tests/sheet/fixture.h"

#include <math.h>
#include <string.h>

#define WIDTH 800
#define HEIGHT 200
#define PAPER 0xffffffu

typedef struct {
    HwAxis *axis;
    const HwTimeBase *base;
    Fixture *fixture;
    PangoContext *context;
    HwInk ink;
    cairo_surface_t *surface;
    cairo_t *cr;
} Canvas;

static uint32_t
plain(int64_t column, int row)
{
    (void)column;
    (void)row;
    return 0x808080;
}

/* Two blocks of 400 columns; a pause of 100 ms between them where wanted. */
static void
canvas_begin(Canvas *canvas, int void_ms)
{
    FixtureWish wish = { .columns_per_block = 400,
                         .n_blocks = 2,
                         .rows = 20,
                         .travel = "left",
                         .void_after = void_ms > 0 ? 1 : 0,
                         .void_ms = void_ms,
                         .pixel = plain };
    canvas->fixture = fixture_new(&wish);
    canvas->base = hw_strip_get_time_base(canvas->fixture->strip);
    canvas->axis = hw_axis_new(canvas->base);
    canvas->context = hw_text_context_new();
    canvas->ink = hw_ink_paper();
    canvas->surface = cairo_image_surface_create(CAIRO_FORMAT_RGB24, WIDTH, HEIGHT);
    canvas->cr = cairo_create(canvas->surface);
    cairo_set_source_rgb(canvas->cr, 1, 1, 1);
    cairo_paint(canvas->cr);
}

static void
canvas_end(Canvas *canvas)
{
    g_assert_cmpint(cairo_status(canvas->cr), ==, CAIRO_STATUS_SUCCESS);
    cairo_destroy(canvas->cr);
    cairo_surface_destroy(canvas->surface);
    g_object_unref(canvas->context);
    hw_axis_unref(canvas->axis);
    fixture_free(canvas->fixture);
}

static uint32_t
pixel(const Canvas *canvas, int x, int y)
{
    g_assert_true(x >= 0 && x < WIDTH && y >= 0 && y < HEIGHT);
    cairo_surface_flush(canvas->surface);
    const uint8_t *row =
        cairo_image_surface_get_data(canvas->surface) + y * cairo_image_surface_get_stride(canvas->surface);
    return ((const uint32_t *)(const void *)row)[x] & 0xffffffu;
}

static uint32_t
rgb(HwColour colour)
{
    return (uint32_t)lround(colour.red * 255) << 16 | (uint32_t)lround(colour.green * 255) << 8 |
           (uint32_t)lround(colour.blue * 255);
}

static HwViewMap
view(double first_cell, double cells_per_px, bool later_left)
{
    return (HwViewMap){ .first_cell = first_cell,
                        .cells_per_px = cells_per_px,
                        .rows_per_px = 20.0 / HEIGHT,
                        .width_px = WIDTH,
                        .height_px = HEIGHT,
                        .later_left = later_left };
}

static HwPennantLayout *
lay(const Canvas *canvas, const HwViewMap *map, const HwPennant *pennants, int n, double rail)
{
    HwPennantPlace place = { .picture_y = rail, .rail_height = rail };
    return hw_pennant_layout_new(canvas->context, canvas->axis, map, pennants, n, &place, &canvas->ink);
}

static void
hairlines_leave_every_pixel_of_the_tyre_bare(void)
{
    Canvas canvas = { 0 };
    canvas_begin(&canvas, 0);
    static const double scales[] = { 4.0, 1.0, 0.5, 0.125 };
    static const double columns[] = { 300, 300.37, 301.5, 320 };
    for (guint s = 0; s < G_N_ELEMENTS(scales); s++)
        for (guint c = 0; c < G_N_ELEMENTS(columns); c++)
            for (int later_left = 0; later_left < 2; later_left++) {
                HwViewMap map = view(scales[s] == 0.125 ? 290 : 0, scales[s], later_left);
                HwPennant pennant = { .column = columns[c], .row = 2, .bib = "47", .state = HW_PENNANT_READ };
                cairo_set_source_rgb(canvas.cr, 1, 1, 1);
                cairo_paint(canvas.cr);
                g_autoptr(HwPennantLayout) layout = lay(&canvas, &map, &pennant, 1, 0);
                hw_pennant_layout_draw_picture(layout, canvas.cr);
                double edge = hw_view_map_x(&map, columns[c]);
                int y = 150; /* far from the flag */
                bool stem = false;
                for (int x = 0; x < WIDTH; x++) {
                    bool later = later_left ? x + 1 <= edge + 1e-6 && x < edge : x >= edge - 1e-6;
                    if (later)
                        g_assert_cmphex(pixel(&canvas, x, y), ==, PAPER);
                    stem |= pixel(&canvas, x, y) == rgb(canvas.ink.state[HW_PENNANT_READ]);
                }
                g_assert_true(stem);
                /* and it stands right beside it: less than two pixels away */
                double stem_x;
                g_assert_true(hw_pennant_layout_get_stem(layout, 0, &stem_x));
                double gap = later_left ? stem_x - edge : edge - stem_x - 1;
                g_assert_cmpfloat(gap, >=, -1e-6);
                g_assert_cmpfloat(gap, <, 1);
            }
    canvas_end(&canvas);
}

static void
at_one_to_one_the_hairline_stands_on_the_pixel_before_its_column(void)
{
    Canvas canvas = { 0 };
    canvas_begin(&canvas, 0);
    HwViewMap map = view(0, 1, false);
    HwPennant pennant = { .column = 300.6, .row = 2, .bib = "47", .state = HW_PENNANT_READ };
    g_autoptr(HwPennantLayout) layout = lay(&canvas, &map, &pennant, 1, 0);
    hw_pennant_layout_draw_picture(layout, canvas.cr);
    g_assert_cmphex(pixel(&canvas, 299, 150), ==, rgb(canvas.ink.state[HW_PENNANT_READ]));
    g_assert_cmphex(pixel(&canvas, 298, 150), ==, rgb(canvas.ink.casing));
    g_assert_cmphex(pixel(&canvas, 300, 150), ==, PAPER);
    g_assert_cmphex(pixel(&canvas, 297, 150), ==, PAPER);
    canvas_end(&canvas);
}

static void
the_reading_line_has_two_tones_and_leaves_the_tyre_bare(void)
{
    Canvas canvas = { 0 };
    canvas_begin(&canvas, 0);
    cairo_set_source_rgb(canvas.cr, 0.5, 0.5, 0.5);
    cairo_paint(canvas.cr);
    uint32_t ground = pixel(&canvas, 0, 0);
    for (int later_left = 0; later_left < 2; later_left++) {
        HwViewMap map = view(0, 1, later_left);
        hw_reading_line_draw(canvas.cr, &map, 300, 0, HEIGHT, &canvas.ink);
        int before = later_left ? WIDTH - 300 : 299, step = later_left ? 1 : -1;
        g_assert_cmphex(pixel(&canvas, before, 9), ==, rgb(canvas.ink.core));
        g_assert_cmphex(pixel(&canvas, before + step, 9), ==, rgb(canvas.ink.casing));
        g_assert_cmphex(pixel(&canvas, before - step, 9), ==, ground);
    }
    canvas_end(&canvas);
}

static void
labels_of_close_riders_never_overlap_and_stay_in_the_rail(void)
{
    Canvas canvas = { 0 };
    canvas_begin(&canvas, 0);
    HwPennant pennants[24];
    char bibs[24][8];
    for (int i = 0; i < 24; i++) {
        g_snprintf(bibs[i], sizeof bibs[i], "%d", 101 + i);
        pennants[i] = (HwPennant){ .column = 200 + 9 * i, .row = 10, .bib = bibs[i], .selected = i == 11 };
    }
    for (int later_left = 0; later_left < 2; later_left++) {
        HwViewMap map = view(0, 1, later_left);
        g_autoptr(HwPennantLayout) layout = lay(&canvas, &map, pennants, 24, 26);
        int n_clusters = hw_pennant_layout_get_n_clusters(layout), hidden = 0;
        g_assert_cmpint(n_clusters, >, 0);
        for (int c = 0; c < n_clusters; c++) {
            int n;
            const int *members = hw_pennant_layout_get_cluster(layout, c, &n);
            hidden += n;
            for (int k = 1; k < n; k++)
                g_assert_cmpfloat(pennants[members[k - 1]].column, <, pennants[members[k]].column);
            for (int k = 0; k < n; k++)
                g_assert_false(pennants[members[k]].selected);
        }
        g_assert_cmpint(hidden, <, 24);
        for (int i = 0; i < 24; i++)
            for (int j = 0; j < 24; j++) {
                double a[4], b[4];
                g_assert_true(hw_pennant_layout_get_label(layout, i, &a[0], &a[1], &a[2], &a[3]));
                g_assert_true(hw_pennant_layout_get_label(layout, j, &b[0], &b[1], &b[2], &b[3]));
                g_assert_true(a[0] >= 0 && a[0] + a[2] <= WIDTH && a[1] >= 0 && a[1] + a[3] <= 26);
                bool same_box = a[0] == b[0] && a[1] == b[1]; /* members of one "+3" */
                g_assert_true(same_box || a[0] >= b[0] + b[2] || b[0] >= a[0] + a[2] || a[1] >= b[1] + b[3] ||
                              b[1] >= a[1] + a[3]);
            }
    }
    canvas_end(&canvas);
}

static void
states_differ_by_shape_not_by_colour_alone(void)
{
    Canvas canvas = { 0 };
    canvas_begin(&canvas, 0);
    /* All states in one colour: what still differs is shape. */
    for (int state = 0; state < HW_N_PENNANT_STATES; state++)
        canvas.ink.state[state] = (HwColour){ 0, 0.4, 0.7, 1 };
    uint32_t *seen[HW_N_PENNANT_STATES] = { NULL };
    for (int state = 0; state < HW_N_PENNANT_STATES; state++) {
        HwViewMap map = view(0, 1, false);
        HwPennant pennant = { .column = 300, .row = 10, .bib = "47", .state = (HwPennantState)state };
        cairo_set_source_rgb(canvas.cr, 1, 1, 1);
        cairo_paint(canvas.cr);
        g_autoptr(HwPennantLayout) layout = lay(&canvas, &map, &pennant, 1, 0);
        hw_pennant_layout_draw_picture(layout, canvas.cr);
        seen[state] = g_new(uint32_t, WIDTH * HEIGHT);
        for (int i = 0; i < WIDTH * HEIGHT; i++)
            seen[state][i] = pixel(&canvas, i % WIDTH, i / WIDTH);
        for (int other = 0; other < state; other++)
            g_assert_cmpint(memcmp(seen[state], seen[other], sizeof(uint32_t) * WIDTH * HEIGHT), !=, 0);
    }
    for (int state = 0; state < HW_N_PENNANT_STATES; state++)
        g_free(seen[state]);
    canvas_end(&canvas);
}

static void
the_flag_is_hollow_while_to_re_read_and_filled_when_read(void)
{
    Canvas canvas = { 0 };
    canvas_begin(&canvas, 0);
    HwViewMap map = view(0, 1, false);
    for (int state = HW_PENNANT_ROUGH; state <= HW_PENNANT_READ; state++) {
        HwPennant pennant = { .column = 300, .row = 10, .bib = "47", .state = (HwPennantState)state };
        cairo_set_source_rgb(canvas.cr, 1, 1, 1);
        cairo_paint(canvas.cr);
        g_autoptr(HwPennantLayout) layout = lay(&canvas, &map, &pennant, 1, 0);
        hw_pennant_layout_draw_picture(layout, canvas.cr);
        /* The flag points to the earlier side: its middle lies some pixels before the hairline, at the hub.
         */
        uint32_t inside = pixel(&canvas, 295, 100);
        g_assert_cmphex(inside, ==, state == HW_PENNANT_READ ? rgb(canvas.ink.state[state]) : PAPER);
    }
    canvas_end(&canvas);
}

static void
a_marker_is_grabbed_within_twelve_units_at_any_zoom(void)
{
    Canvas canvas = { 0 };
    canvas_begin(&canvas, 0);
    HwPennant pennants[] = { { .column = 300, .row = 10, .bib = "47" },
                             { .column = 340, .row = 5, .bib = "11" } };
    static const double scales[] = { 2.0, 1.0, 0.5 };
    for (guint s = 0; s < G_N_ELEMENTS(scales); s++) {
        HwViewMap map = view(0, scales[s], false);
        g_autoptr(HwPennantLayout) layout = lay(&canvas, &map, pennants, 2, 26);
        double x = hw_view_map_x(&map, 300), hub = 26 + hw_view_map_y(&map, 10);
        HwPennantHit hit = hw_pennant_layout_hit(layout, x - 11, 210, 12);
        g_assert_cmpint(hit.part, ==, HW_PENNANT_STEM);
        g_assert_cmpint(hit.index, ==, 0);
        hit = hw_pennant_layout_hit(layout, x - 8, hub + 5, 12);
        g_assert_cmpint(hit.part, ==, HW_PENNANT_FLAG);
        g_assert_cmpint(hit.index, ==, 0);
        hit = hw_pennant_layout_hit(layout, x - 30, 210, 12);
        g_assert_cmpint(hit.part, ==, HW_PENNANT_NOTHING);
        g_assert_cmpint(hit.index, ==, -1);
        double box[4];
        g_assert_true(hw_pennant_layout_get_label(layout, 1, &box[0], &box[1], &box[2], &box[3]));
        hit = hw_pennant_layout_hit(layout, box[0] + box[2] / 2, box[1] + box[3] / 2, 12);
        g_assert_cmpint(hit.part, ==, HW_PENNANT_LABEL);
        g_assert_cmpint(hit.index, ==, 1);
    }
    canvas_end(&canvas);
}

static void
a_count_is_grabbed_as_one(void)
{
    Canvas canvas = { 0 };
    canvas_begin(&canvas, 0);
    HwPennant pennants[8];
    for (int i = 0; i < 8; i++)
        pennants[i] = (HwPennant){ .column = 300 + i, .row = 10, .bib = "105" };
    HwViewMap map = view(0, 1, false);
    g_autoptr(HwPennantLayout) layout = lay(&canvas, &map, pennants, 8, 13);
    g_assert_cmpint(hw_pennant_layout_get_n_clusters(layout), ==, 1);
    int n;
    const int *members = hw_pennant_layout_get_cluster(layout, 0, &n);
    double box[4];
    g_assert_true(hw_pennant_layout_get_label(layout, members[0], &box[0], &box[1], &box[2], &box[3]));
    HwPennantHit hit = hw_pennant_layout_hit(layout, box[0] + 3, box[1] + 3, 12);
    g_assert_cmpint(hit.part, ==, HW_PENNANT_CLUSTER);
    g_assert_cmpint(hit.cluster, ==, 0);
    g_assert_cmpint(hit.index, ==, members[0]);
    canvas_end(&canvas);
}

static void
markers_out_of_view_are_left_out(void)
{
    Canvas canvas = { 0 };
    canvas_begin(&canvas, 0);
    HwViewMap map = view(500, 0.125, false);
    HwPennant pennant = { .column = 300, .row = 10, .bib = "47" };
    g_autoptr(HwPennantLayout) layout = lay(&canvas, &map, &pennant, 1, 26);
    double box[4], x = 7;
    g_assert_false(hw_pennant_layout_get_label(layout, 0, &box[0], &box[1], &box[2], &box[3]));
    g_assert_false(hw_pennant_layout_get_stem(layout, 0, &x));
    g_assert_cmpfloat(x, ==, 7);
    canvas_end(&canvas);
}

static void
a_void_is_hatched_and_nothing_beside_it(void)
{
    Canvas canvas = { 0 };
    canvas_begin(&canvas, 100);
    HwViewMap map = view(0, 1, false);
    hw_void_hatch_draw(canvas.cr, canvas.context, canvas.axis, canvas.base, &map, 20, NULL, &canvas.ink);
    int ground = 0, line = 0;
    for (int x = 0; x < WIDTH; x++)
        for (int y = 0; y < HEIGHT; y += 7) {
            uint32_t seen = pixel(&canvas, x, y);
            if (x < 400 || x >= 500)
                g_assert_cmphex(seen, ==, PAPER);
            else
                g_assert_cmphex(seen, !=, PAPER);
            ground += seen == rgb(canvas.ink.void_ground);
            line += (seen & 0xff) < 0xb0;
        }
    g_assert_cmpint(ground, >, 500);
    g_assert_cmpint(line, >, 50);
    canvas_end(&canvas);
}

static void
a_void_narrower_than_a_pixel_is_still_seen(void)
{
    Canvas canvas = { 0 };
    canvas_begin(&canvas, 3);
    HwViewMap map = view(0, 10, false);
    hw_void_hatch_draw(canvas.cr, canvas.context, canvas.axis, canvas.base, &map, 20, NULL, &canvas.ink);
    g_assert_cmphex(pixel(&canvas, 40, 60), !=, PAPER);
    g_assert_cmphex(pixel(&canvas, 41, 60), !=, PAPER);
    g_assert_cmphex(pixel(&canvas, 38, 60), ==, PAPER);
    g_assert_cmphex(pixel(&canvas, 43, 60), ==, PAPER);
    canvas_end(&canvas);
}

/* Ticks of full length at the foot of a ruler 22 high. */
static GArray *
major_ticks(const Canvas *canvas)
{
    GArray *ticks = g_array_new(FALSE, FALSE, sizeof(int));
    for (int x = 0; x < WIDTH; x++)
        if (pixel(canvas, x, 17) == rgb(canvas->ink.text) && pixel(canvas, x, 19) == rgb(canvas->ink.text))
            g_array_append_val(ticks, x);
    return ticks;
}

static void
the_ruler_runs_on_through_a_void(void)
{
    for (int later_left = 0; later_left < 2; later_left++) {
        Canvas canvas = { 0 };
        canvas_begin(&canvas, 100);
        HwViewMap map = view(50, 1, later_left);
        HwRulerClock clock = { .elapsed = true };
        hw_ruler_draw(canvas.cr, canvas.context, canvas.axis, &map, &clock, NULL, 22, &canvas.ink);
        g_autoptr(GArray) ticks = major_ticks(&canvas);
        /* Column c is centred on c ms: 100 ms stands at c = 100.5. The void of 100 ms is 100 cells long. */
        g_assert_cmpuint(ticks->len, ==, 8);
        for (guint i = 0; i < ticks->len; i++) {
            double cell = 100.5 + 100 * (later_left ? 7 - i : i);
            int expected = (int)floor(hw_view_map_x(&map, cell));
            g_assert_cmpint(ABS(g_array_index(ticks, int, i) - expected), <=, 1);
        }
        canvas_end(&canvas);
    }
}

static void
front_stands_at_the_earlier_end_and_no_label_touches_it(void)
{
    for (int later_left = 0; later_left < 2; later_left++) {
        Canvas canvas = { 0 };
        canvas_begin(&canvas, 0);
        HwViewMap map = view(0, 1, later_left);
        HwRulerClock clock = { .elapsed = true };
        hw_ruler_draw(canvas.cr, canvas.context, canvas.axis, &map, &clock, NULL, 22, &canvas.ink);
        int left = 0, right = 0;
        for (int x = 0; x < 14; x++)
            for (int y = 5; y < 16; y++) {
                left += pixel(&canvas, x, y) != PAPER;
                right += pixel(&canvas, WIDTH - 1 - x, y) != PAPER;
            }
        if (later_left)
            g_assert_true(right > 20 && left == 0);
        else
            g_assert_true(left > 20 && right == 0);
        canvas_end(&canvas);
    }
}

static void
steps_are_one_two_five_and_clock_steps_above_a_second(void)
{
    static const struct {
        double need_ns;
        int64_t step_ns;
    } cases[] = {
        { 0.5, 1 },
        { 3, 5 },
        { 11e3, 20000 },
        { 21e6, 50000000 },
        { 0.6e9, G_GINT64_CONSTANT(1000000000) },
        { 6e9, G_GINT64_CONSTANT(10000000000) },
        { 16e9, G_GINT64_CONSTANT(30000000000) },
        { 61e9, G_GINT64_CONSTANT(120000000000) },
        { 2e12, G_GINT64_CONSTANT(3600000000000) },
        { 4e12, G_GINT64_CONSTANT(7200000000000) },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++)
        g_assert_cmpint(hw_ruler_step_ns(cases[i].need_ns, 1), ==, cases[i].step_ns);
}

static void
labels_show_as_many_decimals_as_their_step(void)
{
    HwRulerClock clock = { .elapsed = false };
    g_assert_true(hw_instant_parse(FIXTURE_EPOCH, &clock.epoch, NULL));
    g_autofree char *day = hw_ruler_dup_label(&clock, 250000000, 50000000);
    g_assert_cmpstr(day, ==, "16:02:11.25");
    g_autofree char *whole = hw_ruler_dup_label(&clock, G_GINT64_CONSTANT(2000000000), 1000000000);
    g_assert_cmpstr(whole, ==, "16:02:13");
    clock.elapsed = true;
    clock.zero_ns = -60000000000;
    g_autofree char *elapsed = hw_ruler_dup_label(&clock, 500000000, 100000000);
    g_assert_cmpstr(elapsed, ==, "1:00.5");
}

static void
text_on_a_state_colour_reads_by_wcag(void)
{
    /* WCAG 2.1, success criterion 1.4.3: 4.5 to 1 for text of this size. */
    HwInk ink = hw_ink_paper();
    for (int state = 0; state < HW_N_PENNANT_STATES; state++) {
        const HwColour *ground = &ink.state[state];
        double parts[] = { ground->red, ground->green, ground->blue }, weights[] = { 0.2126, 0.7152, 0.0722 };
        double luminance = 0;
        for (int i = 0; i < 3; i++)
            luminance +=
                weights[i] * (parts[i] <= 0.03928 ? parts[i] / 12.92 : pow((parts[i] + 0.055) / 1.055, 2.4));
        double on = hw_colour_on(ground).red;
        double contrast = on > 0.5 ? 1.05 / (luminance + 0.05) : (luminance + 0.05) / 0.05;
        g_assert_cmpfloat(contrast, >=, 4.5);
    }
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
#define CASE(name) g_test_add_func("/sheet/painters/" #name, name)
    CASE(hairlines_leave_every_pixel_of_the_tyre_bare);
    CASE(at_one_to_one_the_hairline_stands_on_the_pixel_before_its_column);
    CASE(the_reading_line_has_two_tones_and_leaves_the_tyre_bare);
    CASE(labels_of_close_riders_never_overlap_and_stay_in_the_rail);
    CASE(states_differ_by_shape_not_by_colour_alone);
    CASE(the_flag_is_hollow_while_to_re_read_and_filled_when_read);
    CASE(a_marker_is_grabbed_within_twelve_units_at_any_zoom);
    CASE(a_count_is_grabbed_as_one);
    CASE(markers_out_of_view_are_left_out);
    CASE(a_void_is_hatched_and_nothing_beside_it);
    CASE(a_void_narrower_than_a_pixel_is_still_seen);
    CASE(the_ruler_runs_on_through_a_void);
    CASE(front_stands_at_the_earlier_end_and_no_label_touches_it);
    CASE(steps_are_one_two_five_and_clock_steps_above_a_second);
    CASE(labels_show_as_many_decimals_as_their_step);
    CASE(text_on_a_state_colour_reads_by_wcag);
    return g_test_run();
}
