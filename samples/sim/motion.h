/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * How one bicycle moves through the line: the rider's power against air, rolling, bearings, slope and
 * inertia, after J. C. Martin et al., "Validation of a Mathematical Model for Road Cycling Power", J Appl
 * Biomech 14 (1998) 276-291, and the throw of the bicycle under the rider, in which the common centre of mass
 * keeps its speed. Time is in seconds from the true crossing of the foremost point of the front tyre; place
 * is that point's, in metres beyond the line's plane (0 at time 0). Own it; any thread may read it.
 */
#pragma once

#include <stdbool.h>

typedef struct {
    double power_w;
    double rider_kg, bike_kg;
    double cda_m2, wheel_drag_m2; /* air: body and frame; the wheels' turning */
    double air_kgm3, head_wind_mps;
    double rolling, grade; /* coefficient of rolling resistance; rise per way */
    double wheel_inertia_kgm2, wheel_radius_m;
    double chain_efficiency;
} SimBody;

typedef struct {
    double air_w, rolling_w, bearing_w, slope_w; /* what the way takes */
    double net_w;
} SimLoss;

/* Coefficients of Martin's worked example (bearings and wheels) with sprinting riders' air. */
void sim_body_init(SimBody *b);
/* Power the road takes at a ground speed. */
SimLoss sim_body_loss(const SimBody *b, double speed_mps);
/* Acceleration under the body's power. */
double sim_body_acceleration(const SimBody *b, double speed_mps);

typedef struct {
    double shift_m;    /* L: how far the rider goes back on the bicycle; 0 = no throw */
    double start_s;    /* begin, from the crossing; negative = before the line */
    double duration_s; /* > 0 */
} SimThrow;

/* What the bicycle gains on the centre of mass in a whole throw, L mr / (mr + mb). */
double sim_throw_gain(const SimBody *b, const SimThrow *t);
/* Share of the throw that is done, 0 to 1, with soft beginning and end. */
double sim_throw_share(const SimThrow *t, double time_s);

typedef struct SimMotion SimMotion;

/* speed_mps: ground speed lead_s seconds before the crossing. */
SimMotion *sim_motion_new(const SimBody *b, const SimThrow *t, double speed_mps, double lead_s);
void sim_motion_free(SimMotion *m);
double sim_motion_place(const SimMotion *m, double time_s);
double sim_motion_speed(const SimMotion *m, double time_s);
/* How far the rider sits back on the bicycle, m. */
double sim_motion_shift(const SimMotion *m, double time_s);
/* When the foremost point is at a place; place within what the rider covers in -3 s to +4 s. */
double sim_motion_when(const SimMotion *m, double place_m);
