/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A case: one finish and all that was decided about it, in one SQLite file. The journal is the truth: every
 * change is an act, written and flushed before hw_case_do returns; the table of facts is a projection of it
 * that can be rebuilt and compared. Undo and redo are acts. A case belongs to the thread that opened it. */
#pragma once

#include "core/case/act.h"
#include "core/case/ledger.h"
#include "core/case/store.h"

#include <glib.h>
#include <stdbool.h>
#include <stdint.h>

#define HW_CASE_SUFFIX ".halfwheel"
#define HW_CASE_VERSION 1

typedef struct HwCase HwCase;

/* Makes a new case at `path`, whole or not at all, and leaves it open for writing. An existing file is
 * refused without `force` (HW_BASE_ERROR_EXISTS). */
HwCase *hw_case_create(const char *path, bool force, GError **error);

typedef enum {
    HW_CASE_WRITE,        /* fails where another desk writes it, or nothing can be written there */
    HW_CASE_READ,         /* never writes */
    HW_CASE_WRITE_OR_READ /* reads where it cannot write; hw_case_get_why_read_only says why */
} HwCaseMode;

/* Opens a case. Refused (HW_CASE_ERROR_FORMAT): no SQLite file of ours, a newer version, foreign tables,
 * triggers or views. Refused (HW_CASE_ERROR_FALSE): an entry that breaks the chain, or facts that the journal
 * does not give. */
HwCase *hw_case_open(const char *path, HwCaseMode mode, GError **error);
void hw_case_close(HwCase *held);

const char *hw_case_get_path(const HwCase *held);
/* NULL where the case can be written. A sentence, borrowed. */
const char *hw_case_get_why_read_only(const HwCase *held);
/* Of the last entry; grows with every act. */
int64_t hw_case_get_revision(const HwCase *held);
/* Digest of the last entry: pins the whole journal. */
const HwDigest *hw_case_get_digest(const HwCase *held);

/* The person at the desk, whose key acts bear from now on; "" nobody. Not an act. */
void hw_case_set_desk(HwCase *held, const char *person);

/* Writes the act. Changes that leave a fact as it is are left out; an act that changes nothing is not written
 * (true, the revision stays). On failure nothing of it is kept: HW_CASE_ERROR_READ_ONLY, HW_CASE_ERROR_IO. */
bool hw_case_do(HwCase *held, const HwAct *act, GError **error);

/* Takes back the last act that was neither kept nor taken back; makes the last act taken back again, as long
 * as nothing else was done since. HW_CASE_ERROR_ACT where there is none. */
bool hw_case_undo(HwCase *held, GError **error);
bool hw_case_redo(HwCase *held, GError **error);
/* A fact's value, borrowed until the next act; NULL where there is none. */
const json_t *hw_case_get_fact(const HwCase *held, const char *kind, const char *key);

/* All facts of a kind as for hw_ledger_dup_facts. */
GArray *hw_case_dup_facts(const HwCase *held, const char *kind);

/* Rebuilds the facts from the journal in memory and compares them with the table, and every digest with its
 * chain: false with HW_CASE_ERROR_FALSE that names the first entry or fact that does not hold. hw_case_open
 * calls it. */
bool hw_case_verify(HwCase *held, GError **error);

/* A copy of the case as it stands, whole or not at all. */
bool hw_case_copy(HwCase *held, const char *path, bool force, GError **error);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwCase, hw_case_close)
