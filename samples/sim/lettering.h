/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Painted digits as strokes: a number laid out on a panel in a rider's plane. Values; no allocation.
 */
#pragma once

#include "samples/sim/shape.h"

typedef struct {
    SimPoint middle;          /* of the panel */
    SimPoint reading;         /* unit vector: the way the number is read */
    SimPoint up;              /* unit vector: towards the top of the digits */
    double width_m, height_m; /* of the panel; digits fill about two thirds of the height */
    SimColour ground, ink;
} SimPanel;

/*
 * Fills shapes nearest first: the strokes, then the panel. text: digits, others are left out.
 * Returns how many of room were used.
 */
int sim_lettering_panel(const SimPanel *panel, const char *text, SimShape *shapes, int room);
