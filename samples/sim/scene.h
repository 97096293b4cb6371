/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The place: where the camera stands, what each row of the picture sees, where the slit's plane lies against
 * the line's, and what stands still there. y is metres away from the camera from the road's near edge, h
 * metres up, X metres beyond the line's plane along the travel. Read only after filling; any thread.
 */
#pragma once

#include "samples/sim/scenario.h"

typedef struct {
    const SimScenario *scenario;
    double tilt_rad; /* the camera's axis below the level */
    double x0_m, tan_yaw, tan_lean, tan_roll;
} SimScene;

void sim_scene_init(SimScene *s, const SimScenario *scenario);
/* Fall of the sight through a place in the picture (row i covers [i, i + 1)) per metre of distance. */
double sim_scene_fall(const SimScene *s, double row);
/* The height seen through that fall in the plane of a rider at y. */
double sim_scene_height(const SimScene *s, double fall, double y_m);
/* The place in the picture of a point. */
double sim_scene_row(const SimScene *s, double y_m, double h_m);
/* Where the slit's plane lies at a point. */
double sim_scene_plane(const SimScene *s, double y_m, double h_m);
/* Width of what one column covers along the travel at a distance. */
double sim_scene_slit(const SimScene *s, double y_m);
/*
 * What stands still behind everything, in light. ground_y: where the sight meets the road, NAN where it
 * doesn't. moves: whether another time gives another colour, as where spectators stand.
 */
SimColour sim_scene_background(const SimScene *s, double fall, double time_s, double *ground_y, bool *moves);
/* Share of an exposure in which the lamp burns. */
double sim_scene_lamp(const SimScene *s, double from_s, double to_s);
