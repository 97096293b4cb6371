/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Riders that share a time (UCI 1.2.107): a new time is taken where the gap from the back of the last rear
 * wheel of the group to the front of the next front wheel is the rule's or more. Without rear markers
 * front-to-front decides only what it can; where it cannot, the rear wheel is needed. */
#pragma once

#include <stdbool.h>
#include <stdint.h>

/* Longest bicycle (UCI 1.3.012), m. */
#define HW_BICYCLE_LENGTH_M 1.85
#define HW_TANDEM_LENGTH_M 2.70
/* Stated lowest speed of a rider whose speed was not measured: on foot, pushing the bicycle. */
#define HW_WALKING_MPS 0.5

typedef struct {
    int64_t front_ns;
    double u_ns; /* standard uncertainty of the front's reading */
    bool has_rear;
    int64_t rear_ns;
    double speed_mps;  /* the lowest it can be at the line; NAN where not measured */
    bool in_breakaway; /* of a declared breakaway */
} HwGroupRider;

typedef enum { HW_GROUP_SAME, HW_GROUP_NEW, HW_GROUP_REAR_NEEDED } HwGroupState;

typedef struct {
    int64_t gap_ns;           /* T */
    int64_t breakaway_gap_ns; /* used behind riders of the declared breakaway; 0: T throughout */
    double length_m;
} HwGroupRule;

/* The state of each rider towards the group before: states[0] is NEW. Riders stand in order of front_ns. A
 * rider of state REAR_NEEDED may belong to either group: bounds then hold for both. `needs[i]` is the place
 * of the rider whose rear wheel would decide (else −1). Arrays have n entries. */
void hw_groups_find(const HwGroupRider *riders, int n, const HwGroupRule *rule, HwGroupState *states,
                    int *needs);
