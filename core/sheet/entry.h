/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What a picture says of each marker on it: place, times, gaps, in words. Official time and measured gap
 * stand apart; each measured gap has its ±. */
#pragma once

#include "core/sheet/palette.h"
#include "core/sheet/picture.h"

#include <glib.h>

enum {
    HW_CELL_PLACE,
    HW_CELL_BIB,
    HW_CELL_NAME,
    HW_CELL_TEAM,
    HW_CELL_TIME,
    HW_CELL_GAP,
    HW_CELL_BEFORE,
    HW_CELL_WINNER,
    HW_CELL_APART,
    HW_N_CELLS
};

typedef struct {
    double column;
    double row;
    bool rear;
    HwPennantState state;
    char *bib;
    const HwFinishRow *finish; /* NULL: not ranked by this marker, or no list */
    char *place;  /* "2", "3=", "DSQ"; "" where none; with its category where there are several */
    char *before; /* "33: 1.00 ± 0.58 ms"; "" where none; likewise below */
    char *winner;
    char *cells[HW_N_CELLS]; /* of its row in the table; NULL where it has none (rear tyres) */
} HwEntry;

/* Entries of a picture between two columns, by column (GPtrArray of HwEntry, owned by the caller). Markers of
 * another passage than the list's are left out. */
GPtrArray *hw_entries_new(const HwPicture *picture, double from_col, double to_col);

/* The front marker of a bib, or the marker its place rests on. NULL where there is none. Borrowed. */
const HwEntry *hw_entries_find(const GPtrArray *entries, const char *bib);

/* "2 ahead of 33 by 1.00 ± 0.58 ms, 1.8 ± 1.0 cm. Told apart: no (…)". Owned by the caller. */
char *hw_entries_dup_pair(const HwPicture *picture, const HwEntry *a, const HwEntry *b);

/* A measured value with U = 2 u, two figures of U: "1.00 ± 0.58 ms" (s from a second on); "1.000 ms, ±
 * unknown". Owned by the caller. */
char *hw_entry_dup_measured(int64_t value_ns, double u_ns);
