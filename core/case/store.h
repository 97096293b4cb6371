/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The SQLite file behind a case: two tables, journal and fact, and nothing else. Rollback journal,
 * synchronous EXTRA, STRICT, DEFENSIVE, no trusted schema. Knows nothing of what lines and facts mean. */
#pragma once

#include "core/case/ledger.h"

#include <glib.h>
#include <stdbool.h>
#include <stdint.h>

typedef struct HwStore HwStore;

/* An empty store at a path where nothing is. */
HwStore *hw_store_create(const char *path, GError **error);

/* An existing one; `label` names it in sentences. HW_CASE_ERROR_FORMAT for whatever is not ours, newer, or
 * has a schema other than ours. */
HwStore *hw_store_open(const char *path, bool write, const char *label, GError **error);
void hw_store_close(HwStore *store);

/* Every line with its digest into the ledger, which refuses what does not follow. */
bool hw_store_load(HwStore *store, HwLedger *ledger, GError **error);

/* True where the fact table says what the ledger does; else HW_CASE_ERROR_FALSE. */
bool hw_store_compare(HwStore *store, const HwLedger *ledger, GError **error);

/* One entry with what it changes, in one transaction, on the disk when this returns; nothing of it after a
 * failure. */
bool hw_store_append(HwStore *store, int64_t seq, const char *line, const char *digest, const json_t *changes,
                     GError **error);

/* A copy of the whole into a file where nothing is. */
bool hw_store_copy(HwStore *store, const char *path, GError **error);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwStore, hw_store_close)
