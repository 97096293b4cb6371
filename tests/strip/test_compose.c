/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Every pixel of a view is a cell of the strip, or the mean of those in it, weighed by area; held to the
 * definition worked out here pixel by pixel, and to values worked by hand. */
#include "core/strip/compose.h"
#include "tests/strip/pictures.h"
#include "tests/strip/strip_fixture.h"

#include <math.h>
#include <png.h>
#include <string.h>

enum { ROWS = 12, BLOCK = 20, VOID_CELLS = 7, GUARD = 3 };

/* Three blocks of 20 columns; 7 columns' time without picture between the second and the third. */
enum { N_CELLS = 3 * BLOCK + VOID_CELLS, VOID_START = 2 * BLOCK, VOID_END = 2 * BLOCK + VOID_CELLS };

static uint8_t
sample_at(int column, int row, int channel)
{
    uint32_t state = (uint32_t)(column * 7919 + row * 104729 + channel * 1299709);
    picture_noise(&state);
    return picture_noise(&state);
}

typedef struct {
    StripFixture *fixture;
    HwStrip *strip;
    HwAxis *axis;
} Scene;

static void
scene_open(Scene *scene)
{
    scene->strip = strip_fixture_open_good(scene->fixture);
    scene->axis = hw_axis_new(hw_strip_get_time_base(scene->strip));
}

static void
scene_clear(Scene *scene)
{
    hw_axis_unref(scene->axis);
    hw_strip_unref(scene->strip);
    strip_fixture_free(scene->fixture);
}

G_DEFINE_AUTO_CLEANUP_CLEAR_FUNC(Scene, scene_clear)

static void
add_colour_block(StripFixture *fixture, int index, int first_ms)
{
    uint8_t samples[BLOCK * ROWS * 3];
    for (int i = 0; i < BLOCK * ROWS * 3; i++)
        samples[i] = sample_at(index * BLOCK + i / 3 % BLOCK, i / 3 / BLOCK, i % 3);
    PngWish wish = {
        .width = BLOCK, .height = ROWS, .bits = 8, .colour_type = PNG_COLOR_TYPE_RGB, .samples = samples
    };
    g_autoptr(GByteArray) file = picture_png(&wish);
    g_autofree char *name = g_strdup_printf("b%d.png", index);
    g_autofree char *keys = g_strdup_printf("\"columns\":%d,\"first_ns\":%d", BLOCK, first_ms * 1000000);
    strip_fixture_add(fixture, name, file, keys);
}

static Scene
scene_new(void)
{
    Scene scene = { .fixture = strip_fixture_new() };
    add_colour_block(scene.fixture, 0, 0);
    add_colour_block(scene.fixture, 1, BLOCK);
    add_colour_block(scene.fixture, 2, VOID_END);
    scene_open(&scene);
    g_assert_cmpint(hw_axis_get_n_cells(scene.axis), ==, N_CELLS);
    return scene;
}

/* One PNG as a strip. */
static Scene
scene_of(const PngWish *wish)
{
    Scene scene = { .fixture = strip_fixture_new() };
    g_autoptr(GByteArray) file = picture_png(wish);
    strip_fixture_add(scene.fixture, "b.png", file, "\"first_ns\":0");
    scene_open(&scene);
    return scene;
}

static uint32_t *
view(const Scene *scene, const HwViewMap *map, const HwTone *tone)
{
    int stride = map->width_px + GUARD;
    uint32_t *pixels = g_new(uint32_t, stride * map->height_px);
    for (int i = 0; i < stride * map->height_px; i++)
        pixels[i] = 0x12345678;
    g_autoptr(GError) error = NULL;
    bool ok = hw_compose(scene->strip, scene->axis, map, tone, pixels, stride, NULL, &error);
    g_assert_no_error(error);
    g_assert_true(ok);
    for (int y = 0; y < map->height_px; y++)
        for (int x = map->width_px; x < stride; x++)
            g_assert_cmphex(pixels[y * stride + x], ==, 0x12345678);
    return pixels;
}

/* ---- The definition ---- */

static double
overlap(double a_start, double a_end, double b_start, double b_end)
{
    return MAX(0.0, MIN(a_end, b_end) - MAX(a_start, b_start));
}

static bool
in_void(int cell)
{
    return cell >= VOID_START && cell < VOID_END;
}

/* One channel of the pixel that covers these cells and rows. */
static double
expected_channel(double c0, double c1, double r0, double r1, int channel)
{
    double beyond = HW_COMPOSE_BEYOND >> (16 - 8 * channel) & 0xff;
    double empty = HW_COMPOSE_VOID >> (16 - 8 * channel) & 0xff;
    double sum = 0.0;
    double picture = 0.0;
    double hole = 0.0;
    for (int cell = 0; cell < N_CELLS; cell++) {
        for (int row = 0; row < ROWS; row++) {
            double area = overlap(c0, c1, cell, cell + 1) * overlap(r0, r1, row, row + 1);
            int column = cell < VOID_START ? cell : cell - VOID_CELLS;
            if (in_void(cell)) {
                hole += area;
            } else {
                picture += area;
                sum += area * sample_at(column, row, channel);
            }
        }
    }
    double whole = (c1 - c0) * (r1 - r0);
    return (sum + hole * empty + (whole - picture - hole) * beyond) / whole;
}

static void
assert_view_is_as_defined(const Scene *scene, const HwViewMap *map)
{
    g_autofree uint32_t *pixels = view(scene, map, &HW_TONE_AS_STORED);
    for (int y = 0; y < map->height_px; y++) {
        for (int x = 0; x < map->width_px; x++) {
            int t = map->later_left ? map->width_px - 1 - x : x;
            double c0 = map->first_cell + t * map->cells_per_px;
            double c1 = c0 + map->cells_per_px;
            double r0 = map->first_row + y * map->rows_per_px;
            double r1 = r0 + map->rows_per_px;
            if (map->cells_per_px <= 1.0) {
                c0 = floor((c0 + c1) / 2.0);
                c1 = c0 + 1.0;
            }
            if (map->rows_per_px <= 1.0) {
                r0 = floor((r0 + r1) / 2.0);
                r1 = r0 + 1.0;
            }
            bool exact = map->cells_per_px <= 1.0 && map->rows_per_px <= 1.0;
            uint32_t found = pixels[y * (map->width_px + GUARD) + x];
            g_assert_cmphex(found >> 24, ==, 0xff);
            for (int c = 0; c < 3; c++) {
                double wanted = expected_channel(c0, c1, r0, r1, c);
                double got = found >> (16 - 8 * c) & 0xff;
                /* A mean is rounded once, mixed with the colour of a void or of what lies beyond once more.
                 */
                if (fabs(got - wanted) > (exact ? 0.0 : 1.51))
                    g_error(
                        "%g cells and %g rows a pixel, from %g, %s: pixel %d, %d channel %d is %g, not %g",
                        map->cells_per_px, map->rows_per_px, map->first_cell,
                        map->later_left ? "later left" : "later right", x, y, c, got, wanted);
            }
        }
    }
}

static void
test_view_is_as_defined_at_every_scale(void)
{
    static const double cells[] = { 1.0, 0.25, 0.3, 2.0, 2.5, 3.0, 7.3, 20.0, 61.0 };
    static const double rows[] = { 1.0, 0.5, 2.0, 1.7, 3.9 };
    static const double firsts[] = { 0.0, -3.0, 4.0, 10.4, 17.0, 33.3, 58.5 };
    g_auto(Scene) scene = scene_new();
    for (size_t i = 0; i < G_N_ELEMENTS(cells); i++)
        for (size_t j = 0; j < G_N_ELEMENTS(rows); j++)
            for (size_t k = 0; k < G_N_ELEMENTS(firsts) * 2; k++) {
                HwViewMap map = { .first_cell = firsts[k / 2],
                                  .cells_per_px = cells[i],
                                  .first_row = k % 3 == 0 ? 0.0 : -1.25,
                                  .rows_per_px = rows[j],
                                  .width_px = 23,
                                  .height_px = 9,
                                  .later_left = k % 2 == 1 };
                assert_view_is_as_defined(&scene, &map);
            }
}

/* The definition above allows rounding; at 1:1 not a bit may differ, mirrored or not. */
static void
test_one_to_one_is_the_raster(void)
{
    g_auto(Scene) scene = scene_new();
    for (int left = 0; left < 2; left++) {
        HwViewMap map = { .first_cell = 0,
                          .cells_per_px = 1,
                          .rows_per_px = 1,
                          .width_px = N_CELLS + 2,
                          .height_px = ROWS + 1,
                          .later_left = left == 1 };
        g_autofree uint32_t *pixels = view(&scene, &map, &HW_TONE_AS_STORED);
        for (int y = 0; y <= ROWS; y++)
            for (int cell = 0; cell < N_CELLS + 2; cell++) {
                int x = left ? map.width_px - 1 - cell : cell;
                int column = cell < VOID_START ? cell : cell - VOID_CELLS;
                uint32_t wanted = 0xff000000u | (uint32_t)sample_at(column, y, 0) << 16 |
                                  (uint32_t)sample_at(column, y, 1) << 8 | sample_at(column, y, 2);
                if (in_void(cell))
                    wanted = HW_COMPOSE_VOID;
                if (cell >= N_CELLS || y >= ROWS)
                    wanted = HW_COMPOSE_BEYOND;
                g_assert_cmphex(pixels[y * (map.width_px + GUARD) + x], ==, wanted);
            }
    }
}

/* ---- Values worked by hand ---- */

static HwViewMap
map_at(double cells_per_px, double rows_per_px, int width, int height)
{
    return (HwViewMap){
        .cells_per_px = cells_per_px, .rows_per_px = rows_per_px, .width_px = width, .height_px = height
    };
}

static void
assert_greys(const Scene *scene, const HwViewMap *map, const HwTone *tone, const uint8_t *greys)
{
    g_autofree uint32_t *pixels = view(scene, map, tone);
    for (int i = 0; i < map->width_px; i++)
        g_assert_cmphex(pixels[i], ==, 0xff000000u | greys[i] * 0x010101u);
}

static void
test_shrinking_by_hand(void)
{
    static const uint8_t samples[] = { 10, 21, 100, 200, 0, 255 };
    PngWish wish = { .width = 6, .height = 1, .bits = 8, .samples = samples };
    g_auto(Scene) scene = scene_of(&wish);
    HwViewMap map = map_at(2.0, 1.0, 3, 1);
    assert_greys(&scene, &map, &HW_TONE_AS_STORED,
                 ((const uint8_t[]){ 16, 150, 128 })); /* 15.5, 150, 127.5 */
    map = map_at(1.5, 1.0, 4, 1);
    /* (10 + 21/2)/1.5 = 13.67, (21/2 + 100)/1.5 = 73.67, (200 + 0)/1.5 = 133.33, (0 + 255)/1.5 = 170 */
    assert_greys(&scene, &map, &HW_TONE_AS_STORED, ((const uint8_t[]){ 14, 74, 133, 170 }));
    map = map_at(0.5, 1.0, 12, 1);
    assert_greys(&scene, &map, &HW_TONE_AS_STORED,
                 ((const uint8_t[]){ 10, 10, 21, 21, 100, 100, 200, 200, 0, 0, 255, 255 }));
}

static void
test_other_depths_are_scaled_to_eight_bits(void)
{
    static const uint8_t deep[] = { 0, 0, 0x80, 0, 0xff, 0xff, 0x40, 0x40 };
    PngWish deep_wish = { .width = 4, .height = 1, .bits = 16, .samples = deep };
    g_auto(Scene) deep_scene = scene_of(&deep_wish);
    HwViewMap map = map_at(1.0, 1.0, 4, 1);
    assert_greys(&deep_scene, &map, &HW_TONE_AS_STORED, ((const uint8_t[]){ 0, 128, 255, 64 }));

    static const uint8_t shallow[] = { 0x1b };
    PngWish shallow_wish = { .width = 4, .height = 1, .bits = 2, .samples = shallow };
    g_auto(Scene) shallow_scene = scene_of(&shallow_wish);
    assert_greys(&shallow_scene, &map, &HW_TONE_AS_STORED, ((const uint8_t[]){ 0, 85, 170, 255 }));

    static const uint8_t clear[] = { 200, 128, 200, 255, 200, 0, 255, 51 };
    PngWish clear_wish = {
        .width = 4, .height = 1, .bits = 8, .colour_type = PNG_COLOR_TYPE_GRAY_ALPHA, .samples = clear
    };
    g_auto(Scene) clear_scene = scene_of(&clear_wish);
    assert_greys(&clear_scene, &map, &HW_TONE_AS_STORED, ((const uint8_t[]){ 100, 200, 0, 51 }));
}

static void
test_tone_by_hand(void)
{
    static const uint8_t samples[] = { 100, 64, 0, 254 };
    PngWish wish = { .width = 4, .height = 1, .bits = 8, .samples = samples };
    g_auto(Scene) scene = scene_of(&wish);
    HwViewMap map = map_at(1.0, 1.0, 4, 1);
    assert_greys(&scene, &map, &(HwTone){ 0.2, 1.0, 1.0 }, ((const uint8_t[]){ 151, 115, 51, 255 }));
    /* half the distance from 127.5 */
    assert_greys(&scene, &map, &(HwTone){ 0.0, 0.5, 1.0 }, ((const uint8_t[]){ 114, 96, 64, 191 }));
    /* 255·√(c/255): 159.7, 127.7, 0, 254.499 */
    assert_greys(&scene, &map, &(HwTone){ 0.0, 1.0, 2.0 }, ((const uint8_t[]){ 160, 128, 0, 254 }));
    /* Means are taken first: 82 and 127, + 51. */
    map = map_at(2.0, 1.0, 2, 1);
    assert_greys(&scene, &map, &(HwTone){ 0.2, 1.0, 1.0 }, ((const uint8_t[]){ 133, 178 }));
}

/* White for one column of black, in 3,000: wherever it lies, and even where two pixels share it. */
static void
test_one_column_stays_visible(void)
{
    enum { N = 3000, HEIGHT = 8 };
    static const int places[] = { 0, 31, 32, 777, 1500, 2047, 2999 };
    static const double scales[] = { 1.3, 2.0, 3.7, 16.0, 31.9, 32.0, 50.0, 100.1, 200.0 };
    for (size_t i = 0; i < G_N_ELEMENTS(places); i++) {
        g_autofree uint8_t *samples = g_malloc0(N * HEIGHT);
        for (int row = 0; row < HEIGHT; row++)
            samples[row * N + places[i]] = 255;
        PngWish wish = { .width = N, .height = HEIGHT, .bits = 8, .samples = samples };
        g_auto(Scene) scene = scene_of(&wish);
        for (size_t j = 0; j < G_N_ELEMENTS(scales) * 2; j++) {
            double scale = scales[j / 2];
            int width = (int)(N / scale);
            if (places[i] >= floor(width * scale))
                continue;
            HwViewMap map = map_at(scale, j % 2 == 0 ? 1.0 : 4.0, width, 2);
            g_autofree uint32_t *pixels = view(&scene, &map, &HW_TONE_AS_STORED);
            /* Where reduced cells are used, the one that holds the column may reach into the pixel before. */
            bool reduced = scale >= 32.0 && map.rows_per_px >= 4.0;
            int at = (int)(places[i] / scale);
            int first = reduced ? MAX(at - 1, 0) : at;
            int last = MIN(at + 1, width - 1);
            uint32_t light = 0;
            uint32_t brightest = 0;
            for (int x = first; x <= last; x++) {
                light += pixels[x] & 0xff;
                brightest = MAX(brightest, pixels[x] & 0xff);
            }
            g_assert_cmpuint(brightest, >=, 1);
            g_assert_cmpfloat_with_epsilon(light, 255.0 / scale, 1.01);
            for (int x = 0; x < width; x++)
                if (x < first || x > last)
                    g_assert_cmphex(pixels[x], ==, 0xff000000u);
        }
    }
}

/* ---- Overviews ---- */

static uint8_t
smooth(int column, int row)
{
    return (uint8_t)(128 + 100 * sin(column / 90.0) + row % 20);
}

/* From reduced blocks, and nothing else decoded. Where reduced cells and pixels coincide it is the mean, but
 * for rounding twice; where they do not, the picture's own slope (1.1 codes a column, one a row) comes in. */
static void
test_overview_is_the_mean(void)
{
    enum { WIDTH = 1000, HEIGHT = 90, WIDTH_PX = 53, HEIGHT_PX = 16 };
    static const struct {
        double first_cell;
        double cells;
        double rows;
        double within;
    } cases[] = { { 0.0, 32.0, 4.0, 1.01 }, { 3.0, 37.0, 5.3, 4.0 } };
    g_auto(Scene) scene = { .fixture = strip_fixture_new() };
    g_autoptr(GByteArray) file = picture_grey_png(WIDTH, HEIGHT, smooth);
    strip_fixture_add(scene.fixture, "a.png", file, "\"columns\":1000,\"first_ns\":0");
    strip_fixture_add(scene.fixture, "b.png", file, "\"columns\":1000,\"first_ns\":1000000000");
    scene_open(&scene);
    for (size_t i = 0; i < G_N_ELEMENTS(cases); i++) {
        HwViewMap map = map_at(cases[i].cells, cases[i].rows, WIDTH_PX, HEIGHT_PX);
        map.first_cell = cases[i].first_cell;
        g_autofree uint32_t *pixels = view(&scene, &map, &HW_TONE_AS_STORED);
        for (int y = 0; y < HEIGHT_PX; y++)
            for (int x = 0; x < WIDTH_PX; x++) {
                double r0 = y * cases[i].rows;
                double c0 = map.first_cell + x * cases[i].cells;
                double sum = 0.0;
                for (int cell = (int)c0; cell < (int)(c0 + cases[i].cells); cell++)
                    for (int row = (int)r0; row < MIN(HEIGHT, (int)r0 + 7); row++)
                        sum += smooth(cell % WIDTH, row) * overlap(r0, r0 + cases[i].rows, row, row + 1);
                /* The first block ends inside a pixel and a reduced cell. */
                bool joint = c0 < WIDTH && c0 + cases[i].cells > WIDTH;
                if (!joint)
                    g_assert_cmpfloat_with_epsilon(pixels[y * (WIDTH_PX + GUARD) + x] & 0xff,
                                                   sum / (cases[i].cells * cases[i].rows),
                                                   c0 < WIDTH ? cases[i].within : 4.0);
            }
    }
    g_autoptr(HwRaster) whole = hw_strip_peek_raster(scene.strip, 0, HW_PLANE_STORED);
    g_assert_null(whole);
}

/* ---- What is not there ---- */

static void
test_block_found_damaged_is_drawn_as_void(void)
{
    g_auto(Scene) scene = { .fixture = strip_fixture_new() };
    g_autoptr(GByteArray) file = picture_grey_png(BLOCK, ROWS, smooth);
    g_autoptr(GByteArray) cut = picture_grey_png(BLOCK, ROWS, smooth);
    g_byte_array_set_size(cut, cut->len - 20);
    strip_fixture_add(scene.fixture, "a.png", file, "\"columns\":20,\"first_ns\":0");
    strip_fixture_add(scene.fixture, "b.png", cut, "\"columns\":20,\"first_ns\":20000000");
    scene_open(&scene);
    HwViewMap map = map_at(1.0, 1.0, 2 * BLOCK, ROWS);
    for (int round = 0; round < 2; round++) {
        g_autofree uint32_t *pixels = view(&scene, &map, &HW_TONE_AS_STORED);
        g_assert_cmphex(pixels[BLOCK - 1], ==, 0xff000000u | smooth(BLOCK - 1, 0) * 0x010101u);
        g_assert_cmphex(pixels[BLOCK], ==, HW_COMPOSE_VOID);
        g_assert_cmphex(pixels[(2 * BLOCK + GUARD) * (ROWS - 1) + 2 * BLOCK - 1], ==, HW_COMPOSE_VOID);
        /* The same with a strip that knows. */
        HwStrip *refreshed = hw_strip_refreshed(scene.strip, NULL);
        hw_strip_unref(scene.strip);
        hw_axis_unref(scene.axis);
        scene.strip = refreshed;
        scene.axis = hw_axis_new(hw_strip_get_time_base(refreshed));
        g_assert_cmpint(hw_axis_get_n_cells(scene.axis), ==, 2 * BLOCK);
    }
}

static void
test_cached_view_never_decodes(void)
{
    g_auto(Scene) scene = scene_new();
    HwViewMap map = map_at(1.0, 1.0, N_CELLS, ROWS);
    int stride = N_CELLS + GUARD;
    g_autofree uint32_t *cached = g_new0(uint32_t, stride * ROWS);
    bool holes = false;
    g_autoptr(GError) error = NULL;
    g_assert_true(
        hw_compose_cached(scene.strip, scene.axis, &map, &HW_TONE_AS_STORED, cached, stride, &holes, &error));
    g_assert_true(holes);
    g_assert_cmphex(cached[0], ==, HW_COMPOSE_VOID);
    g_assert_cmpuint(hw_strip_get_n_decoded(scene.strip), ==, 0);

    /* Reduced blocks stand in for what is missing. */
    g_autoptr(HwRaster) reduced = hw_strip_get_reduced(scene.strip, 0, NULL, &error);
    g_assert_no_error(error);
    g_assert_true(
        hw_compose_cached(scene.strip, scene.axis, &map, &HW_TONE_AS_STORED, cached, stride, &holes, &error));
    g_assert_true(holes);
    g_assert_cmphex(cached[17] & 0xff, ==, hw_raster_get(reduced, 1, 0, 2));

    g_autofree uint32_t *pixels = view(&scene, &map, &HW_TONE_AS_STORED);
    g_assert_true(
        hw_compose_cached(scene.strip, scene.axis, &map, &HW_TONE_AS_STORED, cached, stride, &holes, &error));
    g_assert_false(holes);
    for (int y = 0; y < ROWS; y++)
        g_assert_cmpmem(pixels + y * stride, N_CELLS * 4, cached + y * stride, N_CELLS * 4);
}

static void
test_cancelled_view_says_so(void)
{
    g_auto(Scene) scene = scene_new();
    HwViewMap map = map_at(1.0, 1.0, N_CELLS, ROWS);
    g_autofree uint32_t *pixels = g_new0(uint32_t, N_CELLS * ROWS);
    g_autoptr(GCancellable) cancellable = g_cancellable_new();
    g_cancellable_cancel(cancellable);
    g_autoptr(GError) error = NULL;
    g_assert_false(
        hw_compose(scene.strip, scene.axis, &map, &HW_TONE_AS_STORED, pixels, N_CELLS, cancellable, &error));
    g_assert_error(error, G_IO_ERROR, G_IO_ERROR_CANCELLED);
}

static void
test_view_off_the_strip_is_beyond(void)
{
    g_auto(Scene) scene = scene_new();
    static const double places[] = { -1e12, -500.0, 500.0, 1e12 };
    for (size_t i = 0; i < G_N_ELEMENTS(places) * 2; i++) {
        HwViewMap map = map_at(i % 2 == 0 ? 1.0 : 2.5, 1.0, 16, 2);
        map.first_cell = places[i / 2];
        g_autofree uint32_t *pixels = view(&scene, &map, &HW_TONE_AS_STORED);
        for (int x = 0; x < 16; x++)
            g_assert_cmphex(pixels[x], ==, HW_COMPOSE_BEYOND);
    }
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
#define ADD(name) g_test_add_func("/compose/" #name, test_##name)
    ADD(view_is_as_defined_at_every_scale);
    ADD(one_to_one_is_the_raster);
    ADD(shrinking_by_hand);
    ADD(other_depths_are_scaled_to_eight_bits);
    ADD(tone_by_hand);
    ADD(one_column_stays_visible);
    ADD(overview_is_the_mean);
    ADD(block_found_damaged_is_drawn_as_void);
    ADD(cached_view_never_decodes);
    ADD(cancelled_view_says_so);
    ADD(view_off_the_strip_is_beyond);
#undef ADD
    return g_test_run();
}
