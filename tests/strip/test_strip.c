/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Columns keep their numbers whatever turns out to be damaged; samples are in the order of time; what cannot
 * be read is a void with its reason. */
#include "core/base/digest.h"
#include "core/strip/strip_error.h"
#include "tests/strip/pictures.h"
#include "tests/strip/strip_fixture.h"

#include <math.h>
#include <pthread.h>
#include <string.h>

enum { ROWS = 6 };

static uint8_t
rising(int column, int row)
{
    return (uint8_t)(column * 3 + row * 40);
}

static void
add(StripFixture *fixture, const char *name, int width, int height, const char *keys)
{
    g_autoptr(GByteArray) file = picture_grey_png(width, height, rising);
    strip_fixture_add(fixture, name, file, keys);
}

static void
assert_columns(HwStrip *strip, guint block, int64_t first_col, int64_t n_cols)
{
    int64_t first;
    int64_t n;
    hw_strip_get_block_columns(strip, block, &first, &n);
    g_assert_cmpint(first, ==, first_col);
    g_assert_cmpint(n, ==, n_cols);
}

/* The reason names the file and says `word`. */
static void
assert_damage(HwStrip *strip, guint block, const char *file, const char *word)
{
    const char *reason = hw_strip_get_damage(strip, block);
    g_assert_nonnull(reason);
    g_assert_nonnull(strstr(reason, file));
    if (strstr(reason, word) == NULL)
        g_error("\"%s\" does not say \"%s\"", reason, word);
    g_assert_false(g_str_has_suffix(reason, "."));
}

/* Decoding a block is refused as damage. */
static void
assert_refused(HwStrip *strip, guint block, HwPlane plane, const char *word)
{
    g_autoptr(GError) error = NULL;
    g_assert_null(hw_strip_get_raster(strip, block, plane, NULL, &error));
    g_assert_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED);
    if (strstr(error->message, word) == NULL)
        g_error("\"%s\" does not say \"%s\"", error->message, word);
}

static HwRaster *
get(HwStrip *strip, guint block, HwPlane plane)
{
    g_autoptr(GError) error = NULL;
    HwRaster *raster = hw_strip_get_raster(strip, block, plane, NULL, &error);
    g_assert_no_error(error);
    return raster;
}

static HwStrip *
refresh(HwStrip *strip)
{
    g_autoptr(GError) error = NULL;
    HwStrip *refreshed = hw_strip_refreshed(strip, &error);
    g_assert_no_error(error);
    return refreshed;
}

/* ---- Counting ---- */

static void
test_columns_are_counted_by_the_first_that_tells(void)
{
    StripFixture *fixture = strip_fixture_new();
    static const char stamps[] = "ns\n40000000\n41000000\n42000000\n";
    folder_write(fixture->folder, "times.csv", stamps, sizeof stamps - 1);
    add(fixture, "a.png", 8, ROWS, "\"first_ns\":0");                                        /* width */
    strip_fixture_add(fixture, "b.png", NULL, "\"columns\":5,\"first_ns\":10000000");        /* manifest */
    strip_fixture_add(fixture, "c.png", NULL, "\"first_ns\":20000000,\"last_ns\":26000000"); /* stamps */
    strip_fixture_add(fixture, "d.png", NULL, "\"first_ns\":30000000");                      /* nothing */
    add(fixture, "e.png", 3, ROWS, "\"times\":\"times.csv\"");                               /* times */
    g_autoptr(HwStrip) strip = strip_fixture_open_good(fixture);
    assert_columns(strip, 0, 0, 8);
    assert_columns(strip, 1, 8, 5);
    assert_columns(strip, 2, 13, 7);
    assert_columns(strip, 3, 20, 0);
    assert_columns(strip, 4, 20, 3);
    g_assert_cmpint(hw_strip_get_n_columns(strip), ==, 23);
    g_assert_cmpint(hw_time_base_get_n_columns(hw_strip_get_time_base(strip)), ==, 23);
    g_assert_cmpint(hw_strip_get_n_rows(strip), ==, ROWS);
    g_assert_null(hw_strip_get_damage(strip, 0));
    assert_damage(strip, 1, "b.png", "missing");
    assert_damage(strip, 2, "c.png", "missing");
    assert_damage(strip, 3, "d.png", "missing");
    g_assert_null(hw_strip_get_damage(strip, 4));
    g_assert_false(hw_strip_is_whole(strip));
    g_assert_cmpuint(hw_strip_get_n_decoded(strip), ==, 0);
    strip_fixture_free(fixture);
}

static void
test_column_is_found_in_its_block(void)
{
    StripFixture *fixture = strip_fixture_new();
    add(fixture, "a.png", 8, ROWS, "\"columns\":8,\"first_ns\":0");
    /* Missing, and 10 columns long by the rate up to the next block: those behind it keep their numbers. */
    strip_fixture_add(fixture, "b.png", NULL, "\"first_ns\":20000000");
    add(fixture, "c.png", 5, ROWS, "\"columns\":5,\"first_ns\":30000000");
    g_autoptr(HwStrip) strip = strip_fixture_open_good(fixture);
    static const struct {
        double column;
        bool found;
        guint block;
        double in_block;
    } cases[] = { { 0.0, true, 0, 0.0 },     { 7.999, true, 0, 7.999 }, { 8.0, true, 1, 0.0 },
                  { 18.0, true, 2, 0.0 },    { 22.5, true, 2, 4.5 },    { 23.0, false, 9, 9.0 },
                  { -0.001, false, 9, 9.0 }, { NAN, false, 9, 9.0 } };
    for (size_t i = 0; i < G_N_ELEMENTS(cases); i++) {
        guint block = 9;
        double in_block = 9.0;
        g_assert_true(hw_strip_locate(strip, cases[i].column, &block, &in_block) == cases[i].found);
        g_assert_cmpuint(block, ==, cases[i].block);
        g_assert_cmpfloat(in_block, ==, cases[i].in_block);
    }
    strip_fixture_free(fixture);
}

static void
test_stamps_that_do_not_match_the_columns_are_damage(void)
{
    StripFixture *fixture = strip_fixture_new();
    static const char stamps[] = "ns\n40000000\n41000000\n42000000\n";
    folder_write(fixture->folder, "times.csv", stamps, sizeof stamps - 1);
    add(fixture, "a.png", 8, ROWS, "\"columns\":8,\"first_ns\":0");
    add(fixture, "b.png", 4, ROWS, "\"columns\":4,\"times\":\"times.csv\"");
    g_autoptr(HwStrip) strip = strip_fixture_open_good(fixture);
    assert_columns(strip, 1, 8, 4);
    assert_damage(strip, 1, "times.csv", "3 stamps where 4");
    strip_fixture_free(fixture);
}

/* ---- Damage ---- */

/* Two good blocks of eight columns; what stands between them is the case's. */
typedef struct {
    StripFixture *fixture;
    HwStrip *strip;
} Middle;

static Middle
open_with_middle(const GByteArray *file, const char *more_keys)
{
    StripFixture *fixture = strip_fixture_new();
    g_autofree char *keys = g_strdup_printf("\"columns\":8,\"first_ns\":8000000%s", more_keys);
    add(fixture, "a.png", 8, ROWS, "\"columns\":8,\"first_ns\":0");
    strip_fixture_add(fixture, "b.png", file, keys);
    add(fixture, "c.png", 8, ROWS, "\"columns\":8,\"first_ns\":16000000");
    return (Middle){ fixture, strip_fixture_open_good(fixture) };
}

/* The block is found to be damaged when it is decoded, in either plane and by check_block, and never before;
 * then the strip's successor has it as a void and all numbers are as they were. */
static void
check_damage_found(Middle middle, const char *word)
{
    HwStrip *strip = middle.strip;
    g_assert_null(hw_strip_get_damage(strip, 1));
    g_autoptr(HwStrip) same = refresh(strip);
    g_assert_true(same == strip);
    assert_refused(strip, 1, HW_PLANE_STORED, word);
    assert_refused(strip, 1, HW_PLANE_GREY, word);
    g_autoptr(GError) error = NULL;
    guint notes = 77;
    g_assert_false(hw_strip_check_block(strip, 1, &notes, NULL, &error));
    g_assert_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED);
    g_assert_cmpuint(notes, ==, 77);

    g_autoptr(HwStrip) refreshed = refresh(strip);
    g_assert_true(refreshed != strip);
    g_assert_null(hw_strip_get_damage(strip, 1));
    assert_damage(refreshed, 1, "b.png", word);
    assert_columns(refreshed, 1, 8, 8);
    assert_columns(refreshed, 2, 16, 8);
    g_assert_cmpint(hw_strip_get_n_columns(refreshed), ==, 24);
    g_assert_cmpuint(hw_time_base_get_n_voids(hw_strip_get_time_base(refreshed)), ==, 1);
    const HwVoid *hole = hw_time_base_get_void(hw_strip_get_time_base(refreshed), 0);
    g_assert_cmpint(hole->after_column, ==, 8);
    g_assert_cmpint(hole->n_cols, ==, 8);
    g_assert_nonnull(strstr(hole->reason, word));
    g_assert_false(hw_strip_is_whole(refreshed));
    int64_t before;
    int64_t after;
    g_assert_true(hw_time_base_instant(hw_strip_get_time_base(strip), 20.5, &before));
    g_assert_true(hw_time_base_instant(hw_strip_get_time_base(refreshed), 20.5, &after));
    g_assert_cmpint(before, ==, after);
    g_assert_false(hw_time_base_instant(hw_strip_get_time_base(refreshed), 12.5, &after));

    hw_strip_unref(strip);
    strip_fixture_free(middle.fixture);
}

static void
test_cut_block_becomes_a_void(void)
{
    g_autoptr(GByteArray) file = picture_grey_png(8, ROWS, rising);
    g_byte_array_set_size(file, file->len - 20);
    check_damage_found(open_with_middle(file, ""), "cut");
}

static void
test_altered_digest_becomes_a_void(void)
{
    g_autoptr(GByteArray) file = picture_grey_png(8, ROWS, rising);
    HwDigest other = hw_digest_bytes("another file", 12);
    g_autofree char *keys = g_strdup_printf(",\"sha256\":\"%s\"", other.hex);
    check_damage_found(open_with_middle(file, keys), "altered: its SHA-256 is not the manifest's");
}

static void
test_page_in_place_of_a_picture_becomes_a_void(void)
{
    g_autoptr(GByteArray) file = g_byte_array_new();
    g_byte_array_append(file, (const uint8_t *)"<!DOCTYPE html><title>404</title>", 33);
    check_damage_found(open_with_middle(file, ""), "neither a PNG nor a JPEG");
}

static void
test_other_count_of_columns_becomes_a_void(void)
{
    g_autoptr(GByteArray) file = picture_grey_png(7, ROWS, rising);
    check_damage_found(open_with_middle(file, ""), "7 columns where 8");
}

static void
test_other_height_becomes_a_void(void)
{
    g_autoptr(GByteArray) file = picture_grey_png(8, ROWS + 1, rising);
    check_damage_found(open_with_middle(file, ""), "7 rows high where the recording has 6");
}

static void
test_matching_digest_is_read(void)
{
    g_autoptr(GByteArray) file = picture_grey_png(8, ROWS, rising);
    HwDigest digest = hw_digest_bytes(file->data, file->len);
    g_autofree char *keys = g_strdup_printf(",\"sha256\":\"%s\"", digest.hex);
    Middle middle = open_with_middle(file, keys);
    g_autoptr(HwRaster) raster = get(middle.strip, 1, HW_PLANE_STORED);
    g_assert_cmpint(raster->width, ==, 8);
    g_assert_true(hw_strip_is_whole(middle.strip));
    guint notes = 77;
    g_assert_true(hw_strip_check_block(middle.strip, 1, &notes, NULL, NULL));
    g_assert_cmpuint(notes, ==, 0);
    g_assert_cmpuint(hw_strip_get_n_decoded(middle.strip), ==, 2);
    hw_strip_unref(middle.strip);
    strip_fixture_free(middle.fixture);
}

/* A failure that the shared cache holds reaches a strip made later, which never decoded the block itself. */
static void
test_damage_kept_in_the_cache_is_learnt_by_every_strip(void)
{
    g_autoptr(GByteArray) file = picture_grey_png(8, ROWS, rising);
    g_byte_array_set_size(file, file->len - 20);
    Middle middle = open_with_middle(file, "");
    assert_refused(middle.strip, 1, HW_PLANE_STORED, "cut");
    g_autoptr(HwStrip) later = strip_fixture_open_good(middle.fixture);
    assert_refused(later, 1, HW_PLANE_STORED, "cut");
    g_assert_cmpuint(hw_strip_get_n_decoded(later), ==, 0);
    g_autoptr(HwStrip) refreshed = refresh(later);
    assert_damage(refreshed, 1, "b.png", "cut");
    hw_strip_unref(middle.strip);
    strip_fixture_free(middle.fixture);
}

static void
test_recording_without_a_readable_block_is_refused(void)
{
    StripFixture *fixture = strip_fixture_new();
    g_autoptr(GByteArray) page = g_byte_array_new();
    g_byte_array_append(page, (const uint8_t *)"<html>not a picture</html>", 26);
    strip_fixture_add(fixture, "a.png", NULL, "\"columns\":8,\"first_ns\":0");
    strip_fixture_add(fixture, "b.png", page, "\"columns\":8,\"first_ns\":8000000");
    g_autoptr(GError) error = NULL;
    g_assert_null(strip_fixture_open(fixture, &error));
    g_assert_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_EMPTY);
    g_assert_true(g_str_has_suffix(error->message, "."));
    strip_fixture_free(fixture);
}

static void
test_last_readable_block_lost_is_said(void)
{
    StripFixture *fixture = strip_fixture_new();
    g_autoptr(GByteArray) file = picture_grey_png(8, ROWS, rising);
    g_byte_array_set_size(file, file->len - 20);
    strip_fixture_add(fixture, "a.png", file, "\"columns\":8,\"first_ns\":0");
    g_autoptr(HwStrip) strip = strip_fixture_open_good(fixture);
    assert_refused(strip, 0, HW_PLANE_GREY, "cut");
    g_autoptr(GError) error = NULL;
    g_assert_null(hw_strip_refreshed(strip, &error));
    g_assert_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_EMPTY);
    strip_fixture_free(fixture);
}

/* ---- Samples ---- */

/* `later` left: the image's right end is the earliest column. */
static void
test_columns_stand_in_the_order_of_time(void)
{
    for (int left = 0; left < 2; left++) {
        StripFixture *fixture = strip_fixture_new();
        fixture->head = left ? "\"later\":\"left\",\"scan\":{\"rate_hz\":1000,\"stamp\":\"middle\"},"
                             : "\"later\":\"right\",\"scan\":{\"rate_hz\":1000,\"stamp\":\"middle\"},";
        add(fixture, "a.png", 8, ROWS, "\"columns\":8,\"first_ns\":0");
        g_autoptr(HwStrip) strip = strip_fixture_open_good(fixture);
        g_autoptr(HwRaster) raster = get(strip, 0, HW_PLANE_STORED);
        for (int column = 0; column < 8; column++)
            for (int row = 0; row < ROWS; row++)
                g_assert_cmpuint(hw_raster_get(raster, column, row, 0), ==,
                                 rising(left ? 7 - column : column, row));
        strip_fixture_free(fixture);
    }
}

static void
test_block_is_decoded_once_for_both_planes_of_grey(void)
{
    StripFixture *fixture = strip_fixture_new();
    add(fixture, "a.png", 8, ROWS, "\"columns\":8,\"first_ns\":0");
    g_autoptr(HwStrip) strip = strip_fixture_open_good(fixture);
    g_assert_null(hw_strip_peek_raster(strip, 0, HW_PLANE_STORED));
    g_autoptr(HwRaster) stored = get(strip, 0, HW_PLANE_STORED);
    g_autoptr(HwRaster) grey = get(strip, 0, HW_PLANE_GREY);
    g_autoptr(HwRaster) again = get(strip, 0, HW_PLANE_GREY);
    g_autoptr(HwRaster) there = hw_strip_peek_raster(strip, 0, HW_PLANE_STORED);
    g_assert_true(stored == grey && grey == again && there == stored);
    g_assert_cmpuint(hw_strip_get_n_decoded(strip), ==, 1);
    strip_fixture_free(fixture);
}

static void
test_growing_recording_shares_the_cache(void)
{
    StripFixture *fixture = strip_fixture_new();
    fixture->head = "\"complete\":false,\"scan\":{\"rate_hz\":1000,\"stamp\":\"middle\"},";
    add(fixture, "a.png", 8, ROWS, "\"columns\":8,\"first_ns\":0");
    g_autoptr(HwStrip) young = strip_fixture_open_good(fixture);
    g_autoptr(HwRaster) before = get(young, 0, HW_PLANE_STORED);
    g_assert_false(hw_strip_is_whole(young));
    add(fixture, "b.png", 8, ROWS, "\"columns\":8,\"first_ns\":8000000");
    g_autoptr(HwStrip) grown = strip_fixture_open_good(fixture);
    g_autoptr(HwRaster) after = get(grown, 0, HW_PLANE_STORED);
    g_assert_true(before == after);
    g_assert_cmpuint(hw_strip_get_n_decoded(grown), ==, 0);
    g_assert_cmpint(hw_strip_get_n_columns(grown), ==, 16);
    g_assert_cmpint(hw_strip_get_n_columns(young), ==, 8);
    strip_fixture_free(fixture);
}

/* A file that was written again (a missing one that arrived, a cut one copied anew) is looked at again. */
static void
test_file_written_again_is_read_again(void)
{
    g_autoptr(GByteArray) whole = picture_grey_png(8, ROWS, rising);
    g_autoptr(GByteArray) cut = picture_grey_png(8, ROWS, rising);
    g_byte_array_set_size(cut, cut->len - 20);
    Middle middle = open_with_middle(cut, "");
    assert_refused(middle.strip, 1, HW_PLANE_STORED, "cut");
    folder_write(middle.fixture->folder, "b.png", whole->data, whole->len);
    g_autoptr(HwStrip) anew = strip_fixture_open_good(middle.fixture);
    g_autoptr(HwRaster) raster = get(anew, 1, HW_PLANE_STORED);
    g_assert_nonnull(raster);
    hw_strip_unref(middle.strip);
    strip_fixture_free(middle.fixture);
}

static void
test_cancelled_decode_is_forgotten(void)
{
    StripFixture *fixture = strip_fixture_new();
    add(fixture, "a.png", 8, ROWS, "\"columns\":8,\"first_ns\":0");
    g_autoptr(HwStrip) strip = strip_fixture_open_good(fixture);
    g_autoptr(GCancellable) cancellable = g_cancellable_new();
    g_cancellable_cancel(cancellable);
    g_autoptr(GError) error = NULL;
    g_assert_null(hw_strip_get_raster(strip, 0, HW_PLANE_STORED, cancellable, &error));
    g_assert_error(error, G_IO_ERROR, G_IO_ERROR_CANCELLED);
    g_autoptr(HwStrip) same = refresh(strip);
    g_assert_true(same == strip);
    g_autoptr(HwRaster) raster = get(strip, 0, HW_PLANE_STORED);
    g_assert_nonnull(raster);
    strip_fixture_free(fixture);
}

static uint8_t
speckled(int column, int row)
{
    return (uint8_t)((column * 57 + row * 91 + column * row * 13) % 256);
}

/* Against means taken here one by one; 37 columns and 10 rows leave smaller cells at the ends. */
static void
test_reduced_cells_are_means(void)
{
    StripFixture *fixture = strip_fixture_new();
    g_autoptr(GByteArray) file = picture_grey_png(37, 10, speckled);
    strip_fixture_add(fixture, "a.png", file, "\"columns\":37,\"first_ns\":0");
    g_autoptr(HwStrip) strip = strip_fixture_open_good(fixture);
    g_assert_null(hw_strip_peek_reduced(strip, 0));
    g_autoptr(GError) error = NULL;
    g_autoptr(HwRaster) reduced = hw_strip_get_reduced(strip, 0, NULL, &error);
    g_assert_no_error(error);
    g_assert_cmpint(reduced->width, ==, 3);
    g_assert_cmpint(reduced->height, ==, 3);
    for (int y = 0; y < 3; y++) {
        for (int x = 0; x < 3; x++) {
            int sum = 0;
            int n = 0;
            for (int row = 4 * y; row < MIN(4 * y + 4, 10); row++)
                for (int column = 16 * x; column < MIN(16 * x + 16, 37); column++, n++)
                    sum += speckled(column, row);
            for (int c = 0; c < 3; c++)
                g_assert_cmpuint(hw_raster_get(reduced, x, y, c), ==, (unsigned)((2 * sum + n) / (2 * n)));
            g_assert_cmpuint(hw_raster_get(reduced, x, y, 3), ==, 255);
        }
    }
    g_autoptr(HwRaster) there = hw_strip_peek_reduced(strip, 0);
    g_assert_true(there == reduced);
    g_assert_null(hw_strip_peek_raster(strip, 0, HW_PLANE_STORED));
    strip_fixture_free(fixture);
}

static void
test_light_row_is_linear_and_has_no_light_in_voids(void)
{
    StripFixture *fixture = strip_fixture_new();
    fixture->head = "\"scan\":{\"rate_hz\":1000,\"stamp\":\"middle\",\"transfer\":{\"gamma\":2}},";
    add(fixture, "a.png", 8, ROWS, "\"columns\":8,\"first_ns\":0");
    strip_fixture_add(fixture, "b.png", NULL, "\"columns\":4,\"first_ns\":8000000");
    add(fixture, "c.png", 8, ROWS, "\"columns\":8,\"first_ns\":12000000");
    g_autoptr(HwStrip) strip = strip_fixture_open_good(fixture);
    float light[26];
    g_autoptr(GError) error = NULL;
    g_assert_true(hw_strip_read_light_row(strip, 2, -3, 26, light, NULL, &error));
    for (int i = 0; i < 26; i++) {
        int column = i - 3;
        bool readable = (column >= 0 && column < 8) || (column >= 12 && column < 20);
        g_assert_true(isnan(light[i]) == !readable);
        if (readable) {
            double code = rising(column < 8 ? column : column - 12, 2) / 255.0;
            g_assert_cmpfloat_with_epsilon(light[i], code * code, 1e-6);
        }
    }
    g_assert_false(hw_strip_read_light_row(strip, ROWS, 0, 1, light, NULL, &error));
    g_assert_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_PLACE);
    strip_fixture_free(fixture);
}

/* ---- Threads ---- */

enum { N_THREADS = 8, N_BLOCKS = 10 };

static void *
read_all(void *data)
{
    HwStrip *strip = data;
    for (guint i = 0; i < 60; i++) {
        guint block = i * 7 % N_BLOCKS;
        g_autoptr(GError) error = NULL;
        g_autoptr(HwRaster) raster =
            hw_strip_get_raster(strip, block, i % 2 == 0 ? HW_PLANE_STORED : HW_PLANE_GREY, NULL, &error);
        g_assert_true((raster == NULL) == (block == 4));
        g_autoptr(HwRaster) reduced = hw_strip_get_reduced(strip, block, NULL, NULL);
        g_assert_true((reduced == NULL) == (block == 4));
        g_autoptr(HwStrip) refreshed = hw_strip_refreshed(strip, NULL);
        g_assert_nonnull(refreshed);
    }
    return NULL;
}

static void
test_eight_threads_read_one_strip(void)
{
    StripFixture *fixture = strip_fixture_new();
    hw_block_cache_unref(fixture->cache);
    fixture->cache = hw_block_cache_new(3 * 64 * ROWS);
    for (int i = 0; i < N_BLOCKS; i++) {
        g_autofree char *name = g_strdup_printf("b%d.png", i);
        g_autofree char *keys = g_strdup_printf("\"columns\":64,\"first_ns\":%d", i * 64000000);
        g_autoptr(GByteArray) file = picture_grey_png(64, ROWS, speckled);
        if (i == 4)
            g_byte_array_set_size(file, file->len - 30);
        strip_fixture_add(fixture, name, file, keys);
    }
    g_autoptr(HwStrip) strip = strip_fixture_open_good(fixture);
    pthread_t threads[N_THREADS];
    for (int i = 0; i < N_THREADS; i++)
        g_assert_cmpint(pthread_create(&threads[i], NULL, read_all, strip), ==, 0);
    for (int i = 0; i < N_THREADS; i++)
        pthread_join(threads[i], NULL);
    g_autoptr(HwStrip) refreshed = refresh(strip);
    assert_damage(refreshed, 4, "b4.png", "cut");
    strip_fixture_free(fixture);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
#define ADD(name) g_test_add_func("/strip/" #name, test_##name)
    ADD(columns_are_counted_by_the_first_that_tells);
    ADD(column_is_found_in_its_block);
    ADD(stamps_that_do_not_match_the_columns_are_damage);
    ADD(cut_block_becomes_a_void);
    ADD(altered_digest_becomes_a_void);
    ADD(page_in_place_of_a_picture_becomes_a_void);
    ADD(other_count_of_columns_becomes_a_void);
    ADD(other_height_becomes_a_void);
    ADD(matching_digest_is_read);
    ADD(damage_kept_in_the_cache_is_learnt_by_every_strip);
    ADD(recording_without_a_readable_block_is_refused);
    ADD(last_readable_block_lost_is_said);
    ADD(columns_stand_in_the_order_of_time);
    ADD(block_is_decoded_once_for_both_planes_of_grey);
    ADD(growing_recording_shares_the_cache);
    ADD(file_written_again_is_read_again);
    ADD(cancelled_decode_is_forgotten);
    ADD(reduced_cells_are_means);
    ADD(light_row_is_linear_and_has_no_light_in_voids);
    ADD(eight_threads_read_one_strip);
#undef ADD
    return g_test_run();
}
