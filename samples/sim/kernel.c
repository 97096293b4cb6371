/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "samples/sim/kernel.h"

#include <math.h>

/* First and second integral of the normal distribution with standard deviation s; of a step where s is 0. */
static double
once(double x, double s)
{
    if (s <= 0)
        return x > 0 ? x : 0;
    double z = x / s;
    return x * 0.5 * erfc(-z * M_SQRT1_2) + s * exp(-0.5 * z * z) * 0.39894228040143268;
}

static double
twice(double x, double s)
{
    if (s <= 0)
        return x > 0 ? 0.5 * x * x : 0;
    double z = x / s;
    return 0.5 *
           ((x * x + s * s) * 0.5 * erfc(-z * M_SQRT1_2) + x * s * exp(-0.5 * z * z) * 0.39894228040143268);
}

double
sim_kernel_exact(double exposure_m, double slit_m, double blur_m, double x_m)
{
    double a = exposure_m, b = slit_m;
    if (b < 1e-6)
        return (once(x_m + a / 2, blur_m) - once(x_m - a / 2, blur_m)) / a;
    return (twice(x_m + (a + b) / 2, blur_m) - twice(x_m + (a - b) / 2, blur_m) -
            twice(x_m - (a - b) / 2, blur_m) + twice(x_m - (a + b) / 2, blur_m)) /
           (a * b);
}

void
sim_kernel_init(SimKernel *k, double exposure_m, double slit_m, double blur_m)
{
    k->half_m = (exposure_m + slit_m) / 2 + 5 * blur_m;
    for (int i = 0; i <= SIM_KERNEL_STEPS; i++)
        k->cdf[i] =
            sim_kernel_exact(exposure_m, slit_m, blur_m, k->half_m * (2.0 * i / SIM_KERNEL_STEPS - 1));
    k->cdf[0] = 0;
    k->cdf[SIM_KERNEL_STEPS] = k->cdf[SIM_KERNEL_STEPS + 1] = 1;
}
