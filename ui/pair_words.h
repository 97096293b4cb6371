/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Pairs and accounts of the finish list as sentences. All results are the caller's. */
#pragma once

#include "core/ruling/finish_list.h"

/* "47 ahead of 11 by 3.8 ± 0.2 ms, 6.8 ± 0.4 cm. Told apart: yes." NULL where `row` has nobody measured
 * before it in its category. `ahead`: the row before. */
char *hw_pair_words_dup(const HwFinishRow *ahead, const HwFinishRow *row);

/* The row before `index` in the same category that crossed and is ranked, or NULL. */
const HwFinishRow *hw_pair_words_find_ahead(const HwFinishList *list, guint index);

/* "30 ranked · 1 DNF · 2 missing · 3 unnamed": only what is not nothing, but ranked and missing always. */
char *hw_pair_words_dup_check(const HwFinishList *list);

/* The whole account: "33 entered − 1 DNS = 32 starters = 30 ranked + 0 LAP + …". */
char *hw_pair_words_dup_check_whole(const HwFinishList *list);
