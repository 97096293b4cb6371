/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Markers files: what is read, what is refused, and that writing loses nothing. */
#include "core/ruling/ruling_error.h"
#include "tests/ruling/fixture.h"

#include <math.h>
#include <string.h>

static HwMarkers *
parse(Fixture *fixture, const char *text, GError **error)
{
    return hw_markers_parse(text, strlen(text), "markers.csv", fixture->recording, error);
}

static void
writing_and_reading_gives_the_same_markers(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    g_autoptr(HwMarkers) markers = hw_markers_new();
    HwMarker *marker = hw_marker_new("12", 1234.5678901, 210.25);
    marker->state = HW_MARKER_ROUGH;
    marker->basis = HW_BASIS_CALLER;
    marker->direction = HW_DIRECTION_AGAINST;
    marker->edge = HW_EDGE_REAR;
    marker->u_lead_ns = 1e6 / 3;
    marker->speed_mps = 17.25;
    g_free(marker->note);
    marker->note = g_strdup("behind \"47\",\nleaning");
    g_ptr_array_add(markers->markers, marker);
    g_ptr_array_add(markers->markers, hw_marker_new("?1", 0.1 + 0.2, NAN));

    g_autofree char *csv = hw_markers_dup_csv(markers, fixture->strip);
    g_autoptr(GError) error = NULL;
    g_autoptr(HwMarkers) back = parse(fixture, csv, &error);
    g_assert_no_error(error);
    g_assert_true(back->names_recording);
    const HwMarker *first = g_ptr_array_index(back->markers, 0);
    const HwMarker *second = g_ptr_array_index(back->markers, 1);
    g_assert_cmpfloat(first->column, ==, marker->column);
    g_assert_cmpfloat(first->row, ==, marker->row);
    g_assert_cmpfloat(first->u_lead_ns, ==, marker->u_lead_ns);
    g_assert_cmpint(first->state, ==, HW_MARKER_ROUGH);
    g_assert_cmpint(first->basis, ==, HW_BASIS_CALLER);
    g_assert_cmpint(first->direction, ==, HW_DIRECTION_AGAINST);
    g_assert_cmpint(first->edge, ==, HW_EDGE_REAR);
    g_assert_cmpstr(first->note, ==, marker->note);
    g_assert_cmpint(first->time_ns, ==, INT64_C(1234567890)); /* column c is c ms here */
    g_assert_cmpfloat(second->column, ==, 0.1 + 0.2);
    g_assert_true(isnan(second->row) && isnan(second->speed_mps));
    g_assert_true(hw_marker_is_unnamed(second));
    g_autofree char *again = hw_markers_dup_csv(back, fixture->strip);
    g_assert_cmpstr(again, ==, csv);
}

static void
faults_are_named_with_their_line(void)
{
    static const struct {
        const char *text, *named[2];
    } cases[] = {
        { "bib,column\n1,NaN\n", { "line 2", "NaN" } },
        { "bib,column\n1,inf\n", { "line 2", "inf" } },
        { "bib,column\n1,0x10\n", { "line 2", "0x10" } },
        { "bib,column\n1,\n", { "line 2", "column" } },
        { "bib,row\n1,2\n", { "line 1", "column" } },
        { "column\n1\n", { "line 1", "bib" } },
        { "bib,column,edge\n1,2,side\n", { "line 2", "side" } },
        { "bib,column,u_lead_ns\n1,2,-4\n", { "line 2", "-4" } },
        { "bib,column,time_ns\n1,2,1.5\n", { "line 2", "1.5" } },
        { "bib,column,state\n1,2,maybe\n", { "line 2", "rough" } },
    };
    g_autoptr(Fixture) fixture = fixture_new();
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        g_autoptr(GError) error = NULL;
        g_assert_null(parse(fixture, cases[i].text, &error));
        g_assert_error(error, HW_RULING_ERROR, HW_RULING_ERROR_MARKERS);
        for (guint k = 0; k < 2; k++)
            g_assert_nonnull(strstr(error->message, cases[i].named[k]));
    }
}

static void
markers_of_another_recording_are_refused(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    const char *own = hw_recording_get_short_identity(fixture->recording);
    g_assert_cmpuint(strlen(own), ==, 16);
    g_autofree char *good = g_strdup_printf("bib,column,recording\n1,2,%s\n", own);
    g_autoptr(HwMarkers) markers = parse(fixture, good, NULL);
    g_assert_nonnull(markers);
    g_autoptr(GError) error = NULL;
    g_assert_null(parse(fixture, "bib,column,recording\n1,2,0123456789abcdef\n", &error));
    g_assert_nonnull(strstr(error->message, "0123456789abcdef"));
    g_assert_nonnull(strstr(error->message, own));
}

static void
a_marker_needs_picture_under_it(void)
{
    static const struct {
        const char *text, *named;
    } cases[] = {
        { "bib,column\n1,-0.5\n", "off the strip" },
        { "bib,column\n1,12000\n", "off the strip" },
        { "bib,column\n1,1e300\n", "off the strip" },
        { "bib,column,time_ns\n1,2000,2000600000\n", "0.60 columns apart" }, /* a column shifted */
    };
    g_autoptr(Fixture) fixture = fixture_new();
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        g_autoptr(HwMarkers) markers = parse(fixture, cases[i].text, NULL);
        g_assert_nonnull(markers);
        g_autoptr(GError) error = NULL;
        g_assert_false(hw_markers_check_places(markers, fixture->strip, &error));
        g_assert_nonnull(strstr(error->message, "line 2"));
        g_assert_nonnull(strstr(error->message, cases[i].named));
    }
    g_autoptr(HwMarkers) good = parse(fixture, "bib,column,time_ns\n1,2000,2000400000\n2,11999.999,\n", NULL);
    g_assert_true(hw_markers_check_places(good, fixture->strip, NULL));
}

static void
only_blocks_under_markers_are_decoded(void)
{
    g_autoptr(Fixture) fixture = fixture_new();
    g_autoptr(HwMarkers) markers = parse(fixture, "bib,column\n1,10\n2,20\n3,30\n", NULL);
    guint unchecked = 0;
    g_autoptr(HwStrip) checked = hw_markers_check_blocks(markers, fixture->strip, &unchecked, NULL, NULL);
    g_assert_nonnull(checked);
    g_assert_cmpuint(hw_strip_get_n_decoded(fixture->strip), ==, 1);
    g_assert_cmpuint(unchecked, ==, FIXTURE_BLOCKS - 1);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
    g_test_add_func("/markers/writing_and_reading_gives_the_same_markers",
                    writing_and_reading_gives_the_same_markers);
    g_test_add_func("/markers/faults_are_named_with_their_line", faults_are_named_with_their_line);
    g_test_add_func("/markers/markers_of_another_recording_are_refused",
                    markers_of_another_recording_are_refused);
    g_test_add_func("/markers/a_marker_needs_picture_under_it", a_marker_needs_picture_under_it);
    g_test_add_func("/markers/only_blocks_under_markers_are_decoded", only_blocks_under_markers_are_decoded);
    return g_test_run();
}
