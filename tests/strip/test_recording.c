/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What a good recording gives, and its two digests held against the sha256sum program. */
#include "core/base/base_error.h"
#include "core/strip/manifest.h"
#include "core/strip/recording.h"
#include "core/strip/strip_error.h"
#include "core/strip/times_file.h"
#include "folders.h"

#include <glib/gstdio.h>
#include <string.h>
#include <unistd.h>

#define SCAN "{\"rate_hz\": 2000, \"exposure_us\": 400, \"stamp\": \"start\"}"
#define TWO_BLOCKS                                                                                           \
    "[{\"file\": \"b0.png\", \"columns\": 1000, \"first_ns\": 0, \"last_ns\": 499500000},"                   \
    " {\"file\": \"b1.png\", \"columns\": 1000, \"first_ns\": 500000000}]"

static HwRecording *
open_good(const TestFolder *folder)
{
    g_autoptr(GError) error = NULL;
    HwRecording *recording = hw_recording_open(folder->path, &error);
    g_assert_no_error(error);
    return recording;
}

static void
defaults_are_those_of_the_format(void)
{
    g_autoptr(TestFolder) folder = test_folder_new();
    test_folder_write_manifest(folder, SCAN, TWO_BLOCKS);
    g_autoptr(HwRecording) recording = open_good(folder);
    g_assert_cmpstr(hw_recording_get_camera(recording), ==, "A");
    g_assert_cmpint(hw_recording_get_later(recording), ==, HW_SIDE_RIGHT);
    g_assert_cmpint(hw_recording_get_travel(recording), ==, HW_SIDE_UNKNOWN);
    g_assert_cmpint(hw_recording_get_rows(recording), ==, 0);
    g_assert_true(hw_recording_is_complete(recording));
    g_assert_null(hw_recording_get_scene(recording));
    const HwScan *scan = hw_recording_get_scan(recording);
    g_assert_cmpint(scan->rate_nhz, ==, INT64_C(2000000000000));
    g_assert_cmpint(scan->exposure_fs, ==, INT64_C(400000000000));
    g_assert_cmpint(scan->stamp, ==, HW_STAMP_START);
    g_assert_cmpint(scan->transfer.kind, ==, HW_TRANSFER_UNKNOWN);
    g_assert_cmpuint(hw_recording_get_n_blocks(recording), ==, 2);
    g_assert_cmpint(hw_recording_get_block(recording, 0)->stamps, ==, HW_STAMPS_EVEN);
    g_assert_cmpint(hw_recording_get_block(recording, 1)->stamps, ==, HW_STAMPS_RATE);
    g_assert_cmpint(hw_recording_get_block(recording, 1)->first_ns, ==, 500000000);
}

static void
epoch_keeps_its_day_and_its_offset(void)
{
    g_autoptr(TestFolder) folder = test_folder_new();
    test_folder_write_manifest(folder, SCAN, TWO_BLOCKS);
    g_autoptr(HwRecording) recording = open_good(folder);
    const HwInstant *epoch = hw_recording_get_epoch(recording);
    /* date -d 2027-06-13T16:02:11+02:00 +%s gives 1812895331; 27 leap seconds lie between 1970 and then. */
    g_assert_cmpint(epoch->s, ==, INT64_C(1812895331) + 27);
    g_assert_cmpint(epoch->offset_min, ==, 120);
    g_autofree char *text = hw_instant_dup_text(epoch, 0);
    g_assert_cmpstr(text, ==, "2027-06-13T16:02:11+02:00");
}

static void
rate_is_read_as_an_exact_decimal(void)
{
    static const struct {
        const char *text;
        int64_t rate_nhz;
    } cases[] = {
        { "2000.000000001", INT64_C(2000000000001) },
        { "999999.999999999", INT64_C(999999999999999) },
        { "1000000", INT64_C(1000000000000000) },
        { "0.1", INT64_C(100000000) },
        { "1e-9", 1 },
        { "19999.87654321", INT64_C(19999876543210) },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        g_autoptr(TestFolder) folder = test_folder_new();
        g_autofree char *scan = g_strdup_printf("{\"rate_hz\": %s, \"stamp\": \"middle\"}", cases[i].text);
        test_folder_write_manifest(folder, scan, "[{\"file\": \"b0.png\", \"first_ns\": 0}]");
        g_autoptr(HwRecording) recording = open_good(folder);
        g_assert_cmpint(hw_recording_get_scan(recording)->rate_nhz, ==, cases[i].rate_nhz);
    }
}

static void
unknown_keys_are_ignored(void)
{
    g_autoptr(TestFolder) folder = test_folder_new();
    test_folder_write_manifest(folder, "{\"rate_hz\": 2000, \"stamp\": \"middle\", \"lens\": {\"f\": 50}}",
                               "[{\"file\": \"b0.png\", \"first_ns\": 0, \"mood\": null}]");
    g_autoptr(HwRecording) recording = open_good(folder);
    g_assert_cmpuint(hw_recording_get_n_blocks(recording), ==, 1);
}

static void
a_missing_file_is_no_error_until_it_is_opened(void)
{
    g_autoptr(TestFolder) folder = test_folder_new();
    test_folder_write_manifest(folder, SCAN,
                               "[{\"file\": \"b0.png\", \"first_ns\": 0},"
                               " {\"file\": \"sub/gone.png\", \"first_ns\": 500000}]");
    g_autoptr(HwRecording) recording = open_good(folder);
    g_autoptr(GError) error = NULL;
    g_assert_cmpint(hw_recording_open_file(recording, "sub/gone.png", &error), ==, -1);
    g_assert_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED);
    g_assert_cmpstr(error->message, ==, "sub/gone.png is missing");
    int fd = hw_recording_open_file(recording, "b0.png", NULL);
    g_assert_cmpint(fd, >=, 0);
    close(fd);
}

static void
the_manifest_itself_may_be_named(void)
{
    g_autoptr(TestFolder) folder = test_folder_new();
    test_folder_write_manifest(folder, SCAN, TWO_BLOCKS);
    g_autofree char *manifest = g_build_filename(folder->path, "recording.json", NULL);
    g_autofree char *slashed = g_strconcat(folder->path, "//", NULL);
    g_autofree char *beside = g_strconcat(folder->path, ".markers.csv", NULL);
    g_assert_true(g_file_set_contents(beside, "bib\n", -1, NULL));
    const char *paths[] = { folder->path, manifest, slashed };
    for (guint i = 0; i < G_N_ELEMENTS(paths); i++) {
        g_autoptr(HwRecording) recording = hw_recording_open(paths[i], NULL);
        g_assert_nonnull(recording);
        g_assert_cmpstr(hw_recording_get_path(recording), ==, folder->path);
        g_autofree char *found = hw_recording_dup_beside(recording, ".markers.csv");
        g_assert_cmpstr(found, ==, beside);
        g_assert_null(hw_recording_dup_beside(recording, ".race.json"));
    }
    g_assert_cmpint(g_unlink(beside), ==, 0);
}

/* By hand, with the real program: `sha256sum NAMES | sha256sum`, the names in byte order. */
static void
digest_is_what_sha256sum_gives(void)
{
    g_autoptr(TestFolder) folder = test_folder_new();
    test_folder_write_manifest(folder, SCAN,
                               "[{\"file\": \"sub/é.png\", \"times\": \"Z.csv\"},"
                               " {\"file\": \"b1.png\", \"first_ns\": 500000000},"
                               " {\"file\": \"b0.png\", \"first_ns\": 600000000}]");
    test_folder_write(folder, "sub/é.png", "an accented one");
    test_folder_write(folder, "Z.csv", "ns\n0\n");
    g_autoptr(HwRecording) recording = open_good(folder);
    const char *const call[] = { "sh", "-c",
                                 "sha256sum Z.csv b0.png b1.png recording.json sub/é.png | sha256sum", NULL };
    g_autofree char *printed = test_output_of(folder->path, call);
    printed[64] = '\0';
    bool known = false;
    HwDigest digest = { "" };
    g_autoptr(GError) error = NULL;
    g_assert_true(hw_recording_digest(recording, NULL, NULL, NULL, &known, &digest, &error));
    g_assert_no_error(error);
    g_assert_true(known);
    g_assert_cmpstr(digest.hex, ==, printed);

    test_folder_write(folder, "b1.png", "onf");
    HwDigest altered = { "" };
    g_assert_true(hw_recording_digest(recording, NULL, NULL, NULL, &known, &altered, NULL));
    g_assert_cmpstr(altered.hex, !=, printed);

    g_autofree char *gone = g_build_filename(folder->path, "b1.png", NULL);
    g_assert_cmpint(g_unlink(gone), ==, 0);
    HwDigest kept = { "kept" };
    g_assert_true(hw_recording_digest(recording, NULL, NULL, NULL, &known, &kept, &error));
    g_assert_no_error(error);
    g_assert_false(known);
    g_assert_cmpstr(kept.hex, ==, "kept");
}

static void
a_cancelled_digest_says_so(void)
{
    g_autoptr(TestFolder) folder = test_folder_new();
    test_folder_write_manifest(folder, SCAN, TWO_BLOCKS);
    g_autoptr(HwRecording) recording = open_good(folder);
    g_autoptr(GCancellable) cancellable = g_cancellable_new();
    g_cancellable_cancel(cancellable);
    bool known = false;
    HwDigest digest = { "kept" };
    g_autoptr(GError) error = NULL;
    g_assert_false(hw_recording_digest(recording, NULL, NULL, cancellable, &known, &digest, &error));
    g_assert_error(error, G_IO_ERROR, G_IO_ERROR_CANCELLED);
    g_assert_cmpstr(digest.hex, ==, "kept");
}

static void
identity_is_what_sha256sum_gives_and_outlives_growth(void)
{
    g_autoptr(TestFolder) folder = test_folder_new();
    test_folder_write_manifest(folder, SCAN, TWO_BLOCKS);
    const char *const call[] = { "sh", "-c",
                                 "printf '2027-06-13T16:02:11+02:00\\nA\\nb0.png\\n0\\n' | sha256sum", NULL };
    g_autofree char *printed = test_output_of(folder->path, call);
    printed[64] = '\0';
    g_autoptr(HwRecording) recording = open_good(folder);
    g_assert_cmpstr(hw_recording_get_identity(recording)->hex, ==, printed);
    g_assert_cmpint((int)strlen(hw_recording_get_short_identity(recording)), ==, 16);
    g_assert_true(g_str_has_prefix(printed, hw_recording_get_short_identity(recording)));

    test_folder_write_manifest(folder, SCAN, "[{\"file\": \"b0.png\", \"first_ns\": 0}]");
    g_autoptr(HwRecording) shorter = open_good(folder);
    g_assert_cmpstr(hw_recording_get_identity(shorter)->hex, ==, printed);
    test_folder_write_manifest(folder, SCAN, "[{\"file\": \"b0.png\", \"first_ns\": 1}]");
    g_autoptr(HwRecording) other = open_good(folder);
    g_assert_cmpstr(hw_recording_get_identity(other)->hex, !=, printed);
}

static void
a_written_manifest_reads_back(void)
{
    g_autoptr(TestFolder) folder = test_folder_new();
    HwScan scan = { .rate_nhz = INT64_C(999999999999999),
                    .exposure_fs = INT64_C(123456789),
                    .exposure_known = true,
                    .stamp = HW_STAMP_END,
                    .transfer = { .kind = HW_TRANSFER_TABLE },
                    .slit_mm = 0.5 };
    for (int i = 0; i < 256; i++)
        scan.transfer.table[i] = (float)(i * i) / (255.0f * 255.0f);
    HwBlock blocks[] = {
        { .file = "b0.png", .columns = 10, .stamps = HW_STAMPS_EVEN, .first_ns = -9000, .last_ns = 7 },
        { .file = "b1.png", .columns = 4, .stamps = HW_STAMPS_RATE, .first_ns = 1000000 },
        { .file = "b2.png", .stamps = HW_STAMPS_TIMES, .times_file = "b2.csv" },
    };
    g_autofree char *text = hw_manifest_dup_text("A “title”", "2027-06-13T16:02:11.5Z", "B", HW_SIDE_LEFT,
                                                 HW_SIDE_LEFT, &scan, blocks, G_N_ELEMENTS(blocks));
    test_folder_write(folder, "recording.json", text);
    g_autoptr(HwRecording) recording = open_good(folder);
    g_assert_cmpstr(hw_recording_get_title(recording), ==, "A “title”");
    g_assert_cmpstr(hw_recording_get_camera(recording), ==, "B");
    g_assert_cmpint(hw_recording_get_travel(recording), ==, HW_SIDE_LEFT);
    g_assert_cmpint(hw_recording_get_later(recording), ==, HW_SIDE_LEFT);
    const HwScan *back = hw_recording_get_scan(recording);
    g_assert_cmpint(back->rate_nhz, ==, scan.rate_nhz);
    g_assert_cmpint(back->exposure_fs, ==, scan.exposure_fs);
    g_assert_cmpint(back->stamp, ==, HW_STAMP_END);
    g_assert_cmpmem(back->transfer.table, sizeof back->transfer.table, scan.transfer.table,
                    sizeof scan.transfer.table);
    for (guint i = 0; i < G_N_ELEMENTS(blocks); i++) {
        const HwBlock *block = hw_recording_get_block(recording, i);
        g_assert_cmpstr(block->file, ==, blocks[i].file);
        g_assert_cmpint(block->stamps, ==, blocks[i].stamps);
        g_assert_cmpint(block->columns, ==, blocks[i].columns);
        g_assert_cmpint(block->first_ns, ==, blocks[i].first_ns);
        g_assert_cmpint(block->last_ns, ==, blocks[i].last_ns);
        g_assert_cmpstr(block->times_file, ==, blocks[i].times_file);
    }
}

static void
a_bare_image_is_a_recording_of_one_block(void)
{
    g_autoptr(TestFolder) folder = test_folder_new();
    test_folder_write(folder, "photo.png", "\x89PNG\r\n\x1a\nand more");
    test_folder_write(folder, "notes.txt", "plain words, no picture");
    test_folder_write(folder, "photo.markers.csv", "bib\n");
    g_autofree char *path = g_build_filename(folder->path, "photo.png", NULL);
    g_autofree char *notes = g_build_filename(folder->path, "notes.txt", NULL);
    HwImageScan scan = { .rate_nhz = INT64_C(2000000000000),
                         .stamp = HW_STAMP_MIDDLE,
                         .later = HW_SIDE_RIGHT };
    g_assert_true(hw_instant_parse("2027-06-13T16:02:11Z", &scan.epoch, NULL));
    g_assert_true(hw_recording_path_is_image(path));
    g_assert_false(hw_recording_path_is_image(notes));
    g_assert_false(hw_recording_path_is_image(folder->path));
    g_autoptr(GError) error = NULL;
    g_autoptr(HwRecording) recording = hw_recording_open_image(path, &scan, &error);
    g_assert_no_error(error);
    g_assert_cmpuint(hw_recording_get_n_blocks(recording), ==, 1);
    g_assert_cmpstr(hw_recording_get_block(recording, 0)->file, ==, "photo.png");
    g_autofree char *beside = hw_recording_dup_beside(recording, ".markers.csv");
    g_assert_nonnull(beside);
    int fd = hw_recording_open_file(recording, "photo.png", &error);
    g_assert_cmpint(fd, >=, 0);
    close(fd);
    bool known = true;
    HwDigest digest;
    g_assert_true(hw_recording_digest(recording, NULL, NULL, NULL, &known, &digest, &error));
    g_assert_false(known);

    g_assert_null(hw_recording_open_image(notes, &scan, &error));
    g_assert_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_MANIFEST);
    g_clear_error(&error);
    scan.stamp = HW_STAMP_START;
    g_assert_null(hw_recording_open_image(path, &scan, &error));
    g_assert_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_MANIFEST);
}

static void
times_files_are_read_or_their_fault_is_named(void)
{
    /* `printf 'ns\n5\n7\n' | sha256sum` */
    static const struct {
        const char *text;
        int64_t n; /* 0: a fault */
        const char *reason;
    } cases[] = {
        { "ns\n5\n7\n", 2, NULL },
        { "ns\r\n5\r\n7\r\n", 2, NULL },
        { "\xef\xbb\xbfns\n-5\n9007199254740991", 2, NULL },
        { "ns\n5\n4\n", 2, NULL },
        { "ns\n", 0, "header “ns”" },
        { "stamp\n5\n", 0, "header “ns”" },
        { "ns\n5\n6.5\n", 0, "line 3" },
        { "ns\n9007199254740992\n", 0, "line 2" },
        { "ns\n1e3\n", 0, "line 2" },
        { "", 0, "b0.csv" },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        g_autoptr(TestFolder) folder = test_folder_new();
        test_folder_write_manifest(folder, SCAN, "[{\"file\": \"b0.png\", \"times\": \"b0.csv\"}]");
        test_folder_write(folder, "b0.csv", cases[i].text);
        g_autoptr(HwRecording) recording = open_good(folder);
        g_autoptr(GError) error = NULL;
        int64_t n = -1;
        g_autofree int64_t *times_ns =
            hw_times_file_read(recording, hw_recording_get_block(recording, 0), &n, &error);
        if (cases[i].n > 0) {
            g_assert_no_error(error);
            g_assert_cmpint(n, ==, cases[i].n);
            continue;
        }
        g_assert_null(times_ns);
        g_assert_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED);
        g_assert_cmpint(n, ==, -1);
        g_assert_nonnull(strstr(error->message, "b0.csv"));
        g_assert_nonnull(strstr(error->message, cases[i].reason));
        g_assert_false(g_str_has_suffix(error->message, "."));
    }
}

static void
an_altered_times_file_is_damage(void)
{
    g_autoptr(TestFolder) folder = test_folder_new();
    test_folder_write(folder, "b0.csv", "ns\n5\n7\n");
    const char *const call[] = { "sha256sum", "b0.csv", NULL };
    g_autofree char *printed = test_output_of(folder->path, call);
    printed[64] = '\0';
    g_autofree char *blocks =
        g_strdup_printf("[{\"file\": \"b0.png\", \"times\": \"b0.csv\", \"times_sha256\": \"%s\"}]", printed);
    test_folder_write_manifest(folder, SCAN, blocks);
    g_autoptr(HwRecording) recording = open_good(folder);
    const HwBlock *block = hw_recording_get_block(recording, 0);
    int64_t n = 0;
    g_autofree int64_t *times_ns = hw_times_file_read(recording, block, &n, NULL);
    g_assert_cmpint(n, ==, 2);
    g_assert_cmpint(times_ns[1], ==, 7);
    test_folder_write(folder, "b0.csv", "ns\n5\n8\n");
    g_autoptr(GError) error = NULL;
    g_assert_null(hw_times_file_read(recording, block, &n, &error));
    g_assert_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
#define CASE(name) g_test_add_func("/strip/recording/" #name, name)
    CASE(defaults_are_those_of_the_format);
    CASE(epoch_keeps_its_day_and_its_offset);
    CASE(rate_is_read_as_an_exact_decimal);
    CASE(unknown_keys_are_ignored);
    CASE(a_missing_file_is_no_error_until_it_is_opened);
    CASE(the_manifest_itself_may_be_named);
    CASE(digest_is_what_sha256sum_gives);
    CASE(a_cancelled_digest_says_so);
    CASE(identity_is_what_sha256sum_gives_and_outlives_growth);
    CASE(a_written_manifest_reads_back);
    CASE(a_bare_image_is_a_recording_of_one_block);
    CASE(times_files_are_read_or_their_fault_is_named);
    CASE(an_altered_times_file_is_damage);
#undef CASE
    return g_test_run();
}
