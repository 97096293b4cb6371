/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "samples/sim/motion.h"

#include <glib.h>
#include <math.h>

#define STEP_S 0.001
#define BEFORE_S 3.0
#define AFTER_S 4.0
#define GRAVITY 9.81

struct SimMotion {
    SimThrow thrown;
    double gain_m;
    double offset_m; /* puts the foremost point on the line at time 0 */
    int count;
    double *place; /* of the centre of mass, every STEP_S from -BEFORE_S */
    double *speed;
};

void
sim_body_init(SimBody *b)
{
    *b = (SimBody){
        .power_w = 800,
        .rider_kg = 74,
        .bike_kg = 7.5,
        .cda_m2 = 0.29,
        .wheel_drag_m2 = 0.0044,
        .air_kgm3 = 1.2,
        .rolling = 0.0032,
        .wheel_inertia_kgm2 = 0.14,
        .wheel_radius_m = 0.334,
        .chain_efficiency = 0.977,
    };
}

SimLoss
sim_body_loss(const SimBody *b, double speed_mps)
{
    double weight = (b->rider_kg + b->bike_kg) * GRAVITY;
    double air_mps = speed_mps + b->head_wind_mps;
    SimLoss l;
    l.air_w = 0.5 * b->air_kgm3 * (b->cda_m2 + b->wheel_drag_m2) * air_mps * fabs(air_mps) * speed_mps;
    l.rolling_w = speed_mps * cos(atan(b->grade)) * b->rolling * weight;
    l.bearing_w = speed_mps * (91 + 8.7 * speed_mps) * 1e-3;
    l.slope_w = speed_mps * weight * sin(atan(b->grade));
    l.net_w = l.air_w + l.rolling_w + l.bearing_w + l.slope_w;
    return l;
}

double
sim_body_acceleration(const SimBody *b, double speed_mps)
{
    double mass = b->rider_kg + b->bike_kg + b->wheel_inertia_kgm2 / (b->wheel_radius_m * b->wheel_radius_m);
    double v = fmax(speed_mps, 0.5);
    return (b->power_w * b->chain_efficiency - sim_body_loss(b, v).net_w) / (mass * v);
}

double
sim_throw_gain(const SimBody *b, const SimThrow *t)
{
    return t->shift_m * b->rider_kg / (b->rider_kg + b->bike_kg);
}

double
sim_throw_share(const SimThrow *t, double time_s)
{
    double p = (time_s - t->start_s) / t->duration_s;
    p = CLAMP(p, 0, 1);
    return p * p * p * (10 - 15 * p + 6 * p * p);
}

static double
throw_speed(const SimThrow *t, double time_s)
{
    double p = (time_s - t->start_s) / t->duration_s;
    p = CLAMP(p, 0, 1);
    return 30 * p * p * (1 - p) * (1 - p) / t->duration_s;
}

/* One classical Runge-Kutta step of the centre of mass. */
static void
advance(const SimBody *b, double h, double *x, double *v)
{
    double a1 = sim_body_acceleration(b, *v);
    double a2 = sim_body_acceleration(b, *v + 0.5 * h * a1);
    double a3 = sim_body_acceleration(b, *v + 0.5 * h * a2);
    double a4 = sim_body_acceleration(b, *v + h * a3);
    *x += h * (*v + h / 6 * (a1 + a2 + a3));
    *v += h / 6 * (a1 + 2 * a2 + 2 * a3 + a4);
}

SimMotion *
sim_motion_new(const SimBody *b, const SimThrow *t, double speed_mps, double lead_s)
{
    SimMotion *m = g_new0(SimMotion, 1);
    m->thrown = *t;
    m->gain_m = sim_throw_gain(b, t);
    m->count = (int)lround((BEFORE_S + AFTER_S) / STEP_S) + 1;
    m->place = g_new(double, m->count);
    m->speed = g_new(double, m->count);

    /* The speed is given at -lead_s: run there first (backwards in time where the table begins earlier). */
    double x = 0, v = speed_mps;
    int steps = (int)lround((lead_s - BEFORE_S) / STEP_S);
    for (int i = 0; i < abs(steps); i++)
        advance(b, steps > 0 ? STEP_S : -STEP_S, &x, &v);
    for (int i = 0; i < m->count; i++) {
        m->place[i] = x;
        m->speed[i] = v;
        advance(b, STEP_S, &x, &v);
    }
    m->offset_m = -sim_motion_place(m, 0);
    return m;
}

void
sim_motion_free(SimMotion *m)
{
    if (m == NULL)
        return;
    g_free(m->place);
    g_free(m->speed);
    g_free(m);
}

double
sim_motion_place(const SimMotion *m, double time_s)
{
    double p = (time_s + BEFORE_S) / STEP_S;
    int i = (int)floor(CLAMP(p, 0, m->count - 2.0));
    double q = p - i;
    double x0 = m->place[i], x1 = m->place[i + 1];
    double d0 = m->speed[i] * STEP_S, d1 = m->speed[i + 1] * STEP_S;
    double x = x0 + q * (d0 + q * (3 * (x1 - x0) - 2 * d0 - d1 + q * (2 * (x0 - x1) + d0 + d1)));
    return x + m->offset_m + m->gain_m * sim_throw_share(&m->thrown, time_s);
}

double
sim_motion_speed(const SimMotion *m, double time_s)
{
    double p = (time_s + BEFORE_S) / STEP_S;
    int i = (int)floor(CLAMP(p, 0, m->count - 2.0));
    double v = m->speed[i] + (m->speed[i + 1] - m->speed[i]) * (p - i);
    return v + m->gain_m * throw_speed(&m->thrown, time_s);
}

double
sim_motion_shift(const SimMotion *m, double time_s)
{
    return m->thrown.shift_m * sim_throw_share(&m->thrown, time_s);
}

double
sim_motion_when(const SimMotion *m, double place_m)
{
    double t = place_m / sim_motion_speed(m, 0);
    for (int i = 0; i < 40; i++) {
        double off = sim_motion_place(m, t) - place_m;
        t -= off / sim_motion_speed(m, t);
        if (fabs(off) < 1e-12)
            break;
    }
    return t;
}
