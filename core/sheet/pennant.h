/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Markers as pennants: a hairline on the earlier side of the marker's column, a flag at hub height that
 * points to the earlier side, the bib in a rail above the picture. The state is told by shape and colour:
 * hollow and dashed to re-read, filled read, ticked agreed, "!" disputed. One layout serves painting and
 * pointing. */
#pragma once

#include "core/sheet/palette.h"
#include "core/strip/axis.h"
#include "core/strip/view_map.h"

#include <pango/pango.h>
#include <stdbool.h>

typedef struct {
    double column;   /* the marker's, on the strip */
    double row;      /* of the hub */
    const char *bib; /* or placeholder, UTF-8; what the rail shows */
    HwPennantState state;
    bool rear;     /* of a rear tyre: the flag is notched */
    bool selected; /* never put into a "+3" */
} HwPennant;

/* Where things are, all in user units of the painter. The map's pixel (0, 0) is at (picture_x, picture_y). */
typedef struct {
    double picture_x;
    double picture_y;
    double rail_y; /* top of the rail; it lies above the picture, something may lie between */
    double rail_height;
} HwPennantPlace;

typedef struct HwPennantLayout HwPennantLayout;

/* Places all pennants that are in the view. Everything is copied; the context is kept (a reference). The rail
 * has as many rows of labels as its height allows, at least one. */
HwPennantLayout *hw_pennant_layout_new(PangoContext *context, const HwAxis *axis, const HwViewMap *map,
                                       const HwPennant *pennants, int n_pennants, const HwPennantPlace *place,
                                       const HwInk *ink);
void hw_pennant_layout_free(HwPennantLayout *layout);

/* Bibs and "+3" in the rail, with their stems down to the picture. */
void hw_pennant_layout_draw_rail(const HwPennantLayout *layout, cairo_t *cr);
/* Hairlines and flags on the picture. */
void hw_pennant_layout_draw_picture(const HwPennantLayout *layout, cairo_t *cr);

typedef enum {
    HW_PENNANT_NOTHING,
    HW_PENNANT_LABEL,   /* a bib in the rail */
    HW_PENNANT_CLUSTER, /* a "+3" */
    HW_PENNANT_FLAG,
    HW_PENNANT_STEM
} HwPennantPart;

typedef struct {
    HwPennantPart part;
    int index;   /* of the pennant given; of the earliest one of a cluster; −1 with NOTHING */
    int cluster; /* place of a cluster, else −1 */
} HwPennantHit;

/* What is at a point: labels first, then the nearest flag, then the nearest stem, each within `reach` units
 * to all sides (12 gives 24 to grab). */
HwPennantHit hw_pennant_layout_hit(const HwPennantLayout *layout, double x, double y, double reach);

int hw_pennant_layout_get_n_clusters(const HwPennantLayout *layout);

/* Pennants of a cluster in time order; their places among those given. Borrowed; n_members set. */
const int *hw_pennant_layout_get_cluster(const HwPennantLayout *layout, int cluster, int *n_members);

/* The rectangle of a pennant's label (of its cluster's, where it is in one). False where it is out of view.
 */
bool hw_pennant_layout_get_label(const HwPennantLayout *layout, int index, double *x, double *y,
                                 double *width, double *height);

/* Left edge of a pennant's hairline. False where it is out of view. */
bool hw_pennant_layout_get_stem(const HwPennantLayout *layout, int index, double *x);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwPennantLayout, hw_pennant_layout_free)
