/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Crossings: the markers of one passage, rider by rider, with their instants, in the order across the line.
 */
#pragma once

#include "core/ruling/finish_list.h"

#include <glib.h>
#include <stdbool.h>
#include <stdint.h>

typedef struct {
    const HwMarker *front; /* NULL where only the rear was marked */
    const HwMarker *rear;
    const HwRider *rider; /* NULL: unnamed, or not in the start list */
    bool unnamed;
    bool is_ordered;  /* has the edge that decides; what follows holds only then */
    int64_t front_ns; /* where front is there */
    int64_t rear_ns;  /* where rear is there */
    int64_t order_ns; /* of the edge that decides the order */
    double order_column;
    guint clock; /* of the time base's run; no gap is computed between two clocks */
    double u_ns; /* standard uncertainty of the order edge's reading */
} HwCrossing;

typedef struct {
    GArray
        *crossings;      /* HwCrossing, those ordered first, by order_ns; where it is equal
                          by bib, so that no order of insertion ever decides (who ranks them calls that a tie) */
    char *passage;       /* which was taken; "" where nobody named one */
    GPtrArray *problems; /* char* */
} HwCrossings;

/* Picks the passage's markers and pairs front and rear edges. Fails (HW_RULING_ERROR_MARKERS): several
 * passages and none named; markers that do not say which of several passages they belong to; a bib twice in
 * the passage; a bib that stands in several categories with none named. Markers against the travel are left
 * out and told. */
HwCrossings *hw_crossings_make(const HwFinishInput *input, GError **error);
void hw_crossings_free(HwCrossings *crossings);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwCrossings, hw_crossings_free)
