/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "samples/sim/scene.h"

#include "samples/sim/random.h"

#include <math.h>

void
sim_scene_init(SimScene *s, const SimScenario *c)
{
    s->scenario = c;
    s->tilt_rad =
        atan(c->camera_height_m / (c->distance_m + c->bottom_m)) - atan(c->rows / 2.0 / c->focal_rows);
    s->x0_m = c->x0_mm * 1e-3;
    s->tan_yaw = tan(c->yaw_deg * M_PI / 180);
    s->tan_lean = tan(c->lean_deg * M_PI / 180);
    s->tan_roll = tan(c->roll_deg * M_PI / 180);
}

double
sim_scene_fall(const SimScene *s, double row)
{
    return tan(s->tilt_rad + atan((row - s->scenario->rows / 2.0) / s->scenario->focal_rows));
}

double
sim_scene_height(const SimScene *s, double fall, double y_m)
{
    return s->scenario->camera_height_m - (s->scenario->distance_m + y_m) * fall;
}

double
sim_scene_row(const SimScene *s, double y_m, double h_m)
{
    double fall = (s->scenario->camera_height_m - h_m) / (s->scenario->distance_m + y_m);
    return s->scenario->rows / 2.0 + s->scenario->focal_rows * tan(atan(fall) - s->tilt_rad);
}

double
sim_scene_plane(const SimScene *s, double y_m, double h_m)
{
    double x = s->x0_m + y_m * s->tan_yaw + h_m * s->tan_lean;
    if (s->tan_roll != 0)
        x += s->tan_roll * ((y_m + s->scenario->distance_m) * sin(s->tilt_rad) +
                            (h_m - s->scenario->camera_height_m) * cos(s->tilt_rad));
    return x;
}

double
sim_scene_slit(const SimScene *s, double y_m)
{
    const SimScenario *c = s->scenario;
    return c->slit_mm * 1e-3 * (c->distance_m + y_m) / (c->distance_m + c->road_m / 2);
}

/* Length of [from, to] inside [low, high]. */
static double
common(double from, double to, double low, double high)
{
    double a = fmax(from, low), b = fmin(to, high);
    return b > a ? b - a : 0;
}

static SimColour
mixed(SimColour a, SimColour b, double share)
{
    float f = (float)share;
    return (SimColour){ a.r + (b.r - a.r) * f, a.g + (b.g - a.g) * f, a.b + (b.b - a.b) * f };
}

static SimColour
times(SimColour c, double k)
{
    float f = (float)fmax(k, 0);
    return (SimColour){ c.r * f, c.g * f, c.b * f };
}

/* Road with the finish line painted on it: black 4 cm between white strips of 34 cm (UCI 1.2.099), a little
 * worn. */
static SimColour
ground(const SimScene *s, double y)
{
    const SimScenario *c = s->scenario;
    double x = sim_scene_plane(s, y, 0), w = fmax(sim_scene_slit(s, y), 1e-6);
    double a = x - w / 2, b = x + w / 2;
    double black = common(a, b, 0, .04) / w;
    double white = (common(a, b, -.34, 0) + common(a, b, .04, .38)) / w;
    double wear = .5 + .5 * sim_random_pattern(11, y * 3.1, 0.3);
    double grit = 1 + .10 * sim_random_pattern(12, y * 120, 0) + .06 * sim_random_pattern(13, y * 31, 0);
    SimColour road = c->indoors ? (SimColour){ .38f, .27f, .16f } : (SimColour){ .135f, .133f, .130f };
    road = times(road, grit);
    if (y < 0.0 || y > c->road_m)
        return y < 0 ? times(road, .9) : times((SimColour){ .26f, .255f, .24f }, grit);
    SimColour light = mixed((SimColour){ .60f, .60f, .57f }, road, .10 + .18 * wear * wear);
    SimColour dark = mixed((SimColour){ .028f, .028f, .030f }, road, .06 + .2 * wear * wear);
    SimColour out = times(road, 1 - black - white);
    SimColour l = times(light, white * (.97 + .3 * (grit - 1))), d = times(dark, black * grit);
    return (SimColour){ out.r + l.r + d.r, out.g + l.g + d.g, out.b + l.b + d.b };
}

static SimColour
barrier(const SimScene *s, double h)
{
    (void)s;
    if (h < .06)
        return (SimColour){ .07f, .07f, .07f };
    if (h > .99)
        return times((SimColour){ .42f, .43f, .45f }, .8 + .4 * sim_random_pattern(21, h * 60, 0));
    /* A printed cloth: what the slit meets of letters and fields. */
    double letter = sim_random_pattern(22, h * 9, 1.7);
    SimColour cloth = { .035f, .085f, .20f };
    if (h > .34 && h < .78 && letter > -.05)
        cloth = (SimColour){ .58f, .58f, .56f };
    else if (h < .20)
        cloth = (SimColour){ .50f, .34f, .05f };
    return times(cloth, .93 + .12 * sim_random_pattern(23, h * 40, 0));
}

/* People behind the barrier: clothes one above the other, that sway, and pass slowly into others. */
static SimColour
crowd(double h, double t)
{
    static const SimColour WEAR[] = {
        { .05f, .06f, .10f }, { .22f, .06f, .05f }, { .34f, .33f, .30f },
        { .06f, .12f, .09f }, { .30f, .20f, .14f }, { .04f, .04f, .045f },
    };
    double sway = .05 * sim_random_pattern(31, t * .9, 0);
    double place = (h + sway) * 4.2;
    int i = (int)floor(place);
    /* Somebody else comes to stand there now and then, within a tenth of a second or so. */
    double turn = t * .35 + i * .37, before = floor(turn), pass = (turn - before - .94) / .06;
    unsigned which = (unsigned)(i * 7 + 3 + (int)before);
    SimColour c = mixed(WEAR[which % 6], WEAR[(which + 1) % 6], pass > 0 ? pass * pass * (3 - 2 * pass) : 0);
    if (h > 1.42)
        c = mixed(c, (SimColour){ .30f, .19f, .13f }, fmin((h - 1.42) / .06, 1));
    double folds =
        .35 * sim_random_pattern(32, (h + sway) * 23, t * 1.6) + .14 * sim_random_pattern(33, h * 60, t * 5);
    return times(c, .75 + folds);
}

SimColour
sim_scene_background(const SimScene *s, double fall, double time_s, double *ground_y, bool *moves)
{
    const SimScenario *c = s->scenario;
    double edge = c->road_m + .35, y = fall > 1e-9 ? c->camera_height_m / fall - c->distance_m : HUGE_VAL;
    *ground_y = NAN;
    *moves = false;
    if (y < edge) {
        *ground_y = y;
        return ground(s, y);
    }
    double h = sim_scene_height(s, fall, edge);
    if (c->indoors) {
        /* The boards of the track go on and rise, then the fence and the dark of the hall. */
        if (h < 1.1)
            return times((SimColour){ .36f, .255f, .15f }, 1 + .10 * sim_random_pattern(41, h * 50, 0));
        if (h < 1.25)
            return (SimColour){ .40f, .41f, .43f };
        return times((SimColour){ .030f, .032f, .042f }, 1 + .5 * sim_random_pattern(42, h * 7, 0));
    }
    if (h < 1.05)
        return barrier(s, h);
    double back = sim_scene_height(s, fall, edge + .7);
    if (back < 1.66) {
        *moves = true;
        return crowd(back, time_s);
    }
    double wall = sim_scene_height(s, fall, edge + 6);
    return times((SimColour){ .16f, .145f, .125f },
                 1 + .30 * sim_random_pattern(43, wall * 3, 0) + .18 * sim_random_pattern(44, wall * 22, 0));
}

double
sim_scene_lamp(const SimScene *s, double from_s, double to_s)
{
    const SimScenario *c = s->scenario;
    double n = floor((from_s - c->lamp_first_s) / c->lamp_period_s), lit = 0;
    for (int i = 0; i < 2; i++) {
        double on = c->lamp_first_s + (n + i) * c->lamp_period_s;
        lit += common(from_s, to_s, on, on + c->lamp_width_s);
    }
    return lit / (to_s - from_s);
}
