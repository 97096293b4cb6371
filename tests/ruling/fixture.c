/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/ruling/fixture.h"

#include <glib/gstdio.h>
#include <png.h>
#include <string.h>

enum { ROWS = 4 };

static void
write_png(const char *folder, const char *name, guint width)
{
    g_autofree char *path = g_build_filename(folder, name, NULL);
    g_autofree png_byte *pixels = g_malloc(width * ROWS);
    for (guint i = 0; i < width * ROWS; i++)
        pixels[i] = (png_byte)(i * 7);
    png_image image = {
        .version = PNG_IMAGE_VERSION, .width = width, .height = ROWS, .format = PNG_FORMAT_GRAY
    };
    g_assert_true(png_image_write_to_file(&image, path, 0, pixels, 0, NULL));
}

/* Stamped evenly, the second block with room for `missing` columns more, or by rate. */
static Fixture *
make(bool even, int missing)
{
    Fixture *fixture = g_new0(Fixture, 1);
    fixture->folder = g_dir_make_tmp("hw-ruling-XXXXXX", NULL);
    GString *blocks = g_string_new(NULL);
    for (int i = 0; i < FIXTURE_BLOCKS; i++) {
        g_autofree char *name = g_strdup_printf("b%d.png", i);
        write_png(fixture->folder, name, FIXTURE_BLOCK_COLUMNS);
        gint64 first_ns = (gint64)i * FIXTURE_BLOCK_COLUMNS * 1000000 + 500000 + (i == 2 ? 1000000000 : 0);
        gint64 last_ns =
            first_ns + (FIXTURE_BLOCK_COLUMNS - 1 + (i == 1 ? missing : 0)) * G_GINT64_CONSTANT(1000000);
        g_autofree char *last =
            even ? g_strdup_printf(",\"last_ns\":%" G_GINT64_FORMAT, last_ns) : g_strdup("");
        g_string_append_printf(blocks,
                               "%s{\"file\":\"%s\",\"columns\":%d,\"first_ns\":%" G_GINT64_FORMAT "%s}",
                               i > 0 ? "," : "", name, FIXTURE_BLOCK_COLUMNS, first_ns, last);
    }
    g_autofree char *manifest = g_strdup_printf(
        "{\"halfwheel_recording\":1,\"epoch\":\"2027-06-13T16:00:00+02:00\",\"travel\":\"left\","
        "\"scan\":{\"rate_hz\":1000,\"stamp\":\"middle\"},\"blocks\":[%s]}",
        blocks->str);
    g_string_free(blocks, TRUE);
    g_autofree char *path = g_build_filename(fixture->folder, HW_RECORDING_MANIFEST, NULL);
    g_assert_true(g_file_set_contents(path, manifest, -1, NULL));
    g_autoptr(GError) error = NULL;
    fixture->recording = hw_recording_open(fixture->folder, &error);
    g_assert_no_error(error);
    fixture->cache = hw_block_cache_new((size_t)16 << 20);
    fixture->strip = hw_strip_new(fixture->recording, fixture->cache, &error);
    g_assert_no_error(error);
    return fixture;
}

Fixture *
fixture_new(void)
{
    return make(false, 0);
}

Fixture *
fixture_new_with_drop(int missing)
{
    return make(true, missing);
}

void
fixture_free(Fixture *fixture)
{
    g_autoptr(GDir) folder = g_dir_open(fixture->folder, 0, NULL);
    for (const char *name = g_dir_read_name(folder); name != NULL; name = g_dir_read_name(folder)) {
        g_autofree char *path = g_build_filename(fixture->folder, name, NULL);
        g_unlink(path);
    }
    g_rmdir(fixture->folder);
    hw_strip_unref(fixture->strip);
    hw_block_cache_unref(fixture->cache);
    hw_recording_unref(fixture->recording);
    g_free(fixture->folder);
    g_free(fixture);
}

HwFinishList *
fixture_try(Fixture *fixture, const Case *given, GError **error)
{
    g_autoptr(HwMarkers) markers = NULL;
    g_autoptr(HwStartList) start_list = NULL;
    g_autoptr(HwRace) race = NULL;
    g_autoptr(HwRules) rules = NULL;
    HwInstant gun;
    g_autoptr(GError) fault = NULL;
    g_autofree char *csv =
        g_strdup_printf("%s\n%s\n", given->header != NULL ? given->header : "bib,column", given->markers);
    markers = hw_markers_parse(csv, strlen(csv), "markers.csv", fixture->recording, error);
    if (markers == NULL)
        return NULL;
    if (given->start_list != NULL)
        start_list =
            hw_start_list_parse(given->start_list, strlen(given->start_list), "startlist.csv", NULL, &fault);
    g_assert_no_error(fault);
    if (given->race != NULL) {
        g_autofree char *json = g_strdup_printf("{\"halfwheel_race\":1,%s}", given->race);
        race = hw_race_parse(json, strlen(json), "race.json", &fault);
        g_assert_no_error(fault);
    }
    if (given->rules != NULL)
        rules = hw_rules_read(given->rules, &fault);
    g_assert_no_error(fault);
    if (given->gun != NULL)
        g_assert_true(hw_instant_parse(given->gun, &gun, NULL));
    HwFinishInput input = { .strip = hw_strip_ref(fixture->strip),
                            .markers = markers,
                            .start_list = start_list,
                            .race = race,
                            .rules = rules,
                            .gun = given->gun != NULL ? &gun : NULL,
                            .passage = given->passage };
    HwFinishList *list = hw_finish_list_derive(&input, NULL, error);
    hw_strip_unref(input.strip);
    return list;
}

HwFinishList *
fixture_list(Fixture *fixture, const Case *given)
{
    g_autoptr(GError) error = NULL;
    HwFinishList *list = fixture_try(fixture, given, &error);
    g_assert_no_error(error);
    return list;
}

const HwFinishRow *
fixture_row(const HwFinishList *list, const char *bib, const char *category)
{
    for (guint i = 0; i < list->rows->len; i++) {
        const HwFinishRow *row = g_ptr_array_index(list->rows, i);
        if (strcmp(row->bib, bib) == 0 && (category == NULL || strcmp(row->category, category) == 0))
            return row;
    }
    g_error("no row of bib %s", bib);
}

char *
fixture_dup_places(const HwFinishList *list)
{
    GString *text = g_string_new(NULL);
    for (guint i = 0; i < list->rows->len; i++) {
        const HwFinishRow *row = g_ptr_array_index(list->rows, i);
        if (row->rank > 0)
            g_string_append_printf(text, "%s%d:%s", text->len > 0 ? " " : "", row->rank, row->bib);
    }
    return g_string_free(text, FALSE);
}

bool
fixture_says(const HwFinishList *list, ...)
{
    for (guint i = 0; i < list->problems->len; i++) {
        const char *problem = g_ptr_array_index(list->problems, i);
        bool all = true;
        va_list words;
        va_start(words, list);
        for (const char *word = va_arg(words, const char *); word != NULL; word = va_arg(words, const char *))
            all &= strstr(problem, word) != NULL;
        va_end(words);
        if (all)
            return true;
    }
    return false;
}
