/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A figure measured several times: its mean and how sure it is. */
#pragma once

#include <stdbool.h>
#include <stdint.h>

typedef struct {
    double mean;
    double expanded; /* twice the standard deviation of the mean */
    int n;
} Spread;

/* Of n >= 2 values. */
Spread spread_of(const double *values, int n);

/* Processor time of this process, in ns: what another program takes of the machine does not count. */
int64_t spread_now_ns(void);

/* "0.953 ± 0.004 (n = 15)" after the words, and whether it keeps `limit` (from below where `at_least`);
 * no word of an aim where it is 0. */
void spread_print(const char *words, Spread spread, bool at_least, double limit);
