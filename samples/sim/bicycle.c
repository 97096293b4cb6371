/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "samples/sim/bicycle.h"

#include <math.h>

SimShape *
sim_shape_list_add(SimShapeList *list, SimShape shape)
{
    /* A full list overwrites its last shape: far parts go first, never an edge that is measured. */
    if (list->count == SIM_SHAPES_MAX)
        list->count--;
    list->shape[list->count] = shape;
    return &list->shape[list->count++];
}

static SimPaint
gloss(SimColour c, float shine)
{
    return (SimPaint){ .kind = SIM_PAINT_ROUND, .colour = c, .gloss = shine };
}

static SimPaint
flat(float r, float g, float b)
{
    return (SimPaint){ .kind = SIM_PAINT_FLAT, .colour = { r, g, b } };
}

static SimPoint
shifted(SimPoint p, double du, double dh)
{
    return (SimPoint){ p.u + du, p.h + dh };
}

double
sim_bicycle_length(const SimBicycle *b)
{
    return b->wheelbase_m + b->diameter_m;
}

void
sim_bicycle_points(const SimBicycle *b, SimBicyclePoints *p)
{
    const double head = 73.0 * M_PI / 180, seat = 73.5 * M_PI / 180;
    double r = b->diameter_m / 2;
    p->front_hub = (SimPoint){ r, r };
    p->rear_hub = (SimPoint){ r + b->wheelbase_m, r };
    double drop = b->track ? 0.055 : 0.070, stay = b->track ? 0.395 : 0.408;
    p->bottom_bracket = (SimPoint){ p->rear_hub.u - sqrt(stay * stay - drop * drop), r - drop };
    p->saddle = shifted(p->bottom_bracket, b->saddle_m * cos(seat), b->saddle_m * sin(seat));
    p->nose = shifted(p->saddle, -.13, 0);
    /* The steering axis passes 45 mm behind the hub. */
    SimPoint foot = shifted(p->front_hub, 0.045 * sin(head), -0.045 * cos(head));
    p->crown = shifted(foot, 0.368 * cos(head), 0.368 * sin(head));
    p->head = shifted(foot, 0.51 * cos(head), 0.51 * sin(head));
    p->stem = shifted(p->head, 0.008 - 0.118, 0.045 - 0.012);
    p->hood = shifted(p->stem, -0.105, 0.035);
    p->drop = shifted(p->stem, -0.082, -0.065);
    p->drop_end = shifted(p->stem, 0.03, -0.135);
    p->pad = shifted(p->stem, -0.02, 0.07);
    p->crank_m = 0.1725;
}

SimPoint
sim_bicycle_pedal(const SimBicycle *b, double crank_rad, bool far)
{
    SimBicyclePoints p;
    sim_bicycle_points(b, &p);
    double turn = crank_rad + (far ? M_PI : 0);
    return shifted(p.bottom_bracket, -p.crank_m * sin(turn), p.crank_m * cos(turn));
}

static void
add_chain(const SimBicycle *b, const SimBicyclePoints *p, SimShapeList *list)
{
    double ring = 0.108, cog = b->track ? 0.03 : 0.028;
    SimPaint metal = gloss((SimColour){ .10f, .10f, .11f }, .25f), links = flat(.045f, .042f, .04f);
    if (!b->track) {
        SimPoint cage = shifted(p->rear_hub, -0.012, -0.135);
        sim_shape_list_add(list, sim_shape_capsule(shifted(p->rear_hub, -0.005, -0.06), .022, cage, .020,
                                                   flat(.03f, .03f, .03f)));
        sim_shape_list_add(list,
                           sim_shape_capsule(shifted(p->bottom_bracket, 0, -ring), .004, cage, .004, links));
    } else
        sim_shape_list_add(list, sim_shape_capsule(shifted(p->bottom_bracket, 0, -ring), .005,
                                                   shifted(p->rear_hub, 0, -cog), .005, links));
    sim_shape_list_add(list, sim_shape_capsule(shifted(p->bottom_bracket, 0, ring), .005,
                                               shifted(p->rear_hub, 0, cog), .005, links));
    sim_shape_list_add(list, sim_shape_ring(p->bottom_bracket, ring, ring - .018, metal));
    sim_shape_list_add(list, sim_shape_ring(p->rear_hub, b->track ? cog : .046, .012, metal));
    for (int i = 0; i < 4; i++) {
        double a = 0.4 + i * M_PI / 2;
        sim_shape_list_add(
            list, sim_shape_capsule(p->bottom_bracket, .012,
                                    shifted(p->bottom_bracket, (ring - .01) * cos(a), (ring - .01) * sin(a)),
                                    .007, metal));
    }
}

void
sim_bicycle_add_near(const SimBicycle *b, double crank_rad, SimShapeList *list)
{
    SimBicyclePoints p;
    sim_bicycle_points(b, &p);
    SimPoint pedal = sim_bicycle_pedal(b, crank_rad, false);
    SimPaint arm = gloss((SimColour){ .05f, .05f, .055f }, .3f);
    sim_shape_list_add(list, sim_shape_capsule(shifted(pedal, -.045, -.004), .008,
                                               shifted(pedal, .045, -.004), .008, flat(.05f, .05f, .05f)));
    sim_shape_list_add(list, sim_shape_capsule(p.bottom_bracket, .017, pedal, .011, arm));
    if (b->drive_near)
        add_chain(b, &p, list);
}

/* A spoke at a turn of the wheel; a part of a rolling wheel crosses the slit faster above the hub, slower
 * below. */
static void
add_spoke(SimPoint hub, double inner, double outer, double turn, double r, double thick, SimPaint paint,
          SimShapeList *list)
{
    double su = -sin(turn), sh = cos(turn);
    SimPoint a = shifted(hub, inner * su, inner * sh), b = shifted(hub, outer * su, outer * sh);
    SimShape s = sim_shape_capsule(a, thick, b, thick, paint);
    double high = 0.6 * outer * sh / r, steep = fmax(sh * sh, 0.05);
    double pace = fabs(1 + high / steep);
    s.stretch = 1 / fmin(fmax(pace, 0.2), 4.0);
    s.shadow = 0;
    sim_shape_list_add(list, s);
}

/* Three rows of light strokes on a deep rim; they turn with the wheel, so the scan bends them. */
static void
add_rim_print(const SimBicycle *b, SimPoint hub, double turn, SimShapeList *list)
{
    double r = b->diameter_m / 2, middle = r - .026 - b->rim_m * .5, half = b->rim_m * .22;
    for (int i = 0; i < 18; i++) {
        double a = turn + i / 6 * 2.0943951 + i % 6 * .085, su = -sin(a), sh = cos(a);
        SimPoint p = { hub.u + (middle - half) * su, hub.h + (middle - half) * sh };
        SimPoint q = { hub.u + (middle + half) * su, hub.h + (middle + half) * sh };
        SimShape s = sim_shape_capsule(p, .005, q, .005, flat(.42f, .42f, .42f));
        s.stretch = 1 / fmax(fabs(1 + middle * sh / r), .2);
        s.shadow = 0;
        sim_shape_list_add(list, s);
    }
}

static void
add_wheel(const SimBicycle *b, SimPoint hub, double turn, int spokes, bool disc, SimShapeList *list)
{
    double r = b->diameter_m / 2, tyre = 0.026;
    SimPaint rubber = flat(.016f, .016f, .017f);
    sim_shape_list_add(list, sim_shape_ring(hub, r, r - tyre * .62, rubber));
    SimPaint side = flat(.030f, .027f, .024f);
    if ((b->seed & 7u) == 3)
        side.colour = (SimColour){ .22f, .13f, .06f };
    sim_shape_list_add(list, sim_shape_ring(hub, r - tyre * .5, r - tyre, side));
    SimPaint rim = gloss(b->rim, .12f);
    rim.grain = .05f;
    rim.seed = b->seed;
    if (disc) {
        SimPaint sheet = {
            .kind = SIM_PAINT_ROUND, .colour = b->rim, .grain = .06f, .gloss = .06f, .seed = b->seed + 1
        };
        sim_shape_list_add(list, sim_shape_ring(hub, .10, .075, flat(.35f, .35f, .36f)));
        sim_shape_list_add(list, sim_shape_ellipse(hub, r - tyre * .7, r - tyre * .7, 0, sheet));
        return;
    }
    sim_shape_list_add(list,
                       sim_shape_ellipse(hub, .021, .021, 0, gloss((SimColour){ .09f, .09f, .1f }, .4f)));
    if (b->rim_m > .04 && (b->seed >> 4 & 1u))
        add_rim_print(b, hub, turn, list);
    sim_shape_list_add(list, sim_shape_ring(hub, r - tyre * .7, r - tyre - b->rim_m, rim));
    double inner = r - tyre - b->rim_m + .004;
    SimPaint wire = flat(.07f, .07f, .072f);
    for (int i = 0; i < spokes; i++)
        add_spoke(hub, .018, inner, turn + 2 * M_PI * i / spokes, r, .0012, wire, list);
}

static void
add_bars(const SimBicycle *b, const SimBicyclePoints *p, SimShapeList *list)
{
    SimPaint tape = gloss(b->bar_tape, .05f), metal = gloss((SimColour){ .04f, .04f, .045f }, .25f);
    if (b->time_trial) {
        sim_shape_list_add(list, sim_shape_capsule(p->pad, .017, shifted(p->pad, -.30, .045), .013, metal));
        sim_shape_list_add(
            list, sim_shape_capsule(shifted(p->pad, .05, .012), .020, p->pad, .022, flat(.02f, .02f, .02f)));
        sim_shape_list_add(list,
                           sim_shape_capsule(p->stem, .016, shifted(p->stem, -.17, -.015), .013, metal));
        sim_shape_list_add(list, sim_shape_capsule(p->stem, .02, p->pad, .02, metal));
    } else {
        SimPoint bend = shifted(p->hood, .02, -.02);
        if (!b->track) {
            sim_shape_list_add(list, sim_shape_capsule(shifted(p->hood, .015, -.005), .019,
                                                       shifted(p->hood, -.03, .022), .016,
                                                       flat(.018f, .018f, .018f)));
            sim_shape_list_add(list, sim_shape_capsule(shifted(p->hood, -.022, .0), .007,
                                                       shifted(p->hood, -.005, -.115), .006, metal));
        }
        sim_shape_list_add(list, sim_shape_capsule(p->stem, .015, bend, .015, tape));
        sim_shape_list_add(list, sim_shape_capsule(bend, .015, p->drop, .016, tape));
        sim_shape_list_add(list, sim_shape_capsule(p->drop, .016, shifted(p->drop, .04, -.062), .016, tape));
        sim_shape_list_add(list,
                           sim_shape_capsule(shifted(p->drop, .04, -.062), .016, p->drop_end, .016, tape));
    }
    SimPoint clamp = shifted(p->head, .010, .035);
    sim_shape_list_add(list, sim_shape_capsule(clamp, .019, p->stem, .018, metal));
}

void
sim_bicycle_add_frame(const SimBicycle *b, double crank_rad, double wheel_rad, SimShapeList *list)
{
    SimBicyclePoints p;
    sim_bicycle_points(b, &p);
    SimPaint tube = gloss(b->frame, .35f), dark = gloss((SimColour){ .035f, .035f, .038f }, .3f);
    SimPaint marked = tube;
    marked.band = b->frame_band;
    marked.band_from = .34f;
    marked.band_to = .70f;
    double aero = b->time_trial ? 1.5 : 1;

    add_bars(b, &p, list);
    SimPoint tail = shifted(p.saddle, .11, .012);
    sim_shape_list_add(list, sim_shape_capsule(p.nose, .013, tail, .024, flat(.02f, .02f, .02f)));
    SimPoint cluster = shifted(p.bottom_bracket, .50 * cos(73.5 * M_PI / 180), .50 * sin(73.5 * M_PI / 180));
    sim_shape_list_add(list, sim_shape_capsule(shifted(p.head, .002, .03), .021, p.crown, .025 * aero, tube));
    sim_shape_list_add(list, sim_shape_capsule(p.crown, .022 * aero, p.front_hub, .010, tube));
    if (!b->track) {
        SimPoint low = shifted(p.bottom_bracket, -.13, .165), high = shifted(p.bottom_bracket, -.245, .30);
        SimPaint plastic = { .kind = SIM_PAINT_ROUND,
                             .colour = b->bottle,
                             .gloss = .2f,
                             .band = { .03f, .03f, .03f },
                             .band_from = .85f,
                             .band_to = 1.01f };
        sim_shape_list_add(list, sim_shape_capsule(low, .035, high, .034, plastic));
    }
    for (int i = 0; i < 6; i++) {
        double q = .40 + .045 * i;
        SimPoint mid = { p.bottom_bracket.u + (p.crown.u - p.bottom_bracket.u) * q,
                         p.bottom_bracket.h + (p.crown.h - p.bottom_bracket.h) * q };
        sim_shape_list_add(list,
                           sim_shape_capsule(shifted(mid, -.003, -.009), .0045, shifted(mid, .003, .010),
                                             .0045, flat(b->frame.r, b->frame.g, b->frame.b)));
    }
    sim_shape_list_add(list, sim_shape_capsule(p.bottom_bracket, .026 * aero, shifted(p.crown, .004, .012),
                                               .024 * aero, marked));
    sim_shape_list_add(list, sim_shape_capsule(cluster, .018, shifted(p.head, 0, -.015), .019, tube));
    sim_shape_list_add(list, sim_shape_capsule(p.bottom_bracket, .021 * aero, cluster, .018 * aero, tube));
    sim_shape_list_add(list, sim_shape_capsule(cluster, .015, shifted(p.saddle, 0, -.02), .014, dark));
    sim_shape_list_add(list, sim_shape_capsule(shifted(cluster, .0, -.055), .010, p.rear_hub, .009, tube));
    sim_shape_list_add(list, sim_shape_capsule(p.bottom_bracket, .014, p.rear_hub, .011, tube));
    if (!b->drive_near)
        add_chain(b, &p, list);
    SimPoint pedal = sim_bicycle_pedal(b, crank_rad, true);
    add_wheel(b, p.front_hub, wheel_rad + .3, b->front_spokes, false, list);
    add_wheel(b, p.rear_hub, wheel_rad * 1.0 + 1.1, b->rear_spokes, b->disc_wheel, list);
    sim_shape_list_add(list, sim_shape_capsule(p.bottom_bracket, .016, pedal, .011, dark));
}
