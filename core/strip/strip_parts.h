/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Private to strip.c (what a strip is) and strip_samples.c (its samples). */
#pragma once

#include "core/strip/strip.h"

#include <glib.h>
#include <pthread.h>
#include <stdint.h>

/* What is settled of a block when the strip is first made. */
typedef struct {
    int64_t first_col;
    int64_t n_cols;
    int64_t *times_ns; /* n_cols stamps, or NULL */
    char *key;         /* of the file as it was found: names the block in the cache */
    char *damage;      /* known without decoding, or NULL */
} HwStripBlock;

/* Shared by a strip and those refreshed from it. All but `found` and `n_decoded` stays as it was made. */
typedef struct {
    HwRecording *recording;
    HwBlockCache *cache;
    HwStripBlock *blocks;
    guint n_blocks;
    int n_rows;
    pthread_mutex_t lock;
    GHashTable *found; /* block number → reason: damage that decoding showed; guarded by the lock */
    guint n_decoded;   /* guarded by the lock */
    gint refs;
} HwStripTable;

struct HwStrip {
    HwStripTable *table;
    HwTimeBase *base;
    char **damage; /* one a block, NULL where readable */
    guint n_damaged;
    guint n_found; /* of table->found when this strip was made */
    gint refs;
};

/* Clauses that say what is wrong; owned by the caller. */
char *hw_strip_dup_count_reason(const char *file, int64_t found, int64_t wanted);
char *hw_strip_dup_rows_reason(const char *file, int64_t found, int64_t wanted);

/* Remembers that decoding showed a block to be damaged; the first reason stays. */
void hw_strip_table_note_damage(HwStripTable *table, guint block, const char *reason);
