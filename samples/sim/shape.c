/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "samples/sim/shape.h"

#include "samples/sim/random.h"

#include <math.h>
#include <stddef.h>

/* Where the light comes from, in a rider's plane: from ahead, above, and from the camera's side. */
static const double LIGHT_U = -0.30, LIGHT_H = 0.78, LIGHT_CAMERA = 0.55;

static void
bounds_of_corners(SimShape *s)
{
    for (int i = 0; i < s->corners; i++) {
        SimPoint p = s->corner[i];
        if (i == 0 || p.u < s->u_min)
            s->u_min = p.u;
        if (i == 0 || p.u > s->u_max)
            s->u_max = p.u;
        if (i == 0 || p.h < s->h_min)
            s->h_min = p.h;
        if (i == 0 || p.h > s->h_max)
            s->h_max = p.h;
    }
}

SimShape
sim_shape_capsule(SimPoint a, double ra, SimPoint b, double rb, SimPaint paint)
{
    SimShape s = { .kind = SIM_SHAPE_CAPSULE,
                   .a = a,
                   .b = b,
                   .ra = ra,
                   .rb = rb,
                   .stretch = 1,
                   .paint = paint,
                   .shadow = 1 };
    double du = b.u - a.u, dh = b.h - a.h, d = hypot(du, dh);
    if (d > fabs(ra - rb) + 1e-9) {
        /* Outward normals of the two common tangents. */
        double c = (ra - rb) / d, w = sqrt(1 - c * c);
        double eu = du / d, eh = dh / d;
        double n1u = eu * c - eh * w, n1h = eh * c + eu * w;
        double n2u = eu * c + eh * w, n2h = eh * c - eu * w;
        s.corner[0] = (SimPoint){ a.u + ra * n1u, a.h + ra * n1h };
        s.corner[1] = (SimPoint){ b.u + rb * n1u, b.h + rb * n1h };
        s.corner[2] = (SimPoint){ b.u + rb * n2u, b.h + rb * n2h };
        s.corner[3] = (SimPoint){ a.u + ra * n2u, a.h + ra * n2h };
        s.corners = 4;
    }
    s.u_min = fmin(a.u - ra, b.u - rb);
    s.u_max = fmax(a.u + ra, b.u + rb);
    s.h_min = fmin(a.h - ra, b.h - rb);
    s.h_max = fmax(a.h + ra, b.h + rb);
    return s;
}

SimShape
sim_shape_ellipse(SimPoint c, double ra, double rb, double turn_rad, SimPaint paint)
{
    SimShape s = { .kind = SIM_SHAPE_ELLIPSE,
                   .a = c,
                   .ra = ra,
                   .rb = rb,
                   .turn_rad = turn_rad,
                   .stretch = 1,
                   .paint = paint,
                   .shadow = 1 };
    double cu = cos(turn_rad), sh = sin(turn_rad);
    double eu = hypot(ra * cu, rb * sh), eh = hypot(ra * sh, rb * cu);
    s.u_min = c.u - eu;
    s.u_max = c.u + eu;
    s.h_min = c.h - eh;
    s.h_max = c.h + eh;
    return s;
}

SimShape
sim_shape_ring(SimPoint c, double outer, double inner, SimPaint paint)
{
    return (SimShape){ .kind = SIM_SHAPE_RING,
                       .a = c,
                       .ra = outer,
                       .rb = inner,
                       .stretch = 1,
                       .paint = paint,
                       .shadow = 1,
                       .u_min = c.u - outer,
                       .u_max = c.u + outer,
                       .h_min = c.h - outer,
                       .h_max = c.h + outer };
}

SimShape
sim_shape_polygon(const SimPoint *corner, int corners, SimPaint paint)
{
    SimShape s = { .kind = SIM_SHAPE_POLYGON, .corners = corners, .stretch = 1, .paint = paint, .shadow = 1 };
    for (int i = 0; i < corners; i++)
        s.corner[i] = corner[i];
    bounds_of_corners(&s);
    s.a = (SimPoint){ (s.u_min + s.u_max) / 2, (s.h_min + s.h_max) / 2 };
    s.ra = (s.u_max - s.u_min) / 2;
    s.rb = (s.h_max - s.h_min) / 2;
    return s;
}

static void
widen(double u, double *from, double *to)
{
    if (u < *from)
        *from = u;
    if (u > *to)
        *to = u;
}

static void
disc_span(SimPoint c, double r, double h, double *from, double *to)
{
    double d = h - c.h, q = r * r - d * d;
    if (q <= 0)
        return;
    q = sqrt(q);
    widen(c.u - q, from, to);
    widen(c.u + q, from, to);
}

static void
corners_span(const SimShape *s, double h, double *from, double *to)
{
    for (int i = 0; i < s->corners; i++) {
        SimPoint p = s->corner[i], q = s->corner[(i + 1) % s->corners];
        if ((p.h <= h) == (q.h <= h))
            continue;
        widen(p.u + (q.u - p.u) * (h - p.h) / (q.h - p.h), from, to);
    }
}

int
sim_shape_spans(const SimShape *s, double h, double span[4])
{
    double from = HUGE_VAL, to = -HUGE_VAL;
    switch (s->kind) {
    case SIM_SHAPE_CAPSULE:
        disc_span(s->a, s->ra, h, &from, &to);
        disc_span(s->b, s->rb, h, &from, &to);
        corners_span(s, h, &from, &to);
        break;
    case SIM_SHAPE_ELLIPSE: {
        double c = cos(s->turn_rad), n = sin(s->turn_rad), d = h - s->a.h;
        double ia = 1 / (s->ra * s->ra), ib = 1 / (s->rb * s->rb);
        double qa = c * c * ia + n * n * ib, qb = 2 * c * n * (ia - ib) * d;
        double qc = (n * n * ia + c * c * ib) * d * d - 1, disc = qb * qb - 4 * qa * qc;
        if (disc <= 0)
            return 0;
        disc = sqrt(disc);
        from = s->a.u + (-qb - disc) / (2 * qa);
        to = s->a.u + (-qb + disc) / (2 * qa);
        break;
    }
    case SIM_SHAPE_RING: {
        double d = h - s->a.h, in = s->rb * s->rb - d * d;
        disc_span(s->a, s->ra, h, &from, &to);
        if (from < to && in > 0) {
            in = sqrt(in);
            span[0] = from;
            span[1] = s->a.u - in;
            span[2] = s->a.u + in;
            span[3] = to;
            return 2;
        }
        break;
    }
    case SIM_SHAPE_POLYGON:
        corners_span(s, h, &from, &to);
        break;
    }
    if (from >= to)
        return 0;
    span[0] = from;
    span[1] = to;
    return 1;
}

/* How far along its axis a place is (0 to 1), and how far off it as a share of the radius there, in u and h.
 */
static double
along(const SimShape *s, double u, double h, double *nu, double *nh)
{
    if (s->kind == SIM_SHAPE_CAPSULE) {
        double du = s->b.u - s->a.u, dh = s->b.h - s->a.h, dd = du * du + dh * dh;
        double p = dd > 0 ? ((u - s->a.u) * du + (h - s->a.h) * dh) / dd : 0;
        p = p < 0 ? 0 : p > 1 ? 1 : p;
        double r = s->ra + (s->rb - s->ra) * p;
        *nu = (u - s->a.u - du * p) / r;
        *nh = (h - s->a.h - dh * p) / r;
        return p;
    }
    if (s->kind == SIM_SHAPE_ELLIPSE) {
        double c = cos(s->turn_rad), n = sin(s->turn_rad);
        double x = ((u - s->a.u) * c + (h - s->a.h) * n) / s->ra,
               y = ((h - s->a.h) * c - (u - s->a.u) * n) / s->rb;
        *nu = x * c - y * n;
        *nh = x * n + y * c;
        return (x + 1) / 2;
    }
    *nu = (u - s->a.u) / s->ra;
    *nh = (h - s->a.h) / (s->kind == SIM_SHAPE_RING ? s->ra : s->rb);
    return (*nu + 1) / 2;
}

SimColour
sim_shape_colour(const SimShape *s, double u, double h)
{
    const SimPaint *p = &s->paint;
    if (p->kind == SIM_PAINT_FLAT && p->grain == 0)
        return p->colour;
    double nu, nh, place = along(s, u, h, &nu, &nh);
    SimColour c = place >= p->band_from && place < p->band_to ? p->band : p->colour;
    double lit = 1;
    if (p->kind == SIM_PAINT_ROUND) {
        double nc = 1 - nu * nu - nh * nh;
        nc = nc > 0 ? sqrt(nc) : 0;
        double l = nu * LIGHT_U + nh * LIGHT_H + nc * LIGHT_CAMERA;
        lit = 0.34 + 0.10 * nh + 0.72 * (l > 0 ? l : 0);
        if (p->gloss > 0 && l > 0) {
            float g = p->gloss * (float)pow(l, 24);
            c.r += g;
            c.g += g;
            c.b += g;
        }
    }
    if (p->grain > 0) {
        /* Folds run across the limb and slantwise; fine dirt over all. */
        double folds = sim_random_pattern(p->seed, u * 31 + h * 17, h * 23 - u * 9) * 0.8 +
                       sim_random_pattern(p->seed + 7, u * 83 - h * 40, h * 66 + u * 21) * 0.5;
        lit *= 1 + p->grain * (folds + 0.35 * sim_random_pattern(p->seed + 3, u * 260, h * 240));
    }
    float f = (float)(lit > 0 ? lit : 0);
    return (SimColour){ c.r * f, c.g * f, c.b * f };
}
