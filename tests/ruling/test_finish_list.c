/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The finish list: what stands in it. Column c of the fixture is c ms after 16:00:00, so expected times are
 * done by hand. */
#include "core/base/json.h"
#include "tests/ruling/fixture.h"

#include <math.h>
#include <string.h>

#define GUN "2027-06-13T15:59:00+02:00" /* a minute before the epoch */

static const char three[] = "bib,name,team\n1,Ann,X\n2,Bea,X\n3,Cleo,Y\n";

static void
order_is_that_across_the_line(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "3,500\n1,100.5\n2,100.4", .start_list = three, .gun = GUN };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    g_autofree char *places = fixture_dup_places(list);
    g_assert_cmpstr(places, ==, "1:2 2:1 3:3");
    g_assert_cmpint(fixture_row(list, "2", NULL)->time_ns, ==, INT64_C(60100400000));
    g_assert_cmpint(fixture_row(list, "1", NULL)->gap_ns, ==, 100000);
    g_assert_cmpint(fixture_row(list, "3", NULL)->prev.gap_ns, ==, 399500000);
    g_assert_true(fixture_says(list, "No rule set", "not rounded", NULL));
}

static void
official_times_are_rounded_down_to_the_second(void)
{
    /* UCI 2.3.041. 61.999 s and 62.000 s after the gun, more than a second of road between their groups or
     * not. */
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "1,1999,18\n2,2000,18\n3,3500,18",
                   .header = "bib,column,speed_mps",
                   .start_list = three,
                   .rules = "road-1s",
                   .gun = GUN };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    const HwFinishRow *winner = fixture_row(list, "1", NULL);
    const HwFinishRow *third = fixture_row(list, "3", NULL);
    g_assert_cmpint(winner->official_ns, ==, INT64_C(61000000000));
    g_assert_cmpint(fixture_row(list, "2", NULL)->official_ns, ==, INT64_C(61000000000)); /* same group */
    g_assert_true(fixture_row(list, "2", NULL)->same_time);
    g_assert_cmpint(third->official_ns, ==, INT64_C(63000000000));
    g_assert_cmpint(third->group, ==, 2);
    g_assert_cmpint(third->official_gap_ns, ==, INT64_C(2000000000));
    g_autofree char *text = hw_finish_list_dup_text(list);
    g_assert_nonnull(strstr(text, "1:03"));
    g_assert_nonnull(strstr(text, "s.t."));
}

static void
time_trial_ranks_by_official_time_from_own_starts(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    /* Crossing 16:00:01.005 and :03.129; starts a minute apart: 61.005 and 63.129 … 62.129 s. */
    Case given = { .markers = "1,1005\n2,3129\n3,7001",
                   .start_list = "bib,start\n1,15:59:00\n2,15:59:01.5\n3,15:59:06.0\n",
                   .rules = "itt-100th" };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    g_autofree char *places = fixture_dup_places(list);
    g_assert_cmpstr(places, ==, "1:1 1:3 3:2"); /* 61.005 → 61.00, 61.001 → 61.00, 61.629 → 61.62 */
    g_assert_true(fixture_row(list, "3", NULL)->tied);
    g_assert_cmpint(fixture_row(list, "2", NULL)->official_ns, ==, INT64_C(61620000000));
    g_assert_cmpint(fixture_row(list, "2", NULL)->official_gap_ns, ==, INT64_C(620000000));
    g_assert_true(isnan(fixture_row(list, "2", NULL)->prev.distance_m));
    g_assert_true(fixture_says(list, "1 and 3", "level", NULL));
}

static void
categories_have_lists_of_their_own(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "1,A,100\n1,B,101\n2,A,102\n5,,103",
                   .header = "bib,category,column",
                   .start_list = "bib,category\n1,A\n2,A\n1,B\n5,B\n",
                   .race = "\"starts\":[{\"category\":\"A\",\"instant\":\"2027-06-13T15:59:00+02:00\"},"
                           "{\"category\":\"B\",\"instant\":\"2027-06-13T15:59:30+02:00\"}]" };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    g_autofree char *places = fixture_dup_places(list);
    g_assert_cmpstr(places, ==, "1:1 2:2 1:1 2:5");
    g_assert_cmpint(fixture_row(list, "1", "A")->time_ns, ==, INT64_C(60100000000));
    g_assert_cmpint(fixture_row(list, "1", "B")->time_ns, ==, INT64_C(30101000000));
    g_assert_cmpint(fixture_row(list, "5", NULL)->prev.gap_ns, ==, 2000000);
}

static void
rider_check_reconciles_by_team_too(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = {
        .markers = "1,100\n2,200\n3,300\n?1,400\n99,500\n7,600",
        .start_list =
            "bib,team,status\n1,X,\n2,X,\n3,Y,DSQ\n4,Y,DNS\n5,Y,DNF\n6,X,\n7,Y,LAP 1\n8,Y,OTL\n9,X,ABD\n",
        .gun = GUN
    };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    const HwRiderCheck *check = &list->check;
    g_assert_cmpint(check->entered, ==, 9);
    g_assert_cmpint(check->dns, ==, 1);
    g_assert_cmpint(check->starters, ==, 8);
    g_assert_cmpint(check->ranked, ==, 2);
    g_assert_cmpint(check->lap, ==, 1);
    g_assert_cmpint(check->otl, ==, 1);
    g_assert_cmpint(check->dnf, ==, 1);
    g_assert_cmpint(check->abd, ==, 1);
    g_assert_cmpint(check->dsq, ==, 1);
    g_assert_cmpint(check->missing, ==, 1); /* bib 6; the unnamed marker is not added to it */
    g_assert_cmpint(check->unnamed, ==, 1);
    g_assert_cmpint(check->not_in_list, ==, 1);
    g_assert_cmpint(check->starters, ==,
                    check->ranked + check->lap + check->otl + check->dnf + check->abd + check->dsq +
                        check->missing);
    g_autoptr(HwStartList) starters =
        hw_start_list_parse(given.start_list, strlen(given.start_list), "startlist.csv", NULL, NULL);
    HwRiderCheck team = hw_rider_check_make(list, starters, "X");
    g_assert_cmpint(team.entered, ==, 4);
    g_assert_cmpint(team.ranked, ==, 2);
    g_assert_cmpint(team.missing, ==, 1);
    g_assert_cmpint(team.abd, ==, 1);
    g_assert_cmpint(team.unnamed + team.not_in_list, ==, 0);
}

static void
lapped_riders_follow_by_laps_then_order(void)
{
    g_autoptr(Fixture) fixture = fixture_new(); /* from memory: practice */
    Case given = { .markers = "4,90\n1,100\n3,150\n2,200",
                   .start_list = "bib,status\n1,\n2,\n3,LAP 1\n4,LAP 2\n5,LAP 1\n",
                   .gun = GUN };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    g_autofree char *places = fixture_dup_places(list);
    g_assert_cmpstr(places, ==, "1:1 2:2 3:3 4:5 5:4");
    g_assert_false(fixture_row(list, "3", NULL)->has_prev);
    g_assert_false(fixture_row(list, "3", NULL)->has_official); /* a time over fewer laps is no time */
}

static void
teams_are_ranked_by_three_riders(void)
{
    /* UCI 2.3.044. Times in s after the gun, groups a second and more apart; X and Y level at 184 s and by
     * sum of places (1 + 4 + 6 = 2 + 3 + 6 would be a lie: places below), so places decide: X 1+4+5 = 10, Y
     * 2+3+6 = 11; Z has two. */
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = {
        .markers = "1,1000,18\n2,1010,18\n3,1020,18\n4,1030,18\n5,3500,18\n6,3510,18\n7,7000,18\n8,7010,18",
        .header = "bib,column,speed_mps",
        .start_list = "bib,team\n1,X\n2,Y\n3,Y\n4,X\n5,X\n6,Y\n7,Z\n8,Z\n",
        .rules = "road-1s",
        .gun = GUN
    };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    g_assert_cmpuint(list->teams->len, ==, 3);
    const HwTeamRow *first = g_ptr_array_index(list->teams, 0);
    const HwTeamRow *second = g_ptr_array_index(list->teams, 1);
    const HwTeamRow *third = g_ptr_array_index(list->teams, 2);
    g_assert_cmpstr(first->team, ==, "X");
    g_assert_cmpint(first->rank, ==, 1);
    g_assert_cmpint(first->time_ns, ==, INT64_C(185000000000)); /* 61 + 61 + 63 */
    g_assert_cmpint(second->time_ns, ==, first->time_ns);
    g_assert_cmpint(first->place_sum, ==, 10);
    g_assert_cmpint(second->place_sum, ==, 11);
    g_assert_cmpint(second->rank, ==, 2);
    g_assert_cmpint(third->rank, ==, 0);
}

static void
team_time_trial_counts_the_nth_rider(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = {
        .markers = "1,1000\n2,1010\n3,1020\n4,1250\n5,1900\n11,2000\n12,2010\n13,2020\n14,2030\n21,3000",
        .start_list = "bib,team,start\n1,X,15:59:00\n2,X,15:59:00\n3,X,15:59:00\n4,X,15:59:00\n5,X,15:59:00\n"
                      "11,Y,15:59:01\n12,Y,15:59:01\n13,Y,15:59:01\n14,Y,15:59:01\n21,Z,15:59:02\n",
        .rules = "ttt-10th"
    };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    const HwTeamRow *first = g_ptr_array_index(list->teams, 0);
    const HwTeamRow *second = g_ptr_array_index(list->teams, 1);
    const HwTeamRow *third = g_ptr_array_index(list->teams, 2);
    g_assert_cmpstr(first->team, ==, "Y");
    g_assert_cmpint(first->time_ns, ==, INT64_C(61000000000)); /* 2.030 − 1 + 60, down to a tenth */
    g_assert_cmpstr(second->team, ==, "X");
    g_assert_cmpint(second->time_ns, ==, INT64_C(61200000000)); /* fourth rider: 61.250 */
    g_assert_cmpint(second->gap_ns, ==, INT64_C(200000000));
    g_assert_cmpint(third->rank, ==, 0);
    g_assert_true(fixture_says(list, "Team Z", "1 of the 4", NULL));
}

static void
places_only_publishes_no_times(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = {
        .markers = "1,100\n2,200\n3,300", .start_list = three, .rules = "track-bunch", .gun = GUN
    };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    g_autofree char *places = fixture_dup_places(list);
    g_assert_cmpstr(places, ==, "1:1 2:2 3:3");
    g_assert_false(fixture_row(list, "1", NULL)->has_official);
    g_assert_cmpint(fixture_row(list, "2", NULL)->gap_ns, ==, 100000000);
}

static void
elimination_orders_by_the_rear_wheel(void)
{
    g_autoptr(Fixture) fixture = fixture_new(); /* from memory */
    Case given = { .markers = "1,100,front\n1,250,rear\n2,120,front\n2,220,rear\n3,130,front",
                   .header = "bib,column,edge",
                   .start_list = three,
                   .race = "\"passage\":{\"kind\":\"elimination\"}",
                   .rules = "track-elimination" };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    g_autofree char *places = fixture_dup_places(list);
    g_assert_cmpstr(places, ==, "1:2 2:1");
    g_assert_true(fixture_says(list, "Bib 3", "rear tyre", NULL));
    given.race = "\"passage\":{\"kind\":\"final_sprint\"}";
    g_autoptr(HwFinishList) sprint = fixture_list(fixture, &given);
    g_autofree char *sprint_places = fixture_dup_places(sprint);
    g_assert_cmpstr(sprint_places, ==, "1:1 2:2 3:3");
}

static void
gaps_carry_their_uncertainty(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "1,100,17,read,\n2,104,17,read,\n3,110,17,rough,\n4,900,17,rough,2000000",
                   .header = "bib,column,speed_mps,state,u_lead_ns",
                   .gun = GUN };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    const HwFinishRow *second = fixture_row(list, "2", NULL);
    /* Two readings by eye at 1 kHz: 1 ms/√6 (GUM 4.3.7). */
    g_assert_cmpfloat_with_epsilon(second->prev.u_gap_ns, 408248.29, 0.01);
    g_assert_cmpfloat_with_epsilon(second->prev.distance_m, 0.068, 1e-12);
    g_assert_true(isnan(fixture_row(list, "3", NULL)->prev.u_gap_ns)); /* rough, its zoom not said */
    g_assert_cmpint(fixture_row(list, "3", NULL)->prev.separated, ==, HW_SEPARATED_NOT_ESTABLISHED);
    g_assert_true(fixture_says(list, "2 markers are rough", NULL));
}

static void
json_always_has_all_keys(void)
{
    static const char *const keys[] = { "rank",          "bib",           "name",        "team",
                                        "category",      "status",        "time_ns",     "time",
                                        "gap_ns",        "gap",           "gap_prev_ns", "distance_prev_m",
                                        "u_gap_prev_ns", "p_order_wrong", "separated",   "group" };
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "1,100\n?1,200", .start_list = three };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    g_autofree char *text = hw_finish_list_dup_json(list);
    g_assert_true(g_str_has_prefix(text, "{\n  \"halfwheel\": \"rank/1\""));
    g_autoptr(json_t) root = hw_json_parse(text, strlen(text), "list", NULL);
    g_assert_nonnull(root);
    const json_t *rows = json_object_get(root, "list");
    g_assert_cmpuint(json_array_size(rows), ==, 4);
    for (size_t i = 0; i < json_array_size(rows); i++) {
        for (guint k = 0; k < G_N_ELEMENTS(keys); k++)
            g_assert_nonnull(json_object_get(json_array_get(rows, i), keys[k]));
    }
    const json_t *first = json_array_get(rows, 0);
    g_assert_cmpint(json_integer_value(json_object_get(first, "time_ns")), ==,
                    100000000); /* from the epoch */
    g_assert_true(json_is_null(json_object_get(first, "time")));
    g_assert_cmpstr(json_string_value(json_object_get(json_array_get(rows, 3), "status")), ==, "not_seen");
    g_assert_true(json_is_null(json_object_get(root, "rules")));
    g_assert_true(fixture_says(list, "No start is known", NULL));
}

static void
same_input_gives_the_same_bytes_whatever_the_rows_order(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case one = { .markers = "1,100\n2,100\n3,300", .start_list = three, .gun = GUN };
    Case other = { .markers = "3,300\n2,100\n1,100", .start_list = three, .gun = GUN };
    g_autoptr(HwFinishList) a = fixture_list(fixture, &one);
    g_autoptr(HwFinishList) b = fixture_list(fixture, &other);
    g_autofree char *json_a = hw_finish_list_dup_json(a);
    g_autofree char *json_b = hw_finish_list_dup_json(b);
    g_assert_cmpstr(json_a, ==, json_b);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
    g_test_add_func("/finish_list/order_is_that_across_the_line", order_is_that_across_the_line);
    g_test_add_func("/finish_list/official_times_are_rounded_down_to_the_second",
                    official_times_are_rounded_down_to_the_second);
    g_test_add_func("/finish_list/time_trial_ranks_by_official_time_from_own_starts",
                    time_trial_ranks_by_official_time_from_own_starts);
    g_test_add_func("/finish_list/categories_have_lists_of_their_own", categories_have_lists_of_their_own);
    g_test_add_func("/finish_list/rider_check_reconciles_by_team_too", rider_check_reconciles_by_team_too);
    g_test_add_func("/finish_list/lapped_riders_follow_by_laps_then_order",
                    lapped_riders_follow_by_laps_then_order);
    g_test_add_func("/finish_list/teams_are_ranked_by_three_riders", teams_are_ranked_by_three_riders);
    g_test_add_func("/finish_list/team_time_trial_counts_the_nth_rider",
                    team_time_trial_counts_the_nth_rider);
    g_test_add_func("/finish_list/places_only_publishes_no_times", places_only_publishes_no_times);
    g_test_add_func("/finish_list/elimination_orders_by_the_rear_wheel",
                    elimination_orders_by_the_rear_wheel);
    g_test_add_func("/finish_list/gaps_carry_their_uncertainty", gaps_carry_their_uncertainty);
    g_test_add_func("/finish_list/json_always_has_all_keys", json_always_has_all_keys);
    g_test_add_func("/finish_list/same_input_gives_the_same_bytes_whatever_the_rows_order",
                    same_input_gives_the_same_bytes_whatever_the_rows_order);
    return g_test_run();
}
