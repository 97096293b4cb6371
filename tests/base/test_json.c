/* SPDX-License-Identifier: GPL-3.0-or-later */
/* JSON is read strictly (RFC 8259), within limits; a value of the wrong kind is named with its place, and
 * leaves what stood there. Digests are SHA-256 as sha256sum prints it. */
#include "core/base/input.h"
#include "core/base/json.h"

#include "core/base/base_error.h"
#include "core/base/digest.h"
#include "core/base/limits.h"
#include "tests/base/check_table.h"

#include <fcntl.h>
#include <glib/gstdio.h>
#include <math.h>
#include <string.h>
#include <unistd.h>

static json_t *
parse(const char *text)
{
    g_autoptr(GError) error = NULL;
    json_t *root = hw_json_parse(text, strlen(text), "r.json", &error);
    g_assert_no_error(error);
    return root;
}

static void
assert_refused(const char *text, gsize size)
{
    g_autoptr(GError) error = NULL;
    g_autoptr(json_t) root = hw_json_parse(text, size, "r.json", &error);
    if (root != NULL)
        g_error("“%.60s” was taken for JSON", text);
    g_assert_nonnull(error);
    g_assert_true(error->domain == HW_BASE_ERROR);
    g_assert_true(g_str_has_prefix(error->message, "r.json"));
}

static void
what_is_not_json_is_refused(void)
{
    static const char *const texts[] = {
        "",
        " ",
        "{",
        "{\"a\": 010}",
        "{\"a\": 1e999}",
        "{\"a\": -1e999}",
        "{\"a\": 1, \"a\": 2}",
        "{\"a\": 1, \"\\u0061\": 2}",
        "{\"x\": {\"a\": 1, \"a\": 1}}",
        "{\"a\": 1} {\"b\": 2}",
        "{\"a\": 1},",
        "{\"a\": \"x\\u0000y\"}",
        "{\"a\\u0000\": 1}",
        "{\"a\": NaN}",
        "{\"a\": Infinity}",
        "{\"a\": .5}",
        "{\"a\": 5.}",
        "{\"a\": +5}",
        "{\"a\": 0x10}",
        "{\"a\": 99999999999999999999}",
        "{\"a\": 1,}",
        "[1, 2,]",
        "{'a': 1}",
        "{a: 1}",
        "{\"a\": 1} // a remark",
        "/* a remark */ {\"a\": 1}",
        "{\"a\": \"\xff\"}",
        "{\"a\": \"\\ud800\"}",
        "{\"a\": \"line\nbreak\"}",
        "\xEF\xBB\xBF{\"a\": 1}",
        "\"a text alone\"",
        "7",
        "null",
        "<html></html>",
    };
    for (guint i = 0; i < G_N_ELEMENTS(texts); i++)
        assert_refused(texts[i], strlen(texts[i]));
    static const char with_nul[] = "{\"a\": 1}\0{\"b\": 2}";
    assert_refused(with_nul, sizeof with_nul - 1);
    static const char nul_in_text[] = "{\"a\": \"x\0y\"}";
    assert_refused(nul_in_text, sizeof nul_in_text - 1);
    static const char nul_at_end[] = "{\"a\": 1}";
    assert_refused(nul_at_end, sizeof nul_at_end);
}

static void
nesting_ends_at_the_limit(void)
{
    for (int depth = HW_MAX_JSON_DEPTH - 1; depth <= HW_MAX_JSON_DEPTH + 1; depth++) {
        g_autoptr(GString) text = g_string_new(NULL);
        for (int i = 0; i < depth; i++)
            g_string_append_c(text, '[');
        for (int i = 0; i < depth; i++)
            g_string_append_c(text, ']');
        if (depth <= HW_MAX_JSON_DEPTH) {
            g_autoptr(json_t) root = parse(text->str);
            g_assert_nonnull(root);
        } else {
            assert_refused(text->str, text->len);
        }
    }
    g_autofree char *deep = g_strnfill(100000, '[');
    assert_refused(deep, 100000);
    g_autofree char *objects = g_malloc0(600001);
    for (int i = 0; i < 100000; i++)
        strcpy(objects + 5 * i, "{\"a\":");
    assert_refused(objects, strlen(objects));
    /* Brackets in a text are no levels. */
    g_autofree char *quoted = g_strdup_printf("{\"a\": \"%.*s\\\"[[[\"}", 99, deep);
    g_autoptr(json_t) root = parse(quoted);
    g_assert_nonnull(root);
}

static void
an_error_names_line_and_column(void)
{
    g_autoptr(GError) error = NULL;
    static const char text[] = "{\n  \"a\": 1,\n  \"b\" 2\n}\n";
    g_assert_null(hw_json_parse(text, strlen(text), "r.json", &error));
    g_assert_error(error, HW_BASE_ERROR, HW_BASE_ERROR_SYNTAX);
    g_assert_nonnull(strstr(error->message, "line 3"));
}

static void
numbers_are_whole_or_not_and_in_range(void)
{
    g_autoptr(json_t) object =
        parse("{\"i\": 5, \"r\": 5.0, \"t\": \"5\", \"n\": null, \"b\": true,"
              " \"most\": 9007199254740991, \"over\": 9007199254740992, \"tenth\": 0.1}");
    int64_t whole = 99;
    double real = 99;
    static const char *const not_whole[] = { "r", "t", "b", "n", "absent", "over" };
    for (guint i = 0; i < G_N_ELEMENTS(not_whole); i++) {
        g_autoptr(GError) error = NULL;
        g_assert_false(hw_json_get_int64(object, not_whole[i], HW_JSON_REQUIRED, -HW_MAX_JSON_INTEGER,
                                         HW_MAX_JSON_INTEGER, "r.json: scan", &whole, &error));
        g_assert_nonnull(error);
        g_assert_true(g_str_has_prefix(error->message, "r.json: scan"));
        g_assert_nonnull(strstr(error->message, not_whole[i]));
        g_assert_cmpint(whole, ==, 99);
    }
    static const char *const not_number[] = { "t", "b", "n", "absent" };
    for (guint i = 0; i < G_N_ELEMENTS(not_number); i++) {
        g_autoptr(GError) error = NULL;
        g_assert_false(
            hw_json_get_double(object, not_number[i], HW_JSON_REQUIRED, -1e9, 1e9, "r", &real, &error));
        g_assert_nonnull(error);
    }
    g_assert_false(hw_json_get_double(object, "i", HW_JSON_REQUIRED, 6, 9, "r", &real, NULL));
    g_assert_false(hw_json_get_int64(object, "i", HW_JSON_REQUIRED, 6, 9, "r", &whole, NULL));
    g_assert_cmpfloat(real, ==, 99);
    g_assert_cmpint(whole, ==, 99);
    g_assert_true(hw_json_get_int64(object, "absent", HW_JSON_OPTIONAL, 0, 9, "r", &whole, NULL) &&
                  whole == 99);
    g_assert_true(hw_json_get_int64(object, "n", HW_JSON_OPTIONAL, 0, 9, "r", &whole, NULL) && whole == 99);
    g_assert_true(hw_json_get_int64(object, "i", HW_JSON_OPTIONAL, 5, 5, "r", &whole, NULL) && whole == 5);
    g_assert_true(
        hw_json_get_int64(object, "most", HW_JSON_OPTIONAL, 0, HW_MAX_JSON_INTEGER, "r", &whole, NULL));
    g_assert_cmpint(whole, ==, 9007199254740991);
    g_assert_true(hw_json_get_double(object, "i", HW_JSON_OPTIONAL, 5, 5, "r", &real, NULL) && real == 5);
    g_assert_true(hw_json_get_double(object, "tenth", HW_JSON_OPTIONAL, 0, 1, "r", &real, NULL) &&
                  real == 0.1);
}

static void
other_kinds_are_told_apart(void)
{
    g_autoptr(json_t) object = parse("{\"s\": \"left\", \"i\": 1, \"b\": false, \"a\": [], \"o\": {}}");
    static const char *const sides[] = { "left", "right", NULL };
    const char *text = "kept";
    bool flag = true;
    json_t *node = object;
    int word = 99;
    g_assert_false(hw_json_get_string(object, "i", HW_JSON_REQUIRED, "r", &text, NULL));
    g_assert_false(hw_json_get_string(object, "absent", HW_JSON_REQUIRED, "r", &text, NULL));
    g_assert_cmpstr(text, ==, "kept");
    g_assert_false(hw_json_get_bool(object, "i", "r", &flag, NULL));
    g_assert_true(hw_json_get_bool(object, "absent", "r", &flag, NULL) && flag);
    g_assert_false(hw_json_get_array(object, "o", HW_JSON_REQUIRED, "r", &node, NULL));
    g_assert_false(hw_json_get_object(object, "a", HW_JSON_REQUIRED, "r", &node, NULL));
    g_assert_true(node == object);
    g_autoptr(GError) error = NULL;
    static const char *const others[] = { "up", "down", NULL };
    g_assert_false(hw_json_get_word(object, "s", HW_JSON_REQUIRED, others, "r.json", &word, &error));
    g_assert_cmpstr(error->message, ==, "r.json: “s” is “left”; it must be one of up, down.");
    g_assert_false(hw_json_get_word(object, "i", HW_JSON_REQUIRED, sides, "r.json", &word, NULL));
    g_assert_cmpint(word, ==, 99);
    g_assert_true(hw_json_get_word(object, "s", HW_JSON_REQUIRED, sides, "r", &word, NULL) && word == 0);
    g_assert_true(hw_json_get_string(object, "s", HW_JSON_REQUIRED, "r", &text, NULL));
    g_assert_cmpstr(text, ==, "left");
    g_assert_true(hw_json_get_bool(object, "b", "r", &flag, NULL) && !flag);
    g_assert_true(hw_json_get_array(object, "a", HW_JSON_REQUIRED, "r", &node, NULL) && json_is_array(node));
    g_assert_true(hw_json_get_object(object, "o", HW_JSON_REQUIRED, "r", &node, NULL) &&
                  json_is_object(node));
}

static void
text_is_plain_and_reads_back(void)
{
    g_autoptr(json_t) object = parse("{\"a\": 0.1, \"b\": [1, \"Zo\xc3\xab\"], \"c\": 9007199254740991}");
    g_autofree char *text = hw_json_dup_text(object);
    g_assert_cmpstr(text, ==,
                    "{\n  \"a\": 0.1,\n  \"b\": [\n    1,\n    \"Zo\xc3\xab\"\n  ],\n"
                    "  \"c\": 9007199254740991\n}\n");
    g_autoptr(json_t) back = parse(text);
    g_assert_true(json_equal(back, object));
}

static void
a_file_over_the_limit_is_not_read(void)
{
    g_autofree char *folder = g_dir_make_tmp("halfwheel-XXXXXX", NULL);
    g_autofree char *path = g_build_filename(folder, "r.json", NULL);
    g_autoptr(GError) large = NULL, absent = NULL;
    size_t size = 0;
    g_assert_true(g_file_set_contents(path, "{\"a\": 1}", -1, NULL));
    g_assert_null(hw_input_read(path, 7, &size, &large));
    g_assert_error(large, HW_BASE_ERROR, HW_BASE_ERROR_RANGE);
    g_autofree char *text = hw_input_read(path, 8, &size, NULL);
    g_assert_cmpstr(text, ==, "{\"a\": 1}");
    g_assert_cmpuint(size, ==, 8);
    g_unlink(path);
    g_assert_null(hw_input_read(path, 8, &size, &absent));
    g_assert_error(absent, HW_BASE_ERROR, HW_BASE_ERROR_NOT_FOUND);
    g_assert_cmpint(mkfifo(path, 0600), ==, 0);
    g_assert_null(hw_input_read(path, 8, &size, NULL)); /* and does not wait for a writer */
    g_unlink(path);
    g_rmdir(folder);
}

static void
sha256_agrees_with_fips_180(void)
{
    g_autoptr(HwCsvTable) table = check_table_read("sha256_vectors.csv");
    g_autofree char *million = g_strnfill(1000000, 'a');
    for (guint row = 0; row < table->rows->len; row++) {
        const char *message = check_table_get(table, row, "message");
        if (strcmp(check_table_get(table, row, "name"), "million a") == 0)
            message = million;
        const char *expected = check_table_get(table, row, "sha256");
        HwDigest whole = hw_digest_bytes(message, strlen(message));
        g_assert_cmpstr(whole.hex, ==, expected);
        HwDigestSum *sum = hw_digest_sum_new();
        for (gsize at = 0; at < strlen(message); at += 4093)
            hw_digest_sum_add(sum, message + at, MIN(4093, strlen(message) - at));
        HwDigest pieces = hw_digest_sum_finish(sum);
        g_assert_cmpstr(pieces.hex, ==, expected);
        g_autofree char *upper = g_ascii_strup(expected, -1);
        g_assert_true(hw_digest_equal_hex(&whole, upper) && hw_digest_is_hex(upper));
        if (message == million)
            break; /* strlen of a million, a thousand times, is enough once */
    }
    HwDigest nothing = hw_digest_bytes("", 0);
    g_assert_false(hw_digest_equal_hex(&nothing, check_table_get(table, 1, "sha256")));
    g_autofree char *short_hex = g_strndup(nothing.hex, 63), *long_hex = g_strconcat(nothing.hex, "0", NULL);
    g_assert_false(hw_digest_is_hex(short_hex) || hw_digest_is_hex(long_hex) || hw_digest_is_hex(""));
}

static void
a_file_s_digest_is_of_all_its_bytes(void)
{
    g_autofree char *path = NULL;
    int fd = g_file_open_tmp("halfwheel-XXXXXX", &path, NULL);
    g_autofree char *bytes = g_malloc(200000);
    for (int i = 0; i < 200000; i++)
        bytes[i] = (char)(i * 7 % 251);
    g_assert_cmpint(write(fd, bytes, 200000), ==, 200000);
    g_assert_cmpint(lseek(fd, 0, SEEK_SET), ==, 0);
    HwDigest digest;
    g_assert_true(hw_digest_fd(fd, path, &digest, NULL));
    g_autofree char *by_glib = g_compute_checksum_for_data(G_CHECKSUM_SHA256, (guchar *)bytes, 200000);
    g_assert_cmpstr(digest.hex, ==, by_glib);
    close(fd);
    g_autoptr(GError) error = NULL;
    g_assert_false(hw_digest_fd(fd, "gone.png", &digest, &error));
    g_assert_error(error, HW_BASE_ERROR, HW_BASE_ERROR_IO);
    g_assert_nonnull(strstr(error->message, "gone.png"));
    g_unlink(path);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
#define CASE(rule) g_test_add_func("/base/json/" #rule, rule)
    CASE(what_is_not_json_is_refused);
    CASE(nesting_ends_at_the_limit);
    CASE(an_error_names_line_and_column);
    CASE(numbers_are_whole_or_not_and_in_range);
    CASE(other_kinds_are_told_apart);
    CASE(text_is_plain_and_reads_back);
    CASE(a_file_over_the_limit_is_not_read);
    CASE(sha256_agrees_with_fips_180);
    CASE(a_file_s_digest_is_of_all_its_bytes);
#undef CASE
    return g_test_run();
}
