/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The start list: who may cross the line. Immutable once read. */
#pragma once

#include "core/base/instant.h"
#include "core/ruling/status.h"

#include <glib.h>
#include <stdbool.h>
#include <stdint.h>

/* A start as a list gives it: an instant, or a time of day that becomes one only with a crossing. */
typedef struct {
    bool known;
    bool is_instant;
    HwInstant instant;
    int64_t time_of_day_ns;
} HwStartTime;

typedef struct {
    char *bib; /* text; unique in its category */
    char *name;
    char *team;
    char *nation;
    char *category; /* "" where the list has none */
    char *uci_id;
    HwStatus status;          /* OK where none is given */
    int laps_behind;          /* with LAP; 0 unknown */
    HwStartTime start;        /* scheduled */
    HwStartTime start_actual; /* the gate's */
    double diameter_m;        /* front wheel; 0 unknown */
    guint line;               /* of the file */
} HwRider;

typedef struct {
    char *path;
    char *understood;  /* "semicolon-separated, windows-1252; bib ← Dossard, …" */
    GPtrArray *riders; /* of HwRider*, in the file's order */
} HwStartList;

/* Reads a list. `map_by_hand` as for hw_column_map_make, may be NULL. Fails (HW_RULING_ERROR_START_LIST)
 * without a bib column, with an empty bib, a bib that stands twice in its category, a start that is neither
 * instant nor time of day, a diameter outside 0.3 … 1 m, an unknown status. */
HwStartList *hw_start_list_read(const char *path, const char *map_by_hand, GError **error);
HwStartList *hw_start_list_parse(const char *data, gsize size, const char *label, const char *map_by_hand,
                                 GError **error);
void hw_start_list_free(HwStartList *list);

/* The rider with a bib; `category` NULL or "" for any. NULL where there is none; *ambiguous where the bib
 * stands in several categories and none was named. */
const HwRider *hw_start_list_find(const HwStartList *list, const char *bib, const char *category,
                                  bool *ambiguous);

/* Bibs compare as people order them: by number first, then as text. */
int hw_bib_compare(const char *a, const char *b);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwStartList, hw_start_list_free)
