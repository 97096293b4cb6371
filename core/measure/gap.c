/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/measure/gap.h"

#include <math.h>
#include <stddef.h>

HwSetup
hw_setup_unmeasured(void)
{
    return (HwSetup){ .worst_rate = 500e-6,
                      .worst_plane_deg = 0.5,
                      .worst_roll_deg = 1.0,
                      .road_width_m = 8.0,
                      .lowest_speed_mps = 5.0 };
}

const char *
hw_separated_get_word(HwSeparated separated)
{
    static const char *const words[] = { "yes", "no", "not established" };
    return words[separated];
}

const char *
hw_separated_get_told_apart(HwSeparated separated)
{
    return separated == HW_SEPARATED_NOT_ESTABLISHED ? "cannot be shown" : hw_separated_get_word(separated);
}

double
hw_u_by_eye_ns(double period_ns)
{
    return period_ns / sqrt(12.0);
}

/* Probability that a normal quantity of mean |gap| and deviation u is below zero. */
static double
p_below_zero(double gap_ns, double u_ns)
{
    if (u_ns <= 0)
        return gap_ns > 0 ? 0.0 : 0.5;
    return 0.5 * erfc(gap_ns / u_ns / sqrt(2.0));
}

/* By how much a gap can be read wrong where rate and alignment are at their stated worst: the viewed plane
 * turned about the upright (yaw) and the camera rolled displace the line by up to this much between riders at
 * the two edges of the road; the slower of the two sees the longer time. */
static double
worst_bias_ns(const HwLead *ahead, const HwLead *behind, double gap_ns, const HwSetup *setup)
{
    double bias_ns = setup->rate_known ? 0.0 : gap_ns * setup->worst_rate;
    if (!setup->alignment_known) {
        const double radians = 3.14159265358979323846 / 180.0;
        double offset_m = setup->road_width_m *
                          (tan(setup->worst_plane_deg * radians) + tan(setup->worst_roll_deg * radians));
        double slowest = fmin(isnan(ahead->speed_mps) ? setup->lowest_speed_mps : ahead->speed_mps,
                              isnan(behind->speed_mps) ? setup->lowest_speed_mps : behind->speed_mps);
        bias_ns += slowest > 0 ? offset_m / slowest * 1e9 : INFINITY;
    }
    return bias_ns;
}

HwGap
hw_gap_between(const HwLead *ahead, const HwLead *behind, const HwSetup *setup, double p_limit)
{
    HwGap gap = { .gap_ns = behind->time_ns - ahead->time_ns, .distance_m = NAN, .u_distance_m = NAN };
    double size_ns = fabs((double)gap.gap_ns);
    double rate_ns = setup->rate_known ? size_ns * setup->u_rate : 0.0;
    gap.u_gap_ns = sqrt(ahead->u_ns * ahead->u_ns + behind->u_ns * behind->u_ns + rate_ns * rate_ns);
    gap.p_order_wrong = p_below_zero(size_ns, gap.u_gap_ns);

    if (!isnan(behind->speed_mps)) {
        gap.distance_m = behind->speed_mps * (double)gap.gap_ns * 1e-9;
        /* NAN, where u of the speed is not known, carries through. */
        double u_speed_mps = hypot(behind->u_speed_mps, HW_U_SPEED_ON_THE_WAY_MPS);
        gap.u_distance_m = hypot(size_ns * 1e-9 * u_speed_mps, behind->speed_mps * gap.u_gap_ns * 1e-9);
    }

    double worst_ns = size_ns - worst_bias_ns(ahead, behind, size_ns, setup);
    if (gap.p_order_wrong > p_limit)
        gap.separated = HW_SEPARATED_NO;
    else if (isnan(gap.u_gap_ns) || worst_ns <= 0 || p_below_zero(worst_ns, gap.u_gap_ns) > p_limit)
        gap.separated = HW_SEPARATED_NOT_ESTABLISHED;
    else
        gap.separated = HW_SEPARATED_YES;
    return gap;
}
