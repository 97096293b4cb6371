/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Small recordings on disk whose every pixel is known, and pictures read back. 1000 Hz, stamped at the middle
 * of the exposure from the epoch on: column c is centred on c ms, as long as nothing is left out before it.
 */
#pragma once

#include "core/strip/strip.h"

#include <glib.h>
#include <stdint.h>

#define FIXTURE_EPOCH "2027-06-13T16:02:11.000000000+02:00"

/* Colour 0xRRGGBB of a pixel of the strip, columns counted in time. */
typedef uint32_t (*FixturePixel)(int64_t column, int row);

typedef struct {
    int columns_per_block;
    int n_blocks;
    int rows;
    const char *travel; /* NULL: not stated */
    const char *later;  /* NULL: right */
    int void_after;     /* blocks before a pause of void_ms; 0: none */
    int void_ms;
    int missing; /* number of a block whose file is not there, from 1; 0: none */
    FixturePixel pixel;
} FixtureWish;

typedef struct {
    char *folder;
    char *path; /* of the recording in it */
    HwRecording *recording;
    HwBlockCache *cache;
    HwStrip *strip;
} Fixture;

Fixture *fixture_new(const FixtureWish *wish);
void fixture_free(Fixture *fixture);

/* A path in the fixture's folder. Owned by the caller. */
char *fixture_path(const Fixture *fixture, const char *name);

/* A picture read back, its pixels as 0xRRGGBB. */
typedef struct {
    int width;
    int height;
    uint32_t *pixels;
} Image;

Image *image_read(const char *path);
void image_free(Image *image);
uint32_t image_at(const Image *image, int x, int y);

/* Standard output of a program; it must end well. Owned by the caller. */
char *run_dup_output(const char *const *arguments);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(Fixture, fixture_free)
G_DEFINE_AUTOPTR_CLEANUP_FUNC(Image, image_free)
