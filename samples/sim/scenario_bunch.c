/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "samples/sim/scenario_reader.h"

#include "samples/sim/random.h"

#include <math.h>

/* Crossings in clumps with gaps between, from one time to another, in order; own it. */
static double *
draw_times(SimRandom *rnd, int n, double from, double to)
{
    double *times = g_new(double, n), at = 0;
    for (int i = 0; i < n; i++) {
        times[i] = at;
        double u = sim_random_between(rnd, 0, 1);
        if (u < .75)
            at += -.05 * log(1 - u * .9);
        else if (u < .96)
            at += .12 + .5 * (u - .75);
        else
            at += 1.1 + 60 * (u - .96);
    }
    double scale = (to - from) / fmax(times[n - 1], 1e-9);
    for (int i = 0; i < n; i++)
        times[i] = from + times[i] * scale;
    return times;
}

/* Places across the road such that riders who overlap in time stand apart as well as may be; own it. */
static double *
draw_laterals(SimRandom *rnd, const double *times, int n, double road_m)
{
    double *y = g_new(double, n);
    for (int i = 0; i < n; i++) {
        double best = -1;
        for (int k = 0; k < 24; k++) {
            double try = sim_random_between(rnd, 1.3, road_m - .8), clear = HUGE_VAL;
            for (int j = i - 1; j >= 0 && times[i] - times[j] < .13; j--)
                clear = fmin(clear, fabs(try - y[j]));
            if (clear > best) {
                best = clear;
                y[i] = try;
            }
        }
    }
    return y;
}

/* The numbers 0 to n - 1 in a drawn order; own it. */
static int *
draw_turns(SimRandom *rnd, int n)
{
    int *turn = g_new(int, n);
    for (int i = 0; i < n; i++)
        turn[i] = i;
    for (int i = n - 1; i > 0; i--) {
        int j = (int)(sim_random_next(rnd) % (uint32_t)(i + 1)), k = turn[i];
        turn[i] = turn[j];
        turn[j] = k;
    }
    return turn;
}

gboolean
sim_reader_bunch(SimReader *r, const char *text, GError **error)
{
    g_auto(GStrv) f = sim_reader_fields(text);
    double count = 0, bib = 0, from = 0, to = 0;
    if (g_strv_length(f) != 5 || r->given->len == 0 || r->family->len == 0 || r->s->teams->len == 0)
        return sim_reader_refuse(
            r, error,
            "a bunch is COUNT | FIRST BIB | FROM | TO | CATEGORY and needs [teams], [given] and [family].");
    if (!sim_reader_number(r, f[0], 1, 1000, &count, error) ||
        !sim_reader_number(r, f[1], 1, 9999, &bib, error) ||
        !sim_reader_number(r, f[2], 0, 1e6, &from, error) ||
        !sim_reader_number(r, f[3], from, 1e6, &to, error))
        return FALSE;
    int n = (int)count;
    SimRandom rnd;
    sim_random_init(&rnd, r->s->seed, 77);
    g_autofree double *times = draw_times(&rnd, n, from, to);
    g_autofree double *laterals = draw_laterals(&rnd, times, n, r->s->road_m);
    g_autofree int *turn = draw_turns(&rnd, n);
    for (int i = 0; i < n; i++) {
        const char *given = g_ptr_array_index(r->given, sim_random_next(&rnd) % r->given->len);
        const char *family = g_ptr_array_index(r->family, sim_random_next(&rnd) % r->family->len);
        const SimTeam *team = &g_array_index(r->s->teams, SimTeam, (guint)i % r->s->teams->len);
        int k = turn[i];
        /* Who comes later comes slower. */
        double speed = sim_random_between(&rnd, 16.8, 18) - 3.5 * (times[k] - from) / (to - from + 1);
        char at[G_ASCII_DTOSTR_BUF_SIZE], y[G_ASCII_DTOSTR_BUF_SIZE], v[G_ASCII_DTOSTR_BUF_SIZE];
        g_ascii_formatd(at, sizeof at, "%.9f", times[k]);
        g_ascii_formatd(y, sizeof y, "%.3f", laterals[k]);
        g_ascii_formatd(v, sizeof v, "%.3f", speed);
        g_autofree char *line = g_strdup_printf("%d | %s %s | %s | | %s | at=%s y=%s v=%s", (int)bib + i,
                                                given, family, team->name, f[4], at, y, v);
        if (!sim_reader_rider(r, line, error))
            return FALSE;
    }
    return TRUE;
}
