/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * A rider on a bicycle as shapes in one plane, at one instant: legs that turn the cranks, body, arms, head,
 * number. Values; no allocation.
 */
#pragma once

#include "samples/sim/bicycle.h"

typedef enum {
    SIM_POSTURE_SPRINT,   /* out of the saddle, hands in the drops */
    SIM_POSTURE_SEATED,   /* low, hands in the drops */
    SIM_POSTURE_HOODS,    /* higher, hands on the brake hoods */
    SIM_POSTURE_EXTENDED, /* on time-trial bars */
} SimPosture;

typedef struct {
    SimBicycle bicycle;
    SimPosture posture;
    double size;          /* 1 = 1.78 m tall */
    double development_m; /* way per turn of the cranks */
    double crank_start_rad, wheel_start_rad;
    double head_turn; /* -1 to 1: head down to up */
    SimColour jersey, jersey_band, sleeve, shorts, shorts_band, sock, shoe, helmet, skin;
    float band_from, band_to;
    bool read_backwards; /* the number reads from the rear wheel to the front: riders that travel right */
    bool number_on_back, number_on_frame;
    char bib[16];
    uint32_t seed;
} SimRider;

/* place_m: of the foremost point beyond the line; shift_m: how far a throw has put the rider back. */
void sim_rider_pose(const SimRider *r, double place_m, double shift_m, SimShapeList *list);
/* The front wheel's hub height, m. */
double sim_rider_hub(const SimRider *r);
