/* SPDX-License-Identifier: GPL-3.0-or-later */
/* From when a rider's time counts. Expected times are differences of clock readings, done by hand. */
#include "core/ruling/elapsed.h"

#include <glib.h>
#include <stdio.h>
#include <string.h>

#define S INT64_C(1000000000)

/* The crossing is at 16:00:10 +02:00 in all cases. */
static const char epoch_text[] = "2027-06-13T16:00:00+02:00";
static const int64_t crossing_ns = 10 * S;

static HwStartTime
start_time(const char *text)
{
    HwStartTime start = { .known = text != NULL };
    if (text != NULL && strchr(text, 'T') != NULL) {
        start.is_instant = true;
        g_assert_true(hw_instant_parse(text, &start.instant, NULL));
    } else if (text != NULL) {
        int hours, minutes, seconds;
        g_assert_cmpint(sscanf(text, "%d:%d:%d", &hours, &minutes, &seconds), ==, 3);
        start.time_of_day_ns = (hours * INT64_C(3600) + minutes * 60 + seconds) * S;
    }
    return start;
}

static HwElapsed
elapsed_of(const char *scheduled, const char *gate, const char *category, const char *race_body,
           const char *gun_text)
{
    HwInstant epoch, gun;
    g_assert_true(hw_instant_parse(epoch_text, &epoch, NULL));
    HwRider rider = { .start = start_time(scheduled), .start_actual = start_time(gate) };
    g_autoptr(HwRace) race = NULL;
    if (race_body != NULL) {
        g_autofree char *text = g_strdup_printf("{\"halfwheel_race\":1,%s}", race_body);
        race = hw_race_parse(text, strlen(text), "race.json", NULL);
        g_assert_nonnull(race);
    }
    if (gun_text != NULL)
        g_assert_true(hw_instant_parse(gun_text, &gun, NULL));
    HwElapsed elapsed;
    g_assert_true(hw_elapsed_make(&epoch, crossing_ns, &rider, category, race, gun_text != NULL ? &gun : NULL,
                                  &elapsed));
    return elapsed;
}

static void
the_nearest_start_to_the_rider_wins(void)
{
#define WAVES                                                                                                \
    "\"starts\":[{\"category\":\"*\",\"instant\":\"2027-06-13T15:00:00+02:00\"},"                            \
    "{\"category\":\"U23\",\"instant\":\"2027-06-13T15:05:00+02:00\"}]"
    static const struct {
        const char *scheduled, *gate, *category, *race, *gun;
        HwStartSource source;
        int64_t elapsed_s;
    } cases[] = {
        { NULL, NULL, "", NULL, NULL, HW_START_NONE, 10 },
        { NULL, NULL, "", NULL, "2027-06-13T15:30:00+02:00", HW_START_GUN, 1810 },
        { NULL, NULL, "Elite", WAVES, "2027-06-13T15:30:00+02:00", HW_START_WAVE, 3610 },
        { NULL, NULL, "U23", WAVES, NULL, HW_START_WAVE, 3310 },
        { "15:20:00", NULL, "U23", WAVES, NULL, HW_START_SCHEDULED, 2410 },
        { "15:20:00", "15:20:03", "U23", WAVES, NULL, HW_START_GATE, 2407 },
        { NULL, "15:20:03", "U23", WAVES, NULL, HW_START_GATE, 2407 },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        HwElapsed elapsed =
            elapsed_of(cases[i].scheduled, cases[i].gate, cases[i].category, cases[i].race, cases[i].gun);
        g_assert_cmpint(elapsed.source, ==, cases[i].source);
        g_assert_cmpint(elapsed.elapsed_ns, ==, cases[i].elapsed_s * S);
    }
}

static void
gate_counts_only_within_its_limits_of_the_schedule(void)
{
    /* UCI 2.4.013: slightly before zero or within 5 s after, else the manual countdown. */
    static const struct {
        const char *gate;
        bool counts;
    } cases[] = { { "15:20:00", true }, { "15:20:05", true },  { "15:20:06", false },
                  { "15:19:59", true }, { "15:19:58", false }, { "15:26:00", false } };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        HwElapsed elapsed = elapsed_of("15:20:00", cases[i].gate, "", NULL, NULL);
        g_assert_cmpint(elapsed.source, ==, cases[i].counts ? HW_START_GATE : HW_START_SCHEDULED);
        g_assert_true(elapsed.gate_refused == !cases[i].counts);
        if (!cases[i].counts)
            g_assert_cmpint(elapsed.elapsed_ns, ==, 2410 * S);
    }
}

static void
a_time_of_day_is_the_latest_before_the_crossing(void)
{
    g_assert_cmpint(elapsed_of("16:00:10", NULL, "", NULL, NULL).elapsed_ns, ==, 0);
    g_assert_cmpint(elapsed_of("16:00:11", NULL, "", NULL, NULL).elapsed_ns, ==, (24 * 3600 - 1) * S);
    g_assert_cmpint(elapsed_of("23:59:00", NULL, "", NULL, NULL).elapsed_ns, ==, (16 * 3600 + 70) * S);
}

static void
offset_of_the_gun_is_kept(void)
{
    /* 14:00:00Z is 16:00:00+02:00. */
    g_assert_cmpint(elapsed_of(NULL, NULL, "", NULL, "2027-06-13T14:00:00Z").elapsed_ns, ==, 10 * S);
    g_assert_cmpint(elapsed_of(NULL, NULL, "", NULL, "2027-06-12T16:00:00+02:00").elapsed_ns, ==,
                    (24 * 3600 + 10) * S);
    g_assert_cmpint(elapsed_of(NULL, NULL, "", NULL, "2027-06-13T16:00:11+02:00").elapsed_ns, ==, -S);
}

static void
only_what_lies_in_the_race_is_taken_off(void)
{
#define STRETCH(from, to)                                                                                    \
    "\"neutralised\":[{\"from\":\"2027-06-13T" from "+02:00\",\"to\":\"2027-06-13T" to "+02:00\"}]"
    static const struct {
        const char *race;
        int64_t taken_s;
    } cases[] = {
        { STRETCH("15:40:00", "15:42:00"), 120 }, { STRETCH("15:29:00", "15:31:00"), 60 },
        { STRETCH("15:59:50", "16:30:00"), 20 },  { STRETCH("15:00:00", "15:30:00"), 0 },
        { STRETCH("16:00:10", "16:10:00"), 0 },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        HwElapsed elapsed = elapsed_of(NULL, NULL, "", cases[i].race, "2027-06-13T15:30:00+02:00");
        g_assert_cmpint(elapsed.neutralised_ns, ==, cases[i].taken_s * S);
        g_assert_cmpint(elapsed.elapsed_ns, ==, (1810 - cases[i].taken_s) * S);
    }
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
    g_test_add_func("/elapsed/the_nearest_start_to_the_rider_wins", the_nearest_start_to_the_rider_wins);
    g_test_add_func("/elapsed/gate_counts_only_within_its_limits_of_the_schedule",
                    gate_counts_only_within_its_limits_of_the_schedule);
    g_test_add_func("/elapsed/a_time_of_day_is_the_latest_before_the_crossing",
                    a_time_of_day_is_the_latest_before_the_crossing);
    g_test_add_func("/elapsed/offset_of_the_gun_is_kept", offset_of_the_gun_is_kept);
    g_test_add_func("/elapsed/only_what_lies_in_the_race_is_taken_off",
                    only_what_lies_in_the_race_is_taken_off);
    return g_test_run();
}
