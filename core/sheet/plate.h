/* SPDX-License-Identifier: GPL-3.0-or-later */
/* One sheet around the picture: heading, warnings, rail, ruler, scale, table, foot. It knows where the
 * picture's pixels go; whoever writes the file puts them there between the two drawing calls. Units are
 * pixels of 1/96 in.
 */
#pragma once

#include "core/sheet/palette.h"
#include "core/sheet/subject.h"
#include "core/strip/view_map.h"

#include <cairo.h>
#include <glib.h>
#include <pango/pango.h>

/* Room that the heading, the foot and the margins leave the picture. */
#define HW_PLATE_MARGIN 28.0

typedef struct {
    double width;  /* of the sheet; widened where the views need more */
    double height; /* 0: as high as it takes; else the foot stands at the bottom */
    double px_per_cell;
    double px_per_row;
    double max_rail;
    int n_views;
    double first_cell[HW_MAX_VIEWS];
    double n_cells[HW_MAX_VIEWS];
    bool with_table;
    guint table_first;
    const char *page; /* "page 2 of 5" or "" */
    const char *zoom; /* "1 : 8" */
} HwPlateSpec;

/* Where a view's pixels go. */
typedef struct {
    double x, y;
    HwViewMap map;
} HwPlateView;

typedef struct HwPlate HwPlate;

/* The subject and the context must outlive the plate. */
HwPlate *hw_plate_new(const HwSubject *subject, PangoContext *context, const HwInk *ink,
                      const HwPlateSpec *spec);
void hw_plate_free(HwPlate *plate);

double hw_plate_get_width(const HwPlate *plate);
double hw_plate_get_height(const HwPlate *plate);
int hw_plate_get_n_views(const HwPlate *plate);
const HwPlateView *hw_plate_get_view(const HwPlate *plate, int index);
guint hw_plate_get_n_table_rows(const HwPlate *plate); /* that fit */

/* Everything below the picture's pixels, then everything over them. */
void hw_plate_draw_under(const HwPlate *plate, cairo_t *cr);
void hw_plate_draw_over(const HwPlate *plate, cairo_t *cr);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwPlate, hw_plate_free)
