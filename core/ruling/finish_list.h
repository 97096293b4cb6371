/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The finish list: the ranked result derived from markers, start list, race and rule set; never edited
 * itself. The same input gives the same list, to the byte. */
#pragma once

#include "core/measure/calibration.h"
#include "core/measure/gap.h"
#include "core/ruling/elapsed.h"
#include "core/ruling/markers.h"
#include "core/ruling/race.h"
#include "core/ruling/rules.h"
#include "core/ruling/start_list.h"

#include <glib.h>
#include <stdbool.h>
#include <stdint.h>

/* All but strip and markers may be NULL. The markers have passed hw_markers_check_places on this strip. */
typedef struct {
    HwStrip *strip;
    const HwMarkers *markers;
    const HwStartList *start_list;
    const HwRace *race;
    const HwRules *rules; /* NULL: measured order, not rounded, and the list says so */
    const HwInstant *gun;
    const HwCalibration *calibration;
    const char *passage;      /* wins over the race's */
    guint n_unchecked_blocks; /* from hw_markers_check_blocks, to be told */
} HwFinishInput;

typedef struct {
    int rank;  /* in its category; 0: none */
    bool tied; /* shares its rank */
    char *bib;
    char *name; /* "" where not known; likewise below */
    char *team;
    char *nation;
    char *category;
    char *uci_id;
    bool in_start_list;
    bool unnamed; /* a placeholder stands for the bib */
    HwStatus status;
    int laps_behind;
    bool crossed;  /* has a marker in this passage; what follows holds only then */
    double column; /* of the order edge */
    double row;
    HwEdge edge;
    int64_t crossing_ns; /* since the epoch */
    HwStartSource start_source;
    bool gate_refused;
    guint clock;      /* of the time base */
    double u_ns;      /* standard uncertainty of the reading */
    double speed_mps; /* NAN where not measured */
    double u_speed_mps;
    bool has_elapsed; /* a start is known and lies before the crossing */
    int64_t time_ns;  /* elapsed, measured; from the epoch where no start is known */
    bool has_official;
    int64_t official_ns; /* by the rule set; of the group's first rider where groups share a time */
    bool same_time;      /* official time shared with the rider before */
    int group;           /* from 1; 0: none, or open because a rear wheel is needed */
    bool has_gap;        /* to the winner of the category: measured and official */
    int64_t gap_ns;
    bool has_official_gap;
    int64_t official_gap_ns;
    bool has_prev; /* someone ranked before in the category, on the same clock */
    HwGap prev;
} HwFinishRow;

typedef struct {
    int rank; /* 0: too few riders */
    char *team;
    int64_t time_ns; /* sum of official times, or the time of the n-th rider */
    int64_t gap_ns;
    int place_sum;
    int best_place;
    GPtrArray *bibs; /* char*, that count */
} HwTeamRow;

/* entered − DNS = starters = ranked + LAP + OTL + DNF + ABD + DSQ + missing. */
typedef struct {
    int entered, dns, starters, ranked, lap, otl, dnf, abd, dsq, missing;
    int unnamed;     /* markers without a name: beside the account, never in it */
    int not_in_list; /* named markers whose bib is not in the start list */
} HwRiderCheck;

typedef struct {
    GPtrArray *rows;     /* HwFinishRow*, category by category, ranked first */
    GPtrArray *teams;    /* HwTeamRow*; empty where the rule set asks for none */
    GPtrArray *problems; /* char*, a sentence each */
    HwRiderCheck check;
    bool has_start_list;
    bool recording_whole; /* false: the recording is incomplete */
    char *passage;
    int decimals;   /* of official times */
    bool unrounded; /* no rule set: official times are the measured ones */
    bool places_only;
    char *rules_id; /* NULL without a rule set; likewise below */
    char *rules_title;
    char *rules_article;
    char *rules_edition;
} HwFinishList;

/* Fails only as hw_crossings_make does; everything else is a problem in the list. */
HwFinishList *hw_finish_list_new(const HwFinishInput *input, GError **error);
void hw_finish_list_free(HwFinishList *list);

/* The rider check of one team (NULL: all; "" riders without a team). */
HwRiderCheck hw_rider_check_make(const HwFinishList *list, const HwStartList *start_list, const char *team);

/* Everything from files: places checked, marker blocks decoded, list derived. *strip is exchanged for the
 * refreshed one. */
HwFinishList *hw_finish_list_derive(HwFinishInput *input, GCancellable *cancellable, GError **error);

/* The list as `rank` prints it. Owned by the caller. */
char *hw_finish_list_dup_json(const HwFinishList *list);
char *hw_finish_list_dup_csv(const HwFinishList *list);
char *hw_finish_list_dup_text(const HwFinishList *list);

/* Official time of a row ("1:12:04", "s.t."), its gap ("+0.004"): for screens and sheets. "" where none. */
char *hw_finish_row_dup_time(const HwFinishList *list, const HwFinishRow *row);
char *hw_finish_row_dup_gap(const HwFinishList *list, const HwFinishRow *row);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwFinishList, hw_finish_list_free)
