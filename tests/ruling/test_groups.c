/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Which riders share a time (UCI 1.2.107, 2.3.040; sprint-zone protocol of 06.01.2025). */
#include "core/base/csv.h"
#include "core/base/number.h"
#include "core/ruling/groups.h"

#include <glib.h>
#include <math.h>
#include <string.h>

#define S INT64_C(1000000000)
#define MS INT64_C(1000000)

static const HwGroupRule one_second = { S, 0, HW_BICYCLE_LENGTH_M };
static const HwGroupRule three_seconds = { 3 * S, S, HW_BICYCLE_LENGTH_M };

/* A rider at 18.5 m/s: the bicycle takes at most 100 ms to pass. */
static HwGroupRider
rider(int64_t front_ms)
{
    return (HwGroupRider){ .front_ns = front_ms * MS, .u_ns = 0.15e6, .speed_mps = 18.5 };
}

static HwGroupRider
with_rear(HwGroupRider rider, int64_t rear_ms)
{
    rider.has_rear = true;
    rider.rear_ns = rear_ms * MS;
    return rider;
}

static HwGroupState
last_state(const HwGroupRider *riders, int n, const HwGroupRule *rule, int *need)
{
    HwGroupState states[8];
    int needs[8];
    g_assert_cmpint(n, <=, 8);
    hw_groups_find(riders, n, rule, states, needs);
    g_assert_cmpint(states[0], ==, HW_GROUP_NEW);
    if (need != NULL)
        *need = needs[n - 1];
    return states[n - 1];
}

static void
regulations_cases_are_met(void)
{
    g_autofree char *path =
        g_test_build_filename(G_TEST_DIST, "ruling", "data", "uci_same_time_cases.csv", NULL);
    g_autofree char *text = NULL;
    g_assert_true(g_file_get_contents(path, &text, NULL, NULL));
    const char *body = strstr(text, "mode,");
    g_autoptr(HwCsvTable) table = hw_csv_table_parse(body, strlen(body), path, NULL);
    g_assert_cmpuint(table->rows->len, ==, 12);
    for (guint i = 0; i < table->rows->len; i++) {
        GStrv fields = ((HwCsvRow *)g_ptr_array_index(table->rows, i))->fields;
        int64_t gap_ns;
        g_assert_true(hw_number_parse_decimal(fields[1], 9, &gap_ns));
        bool expects_new = strcmp(fields[2], "new") == 0;
        /* Ahead of the pair a break rider where the case speaks of one; rear wheel to front wheel is the gap.
         */
        HwGroupRider riders[3] = { with_rear(rider(0), 100), with_rear(rider(20000), 20100), rider(0) };
        const HwGroupRule *rule = strcmp(fields[0], "standard") == 0 ? &one_second : &three_seconds;
        if (strstr(fields[0], "breakaway_wins") != NULL)
            riders[0].in_breakaway = true;
        bool in_break =
            strstr(fields[0], "break_to_next_group") != NULL || strstr(fields[0], "within_break") != NULL;
        riders[1].in_breakaway = in_break;
        riders[2].in_breakaway = strstr(fields[0], "within_break") != NULL;
        riders[2].front_ns = riders[1].rear_ns + gap_ns;
        g_assert_cmpint(last_state(riders, 3, rule, NULL), ==, expects_new ? HW_GROUP_NEW : HW_GROUP_SAME);
    }
}

static void
front_to_front_is_no_gap_between_groups(void)
{
    /* Fronts 1.05 s apart, the first bicycle takes 0.1 s to pass: only 0.95 s lie between, or 1 s and more if
     * it is short. */
    int need;
    HwGroupRider open[] = { rider(0), rider(1050) };
    g_assert_cmpint(last_state(open, 2, &one_second, &need), ==, HW_GROUP_REAR_NEEDED);
    g_assert_cmpint(need, ==, 0);
    HwGroupRider closed[] = { with_rear(rider(0), 95), rider(1050) };
    g_assert_cmpint(last_state(closed, 2, &one_second, NULL), ==, HW_GROUP_SAME);
    HwGroupRider parted[] = { with_rear(rider(0), 50), rider(1050) };
    g_assert_cmpint(last_state(parted, 2, &one_second, NULL), ==, HW_GROUP_NEW);
}

static void
what_front_to_front_can_decide_needs_no_rear_wheel(void)
{
    HwGroupRider near[] = { rider(0), rider(999) };
    g_assert_cmpint(last_state(near, 2, &one_second, NULL), ==, HW_GROUP_SAME);
    HwGroupRider far[] = { rider(0), rider(1101) };
    g_assert_cmpint(last_state(far, 2, &one_second, NULL), ==, HW_GROUP_NEW);
}

static void
within_its_uncertainty_of_the_limit_the_rear_wheel_is_needed(void)
{
    HwGroupRider riders[] = { rider(0), rider(0) };
    riders[1].front_ns = S - 100000; /* 0.1 ms short of it, U is 0.42 ms */
    g_assert_cmpint(last_state(riders, 2, &one_second, NULL), ==, HW_GROUP_REAR_NEEDED);
}

static void
the_latest_rear_wheel_of_all_counts(void)
{
    /* The second crosses 200 ms after the first, but the first, on foot, clears the line only at 900 ms. */
    HwGroupRider riders[] = { with_rear(rider(0), 900), with_rear(rider(200), 300), rider(1500) };
    g_assert_cmpint(last_state(riders, 3, &one_second, NULL), ==, HW_GROUP_SAME);
    riders[0].rear_ns = 100 * MS;
    g_assert_cmpint(last_state(riders, 3, &one_second, NULL), ==, HW_GROUP_NEW);
}

static void
a_rider_without_measured_speed_may_be_on_foot(void)
{
    int need;
    HwGroupRider riders[] = { rider(0), rider(2000) };
    riders[0].speed_mps = NAN;
    g_assert_cmpint(last_state(riders, 2, &one_second, &need), ==, HW_GROUP_REAR_NEEDED);
    g_assert_cmpint(need, ==, 0);
    riders[1].front_ns = 4800 * MS; /* 1 s and 1.85 m at 0.5 m/s */
    g_assert_cmpint(last_state(riders, 2, &one_second, NULL), ==, HW_GROUP_NEW);
}

static void
an_undecided_rider_leaves_both_groups_possible(void)
{
    HwGroupRider riders[] = { rider(0), rider(1050), rider(1100), rider(3000) };
    HwGroupState states[4];
    int needs[4];
    hw_groups_find(riders, 4, &one_second, states, needs);
    g_assert_cmpint(states[1], ==, HW_GROUP_REAR_NEEDED);
    g_assert_cmpint(states[2], ==, HW_GROUP_SAME);
    g_assert_cmpint(states[3], ==, HW_GROUP_NEW);
}

static void
no_breakaway_rule_behind_a_breakaway_that_did_not_lead(void)
{
    HwGroupRider riders[] = { with_rear(rider(0), 100), with_rear(rider(300), 400), rider(1900) };
    riders[1].in_breakaway = true; /* but the winner is not of it */
    g_assert_cmpint(last_state(riders, 3, &three_seconds, NULL), ==, HW_GROUP_SAME);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
    g_test_add_func("/groups/regulations_cases_are_met", regulations_cases_are_met);
    g_test_add_func("/groups/front_to_front_is_no_gap_between_groups",
                    front_to_front_is_no_gap_between_groups);
    g_test_add_func("/groups/what_front_to_front_can_decide_needs_no_rear_wheel",
                    what_front_to_front_can_decide_needs_no_rear_wheel);
    g_test_add_func("/groups/within_its_uncertainty_of_the_limit_the_rear_wheel_is_needed",
                    within_its_uncertainty_of_the_limit_the_rear_wheel_is_needed);
    g_test_add_func("/groups/the_latest_rear_wheel_of_all_counts", the_latest_rear_wheel_of_all_counts);
    g_test_add_func("/groups/a_rider_without_measured_speed_may_be_on_foot",
                    a_rider_without_measured_speed_may_be_on_foot);
    g_test_add_func("/groups/an_undecided_rider_leaves_both_groups_possible",
                    an_undecided_rider_leaves_both_groups_possible);
    g_test_add_func("/groups/no_breakaway_rule_behind_a_breakaway_that_did_not_lead",
                    no_breakaway_rule_behind_a_breakaway_that_did_not_lead);
    return g_test_run();
}
