/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The steps by which a finish list is derived, in their order. Of use to ruling/ alone. */
#pragma once

#include "core/ruling/crossing.h"
#include "core/ruling/finish_list.h"

/* A sentence for the list's problems. */
void hw_finish_list_say(HwFinishList *list, const char *format, ...) G_GNUC_PRINTF(2, 3);

/* 1: a row for every crossing and every rider of the start list, with status and elapsed time; not yet
 * ranked. */
void hw_finish_rows_make(HwFinishList *list, const HwFinishInput *input, const HwCrossings *crossings);

/* 2: places, ties, groups, official times and gaps, category by category; sorts the rows. */
void hw_finish_rank(HwFinishList *list, const HwFinishInput *input, const HwCrossings *crossings);

/* 3: teams, where the rule set counts them. */
void hw_team_result_make(HwFinishList *list, const HwFinishInput *input);

/* In a team time trial the n-th rider's time is the team's: called between 1 and ranking by time. */
void hw_team_time_apply(HwFinishList *list, const HwFinishInput *input, GPtrArray *category_rows);
