/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What a list needs beside start list and markers (halfwheel_race 1): event, passage, starts, stretches
 * neutralised, statuses, a declared breakaway. Immutable once read. */
#pragma once

#include "core/base/instant.h"
#include "core/ruling/status.h"

#include <glib.h>
#include <stdbool.h>

typedef enum {
    HW_PASSAGE_FINISH,
    HW_PASSAGE_SPRINT,
    HW_PASSAGE_LAP,
    HW_PASSAGE_ELIMINATION,
    HW_PASSAGE_FINAL_SPRINT
} HwPassageKind;

/* "finish", "sprint", …: as in files. */
const char *hw_passage_kind_get_word(HwPassageKind kind);

typedef struct {
    char *category; /* "*": all that have none of their own */
    HwInstant instant;
} HwWave;

typedef struct {
    HwInstant from;
    HwInstant to;
} HwNeutralised;

typedef struct {
    char *bib;
    char *category; /* "": any */
    HwStatus status;
    int laps_behind;
} HwRaceStatus;

typedef struct {
    char *role;
    char *name;
} HwOfficial;

typedef struct {
    char *path;
    char *event; /* "" where none; likewise below */
    char *passage_name;
    HwPassageKind passage_kind;
    bool has_passage;
    int laps_to_go;       /* −1: not given */
    GArray *waves;        /* HwWave */
    GArray *neutralised;  /* HwNeutralised */
    GArray *statuses;     /* HwRaceStatus */
    GPtrArray *breakaway; /* char*, bibs; empty: none declared */
    GArray *officials;    /* HwOfficial */
    double distance_km;   /* 0: not given */
} HwRace;

HwRace *hw_race_read(const char *path, GError **error);
HwRace *hw_race_parse(const char *text, gsize size, const char *label, GError **error);
void hw_race_free(HwRace *race);

/* The status the race gives a rider; one that names the category wins. NULL where it gives none (race may be
 * NULL). */
const HwRaceStatus *hw_race_find_status(const HwRace *race, const char *bib, const char *category);

/* True where the bib is of the declared breakaway (race may be NULL). */
bool hw_race_in_breakaway(const HwRace *race, const char *bib);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwRace, hw_race_free)
