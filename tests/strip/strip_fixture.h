/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A recording being made in a temporary folder, block by block. */
#pragma once

#include "core/strip/strip.h"

#include <glib.h>

typedef struct {
    char *folder;
    GString *blocks;
    const char *head; /* keys before "blocks", each with its comma; NULL: 1000 Hz, stamp middle, linear */
    HwRecording *recording;
    HwBlockCache *cache;
} StripFixture;

StripFixture *strip_fixture_new(void);
void strip_fixture_free(StripFixture *fixture);

/* Names a block with these keys ("\"columns\":8,\"first_ns\":0"), and writes its file unless NULL. */
void strip_fixture_add(StripFixture *fixture, const char *name, const GByteArray *file, const char *keys);

/* Writes the manifest, opens the recording and makes a strip of it (a new one each time). */
HwStrip *strip_fixture_open(StripFixture *fixture, GError **error);
HwStrip *strip_fixture_open_good(StripFixture *fixture);
