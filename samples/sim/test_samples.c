/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The samples that the repository carries are what the simulator makes now: lists, truths and manifests to
 * the byte (but for the digests of pictures), pictures to the sample where the same libraries wrote them,
 * else within what another release of libjpeg or libpng may change. argv: the folder of the samples, then the
 * scenarios.
 */
#include "samples/sim/produce.h"

#include <glib/gstdio.h>
#include <jansson.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include <jpeglib.h>
#include <png.h>

/* Another release may round differently: one level on the whole, and this much anywhere. */
#define MEAN_LEVELS 1.0
#define MOST_LEVELS 40

static const char *samples_folder;

typedef struct {
    unsigned width, height, channels;
    uint8_t *data;
} Picture;

static Picture
read_png(const char *path)
{
    png_image image = { .version = PNG_IMAGE_VERSION };
    g_assert_true(png_image_begin_read_from_file(&image, path));
    image.format = PNG_FORMAT_GRAY;
    Picture p = { image.width, image.height, 1, g_malloc(PNG_IMAGE_SIZE(image)) };
    g_assert_true(png_image_finish_read(&image, NULL, p.data, 0, NULL));
    return p;
}

static Picture
read_jpeg(const char *path)
{
    struct jpeg_decompress_struct jpeg;
    struct jpeg_error_mgr errors;
    FILE *f = fopen(path, "rb");
    g_assert_nonnull(f);
    jpeg.err = jpeg_std_error(&errors);
    jpeg_create_decompress(&jpeg);
    jpeg_stdio_src(&jpeg, f);
    jpeg_read_header(&jpeg, TRUE);
    jpeg.dct_method = JDCT_ISLOW;
    jpeg_start_decompress(&jpeg);
    Picture p = { jpeg.output_width, jpeg.output_height, (unsigned)jpeg.output_components, NULL };
    gsize stride = (gsize)p.width * p.channels;
    p.data = g_malloc(stride * p.height);
    while (jpeg.output_scanline < p.height) {
        JSAMPROW row = p.data + stride * jpeg.output_scanline;
        jpeg_read_scanlines(&jpeg, &row, 1);
    }
    jpeg_finish_decompress(&jpeg);
    g_assert_cmpint((int)errors.num_warnings, ==, 0);
    jpeg_destroy_decompress(&jpeg);
    fclose(f);
    return p;
}

static void
compare_pictures(const char *kept, const char *made)
{
    gboolean png = g_str_has_suffix(kept, ".png");
    Picture a = png ? read_png(kept) : read_jpeg(kept), b = png ? read_png(made) : read_jpeg(made);
    g_assert_cmpuint(a.width, ==, b.width);
    g_assert_cmpuint(a.height, ==, b.height);
    g_assert_cmpuint(a.channels, ==, b.channels);
    gsize n = (gsize)a.width * a.height * a.channels;
    double sum = 0;
    int most = 0;
    for (gsize i = 0; i < n; i++) {
        int off = abs(a.data[i] - b.data[i]);
        sum += off;
        most = MAX(most, off);
    }
    g_assert_cmpfloat(sum / (double)n, <=, MEAN_LEVELS);
    g_assert_cmpint(most, <=, MOST_LEVELS);
    g_free(a.data);
    g_free(b.data);
}

static void
compare_bytes(const char *kept, const char *made)
{
    g_autofree char *a = NULL, *b = NULL;
    gsize na = 0, nb = 0;
    g_autoptr(GError) error = NULL;
    g_file_get_contents(kept, &a, &na, &error);
    g_assert_no_error(error);
    g_file_get_contents(made, &b, &nb, &error);
    g_assert_no_error(error);
    g_assert_cmpmem(a, na, b, nb);
}

static char *
digest_of(const char *path)
{
    g_autofree char *data = NULL;
    gsize n = 0;
    if (!g_file_get_contents(path, &data, &n, NULL))
        return NULL;
    return g_compute_checksum_for_data(G_CHECKSUM_SHA256, (const guchar *)data, n);
}

static json_t *
load(const char *folder)
{
    g_autofree char *path = g_build_filename(folder, "recording.json", NULL);
    json_t *root = json_load_file(path, JSON_REJECT_DUPLICATES, NULL);
    g_assert_nonnull(root);
    return root;
}

/* Pictures as their manifests tell; then the manifests without the digests. */
static void
compare_recordings(const char *kept, const char *made)
{
    json_t *a = load(kept), *b = load(made);
    json_t *blocks_a = json_object_get(a, "blocks"), *blocks_b = json_object_get(b, "blocks");
    g_assert_cmpuint(json_array_size(blocks_a), ==, json_array_size(blocks_b));
    g_assert_cmpuint(json_array_size(blocks_a), >, 0);
    for (size_t i = 0; i < json_array_size(blocks_a); i++) {
        json_t *x = json_array_get(blocks_a, i), *y = json_array_get(blocks_b, i);
        g_autofree char *path_a = g_build_filename(kept, json_string_value(json_object_get(x, "file")), NULL);
        g_autofree char *path_b = g_build_filename(made, json_string_value(json_object_get(y, "file")), NULL);
        g_autofree char *sum_a = digest_of(path_a), *sum_b = digest_of(path_b);
        gboolean whole_a = g_strcmp0(sum_a, json_string_value(json_object_get(x, "sha256"))) == 0;
        gboolean whole_b = g_strcmp0(sum_b, json_string_value(json_object_get(y, "sha256"))) == 0;
        /* A block that was damaged on purpose must be so in both. */
        g_assert_cmpint(whole_a, ==, whole_b);
        g_assert_cmpint(sum_a == NULL, ==, sum_b == NULL);
        if (whole_a && g_strcmp0(sum_a, sum_b) != 0)
            compare_pictures(path_a, path_b);
        json_object_del(x, "sha256");
        json_object_del(y, "sha256");
    }
    g_assert_true(json_equal(a, b));
    json_decref(a);
    json_decref(b);
}

static void
remove_tree(const char *path)
{
    g_autoptr(GDir) dir = g_dir_open(path, 0, NULL);
    for (const char *name; dir != NULL && (name = g_dir_read_name(dir)) != NULL;) {
        g_autofree char *inner = g_build_filename(path, name, NULL);
        remove_tree(inner);
    }
    g_remove(path);
}

static void
sample_is_what_the_simulator_makes(gconstpointer scenario)
{
    static const char *const ENDINGS[] = { ".markers.csv", ".startlist.csv", ".race.json", ".truth.csv" };
    g_autoptr(GError) error = NULL;
    g_autofree char *folder = g_dir_make_tmp("halfwheel-samples-XXXXXX", &error);
    g_assert_no_error(error);
    sim_produce(scenario, folder, FALSE, &error);
    g_assert_no_error(error);
    g_autofree char *base = g_path_get_basename(scenario);
    *strrchr(base, '.') = '\0';
    g_autofree char *kept = g_build_filename(samples_folder, base, NULL);
    g_autofree char *made = g_build_filename(folder, base, NULL);
    for (guint i = 0; i < G_N_ELEMENTS(ENDINGS); i++) {
        g_autofree char *a = g_strconcat(kept, ENDINGS[i], NULL);
        g_autofree char *b = g_strconcat(made, ENDINGS[i], NULL);
        compare_bytes(a, b);
    }
    compare_recordings(kept, made);
    /* What is there is refused, and stays. */
    g_assert_false(sim_produce(scenario, folder, FALSE, &error));
    g_assert_nonnull(strstr(error->message, "--force"));
    compare_recordings(kept, made);
    remove_tree(folder);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
    if (argc < 3) {
        g_printerr("test-samples: name the folder of the samples and the scenarios.\n");
        return 2;
    }
    samples_folder = argv[1];
    for (int i = 2; i < argc; i++) {
        g_autofree char *base = g_path_get_basename(argv[i]);
        g_autofree char *name = g_strconcat("/samples/", base, NULL);
        g_test_add_data_func(name, argv[i], sample_is_what_the_simulator_makes);
    }
    return g_test_run();
}
