/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What painters draw with: colours, type, the size of a pixel. A plain value; the window fills one from its
 * theme, sheets always take the paper one, whatever the desktop looks like. */
#pragma once

#include <cairo.h>
#include <stdbool.h>

typedef struct {
    double red, green, blue, alpha; /* 0 … 1, not premultiplied */
} HwColour;

/* The state of a marker; told by shape as well, never by colour alone. */
typedef enum {
    HW_PENNANT_ROUGH,    /* to re-read: hollow and dashed */
    HW_PENNANT_READ,     /* filled */
    HW_PENNANT_AGREED,   /* filled, ticked */
    HW_PENNANT_DISPUTED, /* filled, with "!" */
    HW_N_PENNANT_STATES
} HwPennantState;

typedef struct {
    HwColour paper;       /* behind rail, ruler and labels */
    HwColour text;        /* on paper */
    HwColour dim_text;    /* on paper, what matters less */
    HwColour rule;        /* ticks, thin lines */
    HwColour casing;      /* dark line along hairlines, so that they stand out on any picture */
    HwColour core;        /* light core of the reading line */
    HwColour void_ground; /* of hatching */
    HwColour void_line;
    HwColour void_text;
    HwColour selected;                   /* ring around what is selected */
    HwColour state[HW_N_PENNANT_STATES]; /* Okabe–Ito */
    const char *font_family;             /* static text; "Sans" finds whatever there is */
    double font_px;                      /* of bibs and labels, in user units */
    double hairline_px;                  /* width of hairlines, in user units */
    double snap_px; /* size of a device pixel in user units, to which hairlines are moved (never to the later
                       side); 0: lines stand exactly where they belong, for vectors */
} HwInk;

/* Light, opaque, for paper and files: 12-unit type, hairlines one unit wide, snapped to whole units. */
HwInk hw_ink_paper(void);

/* Sets the source. */
void hw_colour_set(cairo_t *cr, const HwColour *colour);

/* Black or white, whichever reads better on the colour (WCAG 2.1 relative luminance). */
HwColour hw_colour_on(const HwColour *ground);
