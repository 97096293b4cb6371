/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "samples/sim/lettering.h"

#include <math.h>
#include <string.h>

/* A digit's strokes in a cell 0.6 wide and 1 high; a negative u lifts the pen. */
#define UP                                                                                                   \
    {                                                                                                        \
        -1, 0                                                                                                \
    }
static const SimPoint STROKE[10][18] = {
    { { 0, .2 },
      { 0, .8 },
      { .15, 1 },
      { .45, 1 },
      { .6, .8 },
      { .6, .2 },
      { .45, 0 },
      { .15, 0 },
      { 0, .2 },
      UP,
      UP },
    { { .12, .8 }, { .35, 1 }, { .35, 0 }, UP, UP },
    { { 0, .8 }, { .15, 1 }, { .45, 1 }, { .6, .8 }, { .6, .62 }, { 0, 0 }, { .6, 0 }, UP, UP },
    { { 0, .9 },
      { .15, 1 },
      { .45, 1 },
      { .6, .82 },
      { .6, .66 },
      { .45, .53 },
      { .25, .53 },
      UP,
      { .45, .53 },
      { .6, .38 },
      { .6, .18 },
      { .45, 0 },
      { .15, 0 },
      { 0, .1 },
      UP,
      UP },
    { { .45, 0 }, { .45, 1 }, { 0, .3 }, { .6, .3 }, UP, UP },
    { { .55, 1 },
      { .08, 1 },
      { .03, .56 },
      { .4, .6 },
      { .6, .42 },
      { .6, .18 },
      { .42, 0 },
      { .12, 0 },
      { 0, .12 },
      UP,
      UP },
    { { .52, .95 },
      { .35, 1 },
      { .15, .95 },
      { 0, .6 },
      { 0, .2 },
      { .15, 0 },
      { .45, 0 },
      { .6, .2 },
      { .6, .4 },
      { .45, .56 },
      { .15, .56 },
      { 0, .4 },
      UP,
      UP },
    { { 0, 1 }, { .6, 1 }, { .2, 0 }, UP, UP },
    { { .15, .54 },
      { .03, .7 },
      { .03, .85 },
      { .15, 1 },
      { .45, 1 },
      { .57, .85 },
      { .57, .7 },
      { .45, .54 },
      { .15, .54 },
      { 0, .38 },
      { 0, .18 },
      { .15, 0 },
      { .45, 0 },
      { .6, .18 },
      { .6, .38 },
      { .45, .54 },
      UP,
      UP },
    { { .08, .05 },
      { .25, 0 },
      { .45, .05 },
      { .6, .4 },
      { .6, .8 },
      { .45, 1 },
      { .15, 1 },
      { 0, .8 },
      { 0, .6 },
      { .15, .44 },
      { .45, .44 },
      { .6, .6 },
      UP,
      UP },
};

static SimPoint
on_panel(const SimPanel *p, double x, double y)
{
    return (SimPoint){ p->middle.u + x * p->reading.u + y * p->up.u,
                       p->middle.h + x * p->reading.h + y * p->up.h };
}

int
sim_lettering_panel(const SimPanel *panel, const char *text, SimShape *shapes, int room)
{
    int digits = 0, used = 0;
    for (const char *c = text; *c != '\0'; c++)
        digits += *c >= '0' && *c <= '9';
    if (digits == 0 || room < 1)
        return 0;
    /* A cell is 0.6 wide with 0.25 between: as high as the panel bears, as narrow as it must be. */
    double high = panel->height_m * 0.66, units = 0.6 * digits + 0.25 * (digits - 1);
    double wide = fmin(high, panel->width_m * 0.80 / units);
    double radius = 0.083 * fmin(high, wide * 1.15);
    double x = -wide * units / 2;
    SimPaint ink = { .kind = SIM_PAINT_FLAT, .colour = panel->ink };
    for (const char *c = text; *c != '\0'; c++) {
        if (*c < '0' || *c > '9')
            continue;
        const SimPoint *s = STROKE[*c - '0'];
        for (int i = 0; !(s[i].u < 0 && s[i + 1].u < 0); i++) {
            if (s[i].u < 0 || s[i + 1].u < 0 || used >= room - 1)
                continue;
            shapes[used] = sim_shape_capsule(
                on_panel(panel, x + s[i].u * wide, (s[i].h - 0.5) * high), radius,
                on_panel(panel, x + s[i + 1].u * wide, (s[i + 1].h - 0.5) * high), radius, ink);
            shapes[used++].shadow = 0;
        }
        x += 0.85 * wide;
    }
    double w = panel->width_m / 2, h = panel->height_m / 2;
    SimPoint corner[4] = { on_panel(panel, -w, -h), on_panel(panel, w, -h), on_panel(panel, w, h),
                           on_panel(panel, -w, h) };
    SimPaint ground = { .kind = SIM_PAINT_FLAT, .colour = panel->ground, .grain = 0.10f, .seed = 5 };
    shapes[used] = sim_shape_polygon(corner, 4, ground);
    shapes[used++].shadow = 0;
    return used;
}
