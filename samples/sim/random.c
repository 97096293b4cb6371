/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "samples/sim/random.h"

#include <math.h>

void
sim_random_init(SimRandom *r, uint64_t seed, uint64_t stream)
{
    r->increment = stream * 2u + 1u;
    r->state = 0;
    sim_random_next(r);
    r->state += seed;
    sim_random_next(r);
}

uint32_t
sim_random_next(SimRandom *r)
{
    uint64_t old = r->state;
    r->state = old * 6364136223846793005u + r->increment;
    uint32_t mixed = (uint32_t)(((old >> 18) ^ old) >> 27);
    uint32_t turn = (uint32_t)(old >> 59);
    return mixed >> turn | mixed << ((32u - turn) & 31u);
}

double
sim_random_between(SimRandom *r, double low, double high)
{
    return low + (high - low) * (sim_random_next(r) * 0x1p-32);
}

double
sim_random_normal(SimRandom *r)
{
    double sum = 0;
    for (int i = 0; i < 4; i++) {
        uint32_t word = sim_random_next(r);
        sum += (word & 0xffffu) + 0.5 + (word >> 16) + 0.5;
    }
    /* Eight uniform values of width 65536 have the variance 8/12 of its square. */
    return (sum - 4.0 * 65536.0) * (1.0 / (65536.0 * 0.81649658092772603));
}

static double
corner(uint32_t seed, int32_t x, int32_t y)
{
    uint32_t k = seed ^ ((uint32_t)x * 0x9e3779b1u) ^ ((uint32_t)y * 0x85ebca77u);
    k = (k ^ (k >> 15)) * 0x2c1b3c6du;
    k = (k ^ (k >> 12)) * 0x297a2d39u;
    k ^= k >> 15;
    return k * 0x1p-31 - 1.0;
}

double
sim_random_pattern(uint32_t seed, double x, double y)
{
    double x0 = floor(x), y0 = floor(y);
    double a = x - x0, b = y - y0;
    int32_t i = (int32_t)x0, j = (int32_t)y0;
    a = a * a * (3 - 2 * a);
    b = b * b * (3 - 2 * b);
    double top = corner(seed, i, j) * (1 - a) + corner(seed, i + 1, j) * a;
    double foot = corner(seed, i, j + 1) * (1 - a) + corner(seed, i + 1, j + 1) * a;
    return top * (1 - b) + foot * b;
}
