/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The annotated picture: read the right way round, whole, honest about what is missing, the same each time.
 * PDFs are read back with poppler's pdftotext and pdftoppm, which share nothing with this program. */
#include "core/base/base_error.h"
#include "core/sheet/entry.h"
#include "core/sheet/picture.h"
#include "core/sheet/sheet_error.h"
#include "tests/sheet/fixture.h"

#include <glib/gstdio.h>
#include <math.h>
#include <string.h>

#define MARGIN 28
#define DIGEST "03ac674216f3e15c761ee1a5e255f067953623c8b388b4459e13f978d7c846f4"

/* A rider of sorts: black leading column, then red, on a row of blue sky over grey. */
static uint32_t
rider(int64_t column, int row)
{
    if (row < 20)
        return 0x0000ff;
    if (column == 300)
        return 0x000000;
    return column > 300 && column < 340 ? 0xff0000 : 0x808080;
}

/* Each column its own colour. */
static uint32_t
numbered(int64_t column, int row)
{
    (void)row;
    return (uint32_t)(column & 0xffff) << 8 | 0x4d;
}

static void
write_picture(const HwPicture *picture, const char *path)
{
    g_autoptr(GError) error = NULL;
    HwPictureFormat format;
    g_assert_true(hw_picture_format_of(path, &format, &error));
    g_assert_true(hw_picture_write(picture, path, format, false, NULL, NULL, NULL, &error));
    g_assert_no_error(error);
}

/* Text of all pages; what kind of space parts a number from its unit is no matter here. */
static char *
dup_pdf_text(const char *path)
{
    g_autofree char *text =
        run_dup_output((const char *const[]){ "pdftotext", "-enc", "UTF-8", "-layout", path, "-", NULL });
    GString *plain = g_string_new(text);
    g_string_replace(plain, "\u00a0", " ", 0);
    return g_string_free(plain, FALSE);
}

static void
assert_has(const char *text, const char *words)
{
    if (strstr(text, words) == NULL)
        g_test_message("“%s” is not in:\n%s", words, text);
    g_assert_nonnull(strstr(text, words));
}

static void
riders_face_the_way_they_rode_and_nothing_is_mirrored(void)
{
    for (int travel_right = 0; travel_right < 2; travel_right++)
        for (int later_left = 0; later_left < 2; later_left++) {
            FixtureWish wish = { .columns_per_block = 250,
                                 .n_blocks = 3,
                                 .rows = 60,
                                 .travel = travel_right ? "right" : "left",
                                 .later = later_left ? "left" : "right",
                                 .pixel = rider };
            g_autoptr(Fixture) fixture = fixture_new(&wish);
            g_autofree char *path = fixture_path(fixture, "picture.png");
            HwPicture picture;
            hw_picture_init(&picture, fixture->strip);
            write_picture(&picture, path);
            g_autoptr(Image) image = image_read(path);
            int black_x = -1, rows = 0, blue_y = -1;
            double red_x = 0, red_n = 0;
            for (int y = 0; y < image->height; y++) {
                int red = 0;
                double sum = 0;
                for (int x = 0; x < image->width; x++)
                    if (image_at(image, x, y) == 0xff0000) {
                        red++;
                        sum += x;
                    } else if (image_at(image, x, y) == 0x0000ff) {
                        blue_y = y;
                    }
                if (red == 0)
                    continue;
                g_assert_cmpint(red, ==, 39);
                rows++;
                red_x += sum;
                red_n += red;
                for (int x = MARGIN; x < MARGIN + 750; x++)
                    if (image_at(image, x, y) == 0)
                        black_x = x;
                g_assert_cmpint(blue_y, <, y);
            }
            g_assert_cmpint(rows, ==, 40);
            red_x /= red_n;
            /* The front of the rider, who goes left or right, is where he goes. */
            g_assert_cmpfloat(fabs(fabs(black_x - red_x) - 20), <, 1e-9);
            if (travel_right)
                g_assert_cmpfloat(black_x, >, red_x);
            else
                g_assert_cmpfloat(black_x, <, red_x);
            g_assert_cmpint(black_x, ==, travel_right ? MARGIN + 750 - 1 - 300 : MARGIN + 300);
        }
}

static void
a_picture_wider_than_cairo_can_draw_has_every_column(void)
{
    enum { COLUMNS = 40000 };
    FixtureWish wish = {
        .columns_per_block = 4000, .n_blocks = 10, .rows = 6, .travel = "left", .pixel = numbered
    };
    g_autoptr(Fixture) fixture = fixture_new(&wish);
    g_autofree char *path = fixture_path(fixture, "wide.png");
    HwPicture picture;
    hw_picture_init(&picture, fixture->strip);
    write_picture(&picture, path);
    g_autoptr(Image) image = image_read(path);
    g_assert_cmpint(image->width, ==, COLUMNS + 2 * MARGIN);
    int top = -1, rows = 0;
    for (int y = 0; y < image->height; y++)
        if (image_at(image, MARGIN, y) == numbered(0, 0) &&
            image_at(image, MARGIN + 9, y) == numbered(9, 0)) {
            top = top < 0 ? y : top;
            rows++;
        }
    g_assert_cmpint(rows, ==, 6);
    for (int y = top; y < top + rows; y++)
        for (int x = 0; x < COLUMNS; x++)
            g_assert_cmphex(image_at(image, MARGIN + x, y), ==, numbered(x, 0));
}

static void
enlarging_repeats_columns_as_squares(void)
{
    FixtureWish wish = {
        .columns_per_block = 100, .n_blocks = 1, .rows = 5, .travel = "left", .pixel = numbered
    };
    g_autoptr(Fixture) fixture = fixture_new(&wish);
    g_autofree char *path = fixture_path(fixture, "large.png");
    HwPicture picture;
    hw_picture_init(&picture, fixture->strip);
    picture.px_per_column = 3;
    write_picture(&picture, path);
    g_autoptr(Image) image = image_read(path);
    int rows = 0;
    for (int y = 0; y < image->height; y++) {
        if (image_at(image, MARGIN, y) != numbered(0, 0))
            continue;
        rows++;
        for (int x = 0; x < 300; x++)
            g_assert_cmphex(image_at(image, MARGIN + x, y), ==, numbered(x / 3, 0));
    }
    g_assert_cmpint(rows, ==, 15);
}

/* Four riders; the third marker is to be re-read. Columns are ms. */
typedef struct {
    HwMarkers *markers;
    HwStartList *start_list;
    HwRules *rules;
    char *rules_line;
    HwFinishList *list;
    HwDigest digest;
    HwPicture picture;
} Finish;

static void
finish_begin(Finish *finish, Fixture *fixture)
{
    static const char markers[] = "bib,column,row,edge,state\n"
                                  "11,300.0,12,front,read\n"
                                  "47,312.0,14,front,read\n"
                                  "8,330.5,9,front,rough\n"
                                  "112,2100.0,12,front,read\n";
    static const char riders[] = "bib,name,team\n"
                                 "11,Bram Oduya,Kestrel & Loom\n"
                                 "47,Anselm Großkreutz-Wohlleben von Hagenried zu Obertannen,Nordlyng\n"
                                 "8,יואב ברנע,Nordlyng\n"
                                 "112,Ilse Brandsma,Ordesa Lume\n"
                                 "13,Mira Nobody,Ordesa Lume\n";
    g_autoptr(GError) error = NULL;
    finish->markers = hw_markers_parse(markers, strlen(markers), "markers", fixture->recording, &error);
    g_assert_no_error(error);
    finish->start_list = hw_start_list_parse(riders, strlen(riders), "riders", NULL, &error);
    g_assert_no_error(error);
    finish->rules = hw_rules_read("road-1s", &error);
    g_assert_no_error(error);
    finish->rules_line = hw_rules_dup_line(finish->rules);
    HwInstant gun;
    g_assert_true(hw_instant_parse("2027-06-13T14:50:03+02:00", &gun, NULL));
    HwFinishInput input = { .gun = &gun,
                            .strip = fixture->strip,
                            .markers = finish->markers,
                            .start_list = finish->start_list,
                            .rules = finish->rules };
    finish->list = hw_finish_list_new(&input, &error);
    g_assert_no_error(error);
    g_strlcpy(finish->digest.hex, DIGEST, sizeof finish->digest.hex);
    hw_picture_init(&finish->picture, fixture->strip);
    finish->picture.markers = finish->markers;
    finish->picture.list = finish->list;
    finish->picture.event = "Aldermoor Criterium";
    finish->picture.passage = "Final sprint";
    finish->picture.rules = finish->rules_line;
    finish->picture.digest = &finish->digest;
    finish->picture.excerpt = HW_EXCERPT_MARKERS;
}

static void
finish_end(Finish *finish)
{
    hw_finish_list_free(finish->list);
    g_free(finish->rules_line);
    hw_rules_free(finish->rules);
    hw_start_list_free(finish->start_list);
    hw_markers_free(finish->markers);
}

static Fixture *
finish_fixture(int missing)
{
    FixtureWish wish = { .columns_per_block = 500,
                         .n_blocks = 6,
                         .rows = 60,
                         .travel = "left",
                         .missing = missing,
                         .pixel = rider };
    return fixture_new(&wish);
}

static void
the_pdf_says_who_what_by_which_rules_and_on_what_evidence(void)
{
    g_autoptr(Fixture) fixture = finish_fixture(0);
    Finish finish = { 0 };
    finish_begin(&finish, fixture);
    g_autofree char *path = fixture_path(fixture, "finish.pdf");
    write_picture(&finish.picture, path);
    g_autofree char *text = dup_pdf_text(path);
    static const char *const words[] = { "Aldermoor Criterium",
                                         "Final sprint",
                                         "provisional",
                                         "FRONT",
                                         "11",
                                         "47",
                                         "112",
                                         "Bram Oduya",
                                         "Kestrel & Loom",
                                         "s.t.",
                                         "1:12:08",
                                         DIGEST,
                                         "UCI",
                                         "direction of riding",
                                         "not calibrated",
                                         "page 1 of",
                                         "licensed commissaire",
                                         "5 of 6 blocks" };
    for (guint i = 0; i < G_N_ELEMENTS(words); i++)
        assert_has(text, words[i]);
    assert_has(text, finish.list->rules_edition);
    /* 12 columns of 1 ms, each read by eye: u = 1/√12 ms, of two readings √2 of that, U = 2 u = 0.82 ms (JCGM
     * 100:2008, 4.3.7 and 5.1.2). */
    assert_has(text, "12.00 ± 0.82 ms");
    g_assert_null(strstr(text, "INCOMPLETE"));
    finish_end(&finish);
}

static void
every_page_of_the_pdf_shows_something(void)
{
    g_autoptr(Fixture) fixture = finish_fixture(0);
    Finish finish = { 0 };
    finish_begin(&finish, fixture);
    g_autofree char *path = fixture_path(fixture, "finish.pdf");
    g_autofree char *stem = fixture_path(fixture, "page");
    write_picture(&finish.picture, path);
    g_autofree char *nothing =
        run_dup_output((const char *const[]){ "pdftoppm", "-r", "60", "-png", path, stem, NULL });
    int pages = 0;
    for (;; pages++) {
        g_autofree char *page = g_strdup_printf("%s-%d.png", stem, pages + 1);
        if (!g_file_test(page, G_FILE_TEST_EXISTS))
            break;
        g_autoptr(Image) image = image_read(page);
        int dark = 0;
        for (int i = 0; i < image->width * image->height; i++)
            dark += (image->pixels[i] & 0xff) < 0x90;
        g_assert_cmpint(dark, >, 500);
        /* and is opaque paper at its corner */
        g_assert_cmphex(image_at(image, 1, 1), ==, 0xffffff);
    }
    g_assert_cmpint(pages, >=, 2);
    finish_end(&finish);
}

static void
a_wide_picture_is_cut_into_numbered_pages_that_together_show_all(void)
{
    FixtureWish wish = {
        .columns_per_block = 1000, .n_blocks = 6, .rows = 60, .travel = "left", .pixel = numbered
    };
    g_autoptr(Fixture) fixture = fixture_new(&wish);
    g_autofree char *path = fixture_path(fixture, "wide.pdf");
    g_autofree char *stem = fixture_path(fixture, "image");
    HwPicture picture;
    hw_picture_init(&picture, fixture->strip);
    write_picture(&picture, path);
    g_autofree char *text = dup_pdf_text(path);
    assert_has(text, "page 1 of ");
    assert_has(text, "parts overlap");
    /* The images as they lie in the file: every column of the strip is in one of them, untouched. */
    g_autofree char *nothing = run_dup_output((const char *const[]){ "pdfimages", "-png", path, stem, NULL });
    g_autofree bool *seen = g_new0(bool, 6000);
    int n_images = 0;
    for (;; n_images++) {
        g_autofree char *file = g_strdup_printf("%s-%03d.png", stem, n_images);
        if (!g_file_test(file, G_FILE_TEST_EXISTS))
            break;
        g_autoptr(Image) image = image_read(file);
        g_assert_cmpint(image->height, ==, 60);
        for (int x = 0; x < image->width; x++) {
            uint32_t colour = image_at(image, x, 30);
            g_assert_cmphex(colour & 0xff, ==, 0x4d);
            g_assert_cmpuint(colour >> 8, <, 6000);
            seen[colour >> 8] = true;
        }
    }
    g_assert_cmpint(n_images, >=, 4);
    g_autofree char *last = g_strdup_printf("page %d of %d", n_images, n_images);
    assert_has(text, last);
    for (int i = 0; i < 6000; i++)
        g_assert_true(seen[i]);
}

static void
the_same_input_gives_the_same_file(void)
{
    g_autoptr(Fixture) fixture = finish_fixture(0);
    Finish finish = { 0 };
    finish_begin(&finish, fixture);
    static const char *const ends[] = { "pdf", "png" };
    for (guint i = 0; i < G_N_ELEMENTS(ends); i++) {
        char *bytes[2];
        gsize sizes[2];
        for (int k = 0; k < 2; k++) {
            g_autofree char *name = g_strdup_printf("%d.%s", k, ends[i]);
            g_autofree char *path = fixture_path(fixture, name);
            write_picture(&finish.picture, path);
            g_assert_true(g_file_get_contents(path, &bytes[k], &sizes[k], NULL));
            if (k == 0)
                g_usleep(1100000); /* a date of the clock would differ */
        }
        g_assert_cmpmem(bytes[0], sizes[0], bytes[1], sizes[1]);
        g_free(bytes[0]);
        g_free(bytes[1]);
    }
    finish_end(&finish);
}

static void
a_damaged_recording_says_so_loudly(void)
{
    g_autoptr(Fixture) fixture = finish_fixture(3);
    Finish finish = { 0 };
    finish_begin(&finish, fixture);
    g_autofree char *path = fixture_path(fixture, "damaged.pdf");
    write_picture(&finish.picture, path);
    g_autofree char *text = dup_pdf_text(path);
    assert_has(text, "INCOMPLETE RECORDING");
    assert_has(text, "block-002.png");
    assert_has(text, "no picture");
    finish_end(&finish);
}

static void
an_unstated_direction_says_so(void)
{
    FixtureWish wish = { .columns_per_block = 500, .n_blocks = 1, .rows = 30, .pixel = rider };
    g_autoptr(Fixture) fixture = fixture_new(&wish);
    g_autofree char *path = fixture_path(fixture, "unstated.pdf");
    HwPicture picture;
    hw_picture_init(&picture, fixture->strip);
    write_picture(&picture, path);
    g_autofree char *text = dup_pdf_text(path);
    assert_has(text, "Direction of riding not stated");
    assert_has(text, "No rule set applied");
    assert_has(text, "digest not known");
}

static void
a_pair_stands_side_by_side_with_its_gap(void)
{
    g_autoptr(Fixture) fixture = finish_fixture(0);
    Finish finish = { 0 };
    finish_begin(&finish, fixture);
    finish.picture.excerpt = HW_EXCERPT_PAIR;
    finish.picture.bib_a = "47";
    finish.picture.bib_b = "11";
    g_autofree char *path = fixture_path(fixture, "pair.pdf");
    write_picture(&finish.picture, path);
    g_autofree char *text = dup_pdf_text(path);
    assert_has(text, "11 ahead of 47 by 12.00 ± 0.82 ms");
    assert_has(text, "page 1 of 1");
    g_assert_null(strstr(text, "Ilse Brandsma"));
    /* Each rider's marker stands at the same place of its view, so that what is red behind column 300 stands
     * 12 columns earlier in the view of the rider 12 ms later. */
    g_autofree char *png = fixture_path(fixture, "pair.png");
    write_picture(&finish.picture, png);
    g_autoptr(Image) image = image_read(png);
    int ends[2] = { -1, -1 };
    for (int y = 0; y < image->height && ends[1] < 0; y++) {
        int n = 0;
        for (int x = 0; x + 1 < image->width; x++)
            if (image_at(image, x, y) == 0xff0000 && image_at(image, x + 1, y) == 0x808080 && n < 2)
                ends[n++] = x;
    }
    g_assert_cmpint(ends[1], >, 0);
    /* Bib 47, named first, stands left. Speeds are not known: 350 ms behind, a third of that before, and the
     * space between the views. */
    g_assert_cmpint(ends[1] - ends[0] - 12, ==, 350 + 117 + 24);
    finish_end(&finish);
}

static void
a_failure_leaves_what_was_there(void)
{
    g_autoptr(Fixture) fixture = finish_fixture(0);
    Finish finish = { 0 };
    finish_begin(&finish, fixture);
    g_autofree char *path = fixture_path(fixture, "kept.png");
    g_assert_true(g_file_set_contents(path, "kept", -1, NULL));
    g_autoptr(GError) error = NULL;
    g_assert_false(hw_picture_write(&finish.picture, path, HW_PICTURE_PNG, false, NULL, NULL, NULL, &error));
    g_assert_error(error, HW_BASE_ERROR, HW_BASE_ERROR_EXISTS);
    g_clear_error(&error);

    finish.picture.excerpt = HW_EXCERPT_PAIR;
    finish.picture.bib_a = "11";
    finish.picture.bib_b = "999";
    g_assert_false(hw_picture_write(&finish.picture, path, HW_PICTURE_PNG, true, NULL, NULL, NULL, &error));
    g_assert_error(error, HW_SHEET_ERROR, HW_SHEET_ERROR_PLACE);
    assert_has(error->message, "999");
    g_clear_error(&error);

    finish.picture.excerpt = HW_EXCERPT_STRETCH;
    finish.picture.from_ns = G_GINT64_CONSTANT(90000000000);
    finish.picture.to_ns = G_GINT64_CONSTANT(91000000000);
    g_assert_false(hw_picture_write(&finish.picture, path, HW_PICTURE_PNG, true, NULL, NULL, NULL, &error));
    g_assert_error(error, HW_SHEET_ERROR, HW_SHEET_ERROR_PLACE);
    g_clear_error(&error);

    finish.picture.excerpt = HW_EXCERPT_ALL;
    g_autoptr(GCancellable) cancellable = g_cancellable_new();
    g_cancellable_cancel(cancellable);
    for (int format = HW_PICTURE_PNG; format <= HW_PICTURE_PDF; format++) {
        g_assert_false(hw_picture_write(&finish.picture, path, (HwPictureFormat)format, true, NULL, NULL,
                                        cancellable, &error));
        g_assert_error(error, G_IO_ERROR, G_IO_ERROR_CANCELLED);
        g_clear_error(&error);
    }
    g_autofree char *bytes = NULL;
    g_assert_true(g_file_get_contents(path, &bytes, NULL, NULL));
    g_assert_cmpstr(bytes, ==, "kept");
    /* and nothing half done beside it */
    g_autoptr(GDir) folder = g_dir_open(fixture->folder, 0, NULL);
    for (const char *name; (name = g_dir_read_name(folder)) != NULL;)
        g_assert_true(strcmp(name, "kept.png") == 0 || strcmp(name, "finish") == 0);
    finish_end(&finish);
}

static void
cancel_at(double fraction, gpointer cancellable)
{
    if (fraction > 0.5)
        g_cancellable_cancel(cancellable);
}

static void
cancelling_midway_leaves_nothing(void)
{
    g_autoptr(Fixture) fixture = finish_fixture(0);
    Finish finish = { 0 };
    finish_begin(&finish, fixture);
    for (int format = HW_PICTURE_PNG; format <= HW_PICTURE_PDF; format++) {
        g_autoptr(GCancellable) cancellable = g_cancellable_new();
        g_autoptr(GError) error = NULL;
        g_autofree char *path = fixture_path(fixture, "none");
        g_assert_false(hw_picture_write(&finish.picture, path, (HwPictureFormat)format, false, cancel_at,
                                        cancellable, cancellable, &error));
        g_assert_error(error, G_IO_ERROR, G_IO_ERROR_CANCELLED);
        g_assert_false(g_file_test(path, G_FILE_TEST_EXISTS));
    }
    finish_end(&finish);
}

static void
the_kind_of_file_follows_the_name(void)
{
    HwPictureFormat format = HW_PICTURE_PDF;
    g_autoptr(GError) error = NULL;
    g_assert_true(hw_picture_format_of("-", &format, &error));
    g_assert_cmpint(format, ==, HW_PICTURE_PNG);
    g_assert_true(hw_picture_format_of("a.b/FINISH.PDF", &format, &error));
    g_assert_cmpint(format, ==, HW_PICTURE_PDF);
    g_assert_false(hw_picture_format_of("finish.jpg", &format, &error));
    g_assert_error(error, HW_SHEET_ERROR, HW_SHEET_ERROR_FORMAT);
    g_assert_cmpint(format, ==, HW_PICTURE_PDF);
}

static void
a_measured_value_shows_two_figures_of_its_uncertainty(void)
{
    static const struct {
        int64_t value_ns;
        double u_ns;
        const char *text;
    } cases[] = {
        { 1000000, 288675, "1.00 ± 0.58 ms" },         { 12345678, 6172.8, "12.346 ± 0.012 ms" },
        { 3199400000, 204124, "3.19940 ± 0.00041 s" }, { -500000, 250000, "−0.50 ± 0.50 ms" },
        { 40000000, 6000000, "40 ± 12 ms" },           { 1000000, NAN, "1.000 ms, ± unknown" },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        g_autofree char *text = hw_entry_dup_measured(cases[i].value_ns, cases[i].u_ns);
        GString *plain = g_string_new(text);
        g_string_replace(plain, "\u00a0", " ", 0);
        g_assert_cmpstr(plain->str, ==, cases[i].text);
        g_string_free(plain, TRUE);
    }
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
#define CASE(name) g_test_add_func("/sheet/picture/" #name, name)
    CASE(riders_face_the_way_they_rode_and_nothing_is_mirrored);
    CASE(a_picture_wider_than_cairo_can_draw_has_every_column);
    CASE(enlarging_repeats_columns_as_squares);
    CASE(the_pdf_says_who_what_by_which_rules_and_on_what_evidence);
    CASE(every_page_of_the_pdf_shows_something);
    CASE(a_wide_picture_is_cut_into_numbered_pages_that_together_show_all);
    CASE(the_same_input_gives_the_same_file);
    CASE(a_damaged_recording_says_so_loudly);
    CASE(an_unstated_direction_says_so);
    CASE(a_pair_stands_side_by_side_with_its_gap);
    CASE(a_failure_leaves_what_was_there);
    CASE(cancelling_midway_leaves_nothing);
    CASE(the_kind_of_file_follows_the_name);
    CASE(a_measured_value_shows_two_figures_of_its_uncertainty);
    return g_test_run();
}
