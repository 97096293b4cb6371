/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * What truly happened, written beside a recording: markers, start list, race, and a table of truths. One
 * thread.
 */
#pragma once

#include "samples/sim/recorder.h"

typedef struct {
    const SimCrossing *crossing;
    int order;              /* within its passage, from 1, by true crossing */
    double front_s, rear_s; /* true crossings of the line's plane */
    gboolean front_seen, rear_seen;
    double front_column, rear_column; /* where the picture shows them at hub height */
    double hub_row, speed_mps;
    double hidden_deg; /* of the front wheel's leading half, 0 to 180 */
} SimTruth;

/* One for every crossing, in order of passage and true time; SimTruth. */
GArray *sim_truth_find(SimCamera *camera, const SimRecorder *recorder);
/* Writes NAME.markers.csv, NAME.startlist.csv, NAME.race.json and NAME.truth.csv; stem is the path up to
 * NAME. */
gboolean sim_truth_write(const SimScenario *s, const SimRecorder *recorder, const GArray *truths,
                         const char *stem, GError **error);
