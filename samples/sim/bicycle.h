/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * A racing bicycle of real proportions as shapes in its own plane, at one instant. Sizes follow what
 * UCI 1.3.018 (wheels 0.55-0.70 m) and 1.3.013-1.3.016 (frame, wheelbase, saddle) allow; u_m runs backwards
 * from the foremost point of the front tyre. Values; no allocation.
 */
#pragma once

#include "samples/sim/shape.h"

#include <stdbool.h>

enum { SIM_SHAPES_MAX = 320 };

typedef struct {
    SimShape shape[SIM_SHAPES_MAX]; /* nearest first */
    int count;
} SimShapeList;

typedef struct {
    double diameter_m; /* outer, of both wheels */
    double wheelbase_m;
    double rim_m;    /* depth of the rims */
    double saddle_m; /* bottom bracket to saddle top along the seat tube */
    int front_spokes, rear_spokes;
    bool disc_wheel; /* the rear one */
    bool time_trial; /* bars */
    bool track;      /* one gear, no brakes, no bottles */
    bool drive_near; /* the chain is on the camera's side */
    SimColour frame, frame_band, rim, bar_tape, bottle;
    uint32_t seed;
} SimBicycle;

typedef struct {
    SimPoint front_hub, rear_hub, bottom_bracket, saddle, nose, crown, head, stem, hood, drop, drop_end, pad;
    double crank_m;
} SimBicyclePoints;

void sim_bicycle_points(const SimBicycle *b, SimBicyclePoints *points);
double sim_bicycle_length(const SimBicycle *b);

/* The near crank arm, pedal and (where it is on this side) the chain; crank_rad: 0 = near pedal up, growing
 * as it turns. */
void sim_bicycle_add_near(const SimBicycle *b, double crank_rad, SimShapeList *list);
/* Frame, bars, wheels; wheel_rad: how far the wheels have turned. */
void sim_bicycle_add_frame(const SimBicycle *b, double crank_rad, double wheel_rad, SimShapeList *list);
/* Where a pedal's axle is; the far one is half a turn off. */
SimPoint sim_bicycle_pedal(const SimBicycle *b, double crank_rad, bool far);
/* Adds a shape while there is room. */
SimShape *sim_shape_list_add(SimShapeList *list, SimShape shape);
