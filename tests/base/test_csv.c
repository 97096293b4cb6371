/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Tables: RFC 4180 to the letter, what spreadsheets make of it by a guess that is shown, and no field ever
 * lost or moved into another column in silence. */
#include "core/base/csv.h"

#include "core/base/base_error.h"
#include "core/base/limits.h"

#include <glib/gstdio.h>
#include <string.h>

static HwCsvTable *
parse_bytes(const char *data, gsize size)
{
    g_autoptr(GError) error = NULL;
    HwCsvTable *table = hw_csv_table_parse(data, size, "t.csv", &error);
    g_assert_no_error(error);
    return table;
}

static HwCsvTable *
parse(const char *text)
{
    return parse_bytes(text, strlen(text));
}

static const HwCsvRow *
row_of(const HwCsvTable *table, guint index)
{
    g_assert_cmpuint(index, <, table->rows->len);
    return table->rows->pdata[index];
}

/* Fields of a row, joined by "|", with its line before. */
static char *
shown(const HwCsvTable *table, guint index)
{
    const HwCsvRow *row = row_of(table, index);
    g_autofree char *joined = g_strjoinv("|", row->fields);
    return g_strdup_printf("%u:%s", row->line, joined);
}

static void
assert_row(const HwCsvTable *table, guint index, const char *expected)
{
    g_autofree char *text = shown(table, index);
    g_assert_cmpstr(text, ==, expected);
}

static void
assert_refused_bytes(const char *data, gsize size, const char *place)
{
    g_autoptr(GError) error = NULL;
    g_autoptr(HwCsvTable) table = hw_csv_table_parse(data, size, "t.csv", &error);
    g_assert_null(table);
    g_assert_nonnull(error);
    g_assert_true(error->domain == HW_BASE_ERROR);
    g_assert_true(g_str_has_prefix(error->message, "t.csv"));
    if (strstr(error->message, place) == NULL)
        g_error("“%s” does not say “%s”", error->message, place);
}

static void
assert_refused(const char *text, const char *place)
{
    assert_refused_bytes(text, strlen(text), place);
}

/* RFC 4180, section 2: its rules 1 to 7 with its own examples. */
static void
rules_of_rfc_4180(void)
{
    static const struct {
        const char *text;
        const char *first;
        const char *second;
    } cases[] = {
        { "a,b,c\r\naaa,bbb,ccc\r\nzzz,yyy,xxx\r\n", "2:aaa|bbb|ccc", "3:zzz|yyy|xxx" },
        { "a,b,c\r\naaa,bbb,ccc\r\nzzz,yyy,xxx", "2:aaa|bbb|ccc", "3:zzz|yyy|xxx" },
        { "a,b,c\r\n\"aaa\",\"bbb\",\"ccc\"\r\nzzz,yyy,xxx", "2:aaa|bbb|ccc", "3:zzz|yyy|xxx" },
        { "a,b,c\r\n\"aaa\",\"b\r\nbb\",\"ccc\"\r\nzzz,yyy,xxx", "2:aaa|b\r\nbb|ccc", "4:zzz|yyy|xxx" },
        { "a,b,c\r\n\"aaa\",\"b\"\"bb\",\"ccc\"\r\n \"a\" , x ,\r\n", "2:aaa|b\"bb|ccc", "3: \"a\" | x |" },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        g_autoptr(HwCsvTable) table = parse(cases[i].text);
        g_assert_cmpuint(table->rows->len, ==, 2);
        assert_row(table, 0, cases[i].first);
        assert_row(table, 1, cases[i].second);
    }
}

static void
lines_end_in_any_way(void)
{
    static const char *const ends[] = { "\n", "\r\n", "\r" };
    for (guint i = 0; i < G_N_ELEMENTS(ends); i++) {
        g_autofree char *text =
            g_strconcat("a,b", ends[i], ends[i], "1,\"x", ends[i], "y\"", ends[i], "2,z", ends[i], NULL);
        g_autofree char *first = g_strconcat("3:1|x", ends[i], "y", NULL);
        g_autoptr(HwCsvTable) table = parse(text);
        g_assert_cmpuint(table->rows->len, ==, 2);
        assert_row(table, 0, first);
        assert_row(table, 1, "5:2|z");
    }
}

static void
the_delimiter_is_guessed_and_shown(void)
{
    static const struct {
        const char *text;
        char delimiter;
        const char *format;
    } cases[] = {
        { "bib;name\n1;Ost, Eva\n", ';', "semicolon-separated, UTF-8" },
        { "bib\tname\n1\tOst, Eva\n", '\t', "tab-separated, UTF-8" },
        { "bib|name\n1|Ost, Eva\n", '|', "bar-separated, UTF-8" },
        { "\n\r\nbib;name\n1;Ost, Eva\n", ';', "semicolon-separated, UTF-8" },
        { "bib,\"name; given; family\"\n1,\"Ost, Eva\"\n", ',', "comma-separated, UTF-8" },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        g_autoptr(HwCsvTable) table = parse(cases[i].text);
        g_autofree char *format = hw_csv_table_dup_format(table);
        g_assert_cmpint(table->delimiter, ==, cases[i].delimiter);
        g_assert_cmpstr(format, ==, cases[i].format);
        g_assert_cmpstr(row_of(table, 0)->fields[1], ==, "Ost, Eva");
    }
    g_autoptr(HwCsvTable) single = parse("ns\n0\n500000\n");
    g_assert_cmpuint(single->rows->len, ==, 2);
}

#define NAME_UTF8 "bib,name\n1,Zo\xc3\xab \xc4\x8c\xc3\xa1p\n"

static void
the_encoding_is_guessed_and_shown(void)
{
    static const struct {
        const char *from;
        const char *bom;
        gsize bom_bytes;
        HwEncoding encoding;
        const char *format;
    } cases[] = {
        { "UTF-8", "", 0, HW_ENCODING_UTF8, "comma-separated, UTF-8" },
        { "UTF-8", "\xEF\xBB\xBF", 3, HW_ENCODING_UTF8, "comma-separated, UTF-8 with a byte order mark" },
        { "UTF-8", "\xEF\xBB\xBF\xEF\xBB\xBF", 6, HW_ENCODING_UTF8,
          "comma-separated, UTF-8 with a byte order mark" },
        { "UTF-16LE", "\xFF\xFE", 2, HW_ENCODING_UTF16_LE,
          "comma-separated, UTF-16LE with a byte order mark" },
        { "UTF-16BE", "\xFE\xFF", 2, HW_ENCODING_UTF16_BE,
          "comma-separated, UTF-16BE with a byte order mark" },
        { "UTF-16LE", "", 0, HW_ENCODING_UTF16_LE, "comma-separated, UTF-16LE" },
        { "UTF-16BE", "", 0, HW_ENCODING_UTF16_BE, "comma-separated, UTF-16BE" },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        gsize written = 0;
        g_autofree char *body = g_convert(NAME_UTF8, -1, cases[i].from, "UTF-8", NULL, &written, NULL);
        g_autoptr(GByteArray) bytes = g_byte_array_new();
        g_byte_array_append(bytes, (const guint8 *)cases[i].bom, (guint)cases[i].bom_bytes);
        g_byte_array_append(bytes, (const guint8 *)body, (guint)written);
        g_autoptr(HwCsvTable) table = parse_bytes((const char *)bytes->data, bytes->len);
        g_autofree char *format = hw_csv_table_dup_format(table);
        g_assert_cmpint(table->encoding, ==, cases[i].encoding);
        g_assert_cmpint(table->had_bom, ==, cases[i].bom_bytes > 0);
        g_assert_cmpstr(format, ==, cases[i].format);
        g_assert_cmpstr(table->header[0], ==, "bib");
        g_assert_cmpstr(row_of(table, 0)->fields[1], ==, "Zo\xc3\xab \xc4\x8c\xc3\xa1p");
    }
    /* 0x80 is the euro sign and 0xEB is e with diaeresis in Windows-1252, and neither is UTF-8. */
    g_autoptr(HwCsvTable) windows = parse("bib,name\n1,Zo\xEB \x80\n");
    g_assert_cmpint(windows->encoding, ==, HW_ENCODING_WINDOWS_1252);
    g_assert_cmpstr(row_of(windows, 0)->fields[1], ==, "Zo\xc3\xab \xe2\x82\xac");
}

static void
bytes_that_are_no_text_are_refused(void)
{
    assert_refused_bytes("bib,name\n1,long enough to be no UTF-16\0x\n", 39, "save it as UTF-8");
    assert_refused_bytes("\xFF\xFE"
                         "b\0i\0b\0\n",
                         9, "save it as UTF-8");
    assert_refused("\xEF\xBB\xBF"
                   "bib\n\xff\n",
                   "save it as UTF-8");
    assert_refused("bib\n\x81\x8d\n", "save it as UTF-8"); /* no characters of Windows-1252 */
}

static void
short_rows_are_filled_and_long_ones_refused(void)
{
    g_autoptr(HwCsvTable) table = parse("a,b,c\n1\n1,2,3,,,\n\n,,\n4,5\n");
    g_assert_cmpuint(table->rows->len, ==, 3);
    assert_row(table, 0, "2:1||");
    assert_row(table, 1, "3:1|2|3");
    assert_row(table, 2, "6:4|5|");
    assert_refused("a,b\n1,2\n1,2,,x,y,\n", "line 3 has 6 fields where the header has 2");
    assert_refused("bib,name\n1,Ost, Eva\n", "line 2 has 3 fields");
}

static void
an_open_quote_is_named_by_its_line(void)
{
    assert_refused("a,b\n1,2\n3,\"x\ny\nz\n", "line 3: a quotation mark is never closed");
    assert_refused("a,b\n1,\"", "line 2: a quotation mark is never closed");
    assert_refused("a,b\n1,\"x\n\"y\n", "line 3: text follows a closing quotation mark");
}

static void
a_header_is_needed_and_unique(void)
{
    assert_refused("", "is empty");
    assert_refused("\r\n\n,,\n", "is empty");
    assert_refused(";\t\n \n", "is empty");
    assert_refused("\xEF\xBB\xBF", "is empty");
    assert_refused("bib,name,bib\n1,2,3\n", "“bib” stands twice");
    assert_refused("bib,name, bib \n1,2,3\n", "“bib” stands twice");
    g_autoptr(HwCsvTable) table = parse(" bib , name,,\n1,2,3,4\n");
    g_assert_cmpuint(hw_csv_table_find(table, "name"), ==, 1);
    g_assert_cmpuint(hw_csv_table_find(table, "Name"), ==, G_MAXUINT);
    assert_row(table, 0, "2:1|2|3|4");
}

static void
too_many_fields_are_refused(void)
{
    g_autoptr(GString) text = g_string_new("a0");
    for (int i = 1; i < HW_MAX_TABLE_FIELDS; i++)
        g_string_append_printf(text, ",a%d", i);
    g_autoptr(HwCsvTable) table = parse(text->str);
    g_assert_cmpuint(g_strv_length(table->header), ==, HW_MAX_TABLE_FIELDS);
    g_string_append(text, ",more");
    assert_refused(text->str, "more than 256 fields");
}

static void
what_is_written_reads_back(void)
{
    static const char pieces[] = "ab1 ;,\"\"\r\n\t|'";
    g_autoptr(GRand) random = g_rand_new_with_seed(4180);
    for (int round = 0; round < 2000; round++) {
        g_autoptr(GString) text = g_string_new("x,y,z\r\n");
        g_auto(GStrv) written = g_new0(char *, 4);
        for (int i = 0; i < 3; i++) {
            int length = g_rand_int_range(random, i == 0 ? 1 : 0, 9);
            written[i] = g_malloc0((gsize)length + 1);
            for (int k = 0; k < length; k++)
                written[i][k] = pieces[g_rand_int_range(random, 0, sizeof pieces - 1)];
            if (i == 0)
                written[i][0] = 'a'; /* a row of nothing but blanks is passed over */
        }
        hw_csv_append_record(text, (const char *const *)written, 3);
        g_autoptr(HwCsvTable) table = parse(text->str);
        g_assert_cmpuint(table->rows->len, ==, 1);
        for (int i = 0; i < 3; i++)
            g_assert_cmpstr(row_of(table, 0)->fields[i], ==, written[i]);
    }
    g_autoptr(GString) text = g_string_new(NULL);
    const char *const fields[] = { "7", NULL, "Ost, Eva", "\"E\"" };
    hw_csv_append_record(text, fields, 4);
    g_assert_cmpstr(text->str, ==, "7,,\"Ost, Eva\",\"\"\"E\"\"\"\r\n");
}

static void
a_file_is_named_where_it_cannot_be_read(void)
{
    g_autofree char *folder = g_dir_make_tmp("halfwheel-XXXXXX", NULL);
    g_autofree char *absent = g_build_filename(folder, "absent.csv", NULL);
    g_autoptr(GError) missing = NULL, directory = NULL;
    g_assert_null(hw_csv_table_read(absent, &missing));
    g_assert_error(missing, HW_BASE_ERROR, HW_BASE_ERROR_NOT_FOUND);
    g_assert_nonnull(strstr(missing->message, absent));
    g_assert_null(hw_csv_table_read(folder, &directory));
    g_assert_error(directory, HW_BASE_ERROR, HW_BASE_ERROR_UNSAFE);
    g_assert_cmpint(g_rmdir(folder), ==, 0);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
#define CASE(rule) g_test_add_func("/base/csv/" #rule, rule)
    CASE(rules_of_rfc_4180);
    CASE(lines_end_in_any_way);
    CASE(the_delimiter_is_guessed_and_shown);
    CASE(the_encoding_is_guessed_and_shown);
    CASE(bytes_that_are_no_text_are_refused);
    CASE(short_rows_are_filled_and_long_ones_refused);
    CASE(an_open_quote_is_named_by_its_line);
    CASE(a_header_is_needed_and_unique);
    CASE(too_many_fields_are_refused);
    CASE(what_is_written_reads_back);
    CASE(a_file_is_named_where_it_cannot_be_read);
#undef CASE
    return g_test_run();
}
