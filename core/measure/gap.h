/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The gap between two crossings, how sure it is, and whether the recording tells the two apart. Plain values.
 */
#pragma once

#include <stdbool.h>
#include <stdint.h>

/* When a tyre reached the plane, as it was read. */
typedef struct {
    int64_t time_ns;
    double u_ns;        /* standard uncertainty of the reading alone */
    double speed_mps;   /* NAN where not measured */
    double u_speed_mps; /* NAN where not known */
} HwLead;

/* What is known of the camera where a gap is judged; what is not stands at its stated worst case. */
typedef struct {
    bool rate_known;
    double u_rate; /* relative standard uncertainty of the scan rate */
    bool alignment_known;
    double worst_rate;       /* relative, 500 ppm as shipped */
    double worst_plane_deg;  /* yaw of the viewed plane, 0.5 as shipped */
    double worst_roll_deg;   /* 1 as shipped */
    double road_width_m;     /* 8 as shipped */
    double lowest_speed_mps; /* 5 as shipped, for riders without a measured speed */
} HwSetup;

/* The stated worst cases, nothing measured. */
HwSetup hw_setup_unmeasured(void);

typedef enum { HW_SEPARATED_YES, HW_SEPARATED_NO, HW_SEPARATED_NOT_ESTABLISHED } HwSeparated;

/* "yes", "no", "not established": as in files. */
const char *hw_separated_get_word(HwSeparated separated);

/* "yes", "no", "cannot be shown": what people read behind "told apart". */
const char *hw_separated_get_told_apart(HwSeparated separated);

typedef struct {
    int64_t gap_ns;       /* behind − ahead; ≥ 0 where the order is right */
    double u_gap_ns;      /* standard, of the readings and the rate */
    double distance_m;    /* speed of the one behind × gap; NAN without its speed */
    double u_distance_m;  /* NAN where the distance or u of the speed is not known */
    double p_order_wrong; /* probability that the order is the other way round */
    HwSeparated separated;
} HwGap;

/* By how much the speed of the one behind can have differed, on the way to the line, from that at the line: a
 * bike throw changes it by up to ± 2.1 m/s, rectangular (GUM 4.3.7). */
#define HW_U_SPEED_ON_THE_WAY_MPS 1.2

/* The gap from `ahead` to `behind`. `p_limit`: the largest p_order_wrong at which they count as told apart
 * (0.01 where a rule set names none). Readings are taken as independent and normal (JCGM 100:2008, 5.1.2).
 * YES: p ≤ limit, and still so when rate and alignment, where never measured, stand at their worst; NO: p >
 * limit for the readings alone; NOT_ESTABLISHED: only the worst cases prevent it. */
HwGap hw_gap_between(const HwLead *ahead, const HwLead *behind, const HwSetup *setup, double p_limit);

/* Standard uncertainty in columns of a marker set by eye at 1:1 or above, and the time of one column:
 * half-width of one column, rectangular (GUM 4.3.7): 1/√12. */
double hw_u_by_eye_ns(double period_ns);
