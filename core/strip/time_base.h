/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The time base: column position ↔ ns since the epoch. Columns are doubles, column i covers [i, i+1), its
 * centre i + 0.5 is the middle of its exposure. Linear between neighbours, half a nominal period beyond the
 * ends of a run, never across a void. Immutable, reference-counted, usable from any thread. */
#pragma once

#include "core/strip/recording.h"

#include <glib.h>
#include <stdbool.h>
#include <stdint.h>

/* A block as the time base needs it. */
typedef struct {
    HwStampKind stamps;
    int64_t n_columns; /* numbered columns, damaged ones included; 0 where nothing tells how many */
    int64_t first_ns;  /* as in the manifest */
    int64_t last_ns;
    const int64_t *times_ns; /* TIMES: n_columns stamps, copied */
    const char *file;        /* for sentences; copied */
    const char *damage;      /* why it cannot be read, or NULL; copied */
} HwTimedBlock;

/* Columns between which time is continuous. */
typedef struct {
    int64_t first_col;
    int64_t n_cols;
    int64_t start_ns; /* of its first column: half a period before that one's centre */
    int64_t end_ns;
    guint clock; /* differs between runs parted by a step backwards: no gap may be computed across */
} HwRun;

typedef enum {
    HW_VOID_NOT_SCANNED, /* the stamps show it: dropped scans or a pause */
    HW_VOID_DAMAGED      /* a block that cannot be read */
} HwVoidKind;

/* A stretch of time without readable columns. Voids and runs of one clock follow each other without gap or
 * overlap. A damaged block that nothing places in time follows the former block; at the start, it ends where
 * the next begins. Where nothing counts it either, it reaches to the next block, and as the first or last it
 * is a problem only. */
typedef struct {
    HwVoidKind kind;
    int64_t after_column; /* this many columns stand before it */
    int64_t n_cols;       /* numbered columns inside it: 0 but for damaged blocks */
    int64_t start_ns;
    int64_t duration_ns;
    const char *reason; /* a clause for people, without a final stop */
} HwVoid;

/* An evenly stamped block whose stamps imply another number of columns than it has, by the median rate of all
 * such readable blocks (of an even number of them, the one of the middle two nearer to the nominal rate). A
 * median more than 100 ppm off the nominal rate is a problem said once. */
typedef struct {
    guint block;
    int64_t first_col;
    int64_t n_cols;
    int64_t missing; /* columns suspected to be missing (negative: too many) */
} HwDrop;

typedef struct HwTimeBase HwTimeBase;

/* From all blocks of a recording in order. Fails (HW_STRIP_ERROR_MANIFEST) where a block starts before the
 * former one's end. Problems that are no failure are kept as sentences. */
HwTimeBase *hw_time_base_new(const HwScan *scan, const HwTimedBlock *blocks, guint n_blocks, GError **error);
HwTimeBase *hw_time_base_ref(HwTimeBase *base);
void hw_time_base_unref(HwTimeBase *base);

int64_t hw_time_base_get_n_columns(const HwTimeBase *base);

/* The nominal period in ns, not rounded. */
double hw_time_base_get_period_ns(const HwTimeBase *base);

/* Instant of a column position. False, *ns untouched, off the strip or in a void. A position that is the end
 * of one run and the start of the next belongs to the next. */
bool hw_time_base_instant(const HwTimeBase *base, double column, int64_t *ns);

/* Column position of an instant: always inside a run. False off the strip or in a void. After a step
 * backwards an instant may stand twice; the earlier run is given. */
bool hw_time_base_column(const HwTimeBase *base, int64_t ns, double *column);

/* Place in the list of runs of a column position; −1 in a void or off the strip. */
int hw_time_base_run_at(const HwTimeBase *base, double column);

guint hw_time_base_get_n_runs(const HwTimeBase *base);
const HwRun *hw_time_base_get_run(const HwTimeBase *base, guint index);
guint hw_time_base_get_n_voids(const HwTimeBase *base);
const HwVoid *hw_time_base_get_void(const HwTimeBase *base, guint index);
guint hw_time_base_get_n_drops(const HwTimeBase *base);
const HwDrop *hw_time_base_get_drop(const HwTimeBase *base, guint index);

/* From the start of the first run to the end of the last, voids included; by the stamps. */
int64_t hw_time_base_get_duration_ns(const HwTimeBase *base);

/* Sentences, borrowed: voids, suspected drops, a common deviation of the rate, steps backwards, stamps too
 * close. */
guint hw_time_base_get_n_problems(const HwTimeBase *base);
const char *hw_time_base_get_problem(const HwTimeBase *base, guint index);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwTimeBase, hw_time_base_unref)
