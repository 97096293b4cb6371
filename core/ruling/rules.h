/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A rule set (halfwheel_rules 1): the regulations a list follows, naming article and edition. Shipped ones go
 * through the same parser as a user's own. Immutable once read. */
#pragma once

#include "core/ruling/markers.h"
#include "core/ruling/race.h"
#include "core/ruling/rounding.h"

#include <glib.h>
#include <stdbool.h>
#include <stdint.h>

typedef enum { HW_RANK_BY_CROSSING, HW_RANK_BY_OFFICIAL_TIME } HwRankBy;
typedef enum { HW_TIE_SHARE, HW_TIE_RERUN, HW_TIE_ASK } HwTie;

typedef struct {
    char *id;
    char *title;
    char *article;
    char *edition;
    char *note;           /* "" where none */
    int64_t precision_ns; /* of official times; 0 with places_only */
    HwRounding rounding;
    HwEdge order_edge[HW_PASSAGE_FINAL_SPRINT + 1]; /* by kind of passage */
    HwRankBy rank_by;
    bool places_only;  /* no times are published */
    int time_on_rider; /* n-th of a team gives the team its time; 0: not a team race */
    int team_riders;   /* riders that count for the day's team result; 0: none */
    bool has_groups;
    int64_t group_gap_ns;
    int64_t breakaway_gap_ns; /* 0: the rule set knows none */
    HwTie tie;
    double time_limit_percent; /* 0: none */
    int places_that_matter;
    int64_t correction_limit_ns; /* 0: none named */
    double p_order_limit;        /* largest chance of the wrong order at which two count as told apart */
    char *json;                  /* the text it was read from */
} HwRules;

/* The shipped ids, NULL-ended. */
const char *const *hw_rules_get_ids(void);

/* A shipped id, or the path of a file. NULL with HW_RULING_ERROR_RULES. */
HwRules *hw_rules_read(const char *id_or_path, GError **error);
HwRules *hw_rules_parse(const char *text, gsize size, const char *label, GError **error);
void hw_rules_free(HwRules *rules);

/* The rule set in words a commissaire would recognise, a paragraph with line breaks. Owned by the caller. */
char *hw_rules_dup_text(const HwRules *rules);

/* One line: id, title, article, edition. Owned by the caller. */
char *hw_rules_dup_line(const HwRules *rules);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwRules, hw_rules_free)
