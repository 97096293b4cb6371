/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What Enter will do with the number typed: name the marker under the reading line in view, else place one
 * there. A plain value made anew at each key, so that the judge reads it before it happens; it changes
 * nothing itself. */
#pragma once

#include "ui/session.h"

typedef enum {
    HW_NAMING_READY,  /* Enter commits */
    HW_NAMING_ASK,    /* the sentence is a doubt: Enter must be pressed again */
    HW_NAMING_REFUSED /* Enter does nothing; the sentence says why and what to do */
} HwNamingState;

typedef struct {
    HwNamingState state;
    int marker;     /* −1: one is placed */
    char *bib;      /* as it will be written; NULL: unnamed */
    char *category; /* where the bib is worn in several; else NULL */
    char *rider;    /* name and team; "" where not known */
    char *sentence; /* what Enter does, what is in doubt, or why not */
} HwNaming;

/* `text` as typed ("" or "?": unnamed; "4 women": number 4 of that category, or of the one that begins so);
 * reach_px: how near the line a marker is under it, in device pixels; `renames`: to rename was what the judge
 * asked for, else a marker of another rider is asked about where the line stands on it, and left alone beside
 * it. Something must be open. */
HwNaming *hw_naming_make(HwSession *session, const char *text, double reach_px, bool renames);
void hw_naming_free(HwNaming *naming);

/* The same doubt about the same thing as another one: what a second Enter may confirm. */
bool hw_naming_equal(const HwNaming *a, const HwNaming *b);

/* Does it. False where it is refused after all; the session is then as it was. */
bool hw_naming_commit(HwSession *session, const HwNaming *naming);

/* The marker under the reading line and in view (the selected one first), or −1; *n_within: how many are. */
int hw_naming_find_marker(HwSession *session, double reach_px, int *n_within);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwNaming, hw_naming_free)
