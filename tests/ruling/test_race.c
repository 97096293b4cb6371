/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The race file. */
#include "core/ruling/race.h"

#include <glib.h>
#include <string.h>

static void
everything_a_list_needs_is_read(void)
{
    static const char text[] =
        "{\"halfwheel_race\":1,\"event\":\"Aldermoor Criterium\",\"distance_km\":42.5,"
        "\"passage\":{\"name\":\"finish\",\"kind\":\"finish\",\"laps_to_go\":0},"
        "\"starts\":[{\"category\":\"*\",\"instant\":\"2027-06-13T15:00:00+02:00\"}],"
        "\"neutralised\":[{\"from\":\"2027-06-13T15:10:00+02:00\",\"to\":\"2027-06-13T15:12:00+02:00\"}],"
        "\"status\":[{\"bib\":\"7\",\"status\":\"DNF\"},{\"bib\":\"8\",\"category\":\"U23\",\"status\":"
        "\"LAP\",\"laps_behind\":2}],"
        "\"breakaway\":[\"3\",\"4\"],\"officials\":[{\"role\":\"President\",\"name\":\"I. "
        "Marsh\"}],\"weather\":\"dry\"}";
    g_autoptr(GError) error = NULL;
    g_autoptr(HwRace) race = hw_race_parse(text, strlen(text), "race.json", &error);
    g_assert_no_error(error);
    g_assert_cmpstr(race->event, ==, "Aldermoor Criterium");
    g_assert_cmpint(race->passage_kind, ==, HW_PASSAGE_FINISH);
    g_assert_cmpint(race->laps_to_go, ==, 0);
    g_assert_cmpuint(race->waves->len, ==, 1);
    g_assert_cmpuint(race->neutralised->len, ==, 1);
    g_assert_cmpuint(race->officials->len, ==, 1);
    g_assert_cmpint(hw_race_find_status(race, "7", "U23")->status, ==, HW_STATUS_DNF);
    g_assert_null(hw_race_find_status(race, "8", "Elite"));
    g_assert_cmpint(hw_race_find_status(race, "8", "U23")->laps_behind, ==, 2);
    g_assert_true(hw_race_in_breakaway(race, "4"));
    g_assert_false(hw_race_in_breakaway(race, "5"));
    g_assert_null(hw_race_find_status(NULL, "7", ""));
}

static void
faults_are_named_with_their_place(void)
{
    static const struct {
        const char *body, *named[2];
    } cases[] = {
        { "\"x\":1", { "halfwheel_race", NULL } },
        { "\"halfwheel_race\":1,\"starts\":[{\"instant\":\"noon\"}]", { "starts[0]", "noon" } },
        { "\"halfwheel_race\":1,\"starts\":[{\"instant\":\"2027-06-13T15:00:00\"}]",
          { "starts[0]", "offset" } },
        { "\"halfwheel_race\":1,\"starts\":[{\"instant\":\"2027-06-13T15:00:00Z\"},{\"instant\":\"2027-06-"
          "13T15:00:00Z\"}]",
          { "starts[1]", "two starts" } },
        { "\"halfwheel_race\":1,\"neutralised\":[{\"from\":\"2027-06-13T15:00:00Z\",\"to\":\"2027-06-13T14:"
          "00:00Z\"}]",
          { "neutralised[0]", "ends before" } },
        { "\"halfwheel_race\":1,\"neutralised\":[{\"from\":\"2027-06-13T15:00:00Z\",\"to\":\"2027-06-13T15:"
          "10:00Z\"},"
          "{\"from\":\"2027-06-13T15:05:00Z\",\"to\":\"2027-06-13T15:20:00Z\"}]",
          { "neutralised[1]", "twice" } },
        { "\"halfwheel_race\":1,\"status\":[{\"bib\":\"1\",\"status\":\"late\"}]", { "status[0]", "late" } },
        { "\"halfwheel_race\":1,\"status\":[{\"bib\":\"1\",\"status\":\"DNF\"},{\"bib\":\"1\",\"status\":"
          "\"DSQ\"}]",
          { "status[1]", "two statuses" } },
        { "\"halfwheel_race\":1,\"passage\":{\"kind\":\"stage\"}", { "passage", "stage" } },
        { "\"halfwheel_race\":1,\"breakaway\":[3]", { "breakaway[0]", "text" } },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        g_autofree char *text = g_strdup_printf("{%s}", cases[i].body);
        g_autoptr(GError) error = NULL;
        g_assert_null(hw_race_parse(text, strlen(text), "race.json", &error));
        g_assert_nonnull(strstr(error->message, "race.json"));
        for (guint k = 0; k < 2 && cases[i].named[k] != NULL; k++)
            g_assert_nonnull(strstr(error->message, cases[i].named[k]));
    }
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
    g_test_add_func("/race/everything_a_list_needs_is_read", everything_a_list_needs_is_read);
    g_test_add_func("/race/faults_are_named_with_their_place", faults_are_named_with_their_place);
    return g_test_run();
}
