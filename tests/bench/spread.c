/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/bench/spread.h"

#include <math.h>
#include <stdio.h>
#include <time.h>

Spread
spread_of(const double *values, int n)
{
    double sum = 0, squares = 0;
    for (int i = 0; i < n; i++)
        sum += values[i];
    for (int i = 0; i < n; i++)
        squares += (values[i] - sum / n) * (values[i] - sum / n);
    return (Spread){ .mean = sum / n, .expanded = 2 * sqrt(squares / (n - 1) / n), .n = n };
}

int64_t
spread_now_ns(void)
{
    struct timespec now;
    clock_gettime(CLOCK_PROCESS_CPUTIME_ID, &now);
    return (int64_t)now.tv_sec * 1000000000 + now.tv_nsec;
}

void
spread_print(const char *words, Spread spread, bool at_least, double limit)
{
    bool keeps = at_least ? spread.mean >= limit : spread.mean <= limit;
    printf("%s: %.3f ± %.3f (n = %d)", words, spread.mean, spread.expanded, spread.n);
    if (limit <= 0) {
        printf("\n");
        return;
    }
    printf("; aim %s %.2f, %s\n", at_least ? "at least" : "at most", limit, keeps ? "kept" : "MISSED");
}
