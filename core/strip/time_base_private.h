/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What the files of the time base share among themselves: time_base.c (queries), time_base_build.c (laying
 * the blocks out), time_base_rate.c (what even stamps imply). For no one else. */
#pragma once

#include "core/strip/time_base.h"

#include <glib.h>
#include <stdint.h>

/* 10^18: a period in ns is this over a rate in 10^-9 Hz. */
#define HW_PERIOD_NUMERATOR INT64_C(1000000000000000000)
/* No stamp lies beyond, so that sums of a few never overflow. */
#define HW_MAX_STAMP_NS (INT64_C(1) << 60)

/* Consecutive columns whose stamps follow one law. Stamps are of the middle of the exposure. */
typedef struct {
    int64_t first_col;
    int64_t n_cols;
    int64_t first_ns;
    int64_t span_ns;  /* EVEN: from the first column's stamp to the last's */
    gsize times_from; /* TIMES: place in the list of stamps */
    HwStampKind stamps;
} HwSegment;

struct HwTimeBase {
    gint references;
    int64_t rate_nhz;
    int64_t n_columns;
    GArray *segments;      /* of HwSegment, in order of columns */
    GArray *times_ns;      /* of int64_t, of TIMES blocks only */
    GArray *runs;          /* of HwRun */
    GArray *run_segments;  /* of guint: first segment of each run, and the end */
    GArray *clocks;        /* of guint: first run of each clock, and the end */
    GArray *voids;         /* of HwVoid */
    GArray *drops;         /* of HwDrop */
    GPtrArray *problems;   /* of char* */
    GStringChunk *reasons; /* what voids give as theirs */
};

/* Stamp of a column of a segment, 0 … n_cols − 1. */
int64_t hw_segment_stamp(const HwTimeBase *base, const HwSegment *segment, int64_t column);

/* Suspected drops and a deviation of the rate, from the readable blocks with even stamps. first_cols has each
 * block's first column. */
void hw_time_base_judge_rates(HwTimeBase *base, const HwTimedBlock *blocks, const int64_t *first_cols,
                              guint n_blocks);

/* Takes the sentence. */
void hw_time_base_add_problem(HwTimeBase *base, char *sentence);
