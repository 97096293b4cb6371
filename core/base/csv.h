/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Tables with a header row: RFC 4180, and what spreadsheets make of it (other delimiters, encodings, line
 * ends). */
#pragma once

#include "core/base/encoding.h"

#include <glib.h>
#include <stdbool.h>

typedef struct {
    guint line;   /* of the file, from 1: where the row begins */
    GStrv fields; /* as many as the header has; a short row is filled up with empty ones */
} HwCsvRow;

typedef struct {
    char *label; /* file name, for messages */
    HwEncoding encoding;
    bool had_bom;
    char delimiter; /* ',', ';', tab or '|' */
    GStrv header;
    GPtrArray *rows; /* of HwCsvRow* */
} HwCsvTable;

/* Reads a file: encoding and delimiter guessed; lines of nothing but blanks passed over. A row with more
 * fields than the header is an error, as is an open quote, an empty file or a header name used twice. */
HwCsvTable *hw_csv_table_read(const char *path, GError **error);

/* The same from text in memory. */
HwCsvTable *hw_csv_table_parse(const char *data, gsize size, const char *label, GError **error);

void hw_csv_table_free(HwCsvTable *table);

/* "comma-separated, UTF-8": what was guessed, to be shown. Owned by the caller. */
char *hw_csv_table_dup_format(const HwCsvTable *table);

/* Place of a header by its exact name, or G_MAXUINT. */
guint hw_csv_table_find(const HwCsvTable *table, const char *name);

/* Appends one record with CRLF; fields are quoted where RFC 4180 asks. NULL fields are empty. */
void hw_csv_append_record(GString *text, const char *const *fields, guint n_fields);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwCsvTable, hw_csv_table_free)
