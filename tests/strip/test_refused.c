/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Manifests that are refused whole: each sentence names the file and the place. */
#include "core/base/base_error.h"
#include "core/strip/recording.h"
#include "core/strip/strip_error.h"
#include "folders.h"

#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

#define HEAD "{\"halfwheel_recording\": 1, \"epoch\": \"2027-06-13T16:02:11+02:00\", "
#define SCAN "\"scan\": {\"rate_hz\": 2000, \"exposure_us\": 400, \"stamp\": \"start\"}, "
#define BLOCK(fields) HEAD SCAN "\"blocks\": [{\"file\": \"b0.png\", " fields "}]}"
#define BLOCKS(list) HEAD SCAN "\"blocks\": [" list "]}"
#define RATE(value)                                                                                          \
    HEAD "\"scan\": {\"rate_hz\": " value ", \"stamp\": \"middle\"}, \"blocks\": [{\"file\": \"b0.png\", "   \
         "\"first_ns\": 0}]}"
#define EPOCH(text)                                                                                          \
    "{\"halfwheel_recording\": 1, \"epoch\": \"" text "\", " SCAN                                            \
    "\"blocks\": [{\"file\": \"b0.png\", \"first_ns\": 0}]}"
#define FILE_NAMED(name) BLOCKS("{\"file\": \"" name "\", \"first_ns\": 0}")
#define GOOD FILE_NAMED("b0.png")

typedef struct {
    const char *rule;
    const char *manifest;
    const char *place; /* what the sentence must hold beside the manifest's path */
} Case;

static const Case cases[] = {
    { "broken_json", "{\"halfwheel_recording\": 1,", "line 1" },
    { "empty_file", "", "line 1" },
    { "not_an_object", "[1]", "object" },
    { "a_key_twice", "{\"halfwheel_recording\": 1, \"halfwheel_recording\": 1}", "line 1" },
    { "a_second_root", GOOD " {}", "line 1" },
    { "a_leading_zero", BLOCK("\"first_ns\": 010"), "line 1" },
    { "infinity", RATE("1e999"), "line 1" },
    { "no_version", "{\"epoch\": \"2027-06-13T16:02:11Z\"}", "halfwheel_recording" },
    { "a_newer_version", "{\"halfwheel_recording\": 99}", "newer" },
    { "version_0", "{\"halfwheel_recording\": 0}", "halfwheel_recording" },
    { "a_version_in_words", "{\"halfwheel_recording\": \"1\"}", "halfwheel_recording" },
    { "rate_0", RATE("0"), "scan: “rate_hz”" },
    { "rate_negative", RATE("-1"), "scan: “rate_hz”" },
    { "rate_10_to_the_12", RATE("1e12"), "scan: “rate_hz”" },
    { "rate_just_above_the_limit", RATE("1000000.000001"), "scan: “rate_hz”" },
    { "rate_with_ten_decimals", RATE("1e-10"), "scan: “rate_hz”" },
    { "rate_as_text", RATE("\"2000\""), "scan: “rate_hz”" },
    { "rate_null", RATE("null"), "scan: “rate_hz”" },
    { "no_exposure_though_stamps_are_of_the_start",
      HEAD "\"scan\": {\"rate_hz\": 2000, \"stamp\": \"start\"}, \"blocks\": []}", "scan: “exposure_us”" },
    { "negative_exposure",
      HEAD "\"scan\": {\"rate_hz\": 2000, \"stamp\": \"end\", \"exposure_us\": -1}, \"blocks\": []}",
      "scan: “exposure_us”" },
    { "no_stamp", HEAD "\"scan\": {\"rate_hz\": 2000, \"exposure_us\": 1}, \"blocks\": []}",
      "scan: “stamp”" },
    { "an_unknown_stamp", HEAD "\"scan\": {\"rate_hz\": 2000, \"stamp\": \"begin\"}, \"blocks\": []}",
      "scan: “stamp”" },
    { "a_transfer_that_falls",
      HEAD "\"scan\": {\"rate_hz\": 2000, \"stamp\": \"middle\", \"transfer\": [1, 0]}, \"blocks\": []}",
      "scan: “transfer”" },
    { "epoch_yesterday", EPOCH("yesterday"), "“epoch” “yesterday”" },
    { "epoch_without_offset", EPOCH("2027-06-13T16:02:11"), "no offset" },
    { "epoch_missing", "{\"halfwheel_recording\": 1}", "“epoch”" },
    { "travel_up", "{\"halfwheel_recording\": 1, \"epoch\": \"2027-06-13T16:02:11Z\", \"travel\": \"up\"}",
      "“travel”" },
    { "camera_with_a_line_feed",
      "{\"halfwheel_recording\": 1, \"epoch\": \"2027-06-13T16:02:11Z\", \"camera\": \"A\\nB\"}",
      "“camera”" },
    { "no_blocks", HEAD SCAN "\"rows\": 4}", "“blocks”" },
    { "empty_blocks", BLOCKS(""), "“blocks”" },
    { "a_block_that_is_a_number", BLOCKS("7"), "blocks[0]" },
    { "frames", HEAD SCAN "\"frames\": {\"files\": [\"f0.png\"]}}", "“frames”" },
    { "no_file", BLOCKS("{\"first_ns\": 0}"), "blocks[0]: “file”" },
    { "no_first_stamp", BLOCKS("{\"file\": \"b0.png\"}"), "blocks[0]: “first_ns”" },
    { "a_stamp_with_a_point", BLOCK("\"first_ns\": 0.5"), "blocks[0]: “first_ns”" },
    { "a_stamp_of_2_to_the_53", BLOCK("\"first_ns\": 9007199254740992"), "blocks[0]: “first_ns”" },
    { "a_last_stamp_of_minus_2_to_the_53", BLOCK("\"first_ns\": 0, \"last_ns\": -9007199254740992"),
      "blocks[0]: “last_ns”" },
    { "ends_before_it_starts", BLOCK("\"first_ns\": 5, \"last_ns\": 4"), "blocks[0]: the block ends before" },
    { "many_columns_at_one_stamp", BLOCK("\"first_ns\": 5, \"last_ns\": 5, \"columns\": 2"), "blocks[0]" },
    { "one_column_from_one_stamp_to_another", BLOCK("\"first_ns\": 5, \"last_ns\": 6, \"columns\": 1"),
      "blocks[0]" },
    { "no_columns", BLOCK("\"first_ns\": 0, \"columns\": 0"), "blocks[0]: “columns”" },
    { "too_many_pixels", BLOCK("\"first_ns\": 0, \"columns\": 134217729"), "blocks[0]: “columns”" },
    { "too_many_pixels_with_rows",
      HEAD SCAN "\"rows\": 1025, \"blocks\": [{\"file\": \"b0.png\", \"first_ns\": 0, \"columns\": 131072}]}",
      "blocks[0]: 131072 columns" },
    { "a_digest_of_63_digits",
      BLOCK(
          "\"first_ns\": 0, \"sha256\": \"3a6eb0790f39ac87c94f3856b2dd2c5d110e6811602261a9a923d3bb23adc8b\""),
      "blocks[0]: “sha256”" },
    { "times_beside_stamps", BLOCK("\"first_ns\": 0, \"times\": \"b0.csv\""), "blocks[0]: “times”" },
    { "times_that_are_the_block", BLOCK("\"times\": \"b0.png\""), "blocks[0]" },
    { "a_block_twice",
      BLOCKS("{\"file\": \"b0.png\", \"first_ns\": 0}, {\"file\": \"b0.png\", \"first_ns\": 500000}"),
      "blocks[1]: the file name “b0.png”" },
    { "equal_but_for_case",
      BLOCKS("{\"file\": \"b0.png\", \"first_ns\": 0}, {\"file\": \"B0.PNG\", \"first_ns\": 500000}"),
      "blocks[1]: the file name “B0.PNG”" },
    { "equal_but_for_case_beyond_ascii",
      BLOCKS("{\"file\": \"É.png\", \"first_ns\": 0}, {\"file\": \"é.png\", \"first_ns\": 500000}"),
      "blocks[1]: the file name “é.png”" },
    { "times_twice",
      BLOCKS("{\"file\": \"b0.png\", \"times\": \"t.csv\"}, {\"file\": \"b1.png\", \"times\": \"T.csv\"}"),
      "blocks[1]: the file name “T.csv”" },
    { "the_manifest_as_a_block", FILE_NAMED("recording.json"), "blocks[0]" },
    { "the_manifest_as_times", BLOCK("\"times\": \"Recording.JSON\""), "blocks[0]" },
    { "overlapping_even_blocks",
      BLOCKS("{\"file\": \"b0.png\", \"first_ns\": 0, \"last_ns\": 999}, {\"file\": \"b1.png\", "
             "\"first_ns\": 999}"),
      "blocks[1]: “first_ns” is 999" },
    { "overlapping_blocks_by_the_rate",
      BLOCKS("{\"file\": \"b0.png\", \"first_ns\": 0, \"columns\": 3}, {\"file\": \"b1.png\", \"first_ns\": "
             "1000000}"),
      "blocks[1]: “first_ns” is 1000000" },
    { "backwards",
      BLOCKS("{\"file\": \"b0.png\", \"first_ns\": 500}, {\"file\": \"b1.png\", \"first_ns\": 0}"),
      "blocks[1]" },
    { "backwards_past_a_times_file",
      BLOCKS("{\"file\": \"b0.png\", \"first_ns\": 500}, {\"file\": \"b1.png\", \"times\": \"t.csv\"}, "
             "{\"file\": \"b2.png\", \"first_ns\": 0}"),
      "blocks[2]" },
    { "dot_dot", FILE_NAMED("../b0.png"), "blocks[0]: the file name “../b0.png”" },
    { "dot_dot_inside", FILE_NAMED("a/../b0.png"), "blocks[0]" },
    { "a_dot_part", FILE_NAMED("./b0.png"), "blocks[0]" },
    { "an_absolute_name", FILE_NAMED("/etc/passwd"), "blocks[0]: the file name “/etc/passwd”" },
    { "an_empty_part", FILE_NAMED("a//b0.png"), "blocks[0]" },
    { "an_empty_name", FILE_NAMED(""), "blocks[0]" },
    { "a_percent_sign", FILE_NAMED("b%00.png"), "blocks[0]" },
    { "a_backslash", FILE_NAMED("a\\\\b.png"), "blocks[0]" },
    { "a_control_character", FILE_NAMED("b\\u0007.png"), "blocks[0]" },
    { "times_through_dot_dot", BLOCK("\"times\": \"../t.csv\""), "blocks[0]" },
    { "a_link", FILE_NAMED("link.png"), "blocks[0]: “link.png”" },
    { "a_link_to_nowhere", FILE_NAMED("dangling.png"), "blocks[0]: “dangling.png”" },
    { "a_file_through_a_linked_folder", FILE_NAMED("linked/b0.png"), "blocks[0]: “linked/b0.png”" },
    { "times_through_a_link", BLOCK("\"times\": \"link.png\""), "blocks[0]: “link.png”" },
    { "a_fifo", FILE_NAMED("fifo.png"), "blocks[0]: “fifo.png”" },
    { "a_folder", FILE_NAMED("folder.png"), "blocks[0]: “folder.png”" },
};

static void
make_traps(TestFolder *folder)
{
    const char *const call[] = { "sh", "-c",
                                 "ln -s b0.png link.png; ln -s nowhere dangling.png; mkdir real folder.png; "
                                 "cp b0.png real/; ln -s real linked; mkfifo fifo.png",
                                 NULL };
    g_autofree char *output = test_output_of(folder->path, call);
}

static void
check_refused(TestFolder *folder, const char *place)
{
    g_autoptr(GError) error = NULL;
    g_assert_null(hw_recording_open(folder->path, &error));
    g_assert_nonnull(error);
    g_assert_true(error->domain == HW_STRIP_ERROR || error->domain == HW_BASE_ERROR);
    g_test_message("%s", error->message);
    g_assert_true(g_str_has_prefix(error->message, folder->path));
    g_assert_nonnull(strstr(error->message, place));
    g_assert_true(g_str_has_suffix(error->message, "."));
    g_assert_null(strchr(error->message, '\n'));
}

static void
refused(gconstpointer data)
{
    const Case *tried = data;
    g_autoptr(TestFolder) folder = test_folder_new();
    test_folder_write_manifest(folder, "{}", "[]");
    make_traps(folder);
    /* The same folder opens with a good manifest, so it is the rule that refuses. */
    test_folder_write(folder, "recording.json", GOOD);
    g_autoptr(GError) error = NULL;
    g_autoptr(HwRecording) good = hw_recording_open(folder->path, &error);
    g_assert_no_error(error);
    test_folder_write(folder, "recording.json", tried->manifest);
    check_refused(folder, tried->place);
}

static void
no_manifest(void)
{
    g_autoptr(TestFolder) folder = test_folder_new();
    check_refused(folder, "holds no recording.json");
}

static void
a_nul_byte(void)
{
    g_autoptr(TestFolder) folder = test_folder_new();
    g_autofree char *path = g_build_filename(folder->path, "recording.json", NULL);
    g_assert_true(g_file_set_contents(path, GOOD "\0", sizeof(GOOD), NULL));
    check_refused(folder, "NUL");
    test_folder_write(folder, "recording.json", FILE_NAMED("b0.png\\u0000x"));
    check_refused(folder, "line 1");
}

static void
nested_a_hundred_thousand_deep(void)
{
    g_autoptr(TestFolder) folder = test_folder_new();
    g_autofree char *deep = g_strnfill(100000, '[');
    test_folder_write(folder, "recording.json", deep);
    check_refused(folder, "levels");
}

static void
more_than_16_mebibytes(void)
{
    g_autoptr(TestFolder) folder = test_folder_new();
    g_autofree char *long_text = g_strnfill((16 << 20) + 1, ' ');
    test_folder_write(folder, "recording.json", long_text);
    check_refused(folder, "longer than");
}

static void
a_manifest_that_is_a_link_a_fifo_or_a_folder(void)
{
    static const char *const makers[] = { "ln -s good.json recording.json", "mkfifo recording.json",
                                          "mkdir recording.json" };
    for (guint i = 0; i < G_N_ELEMENTS(makers); i++) {
        g_autoptr(TestFolder) folder = test_folder_new();
        test_folder_write(folder, "good.json", GOOD);
        test_folder_write(folder, "b0.png", "zero");
        const char *const call[] = { "sh", "-c", makers[i], NULL };
        g_autofree char *output = test_output_of(folder->path, call);
        check_refused(folder, "recording.json");
    }
}

static void
a_path_that_is_not_there(void)
{
    g_autoptr(TestFolder) folder = test_folder_new();
    g_autofree char *path = g_build_filename(folder->path, "none", NULL);
    g_autoptr(GError) error = NULL;
    g_assert_null(hw_recording_open(path, &error));
    g_assert_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_MANIFEST);
    g_assert_nonnull(strstr(error->message, path));
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        g_autofree char *path = g_strconcat("/strip/refused/", cases[i].rule, NULL);
        g_test_add_data_func(path, &cases[i], refused);
    }
#define CASE(name) g_test_add_func("/strip/refused/" #name, name)
    CASE(no_manifest);
    CASE(a_nul_byte);
    CASE(nested_a_hundred_thousand_deep);
    CASE(more_than_16_mebibytes);
    CASE(a_manifest_that_is_a_link_a_fifo_or_a_folder);
    CASE(a_path_that_is_not_there);
#undef CASE
    return g_test_run();
}
