/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/sheet/fixture.h"

#include <glib/gstdio.h>
#include <png.h>
#include <string.h>

static void
write_block(const char *path, const FixtureWish *wish, int block)
{
    int width = wish->columns_per_block;
    g_autofree uint8_t *rgb = g_malloc((gsize)width * (gsize)wish->rows * 3);
    bool mirrored = wish->later != NULL && strcmp(wish->later, "left") == 0;
    for (int row = 0; row < wish->rows; row++)
        for (int x = 0; x < width; x++) {
            int column = mirrored ? width - 1 - x : x;
            uint32_t colour = wish->pixel((int64_t)block * width + column, row);
            uint8_t *at = rgb + ((gsize)row * (gsize)width + (gsize)x) * 3;
            at[0] = (uint8_t)(colour >> 16);
            at[1] = (uint8_t)(colour >> 8);
            at[2] = (uint8_t)colour;
        }
    png_image image = { .version = PNG_IMAGE_VERSION,
                        .width = (png_uint_32)width,
                        .height = (png_uint_32)wish->rows,
                        .format = PNG_FORMAT_RGB };
    g_assert_cmpint(png_image_write_to_file(&image, path, 0, rgb, 0, NULL), !=, 0);
}

static void
write_recording(const char *path, const FixtureWish *wish)
{
    g_autoptr(GString) json =
        g_string_new("{ \"halfwheel_recording\": 1, \"title\": \"Aldermoor test strip\",\n");
    g_string_append(json, "  \"epoch\": \"" FIXTURE_EPOCH "\", \"camera\": \"A\",\n");
    if (wish->travel != NULL)
        g_string_append_printf(json, "  \"travel\": \"%s\",\n", wish->travel);
    if (wish->later != NULL)
        g_string_append_printf(json, "  \"later\": \"%s\",\n", wish->later);
    g_string_append(json,
                    "  \"scan\": { \"rate_hz\": 1000, \"stamp\": \"middle\", \"transfer\": \"srgb\" },\n"
                    "  \"blocks\": [");
    for (int i = 0; i < wish->n_blocks; i++) {
        int64_t first_ms = (int64_t)i * wish->columns_per_block;
        if (wish->void_after > 0 && i >= wish->void_after)
            first_ms += wish->void_ms;
        int64_t last_ms = first_ms + wish->columns_per_block - 1;
        g_string_append_printf(json,
                               "%s\n    { \"file\": \"block-%03d.png\", \"columns\": %d, \"first_ns\": "
                               "%" G_GINT64_FORMAT ", \"last_ns\": %" G_GINT64_FORMAT " }",
                               i > 0 ? "," : "", i, wish->columns_per_block, first_ms * 1000000,
                               last_ms * 1000000);
        g_autofree char *name = g_strdup_printf("block-%03d.png", i);
        g_autofree char *file = g_build_filename(path, name, NULL);
        if (wish->missing != i + 1)
            write_block(file, wish, i);
    }
    g_string_append(json, "\n  ] }\n");
    g_autofree char *manifest = g_build_filename(path, "recording.json", NULL);
    g_assert_true(g_file_set_contents(manifest, json->str, -1, NULL));
}

Fixture *
fixture_new(const FixtureWish *wish)
{
    g_autoptr(GError) error = NULL;
    Fixture *fixture = g_new0(Fixture, 1);
    fixture->folder = g_dir_make_tmp("halfwheel-sheet-XXXXXX", &error);
    g_assert_no_error(error);
    fixture->path = g_build_filename(fixture->folder, "finish", NULL);
    g_assert_cmpint(g_mkdir(fixture->path, 0700), ==, 0);
    write_recording(fixture->path, wish);
    fixture->recording = hw_recording_open(fixture->path, &error);
    g_assert_no_error(error);
    fixture->cache = hw_block_cache_new((size_t)32 << 20);
    fixture->strip = hw_strip_new(fixture->recording, fixture->cache, &error);
    g_assert_no_error(error);
    return fixture;
}

static void
remove_tree(const char *path)
{
    GDir *folder = g_dir_open(path, 0, NULL);
    for (const char *name; folder != NULL && (name = g_dir_read_name(folder)) != NULL;) {
        g_autofree char *child = g_build_filename(path, name, NULL);
        if (g_file_test(child, G_FILE_TEST_IS_DIR))
            remove_tree(child);
        else
            g_unlink(child);
    }
    if (folder != NULL)
        g_dir_close(folder);
    g_rmdir(path);
}

void
fixture_free(Fixture *fixture)
{
    if (fixture == NULL)
        return;
    hw_strip_unref(fixture->strip);
    hw_block_cache_unref(fixture->cache);
    hw_recording_unref(fixture->recording);
    remove_tree(fixture->folder);
    g_free(fixture->folder);
    g_free(fixture->path);
    g_free(fixture);
}

char *
fixture_path(const Fixture *fixture, const char *name)
{
    return g_build_filename(fixture->folder, name, NULL);
}

Image *
image_read(const char *path)
{
    png_image png = { .version = PNG_IMAGE_VERSION };
    g_assert_cmpint(png_image_begin_read_from_file(&png, path), !=, 0);
    png.format = PNG_FORMAT_RGB;
    g_autofree uint8_t *rgb = g_malloc(PNG_IMAGE_SIZE(png));
    g_assert_cmpint(png_image_finish_read(&png, NULL, rgb, 0, NULL), !=, 0);
    Image *image = g_new0(Image, 1);
    image->width = (int)png.width;
    image->height = (int)png.height;
    image->pixels = g_new(uint32_t, (gsize)png.width * png.height);
    for (gsize i = 0; i < (gsize)png.width * png.height; i++)
        image->pixels[i] = (uint32_t)rgb[3 * i] << 16 | (uint32_t)rgb[3 * i + 1] << 8 | rgb[3 * i + 2];
    return image;
}

void
image_free(Image *image)
{
    if (image == NULL)
        return;
    g_free(image->pixels);
    g_free(image);
}

uint32_t
image_at(const Image *image, int x, int y)
{
    g_assert_cmpint(x, >=, 0);
    g_assert_cmpint(x, <, image->width);
    g_assert_cmpint(y, >=, 0);
    g_assert_cmpint(y, <, image->height);
    return image->pixels[(gsize)y * (gsize)image->width + (gsize)x];
}

char *
run_dup_output(const char *const *arguments)
{
    char *output = NULL;
    int status = -1;
    g_autoptr(GError) error = NULL;
    g_spawn_sync(NULL, (char **)arguments, NULL, G_SPAWN_SEARCH_PATH, NULL, NULL, &output, NULL, &status,
                 &error);
    g_assert_no_error(error);
    g_assert_true(g_spawn_check_wait_status(status, &error));
    return output;
}
