/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Writes a recording: block files and recording.json, with what the scenario lets go wrong (dropped scans,
 * damaged files). Knows afterwards which true scan stands in which column. One thread.
 */
#pragma once

#include "samples/sim/camera.h"

typedef struct {
    int64_t first_column;
    int columns;
    int64_t first_ns, last_ns;
    gboolean damaged;
    char *file, *sha256;
    char *times_file, *times_sha256; /* NULL where stamps are even */
} SimBlock;

typedef struct SimRecorder SimRecorder;

/* Films the whole scenario into folder, which exists and is empty. NULL and an error where a file can't be
 * written. */
SimRecorder *sim_recorder_run(const SimScenario *scenario, SimCamera *camera, const char *folder,
                              GError **error);
void sim_recorder_free(SimRecorder *r);

const GArray *sim_recorder_get_blocks(const SimRecorder *r); /* SimBlock */
int64_t sim_recorder_columns(const SimRecorder *r);
/* First 16 hexadecimal digits of the recording's identity. */
const char *sim_recorder_get_identity(const SimRecorder *r);
/*
 * The column of a true instant by what the scans truly saw: column i has its centre, i + 0.5, at the middle
 * of its exposure. FALSE where no scan was kept there.
 */
gboolean sim_recorder_column(const SimRecorder *r, double true_s, double *column);
/* The middle of the exposure at a column by the stamps in the files, ns from the epoch. */
double sim_recorder_stamped(const SimRecorder *r, double column);
/* Whether all columns from one to another can be read. */
gboolean sim_recorder_readable(const SimRecorder *r, double from, double to);
