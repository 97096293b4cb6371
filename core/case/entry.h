/* SPDX-License-Identifier: GPL-3.0-or-later */
/* An entry of the journal: one JSON line, chained to the one before by its digest. Pure text in, pure text
 * out. */
#pragma once

#include "core/base/digest.h"
#include "core/base/json.h"

#include <glib.h>
#include <stdbool.h>
#include <stdint.h>

/* What the first entry is chained to: 64 zeros. */
HwDigest hw_entry_first_digest(void);

/* SHA-256 of the previous digest (hex), LF, and the line without its LF. */
HwDigest hw_entry_digest(const HwDigest *previous, const char *line);

typedef struct {
    int64_t seq;    /* from 1 */
    const char *at; /* RFC 3339 */
    const char *by; /* key of a person, or "" */
    const char *act;
    bool kept;
    int64_t undoes;        /* seq of the act taken back; 0: none */
    int64_t redoes;        /* seq of the act made again */
    const json_t *changes; /* [{kind, key, from, to}], borrowed from `root` */
    json_t *root;
} HwEntry;

/* A line as an entry; its texts live as long as it does. False with HW_CASE_ERROR_FALSE that names `where`.
 */
bool hw_entry_parse(const char *line, const char *where, HwEntry *entry, GError **error);
void hw_entry_clear(HwEntry *entry);

/* The line of an entry, without LF: keys in this order, no white space. `changes` is borrowed. Owned by the
 * caller. */
char *hw_entry_dup_line(const HwEntry *entry);

G_DEFINE_AUTO_CLEANUP_CLEAR_FUNC(HwEntry, hw_entry_clear)
