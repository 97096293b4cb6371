/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What part of the picture is in view, and the reading line. */
#include "ui/session_private.h"

#include <math.h>

/* The closest look: one column over this many device pixels. */
#define MAX_ENLARGEMENT 64.0
/* A short picture is not blown up beyond this when fitted. */
#define MAX_FIT_ENLARGEMENT 8.0
/* Rows: the closest look. */
#define MAX_ROW_ENLARGEMENT 16.0

static double
n_cells(HwSession *session)
{
    return session->document ? (double)hw_axis_get_n_cells(session->document->axis) : 1.0;
}

static double
n_rows(HwSession *session)
{
    return session->document ? (double)MAX(hw_strip_get_n_rows(session->document->strip), 1) : 1.0;
}

static double
fit_scale(HwSession *session)
{
    return MAX(n_cells(session) / MAX(session->view.width_px, 1), 1.0 / MAX_FIT_ENLARGEMENT);
}

static double
fit_rows_scale(HwSession *session)
{
    return n_rows(session) / MAX(session->view.height_px, 1);
}

/* Half a view may show what lies beyond an end, so that the line can always be in the middle. */
static void
clamp_view(HwSession *session, HwViewMap *view)
{
    double widest = MAX(fit_scale(session), 1.0);
    double half, shown;

    view->cells_per_px = CLAMP(view->cells_per_px, 1.0 / MAX_ENLARGEMENT, widest);
    half = view->cells_per_px * view->width_px / 2.0;
    if (half * 2.0 >= n_cells(session))
        view->first_cell = n_cells(session) / 2.0 - half;
    else
        view->first_cell = CLAMP(view->first_cell, -half, n_cells(session) - half);
    view->rows_per_px = CLAMP(view->rows_per_px, 1.0 / MAX_ROW_ENLARGEMENT, fit_rows_scale(session));
    shown = view->rows_per_px * view->height_px;
    view->first_row = CLAMP(view->first_row, 0.0, MAX(n_rows(session) - shown, 0.0));
}

static void
set_view(HwSession *session, HwViewMap view)
{
    HwViewMap *old = &session->view;

    clamp_view(session, &view);
    if (view.first_cell == old->first_cell && view.cells_per_px == old->cells_per_px &&
        view.first_row == old->first_row && view.rows_per_px == old->rows_per_px &&
        view.width_px == old->width_px && view.height_px == old->height_px &&
        view.later_left == old->later_left)
        return;
    *old = view;
    hw_session_emit(session, HW_SESSION_VIEW);
}

const HwViewMap *
hw_session_get_view(HwSession *session)
{
    return &session->view;
}

static HwViewMap
fitted(HwSession *session, HwViewMap view)
{
    if (session->fits_time)
        view.cells_per_px = fit_scale(session);
    if (session->fits_rows) {
        view.rows_per_px = fit_rows_scale(session);
        view.first_row = 0.0;
    }
    return view;
}

void
hw_session_reset_view(HwSession *session)
{
    HwViewMap *view = &session->view;
    HwSide travel = HW_SIDE_UNKNOWN;

    session->fits_time = true;
    session->fits_rows = true;
    session->mirrored = false;
    if (session->document)
        travel = hw_recording_get_travel(session->document->recording);
    view->later_left = hw_view_later_left(travel, false);
    view->first_cell = 0.0;
    *view = fitted(session, *view);
    clamp_view(session, view);
    session->reading_cell = 0.0;
    session->hand_row = n_rows(session) / 2.0;
    if (hw_session_get_n_markers(session) > 0) {
        int first = -1;

        for (int i = 0; i < (int)hw_session_get_n_markers(session); i++)
            if (first < 0 ||
                hw_session_get_marker(session, i)->column < hw_session_get_marker(session, first)->column)
                first = i;
        session->reading_cell =
            hw_axis_position(session->document->axis, hw_session_get_marker(session, first)->column);
    }
}

void
hw_session_set_viewport(HwSession *session, int width_px, int height_px)
{
    HwViewMap view = session->view;
    double middle;

    if (view.width_px == width_px && view.height_px == height_px)
        return;
    middle = view.first_cell + view.cells_per_px * view.width_px / 2.0;
    session->view.width_px = view.width_px = width_px;
    session->view.height_px = view.height_px = height_px;
    view = fitted(session, view);
    view.first_cell = middle - view.cells_per_px * width_px / 2.0;
    clamp_view(session, &view);
    session->view = view;
    hw_session_emit(session, HW_SESSION_VIEW);
}

void
hw_session_zoom(HwSession *session, double x_px, double factor)
{
    double widest = MAX(fit_scale(session), 1.0);
    double scale = CLAMP(session->view.cells_per_px / factor, 1.0 / MAX_ENLARGEMENT, widest);

    session->fits_time = false;
    set_view(session, hw_view_map_zoomed(&session->view, x_px, scale));
}

/* Where zooming by key keeps the picture still. */
static double
anchor_px(HwSession *session)
{
    if (hw_session_is_in_view(session, session->reading_cell))
        return hw_view_map_x(&session->view, session->reading_cell);
    return session->view.width_px / 2.0;
}

void
hw_session_zoom_about_line(HwSession *session, double factor)
{
    hw_session_zoom(session, anchor_px(session), factor);
}

void
hw_session_zoom_one_to_one(HwSession *session)
{
    hw_session_zoom(session, anchor_px(session), session->view.cells_per_px);
}

void
hw_session_zoom_fit(HwSession *session)
{
    HwViewMap view = session->view;

    session->fits_time = true;
    session->fits_rows = true;
    view = fitted(session, view);
    view.first_cell = 0.0;
    set_view(session, view);
}

void
hw_session_zoom_rows(HwSession *session, double y_px, double factor)
{
    HwViewMap view = session->view;
    double row = hw_view_map_row(&view, y_px);

    session->fits_rows = false;
    view.rows_per_px = CLAMP(view.rows_per_px / factor, 1.0 / MAX_ROW_ENLARGEMENT, fit_rows_scale(session));
    view.first_row = row - y_px * view.rows_per_px;
    set_view(session, view);
    session->fits_rows = session->view.rows_per_px == fit_rows_scale(session);
}

void
hw_session_pan_px(HwSession *session, double dx_px, double dy_px)
{
    HwViewMap view = session->view;

    view.first_cell += (view.later_left ? dx_px : -dx_px) * view.cells_per_px;
    view.first_row -= dy_px * view.rows_per_px;
    set_view(session, view);
}

void
hw_session_pan_views(HwSession *session, double views)
{
    HwViewMap view = session->view;

    view.first_cell += views * view.cells_per_px * view.width_px;
    set_view(session, view);
}

bool
hw_session_is_in_view(HwSession *session, double cell)
{
    return cell >= session->view.first_cell && cell <= hw_view_map_last_cell(&session->view);
}

void
hw_session_reveal(HwSession *session, double cell)
{
    HwViewMap view = session->view;

    if (hw_session_is_in_view(session, cell))
        return;
    view.first_cell = cell - view.cells_per_px * view.width_px / 2.0;
    set_view(session, view);
}

bool
hw_session_get_mirrored(HwSession *session)
{
    return session->mirrored;
}

void
hw_session_set_mirrored(HwSession *session, bool mirrored)
{
    HwViewMap view = session->view;

    if (!session->document || session->mirrored == mirrored)
        return;
    session->mirrored = mirrored;
    view.later_left = hw_view_later_left(hw_recording_get_travel(session->document->recording), mirrored);
    set_view(session, view);
    hw_session_notify(session, HW_SESSION_PROP_MIRRORED);
}

double
hw_session_get_reading_cell(HwSession *session)
{
    return session->reading_cell;
}

void
hw_session_set_reading_cell(HwSession *session, double cell, bool reveal)
{
    cell = CLAMP(cell, 0.0, n_cells(session));
    if (cell != session->reading_cell) {
        session->reading_cell = cell;
        hw_session_notify(session, HW_SESSION_PROP_READING_CELL);
    }
    if (reveal)
        hw_session_reveal(session, cell);
}

void
hw_session_nudge_line(HwSession *session, double columns_on_screen)
{
    double step = session->view.later_left ? -columns_on_screen : columns_on_screen;

    hw_session_set_reading_cell(session, session->reading_cell + step, true);
}

double
hw_session_get_hand_row(HwSession *session)
{
    return session->hand_row;
}

void
hw_session_set_hand_row(HwSession *session, double row)
{
    row = CLAMP(row, 0.0, n_rows(session));
    if (row == session->hand_row)
        return;
    session->hand_row = row;
    hw_session_notify(session, HW_SESSION_PROP_HAND_ROW);
}
