/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "samples/sim/rider.h"

#include "samples/sim/lettering.h"

#include <math.h>

typedef struct {
    SimPoint hip, shoulder, hand, neck, head;
} Trunk;

static SimPaint
cloth(const SimRider *r, SimColour c, float grain)
{
    return (SimPaint){ .kind = SIM_PAINT_ROUND, .colour = c, .grain = grain, .seed = r->seed };
}

static SimPoint
between(SimPoint a, SimPoint b, double share)
{
    return (SimPoint){ a.u + (b.u - a.u) * share, a.h + (b.h - a.h) * share };
}

static SimPoint
shifted(SimPoint p, double du, double dh)
{
    return (SimPoint){ p.u + du, p.h + dh };
}

/* The joint between two limbs; side +1 bends it towards the front of a downward limb. */
static SimPoint
joint(SimPoint a, SimPoint b, double la, double lb, double side)
{
    double du = b.u - a.u, dh = b.h - a.h, d = hypot(du, dh);
    double reach = fmin(d, (la + lb) * .9995);
    double p = (la * la - lb * lb + reach * reach) / (2 * reach);
    double q = sqrt(fmax(la * la - p * p, 0));
    return (SimPoint){ a.u + du / d * p + side * dh / d * q, a.h + dh / d * p - side * du / d * q };
}

double
sim_rider_hub(const SimRider *r)
{
    return r->bicycle.diameter_m / 2;
}

static void
place_trunk(const SimRider *r, const SimBicyclePoints *p, double bob, double shift, Trunk *t)
{
    double s = r->size;
    *t = (Trunk){ 0 };
    switch (r->posture) {
    case SIM_POSTURE_SPRINT:
        t->hip = shifted(p->saddle, -.09, .085 + bob);
        t->shoulder = shifted(t->hip, -.535 * s, .165 * s - bob);
        t->hand = shifted(p->drop, .005, -.02);
        break;
    case SIM_POSTURE_SEATED:
        t->hip = shifted(p->saddle, .0, .065);
        t->shoulder = shifted(t->hip, -.535 * s, .19 * s + bob * .3);
        t->hand = shifted(p->drop, .005, -.02);
        break;
    case SIM_POSTURE_HOODS:
        t->hip = shifted(p->saddle, .01, .065);
        t->shoulder = shifted(t->hip, -.475 * s, .32 * s + bob * .3);
        t->hand = shifted(p->hood, .0, .02);
        break;
    case SIM_POSTURE_EXTENDED:
        t->hip = shifted(p->saddle, -.02, .065);
        t->shoulder = shifted(t->hip, -.55 * s, .10 * s + bob * .2);
        t->hand = shifted(p->pad, -.27, .065);
        break;
    }
    t->hip.u += shift;
    t->hip.h -= .25 * shift;
    t->shoulder.u += shift * .9;
    t->shoulder.h -= .35 * shift;
    double up = r->head_turn;
    t->neck = shifted(t->shoulder, -.06, .055);
    if (r->posture == SIM_POSTURE_EXTENDED)
        t->head = shifted(t->neck, -.105, .055 + .03 * up);
    else
        t->head = shifted(t->neck, -.085 - .015 * up, .075 + .045 * up);
}

static void
add_leg(const SimRider *r, const Trunk *t, double crank, bool far, SimShapeList *list)
{
    double s = r->size, turn = crank + (far ? M_PI : 0);
    SimPoint pedal = sim_bicycle_pedal(&r->bicycle, crank, far);
    /* The heel rises through the lower and rear part of the stroke. */
    double pitch = .30 + .22 * sin(turn + 2.6);
    double c = cos(pitch), n = sin(pitch);
    SimPoint toe = shifted(pedal, -.075 * c, .018 - .075 * n),
             heel = shifted(pedal, .150 * c, .030 + .150 * n);
    SimPoint ankle = shifted(pedal, .125 * c - .085 * n, .03 + .125 * n + .085 * c);
    SimPoint hip = far ? shifted(t->hip, .01, .005) : t->hip;
    SimPoint knee = joint(hip, ankle, .435 * s, .430 * s, 1);
    float dim = far ? .55f : 1;
    SimColour skin = { r->skin.r * dim, r->skin.g * dim, r->skin.b * dim };
    SimColour shoe = { r->shoe.r * dim, r->shoe.g * dim, r->shoe.b * dim };
    SimColour sock = { r->sock.r * dim, r->sock.g * dim, r->sock.b * dim };
    SimColour shorts = { r->shorts.r * dim, r->shorts.g * dim, r->shorts.b * dim };

    SimPaint leather = cloth(r, shoe, .08f);
    leather.gloss = .2f;
    SimPoint sole_a = shifted(toe, .005, -.022), sole_b = shifted(heel, -.01, -.028);
    sim_shape_list_add(list, sim_shape_capsule(toe, .022, shifted(heel, -.07, .012), .032, leather));
    sim_shape_list_add(list, sim_shape_capsule(shifted(heel, -.07, .012), .034, heel, .029, leather));
    sim_shape_list_add(
        list, sim_shape_capsule(sole_a, .008, sole_b, .010, cloth(r, (SimColour){ .02f, .02f, .02f }, 0)));
    sim_shape_list_add(
        list, sim_shape_capsule(ankle, .038 * s, between(ankle, knee, .28), .042 * s, cloth(r, sock, .08f)));
    /* The calf's belly lies behind the bone. */
    SimPoint calf = between(knee, ankle, .33);
    double du = ankle.u - knee.u, dh = ankle.h - knee.h, d = hypot(du, dh);
    calf = shifted(calf, -dh / d * .016, du / d * .016);
    SimPaint bare = cloth(r, skin, .10f);
    bare.gloss = .06f;
    sim_shape_list_add(list, sim_shape_capsule(knee, .054 * s, calf, .058 * s, bare));
    sim_shape_list_add(list, sim_shape_capsule(calf, .058 * s, ankle, .036 * s, bare));
    SimPoint hem = between(hip, knee, .66);
    SimPaint lycra = cloth(r, shorts, .12f);
    lycra.band = (SimColour){ r->shorts_band.r * dim, r->shorts_band.g * dim, r->shorts_band.b * dim };
    lycra.band_from = .82f;
    lycra.band_to = 1.01f;
    sim_shape_list_add(list, sim_shape_capsule(hip, .104 * s, hem, .078 * s, lycra));
    sim_shape_list_add(list, sim_shape_capsule(between(hip, knee, .4), .085 * s, knee, .056 * s, bare));
}

static void
add_arm(const SimRider *r, const Trunk *t, bool far, SimShapeList *list)
{
    double s = r->size;
    float dim = far ? .5f : 1;
    SimPoint shoulder = far ? shifted(t->shoulder, -.015, .0) : t->shoulder;
    SimPoint elbow;
    if (r->posture == SIM_POSTURE_EXTENDED)
        elbow = shifted((SimPoint){ t->hand.u, t->hand.h }, .30, -.055);
    else
        elbow = joint(shoulder, t->hand, .300 * s, .285 * s, -1);
    SimColour skin = { r->skin.r * dim, r->skin.g * dim, r->skin.b * dim };
    SimColour sleeve = { r->sleeve.r * dim, r->sleeve.g * dim, r->sleeve.b * dim };
    SimPaint bare = cloth(r, skin, .08f);
    SimPaint glove = cloth(r, (SimColour){ .03f * dim, .03f * dim, .032f * dim }, .1f);
    sim_shape_list_add(list,
                       sim_shape_capsule(shifted(t->hand, -.018, .0), .030, shifted(t->hand, .022, .002),
                                         .034, (r->seed & 3u) != 0 ? glove : bare));
    bool sleeved = r->posture == SIM_POSTURE_EXTENDED;
    SimPaint fabric = cloth(r, sleeve, .12f);
    sim_shape_list_add(list, sim_shape_capsule(elbow, .041 * s, t->hand, .028 * s, sleeved ? fabric : bare));
    sim_shape_list_add(
        list,
        sim_shape_capsule(shoulder, .064 * s, between(shoulder, elbow, sleeved ? 1 : .62), .052 * s, fabric));
    sim_shape_list_add(list, sim_shape_capsule(shoulder, .055 * s, elbow, .042 * s, bare));
}

static void
add_head(const SimRider *r, const Trunk *t, SimShapeList *list)
{
    double s = .92 + .08 * r->size, tilt = -.22 + .18 * r->head_turn;
    SimPoint h = t->head;
    SimPaint shell = cloth(r, r->helmet, .06f);
    shell.gloss = .35f;
    SimPaint vent = { .kind = SIM_PAINT_FLAT, .colour = { .015f, .015f, .015f } };
    SimPaint bare = cloth(r, r->skin, .05f);
    static const SimColour LENS[] = {
        { .03f, .02f, .04f }, { .30f, .10f, .02f }, { .02f, .05f, .12f }, { .04f, .04f, .04f }
    };
    SimPoint brow = shifted(h, -.095 * s, .005), nape = shifted(h, .11 * s, .035);
    if (r->posture == SIM_POSTURE_EXTENDED) {
        SimPaint visor = { .kind = SIM_PAINT_ROUND, .colour = { .03f, .035f, .05f }, .gloss = .6f };
        sim_shape_list_add(list,
                           sim_shape_ellipse(shifted(h, -.072 * s, -.015), .035 * s, .062 * s, -.1, visor));
        sim_shape_list_add(list, sim_shape_ellipse(shifted(h, .02, .03), .150 * s, .088 * s, -.12, shell));
        sim_shape_list_add(list,
                           sim_shape_capsule(shifted(h, .03, .045), .062, shifted(h, .21, .035), .02, shell));
    } else {
        sim_shape_list_add(
            list,
            sim_shape_capsule(
                shifted(brow, .012, -.032), .013, shifted(brow, .075, -.025), .010,
                (SimPaint){ .kind = SIM_PAINT_ROUND, .colour = LENS[r->seed >> 9 & 3u], .gloss = .6f }));
        int vents = 2 + (int)(r->seed >> 5 & 1u);
        double rise = tilt + .10;
        for (int i = 0; i < 2 * vents; i++) {
            double x = -.085 + .19 * (i / 2) / vents + .02 * (i & 1), y = i & 1 ? .045 : .085;
            SimPoint a = shifted(h, x, y - x * rise),
                     b = shifted(h, x + .15 / vents, y - (x + .15 / vents) * rise);
            sim_shape_list_add(list, sim_shape_capsule(a, .005, b, .010, vent));
        }
        sim_shape_list_add(list, sim_shape_ellipse(shifted(h, .01, .048), .135 * s, .074 * s, tilt, shell));
        sim_shape_list_add(list, sim_shape_capsule(shifted(h, -.06, .03), .052, nape, .045, shell));
        sim_shape_list_add(
            list, sim_shape_capsule(shifted(h, .02, .0), .005, shifted(h, -.045, -.105), .005, vent));
    }
    sim_shape_list_add(list, sim_shape_ellipse(shifted(h, -.030, -.020), .088 * s, .112 * s, -.25, bare));
    sim_shape_list_add(
        list, sim_shape_capsule(shifted(h, -.100, -.035), .013, shifted(h, -.108, -.052), .012, bare));
    sim_shape_list_add(list, sim_shape_capsule(shifted(h, .01, -.04), .055, t->neck, .060, bare));
}

static void
add_number(const SimRider *r, const Trunk *t, SimShapeList *list)
{
    double du = t->hip.u - t->shoulder.u, dh = t->hip.h - t->shoulder.h, d = hypot(du, dh);
    SimPoint back = { du / d, dh / d }, up = { -back.h, back.u };
    double way = r->read_backwards ? -1 : 1;
    SimPanel p = {
        .middle = { t->hip.u - back.u * .165 + up.u * .052, t->hip.h - back.h * .165 + up.h * .052 },
        .reading = { back.u * way, back.h * way },
        .up = up,
        .width_m = .175,
        .height_m = .165,
        .ground = { .80f, .80f, .78f },
        .ink = { .02f, .02f, .02f },
    };
    list->count += sim_lettering_panel(&p, r->bib, list->shape + list->count, SIM_SHAPES_MAX - list->count);
}

static void
add_frame_plate(const SimRider *r, const SimBicyclePoints *b, SimShapeList *list)
{
    double way = r->read_backwards ? -1 : 1;
    SimPanel p = {
        .middle = shifted(b->saddle, -.005, -.105),
        .reading = { way, 0 },
        .up = { 0, 1 },
        .width_m = .095,
        .height_m = .085,
        .ground = { .78f, .77f, .72f },
        .ink = { .02f, .02f, .02f },
    };
    list->count += sim_lettering_panel(&p, r->bib, list->shape + list->count, SIM_SHAPES_MAX - list->count);
}

/* What is printed on a jersey, too small to be read: a row of strokes along the flank, and the seam of the
 * pockets. */
static void
add_print(const SimRider *r, const Trunk *t, SimShapeList *list)
{
    double du = t->hip.u - t->shoulder.u, dh = t->hip.h - t->shoulder.h, d = hypot(du, dh);
    SimPoint back = { du / d, dh / d }, up = { -back.h, back.u };
    SimPaint ink = cloth(r, r->jersey_band, .1f);
    double x = .05 + .01 * (r->seed & 3u);
    for (int i = 0; i < 5; i++) {
        double low = -.020 + .004 * ((r->seed >> (6 + i)) & 3u), high = .012;
        SimPoint a = { t->shoulder.u + back.u * x + up.u * low, t->shoulder.h + back.h * x + up.h * low };
        SimPoint b = { a.u + up.u * (high - low) + back.u * .008, a.h + up.h * (high - low) + back.h * .008 };
        sim_shape_list_add(list, sim_shape_capsule(a, .0045, b, .0045, ink));
        x += .017;
    }
}

static void
add_trunk(const SimRider *r, const Trunk *t, SimShapeList *list)
{
    double s = r->size;
    add_print(r, t, list);
    SimPaint top = cloth(r, r->jersey, .26f), seat = cloth(r, r->shorts, .12f);
    top.band = r->jersey_band;
    top.band_from = r->band_from;
    top.band_to = r->band_to;
    SimPoint belly = shifted(between(t->hip, t->shoulder, .42), .0, .045);
    SimPoint chest = shifted(t->shoulder, .045, -.012);
    sim_shape_list_add(list, sim_shape_capsule(belly, .128 * s, chest, .112 * s, top));
    SimPaint low = top;
    low.band_from = low.band_to = 2;
    sim_shape_list_add(list, sim_shape_capsule(shifted(t->hip, -.045, .025), .128 * s, belly, .128 * s, low));
    sim_shape_list_add(list, sim_shape_capsule(shifted(t->hip, .018, .008), .127 * s,
                                               shifted(t->hip, -.03, -.01), .122 * s, seat));
}

void
sim_rider_pose(const SimRider *r, double place_m, double shift_m, SimShapeList *list)
{
    list->count = 0;
    SimBicyclePoints p;
    sim_bicycle_points(&r->bicycle, &p);
    double wheel = r->wheel_start_rad + place_m / (r->bicycle.diameter_m / 2);
    double crank = r->crank_start_rad + 2 * M_PI * place_m / r->development_m;
    double bob = .014 * cos(2 * crank);
    Trunk t;
    place_trunk(r, &p, bob, shift_m, &t);

    add_arm(r, &t, false, list);
    add_leg(r, &t, crank, false, list);
    sim_bicycle_add_near(&r->bicycle, crank, list);
    if (r->number_on_back)
        add_number(r, &t, list);
    add_head(r, &t, list);
    add_trunk(r, &t, list);
    if (r->number_on_frame)
        add_frame_plate(r, &p, list);
    sim_bicycle_add_frame(&r->bicycle, crank, wheel, list);
    add_leg(r, &t, crank, true, list);
    add_arm(r, &t, true, list);
}
