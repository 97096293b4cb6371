/* SPDX-License-Identifier: GPL-3.0-or-later */
/* An act: what somebody did to a case, as changes of facts. A fact is named by kind and key ("marker", "17")
 * and has a JSON value or none. Not yet an entry of the journal: it becomes one in hw_case_do, which adds
 * when, by whom, and what each fact was before. */
#pragma once

#include "core/base/json.h"

#include <glib.h>
#include <stdbool.h>

typedef struct HwAct HwAct;

/* `name` says what was done, for people and for the journal: "place_marker". */
HwAct *hw_act_new(const char *name);
void hw_act_free(HwAct *act);

/* The fact becomes `value` (reference taken over), or is no more (NULL). One change a fact in an act: a
 * second one of the same fact replaces the first. */
void hw_act_set(HwAct *act, const char *kind, const char *key, json_t *value);

/* Undo passes this act by: what is published, or what a case begins with. */
void hw_act_keep(HwAct *act);

const char *hw_act_get_name(const HwAct *act);
bool hw_act_is_kept(const HwAct *act);
guint hw_act_get_n_changes(const HwAct *act);
void hw_act_get_change(const HwAct *act, guint index, const char **kind, const char **key, json_t **value);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwAct, hw_act_free)
