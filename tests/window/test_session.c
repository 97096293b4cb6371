/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The session without a screen: view, line, markers with undo, and what Enter will do. */
#include "ui/naming.h"
#include "ui/pair_words.h"
#include "ui/session.h"
#include "ui/words.h"

#include <math.h>

/* A session with a sample open in a view of 1000 × 480 device pixels. */
static HwSession *
open_sample(const char *name)
{
    g_autofree char *path = g_build_filename(g_getenv("HALFWHEEL_SAMPLES"), name, NULL);
    g_autoptr(HwOpenRequest) request = hw_open_request_new(path);
    g_autoptr(GError) error = NULL;
    HwSession *session = hw_session_new();
    HwDocument *document = hw_document_open(request, NULL, &error);

    g_assert_no_error(error);
    hw_session_set_viewport(session, 1000, 480);
    hw_session_set_document(session, document);
    return session;
}

static void
delete_all(HwSession *session)
{
    while (hw_session_get_n_markers(session) > 0)
        hw_session_delete_marker(session, 0);
}

static void
zooming_back_returns_exactly(void)
{
    g_autoptr(HwSession) session = open_sample("aldermoor-sprint");
    HwViewMap before;

    hw_session_zoom(session, 500.0, 4.0);
    before = *hw_session_get_view(session);
    for (int n = 1; n <= 5; n++) {
        for (int i = 0; i < n; i++)
            hw_session_zoom(session, 321.0, 1.25);
        for (int i = 0; i < n; i++)
            hw_session_zoom(session, 321.0, 1.0 / 1.25);
        g_assert_cmpfloat_with_epsilon(hw_session_get_view(session)->cells_per_px, before.cells_per_px,
                                       1e-12);
        g_assert_cmpfloat_with_epsilon(hw_session_get_view(session)->first_cell, before.first_cell, 1e-8);
    }
}

static void
the_cell_under_the_pointer_stays(void)
{
    g_autoptr(HwSession) session = open_sample("aldermoor-sprint");
    const double factors[] = { 3.0, 1.7, 1.1, 0.9, 0.6 };

    hw_session_zoom(session, 500.0, 2.5);
    for (guint i = 0; i < G_N_ELEMENTS(factors); i++) {
        double cell = hw_view_map_cell(hw_session_get_view(session), 640.0);

        hw_session_zoom(session, 640.0, factors[i]);
        g_assert_cmpfloat_with_epsilon(hw_view_map_cell(hw_session_get_view(session), 640.0), cell, 1e-8);
    }
}

static void
the_line_stays_on_the_picture(void)
{
    g_autoptr(HwSession) session = open_sample("aldermoor-sprint");
    double n_cells = (double)hw_axis_get_n_cells(hw_session_get_axis(session));

    hw_session_set_reading_cell(session, -5.0, false);
    g_assert_cmpfloat(hw_session_get_reading_cell(session), ==, 0.0);
    hw_session_set_reading_cell(session, n_cells + 5.0, true);
    g_assert_cmpfloat(hw_session_get_reading_cell(session), ==, n_cells);
    g_assert_true(hw_session_is_in_view(session, n_cells));
}

static void
a_nudge_moves_as_seen_whatever_the_travel(void)
{
    /* The sprint's riders go left, the duel's right: later columns stand right, then left. */
    g_autoptr(HwSession) left = open_sample("aldermoor-sprint");
    g_autoptr(HwSession) right = open_sample("duel");

    hw_session_set_reading_cell(left, 100.0, false);
    hw_session_nudge_line(left, 10.0);
    g_assert_cmpfloat(hw_session_get_reading_cell(left), ==, 110.0);
    hw_session_set_reading_cell(right, 100.0, false);
    hw_session_nudge_line(right, 10.0);
    g_assert_cmpfloat(hw_session_get_reading_cell(right), ==, 90.0);
    hw_session_set_mirrored(right, true);
    hw_session_nudge_line(right, 10.0);
    g_assert_cmpfloat(hw_session_get_reading_cell(right), ==, 100.0);
}

static void
one_drag_is_one_step_of_undo(void)
{
    g_autoptr(HwSession) session = open_sample("aldermoor-sprint");
    double before = hw_session_get_marker(session, 0)->column;
    guint merge = hw_session_new_merge_key(session);

    for (int i = 1; i <= 20; i++)
        g_assert_true(hw_session_move_marker(session, 0, before + i, NAN, merge));
    g_assert_cmpfloat(hw_session_get_marker(session, 0)->column, ==, before + 20.0);
    g_assert_true(hw_session_undo(session));
    g_assert_cmpfloat(hw_session_get_marker(session, 0)->column, ==, before);
    g_assert_false(hw_session_undo(session));
}

static void
a_marker_keeps_its_speed_as_long_as_it_is_on_its_wheel(void)
{
    g_autoptr(HwSession) session = open_sample("aldermoor-sprint");
    double column = hw_session_get_marker(session, 0)->column;
    double speed = hw_session_get_marker(session, 0)->speed_mps;
    double u_speed = hw_session_get_marker(session, 0)->u_speed_mps;
    guint merge = hw_session_new_merge_key(session);
    double wheel_columns;

    g_assert_cmpfloat(speed, >, 5.0);
    /* 0.334 m, half a road wheel across, at the 2000 columns a second of this sample. */
    wheel_columns = 0.334 / speed * 2000.0;
    g_assert_true(hw_session_move_marker(session, 0, column + 0.9 * wheel_columns, NAN, 0));
    g_assert_cmpfloat(hw_session_get_marker(session, 0)->speed_mps, ==, speed);
    g_assert_cmpfloat(hw_session_get_marker(session, 0)->u_speed_mps, ==, u_speed);
    g_assert_true(hw_session_undo(session));
    g_assert_true(hw_session_move_marker(session, 0, column + 1.1 * wheel_columns, NAN, 0));
    g_assert_true(isnan(hw_session_get_marker(session, 0)->speed_mps));
    g_assert_true(hw_session_undo(session));
    /* A drag of many small steps is one long one; back on the wheel the speed is there again. */
    for (int i = 1; i <= 4; i++)
        g_assert_true(hw_session_move_marker(session, 0, column + 0.4 * i * wheel_columns, NAN, merge));
    g_assert_true(isnan(hw_session_get_marker(session, 0)->speed_mps));
    g_assert_true(hw_session_move_marker(session, 0, column + 2.0, NAN, merge));
    g_assert_cmpfloat(hw_session_get_marker(session, 0)->speed_mps, ==, speed);
}

static void
undo_back_to_what_was_saved_is_not_modified(void)
{
    g_autoptr(HwSession) session = open_sample("aldermoor-sprint");

    g_assert_false(hw_session_is_modified(session));
    hw_session_delete_marker(session, 3);
    g_assert_true(hw_session_is_modified(session));
    hw_session_undo(session);
    g_assert_false(hw_session_is_modified(session));
    hw_session_redo(session);
    g_assert_true(hw_session_is_modified(session));
}

static void
a_new_act_drops_what_could_be_redone(void)
{
    g_autoptr(HwSession) session = open_sample("aldermoor-sprint");

    hw_session_delete_marker(session, 3);
    hw_session_undo(session);
    hw_session_rename_marker(session, 0, "501", NULL);
    g_assert_null(hw_session_get_redo_act(session));
    g_assert_false(hw_session_redo(session));
}

static void
setters_tell_only_of_change(void)
{
    g_autoptr(HwSession) session = open_sample("aldermoor-sprint");
    guint told = 0;

    g_signal_connect_swapped(session, "notify::reading-cell", G_CALLBACK(g_atomic_int_inc), &told);
    g_signal_connect_swapped(session, "notify::selection", G_CALLBACK(g_atomic_int_inc), &told);
    g_signal_connect_swapped(session, "view-changed", G_CALLBACK(g_atomic_int_inc), &told);
    hw_session_set_reading_cell(session, hw_session_get_reading_cell(session), false);
    hw_session_set_selection(session, hw_session_get_selection(session));
    hw_session_zoom_fit(session);
    g_assert_cmpuint(told, ==, 0);
    hw_session_set_reading_cell(session, hw_session_get_reading_cell(session) + 1.0, false);
    g_assert_cmpuint(told, ==, 1);
}

static void
enter_names_the_marker_under_the_line_and_no_other(void)
{
    g_autoptr(HwSession) session = open_sample("aldermoor-sprint");
    g_autoptr(HwNaming) naming = NULL;
    int placed;

    delete_all(session);
    hw_session_set_reading_cell(session, 1000.0, true);
    placed = hw_session_place_marker(session, 1000.0, 200.0, NULL, NULL);
    naming = hw_naming_make(session, "1", 6.0, false);
    g_assert_cmpint(naming->state, ==, HW_NAMING_READY);
    g_assert_cmpint(naming->marker, ==, placed);
    g_assert_cmpstr(naming->rider, !=, "");
    g_assert_true(hw_naming_commit(session, naming));
    g_assert_cmpstr(hw_session_get_marker(session, placed)->bib, ==, "1");
}

static void
a_number_that_stands_already_is_asked_about(void)
{
    g_autoptr(HwSession) session = open_sample("aldermoor-sprint");
    const char *taken = hw_session_get_marker(session, 0)->bib;
    g_autoptr(HwNaming) naming = NULL;

    hw_session_set_reading_cell(
        session, hw_axis_position(hw_session_get_axis(session), hw_session_get_marker(session, 5)->column),
        true);
    hw_session_set_selection(session, 5);
    naming = hw_naming_make(session, taken, 6.0, false);
    g_assert_cmpint(naming->state, ==, HW_NAMING_ASK);
}

static void
a_number_nobody_has_is_asked_about(void)
{
    g_autoptr(HwSession) session = open_sample("aldermoor-sprint");
    g_autoptr(HwNaming) naming = NULL;

    delete_all(session);
    hw_session_set_reading_cell(session, 1000.0, true);
    naming = hw_naming_make(session, "4711", 6.0, false);
    g_assert_cmpint(naming->state, ==, HW_NAMING_ASK);
    g_assert_cmpint(naming->marker, ==, -1);
}

static void
a_second_marker_close_by_is_never_placed_silently(void)
{
    g_autoptr(HwSession) session = open_sample("aldermoor-sprint");
    g_autoptr(HwNaming) naming = NULL;

    delete_all(session);
    hw_session_zoom(session, 500.0, 1000.0);
    hw_session_place_marker(session, 1000.0, 200.0, "1", NULL);
    hw_session_set_reading_cell(session, 1003.0, true);
    naming = hw_naming_make(session, "2", 6.0, false);
    g_assert_cmpint(naming->marker, ==, -1);
    g_assert_cmpint(naming->state, ==, HW_NAMING_ASK);
}

static void
a_named_rider_is_never_renamed_by_the_way(void)
{
    g_autoptr(HwSession) session = open_sample("aldermoor-sprint");
    g_autoptr(HwNaming) here = NULL;
    g_autoptr(HwNaming) empty = NULL;
    g_autoptr(HwNaming) beside = NULL;
    g_autoptr(HwNaming) meant = NULL;

    delete_all(session);
    hw_session_set_reading_cell(session, 1000.0, true);
    hw_session_place_marker(session, 1000.0, 200.0, "1", NULL);
    here = hw_naming_make(session, "2", 6.0, false);
    g_assert_cmpint(here->state, ==, HW_NAMING_ASK);
    g_assert_cmpint(here->marker, ==, 0);
    g_assert_cmpstr(here->sentence, ==, "Marker 1 stands here. Enter twice renames it to 2.");
    empty = hw_naming_make(session, "", 6.0, false);
    g_assert_cmpint(empty->state, ==, HW_NAMING_ASK);
    /* Two columns off: within reach in this view, and yet another rider's place. */
    hw_session_set_reading_cell(session, 1002.0, true);
    beside = hw_naming_make(session, "2", 6.0, false);
    g_assert_cmpint(beside->state, ==, HW_NAMING_ASK);
    g_assert_cmpint(beside->marker, ==, -1);
    g_assert_cmpstr(beside->sentence, ==,
                    "Marker 1 stands only 1.0 ms away. Enter twice places it all the same.");
    g_assert_true(hw_naming_commit(session, beside));
    g_assert_cmpstr(hw_session_get_marker(session, 0)->bib, ==, "1");
    g_assert_cmpstr(hw_session_get_marker(session, 1)->bib, ==, "2");
    meant = hw_naming_make(session, "3", 6.0, true);
    g_assert_cmpint(meant->state, ==, HW_NAMING_READY);
    g_assert_cmpint(meant->marker, ==, 1);
}

static void
a_rider_may_have_a_front_and_a_rear_marker(void)
{
    g_autoptr(HwSession) session = open_sample("aldermoor-sprint");
    g_autofree char *bib = g_strdup(hw_session_get_marker(session, 0)->bib);
    double first = hw_session_get_marker(session, 0)->column;
    g_autoptr(HwNaming) naming = NULL;
    g_autoptr(HwNaming) again = NULL;
    int rear;

    delete_all(session);
    hw_session_zoom(session, 500.0, 1000.0);
    hw_session_place_marker(session, first, 200.0, bib, NULL);
    /* A rear axle follows a metre behind the front one: some 100 columns here. */
    hw_session_set_reading_cell(session, first + 100.0, true);
    rear = hw_session_place_marker(session, first + 100.0, 200.0, NULL, NULL);
    naming = hw_naming_make(session, bib, 6.0, false);
    g_assert_cmpint(naming->state, ==, HW_NAMING_ASK);
    hw_session_toggle_rear(session, rear);
    g_assert_cmpint(hw_session_get_marker(session, rear)->edge, ==, HW_EDGE_REAR);
    g_assert_cmpstr(hw_session_get_undo_act(session), ==, "Mark rear tyre");
    again = hw_naming_make(session, bib, 6.0, false);
    g_assert_cmpint(again->state, ==, HW_NAMING_READY);
    g_assert_true(hw_naming_commit(session, again));
    g_assert_cmpuint(hw_session_get_conflicts(session)->len, ==, 0);
    g_assert_nonnull(hw_session_get_list(session, NULL));
    /* Two of one kind contradict each other all the same. */
    hw_session_toggle_rear(session, rear);
    g_assert_cmpint(hw_session_get_marker(session, rear)->edge, ==, HW_EDGE_FRONT);
    g_assert_cmpuint(hw_session_get_conflicts(session)->len, ==, 1);
    hw_session_undo(session);
    g_assert_cmpint(hw_session_get_marker(session, rear)->edge, ==, HW_EDGE_REAR);
}

static void
nothing_out_of_view_is_named(void)
{
    g_autoptr(HwSession) session = open_sample("aldermoor-sprint");
    g_autoptr(HwNaming) naming = NULL;

    hw_session_set_reading_cell(session, 0.0, true);
    hw_session_zoom_one_to_one(session);
    hw_session_pan_views(session, 3.0);
    g_assert_false(hw_session_is_in_view(session, 0.0));
    naming = hw_naming_make(session, "1", 6.0, false);
    g_assert_cmpint(naming->state, ==, HW_NAMING_REFUSED);
    g_assert_false(hw_naming_commit(session, naming));
}

static void
a_number_used_twice_leaves_the_list_and_both_unnamed(void)
{
    g_autoptr(HwSession) session = open_sample("aldermoor-sprint");
    const char *sentence = NULL;
    const HwFinishList *list;
    guint n_rows = 0;

    hw_session_rename_marker(session, 5, hw_session_get_marker(session, 0)->bib, NULL);
    list = hw_session_get_list(session, &sentence);
    g_assert_null(sentence);
    g_assert_nonnull(list);
    g_assert_cmpuint(hw_session_get_conflicts(session)->len, ==, 1);
    for (guint i = 0; i < list->rows->len; i++) {
        const HwFinishRow *row = g_ptr_array_index(list->rows, i);

        if (row->unnamed)
            n_rows++;
    }
    g_assert_cmpuint(n_rows, ==, 2);
    g_assert_cmpint(list->check.unnamed, ==, 2);
}

static void
a_marker_read_from_afar_is_rough_and_says_how_sure(void)
{
    g_autoptr(HwSession) session = open_sample("aldermoor-sprint");
    double scale = hw_session_get_view(session)->cells_per_px;
    const HwMarker *marker;

    delete_all(session);
    g_assert_cmpfloat(scale, >, 1.0);
    marker = hw_session_get_marker(session, hw_session_place_marker(session, 1000.0, 200.0, "1", NULL));
    g_assert_cmpint(marker->state, ==, HW_MARKER_ROUGH);
    /* GUM 4.3.7: half-width of half a pixel's columns at 0.5 ms each, rectangular. */
    g_assert_cmpfloat_with_epsilon(marker->u_lead_ns, scale * 500000.0 / sqrt(12.0), 1.0);
    hw_session_zoom_one_to_one(session);
    hw_session_move_marker(session, 0, 1001.0, NAN, 0);
    marker = hw_session_get_marker(session, 0);
    g_assert_cmpint(marker->state, ==, HW_MARKER_READ);
    g_assert_true(isnan(marker->u_lead_ns));
}

static void
scales_are_said_as_people_say_them(void)
{
    static const struct {
        double cells_per_px;
        const char *text;
    } cases[] = { { 8.0, "1 : 8" }, { 0.25, "× 4" }, { 1.0, "1 : 1" }, { 7.5, "1 : 7.5" }, { 0.4, "× 2.5" } };

    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        g_autofree char *text = hw_words_dup_scale(cases[i].cells_per_px);

        g_assert_cmpstr(text, ==, cases[i].text);
    }
}

static void
a_pair_is_one_plain_sentence(void)
{
    HwFinishRow ahead = { .bib = (char *)"47" };
    HwFinishRow behind = {
        .bib = (char *)"11",
        .has_prev = true,
        .prev = { .gap_ns = 3800000,
                  .u_gap_ns = 100000.0,
                  .distance_m = 0.068,
                  .u_distance_m = 0.002,
                  .separated = HW_SEPARATED_YES },
    };
    g_autofree char *text = hw_pair_words_dup(&ahead, &behind);

    g_assert_cmpstr(text, ==, "47 ahead of 11 by 3.8 ± 0.2 ms, 6.8 ± 0.4 cm. Told apart: yes.");
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
    g_test_add_func("/session/zooming_back_returns_exactly", zooming_back_returns_exactly);
    g_test_add_func("/session/the_cell_under_the_pointer_stays", the_cell_under_the_pointer_stays);
    g_test_add_func("/session/the_line_stays_on_the_picture", the_line_stays_on_the_picture);
    g_test_add_func("/session/a_nudge_moves_as_seen_whatever_the_travel",
                    a_nudge_moves_as_seen_whatever_the_travel);
    g_test_add_func("/session/one_drag_is_one_step_of_undo", one_drag_is_one_step_of_undo);
    g_test_add_func("/session/a_marker_keeps_its_speed_as_long_as_it_is_on_its_wheel",
                    a_marker_keeps_its_speed_as_long_as_it_is_on_its_wheel);
    g_test_add_func("/session/undo_back_to_what_was_saved_is_not_modified",
                    undo_back_to_what_was_saved_is_not_modified);
    g_test_add_func("/session/a_new_act_drops_what_could_be_redone", a_new_act_drops_what_could_be_redone);
    g_test_add_func("/session/setters_tell_only_of_change", setters_tell_only_of_change);
    g_test_add_func("/session/enter_names_the_marker_under_the_line_and_no_other",
                    enter_names_the_marker_under_the_line_and_no_other);
    g_test_add_func("/session/a_number_that_stands_already_is_asked_about",
                    a_number_that_stands_already_is_asked_about);
    g_test_add_func("/session/a_number_nobody_has_is_asked_about", a_number_nobody_has_is_asked_about);
    g_test_add_func("/session/a_second_marker_close_by_is_never_placed_silently",
                    a_second_marker_close_by_is_never_placed_silently);
    g_test_add_func("/session/a_named_rider_is_never_renamed_by_the_way",
                    a_named_rider_is_never_renamed_by_the_way);
    g_test_add_func("/session/a_rider_may_have_a_front_and_a_rear_marker",
                    a_rider_may_have_a_front_and_a_rear_marker);
    g_test_add_func("/session/nothing_out_of_view_is_named", nothing_out_of_view_is_named);
    g_test_add_func("/session/a_number_used_twice_leaves_the_list_and_both_unnamed",
                    a_number_used_twice_leaves_the_list_and_both_unnamed);
    g_test_add_func("/session/a_marker_read_from_afar_is_rough_and_says_how_sure",
                    a_marker_read_from_afar_is_rough_and_says_how_sure);
    g_test_add_func("/session/scales_are_said_as_people_say_them", scales_are_said_as_people_say_them);
    g_test_add_func("/session/a_pair_is_one_plain_sentence", a_pair_is_one_plain_sentence);
    return g_test_run();
}
