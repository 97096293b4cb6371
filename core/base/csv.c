/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/base/csv.h"

#include "core/base/base_error.h"
#include "core/base/input.h"
#include "core/base/limits.h"

#include <string.h>

static const struct {
    char delimiter;
    const char *name;
} delimiters[] = { { ',', "comma-separated" },
                   { ';', "semicolon-separated" },
                   { '\t', "tab-separated" },
                   { '|', "bar-separated" } };

typedef struct {
    const char *p;
    guint line;
    char delimiter;
    const char *label;
} Reader;

static void
row_free(gpointer data)
{
    HwCsvRow *row = data;
    g_strfreev(row->fields);
    g_free(row);
}

void
hw_csv_table_free(HwCsvTable *table)
{
    if (table == NULL)
        return;
    g_free(table->label);
    g_strfreev(table->header);
    g_ptr_array_unref(table->rows);
    g_free(table);
}

static bool
at_line_end(const Reader *reader)
{
    return *reader->p == '\n' || *reader->p == '\r';
}

static void
take_line_end(Reader *reader)
{
    if (*reader->p == '\r')
        reader->p++;
    if (*reader->p == '\n')
        reader->p++;
    reader->line++;
}

static bool
take_quoted(Reader *reader, GString *field, GError **error)
{
    guint opened = reader->line;
    for (reader->p++;; reader->p++) {
        if (*reader->p == '\0') {
            g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_SYNTAX,
                        "%s, line %u: a quotation mark is never closed; close it.", reader->label, opened);
            return false;
        }
        if (*reader->p == '"') {
            if (reader->p[1] != '"')
                break;
            reader->p++;
        } else if (*reader->p == '\n' || (*reader->p == '\r' && reader->p[1] != '\n')) {
            reader->line++;
        }
        g_string_append_c(field, *reader->p);
    }
    reader->p++;
    if (*reader->p != '\0' && *reader->p != reader->delimiter && !at_line_end(reader)) {
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_SYNTAX,
                    "%s, line %u: text follows a closing quotation mark; double the mark or take it out.",
                    reader->label, reader->line);
        return false;
    }
    return true;
}

/* One record; NULL with error. Leaves the reader at the next line. */
static HwCsvRow *
take_record(Reader *reader, GError **error)
{
    g_autoptr(GPtrArray) fields = g_ptr_array_new_with_free_func(g_free);
    guint line = reader->line;
    for (;;) {
        g_autoptr(GString) field = g_string_new(NULL);
        if (*reader->p == '"') {
            if (!take_quoted(reader, field, error))
                return NULL;
        } else {
            while (*reader->p != '\0' && *reader->p != reader->delimiter && !at_line_end(reader))
                g_string_append_c(field, *reader->p++);
        }
        if (fields->len == HW_MAX_TABLE_FIELDS) {
            g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_RANGE,
                        "%s, line %u: more than %d fields; check that it is the right file.", reader->label,
                        line, HW_MAX_TABLE_FIELDS);
            return NULL;
        }
        g_ptr_array_add(fields, g_strdup(field->str));
        if (*reader->p != reader->delimiter)
            break;
        reader->p++;
    }
    if (*reader->p != '\0')
        take_line_end(reader);
    g_ptr_array_add(fields, NULL);
    HwCsvRow *row = g_new0(HwCsvRow, 1);
    row->line = line;
    row->fields = (GStrv)g_ptr_array_steal(fields, NULL);
    return row;
}

static bool
is_blank(const HwCsvRow *row)
{
    for (GStrv field = row->fields; *field != NULL; field++) {
        if ((*field)[strspn(*field, " \t\f\v\r\n")] != '\0')
            return false;
    }
    return true;
}

/* The delimiter that stands most often in the first line that is not blank, outside quotes. */
static char
guess_delimiter(const char *text)
{
    guint counts[G_N_ELEMENTS(delimiters)] = { 0 };
    bool quoted = false;
    text += strspn(text, "\r\n");
    for (const char *p = text; *p != '\0' && (quoted || (*p != '\n' && *p != '\r')); p++) {
        if (*p == '"')
            quoted = !quoted;
        for (guint i = 0; !quoted && i < G_N_ELEMENTS(delimiters); i++)
            counts[i] += *p == delimiters[i].delimiter;
    }
    guint best = 0;
    for (guint i = 1; i < G_N_ELEMENTS(delimiters); i++) {
        if (counts[i] > counts[best])
            best = i;
    }
    return delimiters[best].delimiter;
}

static bool
header_is_unique(const HwCsvTable *table, GError **error)
{
    for (guint i = 0; table->header[i] != NULL; i++) {
        for (guint j = 0; j < i; j++) {
            if (*table->header[i] != '\0' && strcmp(table->header[i], table->header[j]) == 0) {
                g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_SYNTAX,
                            "%s, line 1: the column “%s” stands twice; rename one.", table->label,
                            table->header[i]);
                return false;
            }
        }
    }
    return true;
}

/* Makes the row as wide as the header. */
static bool
fit_row(HwCsvRow *row, guint width, const char *label, GError **error)
{
    guint have = g_strv_length(row->fields);
    for (guint i = have; i > width; i--) { /* from the end: what is left is always NULL-ended */
        if (*row->fields[i - 1] != '\0') {
            g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_SYNTAX,
                        "%s, line %u has %u fields where the header has %u; quote the field that holds the "
                        "delimiter.",
                        label, row->line, have, width);
            return false;
        }
        g_clear_pointer(&row->fields[i - 1], g_free);
    }
    if (have < width) {
        row->fields = g_renew(char *, row->fields, width + 1);
        for (guint i = have; i < width; i++)
            row->fields[i] = g_strdup("");
        row->fields[width] = NULL;
    }
    return true;
}

static bool
read_rows(HwCsvTable *table, Reader *reader, GError **error)
{
    while (*reader->p != '\0') {
        HwCsvRow *row = take_record(reader, error);
        if (row == NULL)
            return false;
        if (is_blank(row)) {
            row_free(row);
            continue;
        }
        if (table->header == NULL) {
            table->header = g_steal_pointer(&row->fields);
            for (GStrv name = table->header; *name != NULL; name++)
                g_strstrip(*name);
            row_free(row);
            continue;
        }
        g_ptr_array_add(table->rows, row);
        if (!fit_row(row, g_strv_length(table->header), table->label, error))
            return false;
        if (table->rows->len > HW_MAX_TABLE_ROWS) {
            g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_RANGE,
                        "%s has more than %d rows; check that it is the "
                        "right file.",
                        table->label, HW_MAX_TABLE_ROWS);
            return false;
        }
    }
    return true;
}

HwCsvTable *
hw_csv_table_parse(const char *data, gsize size, const char *label, GError **error)
{
    HwEncoding encoding;
    bool had_bom;
    g_autofree char *text = hw_encoding_to_utf8(data, size, label, &encoding, &had_bom, error);
    if (text == NULL)
        return NULL;
    g_autoptr(HwCsvTable) table = g_new0(HwCsvTable, 1);
    table->label = g_strdup(label);
    table->encoding = encoding;
    table->had_bom = had_bom;
    table->delimiter = guess_delimiter(text);
    table->rows = g_ptr_array_new_with_free_func(row_free);

    Reader reader = { .p = text, .line = 1, .delimiter = table->delimiter, .label = label };
    if (!read_rows(table, &reader, error))
        return NULL;
    if (table->header == NULL) {
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_SYNTAX, "%s is empty; it needs a header row.", label);
        return NULL;
    }
    return header_is_unique(table, error) ? g_steal_pointer(&table) : NULL;
}

HwCsvTable *
hw_csv_table_read(const char *path, GError **error)
{
    size_t size;
    g_autofree char *data = hw_input_read(path, HW_MAX_TABLE_BYTES, &size, error);
    return data != NULL ? hw_csv_table_parse(data, size, path, error) : NULL;
}

char *
hw_csv_table_dup_format(const HwCsvTable *table)
{
    const char *shape = delimiters[0].name;
    for (guint i = 0; i < G_N_ELEMENTS(delimiters); i++) {
        if (delimiters[i].delimiter == table->delimiter)
            shape = delimiters[i].name;
    }
    return g_strdup_printf("%s, %s%s", shape, hw_encoding_get_name(table->encoding),
                           table->had_bom ? " with a byte order mark" : "");
}

guint
hw_csv_table_find(const HwCsvTable *table, const char *name)
{
    for (guint i = 0; table->header[i] != NULL; i++) {
        if (strcmp(table->header[i], name) == 0)
            return i;
    }
    return G_MAXUINT;
}

void
hw_csv_append_record(GString *text, const char *const *fields, guint n_fields)
{
    for (guint i = 0; i < n_fields; i++) {
        const char *field = fields[i] != NULL ? fields[i] : "";
        if (i > 0)
            g_string_append_c(text, ',');
        if (strpbrk(field, ",\"\r\n") == NULL) {
            g_string_append(text, field);
            continue;
        }
        g_string_append_c(text, '"');
        for (const char *p = field; *p != '\0'; p++) {
            if (*p == '"')
                g_string_append_c(text, '"');
            g_string_append_c(text, *p);
        }
        g_string_append_c(text, '"');
    }
    g_string_append(text, "\r\n");
}
