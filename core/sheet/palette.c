/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/sheet/palette.h"

#include <math.h>

#define RGB(r, g, b)                                                                                         \
    {                                                                                                        \
        (r) / 255.0, (g) / 255.0, (b) / 255.0, 1.0                                                           \
    }

HwInk
hw_ink_paper(void)
{
    return (HwInk){
        .paper = RGB(255, 255, 255),
        .text = RGB(26, 26, 26),
        .dim_text = RGB(92, 92, 92),
        .rule = RGB(110, 110, 110),
        .casing = RGB(20, 20, 20),
        .core = RGB(255, 255, 255),
        .void_ground = RGB(226, 226, 226),
        .void_line = RGB(120, 120, 120),
        .void_text = RGB(26, 26, 26),
        .selected = RGB(26, 26, 26),
        /* Okabe and Ito, "Color Universal Design" (2008): orange, blue, bluish green, vermillion. */
        .state = { RGB(0xE6, 0x9F, 0x00), RGB(0x00, 0x72, 0xB2), RGB(0x00, 0x9E, 0x73),
                   RGB(0xD5, 0x5E, 0x00) },
        .font_family = "Sans",
        .font_px = 12.0,
        .hairline_px = 1.0,
        .snap_px = 1.0,
    };
}

void
hw_colour_set(cairo_t *cr, const HwColour *colour)
{
    cairo_set_source_rgba(cr, colour->red, colour->green, colour->blue, colour->alpha);
}

static double
linear(double code)
{
    return code <= 0.03928 ? code / 12.92 : pow((code + 0.055) / 1.055, 2.4);
}

HwColour
hw_colour_on(const HwColour *ground)
{
    double luminance =
        0.2126 * linear(ground->red) + 0.7152 * linear(ground->green) + 0.0722 * linear(ground->blue);
    /* Contrast with white is 1.05 / (L + 0.05), with black (L + 0.05) / 0.05. */
    bool white = 1.05 / (luminance + 0.05) > (luminance + 0.05) / 0.05;
    double code = white ? 1.0 : 0.0;
    return (HwColour){ code, code, code, 1.0 };
}
