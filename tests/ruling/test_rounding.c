/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Elapsed times are rounded by the named mode; the cases are those of the federations' rules
 * (data/rounding_cases.csv). */
#include "core/base/csv.h"
#include "core/base/duration.h"
#include "core/base/limits.h"
#include "core/ruling/rounding.h"

#include <glib.h>
#include <string.h>

/* "up to next 0.01 s unless exact" → mode and precision. */
static void
parse_operation(const char *operation, HwRounding *rounding, int64_t *precision_ns)
{
    if (g_str_has_prefix(operation, "down") || g_str_has_prefix(operation, "truncate"))
        *rounding = HW_ROUND_DOWN;
    else if (g_str_has_prefix(operation, "half up"))
        *rounding = HW_ROUND_HALF_UP;
    else if (g_str_has_prefix(operation, "up"))
        *rounding = HW_ROUND_UP;
    else
        g_error("unknown operation %s", operation);
    if (strstr(operation, "0.01 s") != NULL)
        *precision_ns = HW_NS_PER_S / 100;
    else if (strstr(operation, "0.1 s") != NULL)
        *precision_ns = HW_NS_PER_S / 10;
    else if (strstr(operation, "1 s") != NULL || strstr(operation, "whole second") != NULL)
        *precision_ns = HW_NS_PER_S;
    else
        g_error("unknown precision in %s", operation);
}

static void
federations_rules_are_met(void)
{
    g_autofree char *path = g_test_build_filename(G_TEST_DIST, "ruling", "data", "rounding_cases.csv", NULL);
    g_autofree char *text = NULL;
    g_assert_true(g_file_get_contents(path, &text, NULL, NULL));
    const char *table_text = strchr(text, '\n') + 1; /* the first line names the source */
    g_autoptr(HwCsvTable) table = hw_csv_table_parse(table_text, strlen(table_text), path, NULL);
    g_assert_nonnull(table);
    g_assert_cmpuint(table->rows->len, ==, 14);
    for (guint i = 0; i < table->rows->len; i++) {
        GStrv fields = ((HwCsvRow *)g_ptr_array_index(table->rows, i))->fields;
        HwRounding rounding;
        int64_t precision_ns, input_ns, expected_ns;
        parse_operation(fields[1], &rounding, &precision_ns);
        g_assert_true(hw_duration_parse(fields[2], &input_ns));
        g_assert_true(hw_duration_parse(fields[3], &expected_ns));
        g_assert_cmpint(hw_round_elapsed(input_ns, precision_ns, rounding), ==, expected_ns);
    }
}

static void
every_mode_at_and_beside_a_half(void)
{
    /* Worked out by hand, precision 10. */
    static const struct {
        int64_t input, down, up, half_up, half_even;
    } cases[] = {
        { 0, 0, 0, 0, 0 },      { 4, 0, 10, 0, 0 },          { 5, 0, 10, 10, 0 },    { 6, 0, 10, 10, 10 },
        { 10, 10, 10, 10, 10 }, { 15, 10, 20, 20, 20 },      { 25, 20, 30, 30, 20 }, { -1, -10, 0, 0, 0 },
        { -5, -10, 0, 0, 0 },   { -15, -20, -10, -10, -20 },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        g_assert_cmpint(hw_round_elapsed(cases[i].input, 10, HW_ROUND_DOWN), ==, cases[i].down);
        g_assert_cmpint(hw_round_elapsed(cases[i].input, 10, HW_ROUND_UP), ==, cases[i].up);
        g_assert_cmpint(hw_round_elapsed(cases[i].input, 10, HW_ROUND_HALF_UP), ==, cases[i].half_up);
        g_assert_cmpint(hw_round_elapsed(cases[i].input, 10, HW_ROUND_HALF_EVEN), ==, cases[i].half_even);
    }
}

static void
rounded_times_never_change_order(void)
{
    g_autoptr(GRand) random = g_rand_new_with_seed(2041);
    for (int i = 0; i < 20000; i++) {
        int64_t a = (int64_t)g_rand_double_range(random, 0, 1e13);
        int64_t b = a + g_rand_int_range(random, 0, 2000000000);
        int64_t precision =
            (int64_t[]){ 1, 1000000, 10000000, 100000000, 1000000000 }[g_rand_int_range(random, 0, 5)];
        HwRounding rounding = (HwRounding)g_rand_int_range(random, 0, 4);
        int64_t rounded = hw_round_elapsed(a, precision, rounding);
        g_assert_cmpint(rounded, <=, hw_round_elapsed(b, precision, rounding));
        g_assert_cmpint(rounded % precision, ==, 0);
        g_assert_cmpint(ABS(rounded - a), <, precision);
    }
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
    g_test_add_func("/rounding/federations_rules_are_met", federations_rules_are_met);
    g_test_add_func("/rounding/every_mode_at_and_beside_a_half", every_mode_at_and_beside_a_half);
    g_test_add_func("/rounding/rounded_times_never_change_order", rounded_times_never_change_order);
    return g_test_run();
}
