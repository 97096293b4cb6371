/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Numbers and durations as text: the whole text or nothing, and back without loss; products through 128 bits,
 * checked against long multiplication and division bit by bit. */
#include "core/base/duration.h"
#include "core/base/limits.h"
#include "core/base/number.h"
#include "core/base/wide.h"

#include <glib.h>
#include <math.h>
#include <string.h>

static void
whole_numbers_are_digits_with_a_sign(void)
{
    static const struct {
        const char *text;
        bool good;
        int64_t value;
    } cases[] = {
        { "0", true, 0 },
        { "-0", true, 0 },
        { "+7", true, 7 },
        { "007", true, 7 },
        { "-12", true, -12 },
        { "9223372036854775807", true, INT64_MAX },
        { "-9223372036854775808", true, INT64_MIN },
        { "9223372036854775808", false, 0 },
        { "-9223372036854775809", false, 0 },
        { "", false, 0 },
        { "-", false, 0 },
        { "+-5", false, 0 },
        { "--5", false, 0 },
        { " 5", false, 0 },
        { "5 ", false, 0 },
        { "5.0", false, 0 },
        { "5e3", false, 0 },
        { "0x10", false, 0 },
        { "12a", false, 0 },
        { "٣", false, 0 },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        int64_t value = 99;
        g_assert_cmpint(hw_number_parse_int64(cases[i].text, INT64_MIN, INT64_MAX, &value), ==,
                        cases[i].good);
        g_assert_cmpint(value, ==, cases[i].good ? cases[i].value : 99);
    }
    int64_t value = 99;
    g_assert_false(hw_number_parse_int64("11", 0, 10, &value));
    g_assert_false(hw_number_parse_int64("-1", 0, 10, &value));
    g_assert_cmpint(value, ==, 99);
    g_assert_true(hw_number_parse_int64("10", 0, 10, &value));
}

static void
decimal_numbers_are_never_inf_nan_or_hex(void)
{
    static const struct {
        const char *text;
        double value; /* NAN: refused */
    } cases[] = {
        { "0", 0 },       { "1.5", 1.5 },   { "-1.5e3", -1500 }, { "+.5", 0.5 },      { "5.", 5 },
        { "1E-2", 0.01 }, { "", NAN },      { ".", NAN },        { "-", NAN },        { "1e", NAN },
        { "1e+", NAN },   { "inf", NAN },   { "-inf", NAN },     { "nan", NAN },      { "NaN(1)", NAN },
        { "0x1p3", NAN }, { "1e999", NAN }, { "-1e999", NAN },   { "1,5", NAN },      { " 1", NAN },
        { "1 ", NAN },    { "1.5.2", NAN }, { "1_000", NAN },    { "infinity", NAN },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        double value = 99;
        bool good = !isnan(cases[i].value);
        g_assert_cmpint(hw_number_parse_double(cases[i].text, &value), ==, good);
        g_assert_cmpfloat(value, ==, good ? cases[i].value : 99);
    }
}

static void
a_single_comma_may_stand_for_the_point(void)
{
    double value = 99;
    g_assert_true(hw_number_parse_double_local("0,668", &value));
    g_assert_cmpfloat(value, ==, 0.668);
    g_assert_true(hw_number_parse_double_local("0.668", &value));
    value = 99;
    g_assert_false(hw_number_parse_double_local("1,000,000", &value));
    g_assert_false(hw_number_parse_double_local("1,234.5", &value));
    g_assert_false(hw_number_parse_double_local(",", &value));
    g_assert_cmpfloat(value, ==, 99);
}

static void
decimals_scale_exactly_or_not_at_all(void)
{
    static const struct {
        const char *text;
        int decimals;
        int64_t scaled; /* −1: refused */
    } cases[] = {
        { "2000", 9, 2000000000000 },
        { "0.1", 9, 100000000 },
        { "0.123456789", 9, 123456789 },
        { "0.1234567891", 9, -1 },
        { "1.5000000000", 9, 1500000000 },
        { ".5", 1, 5 },
        { "5.", 1, -1 },
        { "", 9, -1 },
        { ".", 9, -1 },
        { "-1", 9, -1 },
        { "+1", 9, -1 },
        { "1e3", 9, -1 },
        { "1.2.3", 9, -1 },
        { "9223372036.854775807", 9, INT64_MAX },
        { "9223372036.854775808", 9, -1 },
        { "9223372037", 9, -1 },
        { "7", 0, 7 },
        { "7.0", 0, 7 },
        { "7.1", 0, -1 },
        { "0.000000000000000001", 18, 1 },
        { "1 ", 9, -1 },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        int64_t scaled = 99;
        bool good = cases[i].scaled >= 0;
        if (hw_number_parse_decimal(cases[i].text, cases[i].decimals, &scaled) != good)
            g_error("“%s” with %d decimals", cases[i].text, cases[i].decimals);
        g_assert_cmpint(scaled, ==, good ? cases[i].scaled : 99);
    }
}

/* Every decimal of nine places comes back from its double; its neighbours do not pass for one. */
static void
nine_decimals_come_back_from_a_double(void)
{
    g_autoptr(GRand) random = g_rand_new_with_seed(9);
    for (int i = 0; i < 300000; i++) {
        int64_t limit = i % 3 == 0 ? 4000000 : i % 3 == 1 ? 1000 : 3999999;
        int64_t whole = limit > 3000000 ? limit - g_rand_int_range(random, 1, 1000)
                                        : g_rand_int_range(random, 0, (gint32)limit);
        int64_t part = g_rand_int_range(random, 0, 1000000000);
        g_autofree char *text =
            g_strdup_printf("%s%" G_GINT64_FORMAT ".%09" G_GINT64_FORMAT, i % 2 == 0 ? "" : "-", whole, part);
        int64_t expected = (whole * 1000000000 + part) * (i % 2 == 0 ? 1 : -1);
        int64_t scaled = 0;
        g_assert_true(hw_number_nine_decimals(g_ascii_strtod(text, NULL), &scaled));
        g_assert_cmpint(scaled, ==, expected);
    }
    int64_t scaled = 99;
    g_assert_false(hw_number_nine_decimals(0.1 + 0.2, &scaled));
    g_assert_false(hw_number_nine_decimals(1.0000000001, &scaled));
    g_assert_false(hw_number_nine_decimals(1.0 / 3, &scaled));
    g_assert_false(hw_number_nine_decimals(5e6, &scaled));
    g_assert_false(hw_number_nine_decimals(NAN, &scaled));
    g_assert_false(hw_number_nine_decimals(INFINITY, &scaled));
    g_assert_cmpint(scaled, ==, 99);
}

static void
a_written_double_reads_back_as_itself(void)
{
    g_autoptr(GRand) random = g_rand_new_with_seed(17);
    for (int i = 0; i < 100000; i++) {
        uint64_t bits = ((uint64_t)g_rand_int(random) << 32) | g_rand_int(random);
        double value, back;
        memcpy(&value, &bits, sizeof value);
        if (!isfinite(value))
            continue;
        g_autofree char *text = hw_number_dup_double(value);
        g_assert_true(hw_number_parse_double(text, &back));
        g_assert_cmpint(memcmp(&back, &value, sizeof value), ==, 0);
    }
    g_autofree char *tenth = hw_number_dup_double(0.1), *column = hw_number_dup_double(1234567.25);
    g_assert_cmpstr(tenth, ==, "0.1");
    g_assert_cmpstr(column, ==, "1234567.25");
    g_autofree char *fixed = hw_number_dup_fixed(9.5804, 3), *large = hw_number_dup_fixed(-1e300, 9);
    g_assert_cmpstr(fixed, ==, "9.580");
    g_assert_cmpuint(strlen(large), ==, 1 + 301 + 1 + 9);
}

/* |a| · |b| / d by long multiplication in 32-bit digits and division a bit at a time; true where the rounded
 * quotient fits. */
static bool
muldiv_by_hand(int64_t a, int64_t b, int64_t d, int64_t *result)
{
    bool negative = (a < 0) != (b < 0);
    uint64_t x = a < 0 ? 0 - (uint64_t)a : (uint64_t)a, y = b < 0 ? 0 - (uint64_t)b : (uint64_t)b;
    uint64_t parts[4] = { (x & 0xffffffff) * (y & 0xffffffff), (x >> 32) * (y & 0xffffffff),
                          (x & 0xffffffff) * (y >> 32), (x >> 32) * (y >> 32) };
    uint64_t middle = (parts[0] >> 32) + (parts[1] & 0xffffffff) + (parts[2] & 0xffffffff);
    uint64_t low = (parts[0] & 0xffffffff) | (middle << 32);
    uint64_t high = parts[3] + (parts[1] >> 32) + (parts[2] >> 32) + (middle >> 32);
    uint64_t rest = 0, quotient = 0;
    bool over = false;
    for (int bit = 127; bit >= 0; bit--) {
        uint64_t next = bit >= 64 ? high >> (bit - 64) & 1 : low >> bit & 1;
        rest = rest << 1 | next;
        over |= quotient >> 63 != 0;
        quotient <<= 1;
        if (rest >= (uint64_t)d) {
            rest -= (uint64_t)d;
            quotient |= 1;
        }
    }
    uint64_t other = (uint64_t)d - rest;
    if (rest > other || (rest == other && quotient % 2 == 1)) {
        over |= quotient == UINT64_MAX;
        quotient++;
    }
    uint64_t limit = (uint64_t)INT64_MAX + (negative ? 1 : 0);
    if (over || quotient > limit)
        return false;
    *result = negative ? (int64_t)(0 - quotient) : (int64_t)quotient;
    return true;
}

static void
assert_same_product(int64_t a, int64_t b, int64_t d)
{
    int64_t by_hand = 99, ours = 99;
    bool fits = muldiv_by_hand(a, b, d, &by_hand);
    if (hw_muldiv_half_even(a, b, d, &ours) != fits || ours != by_hand)
        g_error("%" G_GINT64_FORMAT " × %" G_GINT64_FORMAT " / %" G_GINT64_FORMAT, a, b, d);
}

static void
products_round_half_to_even_through_128_bits(void)
{
    for (int a = -40; a <= 40; a++)
        for (int b = -12; b <= 12; b++)
            for (int d = 1; d <= 24; d++)
                assert_same_product(a, b, d);
    static const int64_t edges[] = { INT64_MIN, INT64_MIN + 1, -1, 0, 1, 2, 3, INT64_MAX - 1, INT64_MAX };
    for (guint i = 0; i < G_N_ELEMENTS(edges); i++)
        for (guint k = 0; k < G_N_ELEMENTS(edges); k++)
            for (guint m = 4; m < G_N_ELEMENTS(edges); m++)
                assert_same_product(edges[i], edges[k], edges[m]);
    g_autoptr(GRand) random = g_rand_new_with_seed(128);
    for (int i = 0; i < 300000; i++) {
        int64_t values[3];
        for (int k = 0; k < 3; k++) {
            uint64_t bits = ((uint64_t)g_rand_int(random) << 32) | g_rand_int(random);
            values[k] = (int64_t)bits >> g_rand_int_range(random, 0, 63);
        }
        assert_same_product(values[0], values[1], values[2] > 0 ? values[2] : 1 - (values[2] / 2));
    }
    int64_t result = 0;
    g_assert_true(hw_muldiv_half_even(1, 1, 2, &result) && result == 0);
    g_assert_true(hw_muldiv_half_even(3, 1, 2, &result) && result == 2);
    g_assert_true(hw_muldiv_half_even(-5, 1, 2, &result) && result == -2);
    g_assert_cmpint(hw_muldiv_known(2047, 1000000000, 2000), ==, 1023500000);
}

static void
durations_are_read_whole(void)
{
    static const struct {
        const char *text;
        int64_t ns; /* −1: refused */
    } cases[] = {
        { "0", 0 },
        { "9.58", 9580000000 },
        { "75", 75000000000 },
        { "1:02", 62000000000 },
        { "12:04.31", 724310000000 },
        { "1:02:03.456", 3723456000000 },
        { "100:00:00", 360000000000000 },
        { "0:00.000000001", 1 },
        { "0:60", -1 },
        { "1:60:00", -1 },
        { "1:2:60", -1 },
        { "1:-2", -1 },
        { "-1", -1 },
        { "+1", -1 },
        { "1:", -1 },
        { ":1", -1 },
        { "", -1 },
        { "1:2:3:4", -1 },
        { "1,5", -1 },
        { "1.0000000001", -1 },
        { "1e3", -1 },
        { " 1", -1 },
        { "1:.5", -1 },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        int64_t ns = 99;
        if (hw_duration_parse(cases[i].text, &ns) != (cases[i].ns >= 0))
            g_error("“%s”", cases[i].text);
        g_assert_cmpint(ns, ==, cases[i].ns >= 0 ? cases[i].ns : 99);
    }
}

static void
times_of_day_end_before_24_h(void)
{
    int64_t ns = 99;
    static const char *const refused[] = { "",      "12",    "24:00",  "24:00:00", "23:59:60",
                                           "12:60", "-1:00", "12:30:", "1:2:3:4",  "12:30 pm" };
    for (guint i = 0; i < G_N_ELEMENTS(refused); i++)
        g_assert_false(hw_duration_parse_time_of_day(refused[i], &ns));
    g_assert_cmpint(ns, ==, 99);
    g_assert_true(hw_duration_parse_time_of_day("23:59:59.999999999", &ns));
    g_assert_cmpint(ns, ==, HW_NS_PER_DAY - 1);
    g_assert_true(hw_duration_parse_time_of_day("00:00", &ns));
    g_assert_cmpint(ns, ==, 0);
    g_assert_true(hw_duration_parse_time_of_day("14:50", &ns));
    g_assert_cmpint(ns, ==, 53400 * HW_NS_PER_S);
}

static void
durations_are_written_cut_never_rounded(void)
{
    static const struct {
        int64_t ns;
        int decimals;
        const char *text;
        const char *gap;
    } cases[] = {
        { 0, 0, "0:00", "+0" },
        { 999999999, 0, "0:00", "+0" },
        { 999999999, 3, "0:00.999", "+0.999" },
        { 59999999999, 2, "0:59.99", "+59.99" },
        { 60000000000, 1, "1:00.0", "+1:00.0" },
        { 3599999999999, 9, "59:59.999999999", "+59:59.999999999" },
        { 3600000000000, 0, "1:00:00", "+1:00:00" },
        { 4331007000000, 3, "1:12:11.007", "+1:12:11.007" },
        { -4000000, 3, "-0:00.004", "-0.004" },
        { INT64_MIN, 9, "-2562047:47:16.854775808", "-2562047:47:16.854775808" },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        g_autofree char *text = hw_duration_dup_text(cases[i].ns, cases[i].decimals);
        g_autofree char *gap = hw_duration_dup_gap(cases[i].ns, cases[i].decimals);
        g_assert_cmpstr(text, ==, cases[i].text);
        g_assert_cmpstr(gap, ==, cases[i].gap);
    }
}

static void
decimals_follow_the_precision(void)
{
    static const struct {
        int64_t precision_ns;
        int decimals;
    } cases[] = { { 1, 9 },         { 1000, 6 },       { 1000000, 3 },    { 10000000, 2 },
                  { 100000000, 1 }, { 1000000000, 0 }, { 60000000000, 0 } };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++)
        g_assert_cmpint(hw_duration_decimals(cases[i].precision_ns), ==, cases[i].decimals);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
#define CASE(rule) g_test_add_func("/base/number/" #rule, rule)
    CASE(whole_numbers_are_digits_with_a_sign);
    CASE(decimal_numbers_are_never_inf_nan_or_hex);
    CASE(a_single_comma_may_stand_for_the_point);
    CASE(decimals_scale_exactly_or_not_at_all);
    CASE(nine_decimals_come_back_from_a_double);
    CASE(a_written_double_reads_back_as_itself);
    CASE(products_round_half_to_even_through_128_bits);
    CASE(durations_are_read_whole);
    CASE(times_of_day_end_before_24_h);
    CASE(durations_are_written_cut_never_rounded);
    CASE(decimals_follow_the_precision);
#undef CASE
    return g_test_run();
}
