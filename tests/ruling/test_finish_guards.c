/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Ways to a silent wrong ruling, each with the guard that a list has against it. */
#include "core/ruling/ruling_error.h"
#include "tests/ruling/fixture.h"

#include <math.h>
#include <string.h>

#define GUN "2027-06-13T15:59:00+02:00"

static const char three[] = "bib,name,team\n1,Ann,X\n2,Bea,X\n3,Cleo,Y\n";

static void
a_void_is_in_the_gap_across_it(void)
{
    /* Column 7999 is 7.999 s, column 8001 stands behind a second without picture: 9.001 s. */
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "1,7998\n2,8002", .start_list = three, .gun = GUN };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    g_assert_cmpint(fixture_row(list, "2", NULL)->gap_ns, ==, INT64_C(1004000000));
}

static void
a_marker_beside_a_void_is_named(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "1,7000\n2,8000.2", .start_list = three, .gun = GUN };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    g_assert_true(fixture_says(list, "Bib 2", "beside", NULL));
    g_assert_false(fixture_says(list, "Bib 1", "beside", NULL));
}

static void
a_hidden_drop_is_named_and_in_the_uncertainty(void)
{
    /* Two columns missing somewhere in the second block: by eye 1/√12 ms, and 2/√12 ms for them, twice
     * (GUM 4.3.7, 5.1.2): √(2·(1 + 4)/12) ms. */
    g_autoptr(Fixture) fixture = fixture_new_with_drop(2);
    Case given = { .markers = "1,5000\n2,5004", .start_list = three, .gun = GUN };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    g_assert_true(fixture_says(list, "b1.png", "2 columns more", NULL));
    g_assert_cmpfloat_with_epsilon(fixture_row(list, "2", NULL)->prev.u_gap_ns, 912870.93, 0.01);
    g_autoptr(Fixture) whole = fixture_new_with_drop(0);
    g_autoptr(HwFinishList) sure = fixture_list(whole, &given);
    g_assert_false(fixture_says(sure, "columns more", NULL));
    g_assert_cmpfloat_with_epsilon(fixture_row(sure, "2", NULL)->prev.u_gap_ns, 408248.29, 0.01);
}

static void
level_crossings_share_a_place_whoever_was_entered_first(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "2,100\n1,100\n3,200", .start_list = three, .rules = "road-1s", .gun = GUN };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    g_autofree char *places = fixture_dup_places(list);
    g_assert_cmpstr(places, ==, "1:1 1:2 3:3");
    g_assert_true(fixture_says(list, "Bibs 1 and 2 are level", "commissaires", NULL));
    given.rules = "track-sprint";
    g_autoptr(HwFinishList) heat = fixture_list(fixture, &given);
    g_assert_true(fixture_says(heat, "level", "run again", NULL));
}

static void
differences_are_never_rounded_themselves(void)
{
    /* 61.0 s and 62.9 s: official gap is 62 − 61 = 1 s, not 1.9 rounded; measured gap keeps its ns. */
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "1,1000,18\n2,2900,18",
                   .header = "bib,column,speed_mps",
                   .start_list = three,
                   .rules = "road-1s",
                   .gun = GUN };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    const HwFinishRow *second = fixture_row(list, "2", NULL);
    g_assert_cmpint(second->official_gap_ns, ==, INT64_C(1000000000));
    g_assert_cmpint(second->gap_ns, ==, INT64_C(1900000000));
    /* 61.9 s and 63.1 s: 1.2 s apart, officially 2 s. */
    given.markers = "1,1900,18\n2,3100,18";
    g_autoptr(HwFinishList) other = fixture_list(fixture, &given);
    g_assert_cmpint(fixture_row(other, "2", NULL)->official_gap_ns, ==, INT64_C(2000000000));
    g_assert_cmpint(fixture_row(other, "2", NULL)->gap_ns, ==, INT64_C(1200000000));
}

static void
a_list_without_rule_set_says_so(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "1,100", .start_list = three, .gun = GUN };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    g_assert_true(fixture_says(list, "No rule set", NULL));
    given.rules = "road-1s";
    g_autoptr(HwFinishList) ruled = fixture_list(fixture, &given);
    g_autofree char *text = hw_finish_list_dup_text(ruled);
    g_assert_nonnull(strstr(text, "UCI 1.2.100"));
    g_assert_nonnull(strstr(text, "Part 1 of 01.02.2026"));
}

static void
not_seen_is_no_dnf(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "1,100", .start_list = "bib,status\n1,\n2,\n3,DNF\n", .gun = GUN };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    g_assert_cmpint(fixture_row(list, "2", NULL)->status, ==, HW_STATUS_NOT_SEEN);
    g_assert_cmpint(fixture_row(list, "3", NULL)->status, ==, HW_STATUS_DNF);
    g_assert_cmpint(list->check.missing, ==, 1);
    g_assert_cmpint(list->check.dnf, ==, 1);
}

static void
passages_are_never_mixed(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "1,100,lap 1\n2,110,lap 1\n2,5000,finish\n1,5010,finish",
                   .header = "bib,column,passage",
                   .start_list = three,
                   .gun = GUN };
    g_autoptr(GError) error = NULL;
    g_assert_null(fixture_try(fixture, &given, &error));
    g_assert_nonnull(strstr(error->message, "lap 1"));
    g_assert_nonnull(strstr(error->message, "finish"));
    given.passage = "finish";
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    g_autofree char *places = fixture_dup_places(list);
    g_assert_cmpstr(places, ==, "1:2 2:1");
    given.passage = NULL;
    given.race = "\"passage\":{\"name\":\"lap 1\",\"kind\":\"lap\"}";
    g_autoptr(HwFinishList) lap = fixture_list(fixture, &given);
    g_autofree char *lap_places = fixture_dup_places(lap);
    g_assert_cmpstr(lap_places, ==, "1:1 2:2");
}

static void
a_marker_without_passage_among_others_is_refused(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "1,100,finish\n2,110,", .header = "bib,column,passage", .start_list = three };
    g_autoptr(GError) error = NULL;
    g_assert_null(fixture_try(fixture, &given, &error));
    g_assert_nonnull(strstr(error->message, "line 3"));
}

static void
a_bib_twice_in_a_passage_is_refused(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "1,100\n2,110\n1,120", .start_list = three };
    g_autoptr(GError) error = NULL;
    g_assert_null(fixture_try(fixture, &given, &error));
    g_assert_error(error, HW_RULING_ERROR, HW_RULING_ERROR_MARKERS);
    g_assert_nonnull(strstr(error->message, "bib 1"));
    g_assert_nonnull(strstr(error->message, "lines 2 and 4"));
}

static void
a_finisher_a_lap_short_is_named(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "1,100,lap 1\n2,110,lap 1\n1,4100,lap 2\n1,8100,finish\n2,8110,finish",
                   .header = "bib,column,passage",
                   .start_list = three,
                   .gun = GUN,
                   .passage = "finish" };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    g_assert_true(fixture_says(list, "Bib 2", "1 of the 2", "lap short", NULL));
    g_assert_false(fixture_says(list, "Bib 1", "lap short", NULL));
}

static void
categories_are_never_mixed(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "1,100", .start_list = "bib,category\n1,A\n1,B\n" };
    g_autoptr(GError) error = NULL;
    g_assert_null(fixture_try(fixture, &given, &error));
    g_assert_nonnull(strstr(error->message, "category"));

    Case unknown = { .markers = "1,A,100\n?1,,150\n2,A,200",
                     .header = "bib,category,column",
                     .start_list = "bib,category\n1,A\n2,A\n1,B\n" };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &unknown);
    g_assert_cmpint(fixture_row(list, "?1", NULL)->rank, ==, 0);
    g_assert_cmpint(fixture_row(list, "2", NULL)->rank, ==, 2);
    g_assert_true(fixture_says(list, "?1", "not certain", NULL));
}

/* Two riders 1.9 s apart with somebody 0.95 s behind the first: he would bridge them. */
static HwFinishList *
bridged(Fixture *fixture, const char *start_list, const char *race)
{
    Case given = { .markers = "1,1000,18\n2,1950,18\n3,2900,18",
                   .header = "bib,column,speed_mps",
                   .start_list = start_list,
                   .race = race,
                   .rules = "road-1s",
                   .gun = GUN };
    return fixture_list(fixture, &given);
}

static void
only_riders_of_the_category_and_lap_bridge_groups(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    g_autoptr(HwFinishList) own = bridged(fixture, "bib\n1\n2\n3\n", NULL);
    g_assert_cmpint(fixture_row(own, "3", NULL)->group, ==, 1);
    g_autoptr(HwFinishList) lapped = bridged(fixture, "bib,status\n1,\n2,LAP 1\n3,\n", NULL);
    g_assert_cmpint(fixture_row(lapped, "3", NULL)->group, ==, 2);
    g_autoptr(HwFinishList) other =
        bridged(fixture, "bib,category\n1,A\n2,B\n3,A\n",
                "\"starts\":[{\"category\":\"*\",\"instant\":\"2027-06-13T15:59:00+02:00\"}]");
    g_assert_cmpint(fixture_row(other, "3", NULL)->group, ==, 2);
}

static void
a_rider_taken_out_re_splits_no_group_without_a_word(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    g_autoptr(HwFinishList) list = bridged(fixture, "bib,status\n1,\n2,DSQ\n3,\n", NULL);
    g_assert_cmpint(fixture_row(list, "3", NULL)->group, ==, 1);
    g_assert_true(fixture_says(list, "bib 3", "taken out", "commissaires", NULL));
    g_autofree char *places = fixture_dup_places(list);
    g_assert_cmpstr(places, ==, "1:1 2:3"); /* a disqualification moves riders up */
}

static void
where_a_rear_wheel_is_needed_nothing_is_guessed(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "1,1000,18,front\n2,2050,18,front\n3,4000,18,front",
                   .header = "bib,column,speed_mps,edge",
                   .start_list = three,
                   .rules = "road-1s",
                   .gun = GUN };
    g_autoptr(HwFinishList) open = fixture_list(fixture, &given);
    g_assert_cmpint(fixture_row(open, "2", NULL)->group, ==, 0);
    g_assert_false(fixture_row(open, "2", NULL)->has_official);
    g_assert_true(fixture_row(open, "3", NULL)->has_official);
    g_assert_true(fixture_says(open, "Rear wheel needed between bibs 1 and 2", NULL));
    g_assert_false(fixture_says(open, "Rear wheel needed", "on foot", NULL));
    given.markers =
        "1,1000,,front\n2,2900,18,front\n3,4000,18,front"; /* at 0.5 m/s it clears the line in 3.7 s */
    g_autoptr(HwFinishList) on_foot = fixture_list(fixture, &given);
    g_assert_true(fixture_says(on_foot, "Rear wheel needed between bibs 1 and 2", "on foot", NULL));
    given.markers = "1,1000,18,front\n1,1095,,rear\n2,2050,18,front\n3,4000,18,front";
    g_autoptr(HwFinishList) decided = fixture_list(fixture, &given);
    g_assert_cmpint(fixture_row(decided, "2", NULL)->group, ==, 1);
    g_assert_cmpint(fixture_row(decided, "3", NULL)->group, ==, 2);
}

static void
a_rider_against_the_travel_did_not_finish(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "1,100,front,with\n2,150,front,against\n2,300,front,with",
                   .header = "bib,column,edge,direction",
                   .start_list = three,
                   .gun = GUN };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    g_assert_cmpint(fixture_row(list, "2", NULL)->crossing_ns, ==, 300000000);
    g_assert_true(fixture_says(list, "Bib 2", "against the travel", NULL));
    /* Not said, but the rear tyre came first. */
    Case unsaid = { .markers = "1,100,front\n2,250,front\n2,150,rear",
                    .header = "bib,column,edge",
                    .start_list = three,
                    .gun = GUN };
    g_autoptr(HwFinishList) caught = fixture_list(fixture, &unsaid);
    g_assert_cmpint(fixture_row(caught, "2", NULL)->rank, ==, 0);
    g_assert_true(fixture_says(caught, "Bib 2", "rear tyre is marked before", NULL));
}

static void
a_breakaways_gap_needs_one_declared(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "1,1000,18,front\n1,1100,,rear\n2,2400,18,front\n2,2500,,rear\n3,4000,18,front",
                   .header = "bib,column,speed_mps,edge",
                   .start_list = three,
                   .rules = "road-3s",
                   .gun = GUN };
    g_autoptr(HwFinishList) none = fixture_list(fixture, &given);
    g_assert_cmpint(fixture_row(none, "2", NULL)->group, ==, 1); /* 1.3 s < 3 s */
    g_assert_true(fixture_says(none, "breakaway", "not considered", NULL));
    given.race = "\"breakaway\":[\"1\"]";
    g_autoptr(HwFinishList) declared = fixture_list(fixture, &given);
    g_assert_cmpint(fixture_row(declared, "2", NULL)->group, ==, 2);
    g_assert_cmpint(fixture_row(declared, "3", NULL)->group, ==, 2); /* 3 s behind it */
    given.race = "\"breakaway\":[\"3\"]";
    g_autoptr(HwFinishList) caught = fixture_list(fixture, &given);
    g_assert_cmpint(fixture_row(caught, "2", NULL)->group, ==, 1);
    g_assert_true(fixture_says(caught, "did not win", NULL));
}

static void
the_list_says_whose_gate_time_does_not_count(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "1,1000\n2,2000",
                   .start_list = "bib,start,start_actual\n1,15:58:00,15:58:02\n2,15:59:00,15:59:07\n",
                   .rules = "itt-10th" };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    g_assert_cmpint(fixture_row(list, "1", NULL)->start_source, ==, HW_START_GATE);
    g_assert_cmpint(fixture_row(list, "1", NULL)->official_ns, ==, INT64_C(119000000000));
    g_assert_cmpint(fixture_row(list, "2", NULL)->start_source, ==, HW_START_SCHEDULED);
    g_assert_cmpint(fixture_row(list, "2", NULL)->official_ns, ==, INT64_C(62000000000));
    g_assert_true(fixture_says(list, "Bib 2", "scheduled one counts", NULL));
    g_assert_false(fixture_says(list, "Bib 1", "gate", NULL));
    given.rules = NULL;
    g_autoptr(HwFinishList) unruled = fixture_list(fixture, &given);
    g_assert_true(fixture_says(unruled, "no ranking by time", NULL));
}

static void
a_start_after_the_crossing_gives_no_time(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = {
        .markers = "1,1000", .start_list = three, .rules = "road-1s", .gun = "2027-06-14T15:59:00+02:00"
    };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    g_assert_false(fixture_row(list, "1", NULL)->has_official);
    g_assert_true(fixture_says(list, "Bib 1 crossed", "before the start", NULL));
    given.gun = "2027-06-12T15:59:00+02:00";
    g_autoptr(HwFinishList) day = fixture_list(fixture, &given);
    g_assert_true(fixture_says(day, "Bib 1 took", "more than a day", NULL));
    given.markers = "1,1000\n2,1100\n3,1200";
    g_autoptr(HwFinishList) many = fixture_list(fixture, &given);
    g_assert_true(fixture_says(many, "Bib 1 and 2 others took more than a day", NULL));
}

static void
a_status_that_a_marker_contradicts_is_named(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "1,100\n2,200", .start_list = "bib,status\n1,\n2,DNS\n", .gun = GUN };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    g_assert_cmpint(fixture_row(list, "2", NULL)->rank, ==, 0);
    g_assert_true(fixture_says(list, "Bib 2", "DNS", NULL));
}

static void
a_bib_nobody_entered_is_named(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "1,100\n99,150\n2,200", .start_list = three, .gun = GUN };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    g_assert_true(fixture_says(list, "Bib 99", "not in the start list", NULL));
    g_assert_cmpint(fixture_row(list, "99", NULL)->status, ==, HW_STATUS_UNKNOWN);
    g_assert_cmpint(fixture_row(list, "2", NULL)->rank, ==, 3); /* somebody did cross between */
}

static void
markers_that_name_no_recording_are_told_of(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    Case given = { .markers = "1,100", .start_list = three, .gun = GUN };
    g_autoptr(HwFinishList) list = fixture_list(fixture, &given);
    g_assert_true(fixture_says(list, "which recording", NULL));
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
#define ADD(name) g_test_add_func("/finish_guards/" #name, name)
    ADD(a_void_is_in_the_gap_across_it);
    ADD(a_marker_beside_a_void_is_named);
    ADD(a_hidden_drop_is_named_and_in_the_uncertainty);
    ADD(level_crossings_share_a_place_whoever_was_entered_first);
    ADD(differences_are_never_rounded_themselves);
    ADD(a_list_without_rule_set_says_so);
    ADD(not_seen_is_no_dnf);
    ADD(passages_are_never_mixed);
    ADD(a_marker_without_passage_among_others_is_refused);
    ADD(a_bib_twice_in_a_passage_is_refused);
    ADD(a_finisher_a_lap_short_is_named);
    ADD(categories_are_never_mixed);
    ADD(only_riders_of_the_category_and_lap_bridge_groups);
    ADD(a_rider_taken_out_re_splits_no_group_without_a_word);
    ADD(where_a_rear_wheel_is_needed_nothing_is_guessed);
    ADD(a_rider_against_the_travel_did_not_finish);
    ADD(a_breakaways_gap_needs_one_declared);
    ADD(the_list_says_whose_gate_time_does_not_count);
    ADD(a_start_after_the_crossing_gives_no_time);
    ADD(a_status_that_a_marker_contradicts_is_named);
    ADD(a_bib_nobody_entered_is_named);
    ADD(markers_that_name_no_recording_are_told_of);
#undef ADD
    return g_test_run();
}
