/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Which column of somebody's table means what: headers in English, French, German, Spanish and Italian
 * recognised whatever their case, accents and punctuation, or mapped by hand. */
#pragma once

#include "core/base/csv.h"

#include <glib.h>
#include <stdbool.h>

typedef enum {
    HW_FIELD_BIB,
    HW_FIELD_NAME,
    HW_FIELD_FIRST_NAME, /* set before NAME, where a list parts them */
    HW_FIELD_TEAM,
    HW_FIELD_NATION,
    HW_FIELD_CATEGORY,
    HW_FIELD_START,
    HW_FIELD_START_ACTUAL,
    HW_FIELD_DIAMETER_M,
    HW_FIELD_STATUS,
    HW_FIELD_UCI_ID,
    HW_N_FIELDS
} HwField;

/* Our own name of a field: "bib", "start_actual". */
const char *hw_field_get_name(HwField field);

typedef struct {
    guint column[HW_N_FIELDS]; /* G_MAXUINT: not in the table */
} HwColumnMap;

/* `by_hand` is "bib=Dossard,name=Coureur" or NULL; it wins over what is recognised. Fails
 * (HW_RULING_ERROR_START_LIST) where a named header is not in the table, a field is unknown, or two headers
 * would mean one field (say which by hand). */
bool hw_column_map_make(const HwCsvTable *table, const char *by_hand, HwColumnMap *map, GError **error);

/* "bib ← Dossard, name ← Nom; not used: Couleur": what was understood and what was not, to be shown. Owned by
 * the caller. */
char *hw_column_map_dup_text(const HwColumnMap *map, const HwCsvTable *table);
