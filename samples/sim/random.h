/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * A seeded stream of random numbers, the same on every machine: PCG-XSH-RR 64/32 after M. E. O'Neill, "PCG: A
 * Family of Simple Fast Space-Efficient Statistically Good Algorithms for Random Number Generation",
 * HMC-CS-2014-0905. A value; no allocation; not shared between threads.
 */
#pragma once

#include <stdint.h>

typedef struct {
    uint64_t state;
    uint64_t increment;
} SimRandom;

void sim_random_init(SimRandom *r, uint64_t seed, uint64_t stream);
uint32_t sim_random_next(SimRandom *r);
/* Uniform in [low, high). */
double sim_random_between(SimRandom *r, double low, double high);
/* Mean 0, standard deviation 1: the sum of eight uniform values (Irwin-Hall), cheap and bounded. */
double sim_random_normal(SimRandom *r);
/* A smooth pattern over the plane, between -1 and 1, that varies over about one unit. */
double sim_random_pattern(uint32_t seed, double x, double y);
