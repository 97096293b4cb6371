/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The journal replayed in memory: the facts it gives, its chain, and what can be undone. Entries only ever go
 * on at its end, and one that does not follow from those before is refused. Knows no file. */
#pragma once

#include "core/case/act.h"
#include "core/case/entry.h"

#include <glib.h>
#include <stdbool.h>
#include <stdint.h>

typedef struct HwLedger HwLedger;

/* `label` begins its sentences: the case's path. */
HwLedger *hw_ledger_new(const char *label);
void hw_ledger_free(HwLedger *ledger);

int64_t hw_ledger_get_revision(const HwLedger *ledger);
const HwDigest *hw_ledger_get_digest(const HwLedger *ledger);

/* Takes the next line. `digest`, if not NULL, must be what the chain gives. On failure (HW_CASE_ERROR_FALSE:
 * sequence, chain, a fact that was not as the entry says, an undo of what is not last) the ledger is as
 * before. */
bool hw_ledger_append(HwLedger *ledger, const char *line, const char *digest, GError **error);

/* The line that an act would be next; NULL where it changes nothing. Owned by the caller; the ledger is
 * untouched. */
char *hw_ledger_dup_act_line(const HwLedger *ledger, const HwAct *act, const char *at, const char *by);

/* The same of an undo or a redo; NULL with HW_CASE_ERROR_ACT where there is nothing left to undo or redo. */
char *hw_ledger_dup_undo_line(const HwLedger *ledger, const char *at, const char *by, GError **error);
char *hw_ledger_dup_redo_line(const HwLedger *ledger, const char *at, const char *by, GError **error);

const char *hw_ledger_get_undo_name(const HwLedger *ledger);
const char *hw_ledger_get_redo_name(const HwLedger *ledger);

/* Borrowed until the next append; NULL where the fact is not. */
const json_t *hw_ledger_get_fact(const HwLedger *ledger, const char *kind, const char *key);

typedef struct {
    const char *kind;
    const char *key;
    const json_t *value;
} HwFact;

/* All facts (of one kind, or of all where NULL), by kind, then by key: numbers by size, then texts. A new
 * array of HwFact whose texts are the ledger's. */
GArray *hw_ledger_dup_facts(const HwLedger *ledger, const char *kind);

/* How a fact's value is written: compact, 17 digits. Owned by the caller. */
char *hw_fact_dup_text(const json_t *value);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwLedger, hw_ledger_free)
