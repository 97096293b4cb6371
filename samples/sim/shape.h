/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * A flat shape in a rider's own plane, and its paint. Place u_m runs backwards from the foremost point of the
 * front tyre, h_m upwards from the road. At a given height a shape is one or two stretches of u, known in
 * closed form, so the picture's edges stand where geometry puts them. Values; no allocation.
 */
#pragma once

#include <stdint.h>

typedef struct {
    double u, h;
} SimPoint;

typedef struct {
    float r, g, b; /* linear light, 1 = white in full light */
} SimColour;

typedef enum {
    SIM_SHAPE_CAPSULE, /* two discs and their common tangents */
    SIM_SHAPE_ELLIPSE,
    SIM_SHAPE_RING,    /* a disc without its middle */
    SIM_SHAPE_POLYGON, /* convex, up to six corners */
} SimShapeKind;

typedef enum {
    SIM_PAINT_FLAT,
    SIM_PAINT_ROUND, /* lit as a rounded body is */
} SimPaintKind;

typedef struct {
    SimPaintKind kind;
    SimColour colour;
    SimColour band; /* between band_from and band_to along the axis */
    float band_from, band_to;
    float grain; /* 0 to 1: folds and dirt */
    float gloss;
    uint32_t seed;
} SimPaint;

typedef struct {
    SimShapeKind kind;
    SimPoint a, b;   /* capsule: centres; ellipse, ring: a = centre */
    double ra, rb;   /* capsule: radii; ellipse: half axes; ring: outer and inner radius */
    double turn_rad; /* ellipse: of the first half axis, from u towards h */
    SimPoint corner[6];
    int corners;
    double stretch; /* 1; else share by which this part's crossing is slower in u than the bicycle's */
    double u_min, u_max, h_min, h_max;
    SimPaint paint;
    int shadow; /* throws a shadow */
} SimShape;

SimShape sim_shape_capsule(SimPoint a, double ra, SimPoint b, double rb, SimPaint paint);
SimShape sim_shape_ellipse(SimPoint c, double ra, double rb, double turn_rad, SimPaint paint);
SimShape sim_shape_ring(SimPoint c, double outer, double inner, SimPaint paint);
SimShape sim_shape_polygon(const SimPoint *corner, int corners, SimPaint paint);

/* The stretches at height h as from, to pairs in u; returns how many (0 to 2). */
int sim_shape_spans(const SimShape *s, double h, double span[4]);
/* The paint at a place in the shape. */
SimColour sim_shape_colour(const SimShape *s, double u, double h);
