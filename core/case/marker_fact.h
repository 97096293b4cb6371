/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A marker as a fact of a case: on a block of a recording and in that block, so that nothing that happens to
 * other blocks moves it. Kept as the fact "marker", its key a number from 1. */
#pragma once

#include "core/base/json.h"
#include "core/ruling/markers.h"

#include <glib.h>
#include <stdbool.h>

/* The fact's value (new reference), every number exactly. Its time is that of its column on the strip.
 * `names_recording`: whoever read the marker said which recording it was made on. NULL with
 * HW_CASE_ERROR_ACT where it stands off the strip. */
json_t *hw_marker_to_fact(const HwMarker *marker, HwStrip *strip, bool names_recording, GError **error);

/* A new marker with its column on this strip. Fails where the fact is of another form, was made on another
 * recording, or its place is not on the strip; `where` begins the sentence. */
HwMarker *hw_marker_from_fact(const json_t *fact, HwStrip *strip, const char *where, bool *names_recording,
                              GError **error);
