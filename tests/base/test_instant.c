/* SPDX-License-Identifier: GPL-3.0-or-later */
/* An instant is read strictly, kept to the ns, and counts leap seconds. Checked against a public set of RFC
 * 3339 strings, the IERS list of leap seconds, and libc's timegm for the calendar. */
#include "core/base/instant.h"

#include "core/base/base_error.h"
#include "core/base/json.h"
#include "core/base/limits.h"
#include "tests/base/check_table.h"

#include <string.h>
#include <time.h>

static HwInstant
at(const char *text)
{
    HwInstant instant = { 0 };
    g_autoptr(GError) error = NULL;
    hw_instant_parse(text, &instant, &error);
    g_assert_no_error(error);
    return instant;
}

static int64_t
between(const char *later, const char *earlier)
{
    HwInstant a = at(later), b = at(earlier);
    int64_t ns = 0;
    g_assert_true(hw_instant_difference(&a, &b, &ns));
    return ns;
}

static void
assert_refused(const char *text)
{
    HwInstant kept = { .s = 7, .ns = 8, .offset_min = 9, .offset_unknown = true };
    g_autoptr(GError) error = NULL;
    if (hw_instant_parse(text, &kept, &error))
        g_error("“%s” was taken for an instant", text);
    g_assert_error(error, HW_BASE_ERROR, HW_BASE_ERROR_SYNTAX);
    g_assert_nonnull(strstr(error->message, text));
    g_assert_true(kept.s == 7 && kept.ns == 8 && kept.offset_min == 9 && kept.offset_unknown);
}

static void
public_set_is_judged_as_its_authors_do(void)
{
    g_autoptr(HwCsvTable) table = check_table_read("rfc3339_datetime.csv");
    for (guint row = 0; row < table->rows->len; row++) {
        bool valid = strcmp(check_table_get(table, row, "valid"), "1") == 0;
        const char *quoted = check_table_get(table, row, "json_string");
        g_autoptr(json_t) text = json_loads(quoted, JSON_DECODE_ANY, NULL);
        g_assert_nonnull(text);
        if (valid)
            at(json_string_value(text));
        else
            assert_refused(json_string_value(text));
    }
    g_assert_cmpuint(table->rows->len, ==, 27);
}

/* RFC 3339, section 5.8. */
static void
examples_of_the_rfc_mean_what_it_says(void)
{
    g_assert_cmpint(between("1985-04-12T23:20:50.52Z", "1985-04-12T23:20:50Z"), ==, 520000000);
    g_assert_cmpint(between("1996-12-19T16:39:57-08:00", "1996-12-20T00:39:57Z"), ==, 0);
    g_assert_cmpint(between("1990-12-31T23:59:60Z", "1990-12-31T15:59:60-08:00"), ==, 0);
    g_assert_cmpint(between("1937-01-01T12:00:27.87+00:20", "1937-01-01T11:40:27.87Z"), ==, 0);
}

static void
other_forms_are_refused(void)
{
    static const char *const forms[] = {
        "",
        " 2027-06-13T16:02:11Z",
        "2027-06-13T16:02:11Z ",
        "2027-06-13 16:02:11Z",
        "2027-06-13T16:02:11",
        "2027-06-13T16:02Z",
        "20270613T160211Z",
        "2027-06-13T16:02:11.Z",
        "2027-06-13T16:02:11,5Z",
        "2027-06-13T16:02:11+0200",
        "2027-06-13T16:02:11+2:00",
        "2027-06-13T16:02:11+02:00:00",
        "2027-00-13T16:02:11Z",
        "2027-13-13T16:02:11Z",
        "2027-06-00T16:02:11Z",
        "2027-06-31T16:02:11Z",
        "2027-02-29T16:02:11Z",
        "2100-02-29T16:02:11Z",
        "-027-06-13T16:02:11Z",
        "2027-06-13T-1:02:11Z",
        "2027-06-13T16:60:11Z",
        "2027-06-13T16:02:61Z",
        "2027-06-13T16:02:11+24:00",
        "2027-06-13T16:02:11−02:00",
        "yesterday",
    };
    for (guint i = 0; i < G_N_ELEMENTS(forms); i++)
        assert_refused(forms[i]);
    at("2028-02-29T16:02:11Z");
    at("2000-02-29T16:02:11Z");
}

static int
month_of(const char *name)
{
    return strcmp(name, "Jun") == 0 ? 6 : 12;
}

static void
every_leap_second_has_a_place_of_its_own(void)
{
    g_autoptr(HwCsvTable) table = check_table_read("leap_seconds.csv");
    for (guint row = 0; row < table->rows->len; row++) {
        int year = atoi(check_table_get(table, row, "year"));
        int month = month_of(check_table_get(table, row, "month"));
        int day = atoi(check_table_get(table, row, "day"));
        int tai = atoi(check_table_get(table, row, "tai_minus_utc_after_s"));
        g_autofree char *before = g_strdup_printf("%04d-%02d-%02dT23:59:59Z", year, month, day);
        g_autofree char *leap = g_strdup_printf("%04d-%02d-%02dT23:59:60Z", year, month, day);
        g_autofree char *after = g_strdup_printf("%04d-%02d-01T00:00:00Z", month == 12 ? year + 1 : year,
                                                 month == 12 ? 1 : month + 1);
        g_autofree char *wrong_day = g_strdup_printf("%04d-%02d-%02dT23:59:60Z", year, month, day - 1);
        g_assert_cmpint(between(leap, before), ==, HW_NS_PER_S);
        g_assert_cmpint(between(after, before), ==, 2 * HW_NS_PER_S);
        assert_refused(wrong_day);
        HwInstant earlier = at(before), later = at(after), inside = at(leap);
        g_assert_cmpint(hw_instant_tai_minus_utc_s(&earlier), ==, tai - 1);
        g_assert_cmpint(hw_instant_tai_minus_utc_s(&inside), ==, tai - 1);
        g_assert_cmpint(hw_instant_tai_minus_utc_s(&later), ==, tai);
        g_autofree char *written = hw_instant_dup_text(&inside, 0);
        g_assert_cmpint(strncmp(written, leap, 19), ==, 0);
    }
    g_assert_cmpuint(table->rows->len, ==, 27);
}

static void
a_second_60_is_taken_at_any_offset(void)
{
    g_assert_cmpint(between("2017-01-01T05:29:60.25+05:30", "2016-12-31T23:59:60Z"), ==, 250000000);
    g_assert_cmpint(between("2016-12-31T18:59:60-05:00", "2016-12-31T23:59:60Z"), ==, 0);
    assert_refused("2016-12-31T23:59:60+01:00");
    assert_refused("2026-12-31T23:59:60Z");
}

/* The calendar by libc's timegm, the leap seconds by counting rows of the list. */
static void
differences_agree_with_libc_and_the_list(void)
{
    g_autoptr(HwCsvTable) table = check_table_read("leap_seconds.csv");
    g_autoptr(GRand) random = g_rand_new_with_seed(20270613);
    for (int i = 0; i < 20000; i++) {
        struct tm day[2] = { 0 };
        int64_t counted[2];
        HwInstant instant[2];
        for (int k = 0; k < 2; k++) {
            int offset_min = g_rand_int_range(random, -1439, 1440);
            time_t utc = (time_t)g_rand_double_range(random, -3e9, 6e9);
            time_t local = utc + offset_min * 60;
            gmtime_r(&local, &day[k]);
            g_autofree char *text = g_strdup_printf(
                "%04d-%02d-%02dT%02d:%02d:%02d%c%02d:%02d", day[k].tm_year + 1900, day[k].tm_mon + 1,
                day[k].tm_mday, day[k].tm_hour, day[k].tm_min, day[k].tm_sec, offset_min < 0 ? '-' : '+',
                ABS(offset_min) / 60, ABS(offset_min) % 60);
            counted[k] = utc;
            for (guint row = 0; row < table->rows->len; row++) {
                struct tm end = { .tm_year = atoi(check_table_get(table, row, "year")) - 1900,
                                  .tm_mon = month_of(check_table_get(table, row, "month")),
                                  .tm_mday = 1 };
                counted[k] += timegm(&end) <= utc;
            }
            instant[k] = at(text);
            g_autofree char *written = hw_instant_dup_text(&instant[k], 0);
            if (offset_min != 0)
                g_assert_cmpstr(written, ==, text);
        }
        g_assert_cmpint(instant[1].s - instant[0].s, ==, counted[1] - counted[0]);
    }
}

static void
decimals_beyond_the_ninth_round_half_to_even(void)
{
    static const struct {
        const char *fraction;
        int64_t ns;
    } cases[] = {
        { ".0", 0 },
        { ".5", 500000000 },
        { ".123456789", 123456789 },
        { ".1234567891", 123456789 },
        { ".0000000004999999999", 0 },
        { ".0000000005", 0 },
        { ".00000000050000000001", 1 },
        { ".0000000015", 2 },
        { ".0000000025", 2 },
        { ".00000000250", 2 },
        { ".0000000025000001", 3 },
        { ".0000000035", 4 },
        { ".9999999994", 999999999 },
        { ".9999999995", 1000000000 },
        { ".99999999999999999999999999", 1000000000 },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        g_autofree char *text = g_strconcat("2027-06-13T16:02:11", cases[i].fraction, "+02:00", NULL);
        g_assert_cmpint(between(text, "2027-06-13T16:02:11+02:00"), ==, cases[i].ns);
    }
    /* Carried into a leap second, and out of one. */
    g_assert_cmpint(between("2016-12-31T23:59:59.9999999999Z", "2016-12-31T23:59:60Z"), ==, 0);
    g_assert_cmpint(between("2016-12-31T23:59:60.9999999999Z", "2017-01-01T00:00:00Z"), ==, 0);
}

static void
text_cuts_and_keeps_the_offset(void)
{
    static const struct {
        const char *in;
        int decimals;
        const char *out;
        const char *of_day;
    } cases[] = {
        { "2027-06-13T16:02:11.999999999+02:00", 9, "2027-06-13T16:02:11.999999999+02:00",
          "16:02:11.999999999" },
        { "2027-06-13T16:02:11.999999999+02:00", 3, "2027-06-13T16:02:11.999+02:00", "16:02:11.999" },
        { "2027-06-13T16:02:11.999999999+02:00", 0, "2027-06-13T16:02:11+02:00", "16:02:11" },
        { "2027-01-01T00:00:00-03:30", 1, "2027-01-01T00:00:00.0-03:30", "00:00:00.0" },
        { "2027-01-01T00:00:00Z", 0, "2027-01-01T00:00:00+00:00", "00:00:00" },
        { "2027-01-01T00:00:00-00:00", 0, "2027-01-01T00:00:00-00:00", "00:00:00" },
        { "2016-12-31T15:59:60.123-08:00", 3, "2016-12-31T15:59:60.123-08:00", "15:59:60.123" },
        { "0000-01-01T00:00:00+23:59", 0, "0000-01-01T00:00:00+23:59", "00:00:00" },
        { "9999-12-31T23:59:59-23:59", 0, "9999-12-31T23:59:59-23:59", "23:59:59" },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        HwInstant instant = at(cases[i].in);
        g_autofree char *text = hw_instant_dup_text(&instant, cases[i].decimals);
        g_autofree char *of_day = hw_instant_dup_time_of_day(&instant, cases[i].decimals);
        g_assert_cmpstr(text, ==, cases[i].out);
        g_assert_cmpstr(of_day, ==, cases[i].of_day);
    }
}

static void
plus_undoes_difference(void)
{
    g_autoptr(GRand) random = g_rand_new_with_seed(7);
    for (int i = 0; i < 20000; i++) {
        HwInstant start = { .s = (int64_t)g_rand_double_range(random, -6e9, 6e9),
                            .ns = g_rand_int_range(random, 0, 1000000000),
                            .offset_min = 120 };
        int64_t ns = (int64_t)g_rand_double_range(random, -9e18, 9e18), back = 0;
        HwInstant end = hw_instant_plus(&start, ns);
        g_assert_true(hw_instant_difference(&end, &start, &back));
        g_assert_cmpint(back, ==, ns);
        g_assert_true(end.ns >= 0 && end.ns < 1000000000 && end.offset_min == 120);
        g_assert_cmpint(hw_instant_compare(&end, &start), ==, ns > 0 ? 1 : ns < 0 ? -1 : 0);
    }
    HwInstant before = at("2016-12-31T23:59:59.5Z");
    HwInstant leap = hw_instant_plus(&before, HW_NS_PER_S), after = hw_instant_plus(&before, 2 * HW_NS_PER_S);
    g_autofree char *leap_text = hw_instant_dup_text(&leap, 1), *after_text = hw_instant_dup_text(&after, 1);
    g_assert_cmpstr(leap_text, ==, "2016-12-31T23:59:60.5+00:00");
    g_assert_cmpstr(after_text, ==, "2017-01-01T00:00:00.5+00:00");
}

static void
a_difference_that_does_not_fit_is_no_difference(void)
{
    HwInstant zero = { 0 };
    HwInstant least = { .s = -9223372037, .ns = 145224192 }; /* −2^63 ns */
    HwInstant beyond = { .s = -9223372037, .ns = 145224191 };
    HwInstant most = { .s = 9223372036, .ns = 854775807 }; /* 2^63 − 1 ns */
    int64_t ns = 42;
    g_assert_false(hw_instant_difference(&beyond, &zero, &ns));
    g_assert_false(hw_instant_difference(&most, &beyond, &ns));
    g_assert_cmpint(ns, ==, 42);
    g_assert_true(hw_instant_difference(&least, &zero, &ns));
    g_assert_cmpint(ns, ==, INT64_MIN);
    g_assert_true(hw_instant_difference(&most, &zero, &ns));
    g_assert_cmpint(ns, ==, INT64_MAX);
}

static void
order_does_not_mind_the_offset(void)
{
    HwInstant here = at("2027-06-13T16:02:11+02:00"), there = at("2027-06-13T06:02:11-08:00"),
              later = at("2027-06-13T14:02:11.000000001Z");
    g_assert_cmpint(hw_instant_compare(&here, &there), ==, 0);
    g_assert_cmpint(hw_instant_compare(&here, &later), <, 0);
    g_assert_cmpint(hw_instant_compare(&later, &there), >, 0);
}

static void
a_time_of_day_is_the_latest_not_after_the_limit(void)
{
    static const struct {
        const char *limit;
        int64_t of_day_ns;
        const char *expected;
    } cases[] = {
        { "2027-06-13T16:02:11+02:00", 53400 * HW_NS_PER_S, "2027-06-13T14:50:00.000000000+02:00" },
        { "2027-06-13T16:02:11+02:00", 61200 * HW_NS_PER_S, "2027-06-12T17:00:00.000000000+02:00" },
        { "2027-06-14T00:10:00+02:00", 85800 * HW_NS_PER_S, "2027-06-13T23:50:00.000000000+02:00" },
        { "2027-06-14T00:10:00+02:00", 600 * HW_NS_PER_S, "2027-06-14T00:10:00.000000000+02:00" },
        { "2027-06-14T00:10:00+02:00", 600 * HW_NS_PER_S + 1, "2027-06-13T00:10:00.000000001+02:00" },
        { "2027-06-14T00:00:00-08:00", 0, "2027-06-14T00:00:00.000000000-08:00" },
        { "2027-01-01T00:00:00-08:00", HW_NS_PER_DAY - 1, "2026-12-31T23:59:59.999999999-08:00" },
        { "2027-01-01T06:00:00+14:00", 25200 * HW_NS_PER_S, "2026-12-31T07:00:00.000000000+14:00" },
        { "2028-03-01T00:00:00Z", 43200 * HW_NS_PER_S, "2028-02-29T12:00:00.000000000+00:00" },
        { "2016-12-31T23:59:60.5Z", 86399 * HW_NS_PER_S, "2016-12-31T23:59:59.000000000+00:00" },
        { "2017-01-01T00:00:00Z", 86399 * HW_NS_PER_S, "2016-12-31T23:59:59.000000000+00:00" },
        { "1969-12-31T23:00:00Z", 84600 * HW_NS_PER_S, "1969-12-30T23:30:00.000000000+00:00" },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        HwInstant limit = at(cases[i].limit);
        HwInstant found = hw_instant_latest_time_of_day(&limit, cases[i].of_day_ns);
        g_autofree char *text = hw_instant_dup_text(&found, 9);
        g_assert_cmpstr(text, ==, cases[i].expected);
    }
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
#define CASE(rule) g_test_add_func("/base/instant/" #rule, rule)
    CASE(public_set_is_judged_as_its_authors_do);
    CASE(examples_of_the_rfc_mean_what_it_says);
    CASE(other_forms_are_refused);
    CASE(every_leap_second_has_a_place_of_its_own);
    CASE(a_second_60_is_taken_at_any_offset);
    CASE(differences_agree_with_libc_and_the_list);
    CASE(decimals_beyond_the_ninth_round_half_to_even);
    CASE(text_cuts_and_keeps_the_offset);
    CASE(plus_undoes_difference);
    CASE(a_difference_that_does_not_fit_is_no_difference);
    CASE(order_does_not_mind_the_offset);
    CASE(a_time_of_day_is_the_latest_not_after_the_limit);
#undef CASE
    return g_test_run();
}
