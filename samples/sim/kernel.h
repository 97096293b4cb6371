/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * What one exposure of the slit averages over, along the travel: the way covered during the exposure, the
 * width of the slit's footprint and the lens, folded together. Metres, centred on the middle of the exposure.
 * A value, filled once per rider and scan.
 */
#pragma once

enum { SIM_KERNEL_STEPS = 512 };

typedef struct {
    double half_m;                    /* beyond this distance the kernel is nothing */
    double cdf[SIM_KERNEL_STEPS + 2]; /* share of the kernel before a place */
} SimKernel;

/* exposure_m > 0: way covered during the exposure; slit_m, blur_m (one standard deviation) may be 0. */
void sim_kernel_init(SimKernel *k, double exposure_m, double slit_m, double blur_m);
/* The closed form that the table is filled from. */
double sim_kernel_exact(double exposure_m, double slit_m, double blur_m, double x_m);

static inline double
sim_kernel_share(const SimKernel *k, double x_m)
{
    if (x_m <= -k->half_m)
        return 0;
    if (x_m >= k->half_m)
        return 1;
    double place = (x_m + k->half_m) * (SIM_KERNEL_STEPS / (2 * k->half_m));
    int i = (int)place;
    return k->cdf[i] + (k->cdf[i + 1] - k->cdf[i]) * (place - i);
}
