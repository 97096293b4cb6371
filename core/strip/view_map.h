/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The one place that turns axis positions and rows into pixels and back. A plain value. Pixel x covers [x,
 * x+1). */
#pragma once

#include "core/strip/recording.h"

#include <stdbool.h>

typedef struct {
    double first_cell;   /* axis position at the earlier edge of the view */
    double cells_per_px; /* > 0; below 1 enlarges */
    double first_row;    /* strip row at the top edge */
    double rows_per_px;  /* > 0 */
    int width_px;
    int height_px;
    bool later_left; /* later columns stand to the left */
} HwViewMap;

/* Time runs on screen against the travel, so that riders face the way they rode and bibs can be read: later
 * stands left where they ride to the right. Unknown travel is shown as travel left. `mirrored` turns it
 * about, and the view must say so. */
bool hw_view_later_left(HwSide travel, bool mirrored);

double hw_view_map_x(const HwViewMap *map, double cell);
double hw_view_map_cell(const HwViewMap *map, double x_px);
double hw_view_map_y(const HwViewMap *map, double row);
double hw_view_map_row(const HwViewMap *map, double y_px);

/* Axis position at the later edge. */
double hw_view_map_last_cell(const HwViewMap *map);

/* The same view with the cell under x_px kept there, at another scale. */
HwViewMap hw_view_map_zoomed(const HwViewMap *map, double x_px, double cells_per_px);
