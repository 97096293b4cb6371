/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Any bytes as a table: refused with a sentence, or taken, every row as wide as the header and UTF-8, and
 * written so that it reads back alike. */
#include "core/base/csv.h"
#include "tests/fuzz/fuzz_target.h"

#include <string.h>

int
LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
    g_autoptr(GError) error = NULL;
    g_autoptr(HwCsvTable) table = hw_csv_table_parse((const char *)data, size, "f.csv", &error);
    g_assert_true((table == NULL) == (error != NULL));
    if (table == NULL)
        return 0;
    guint width = g_strv_length(table->header);
    g_autoptr(GString) text = g_string_new(NULL);
    hw_csv_append_record(text, (const char *const *)table->header, width);
    guint last_line = 0;
    for (guint i = 0; i < table->rows->len; i++) {
        const HwCsvRow *row = table->rows->pdata[i];
        g_assert_cmpuint(g_strv_length(row->fields), ==, width);
        g_assert_cmpuint(row->line, >, last_line);
        last_line = row->line;
        for (guint k = 0; k < width; k++)
            g_assert_true(g_utf8_validate(row->fields[k], -1, NULL));
        hw_csv_append_record(text, (const char *const *)row->fields, width);
    }
    g_autofree char *format = hw_csv_table_dup_format(table);
    g_assert_nonnull(format);
    /* Not where the delimiter or a byte order mark that stood inside quotes would be guessed anew. */
    if (width < 2 || g_str_has_prefix(text->str, "\xEF\xBB\xBF") || strpbrk(text->str, ";\t|") != NULL ||
        text->len == 0)
        return 0;
    g_autoptr(HwCsvTable) back = hw_csv_table_parse(text->str, text->len, "f.csv", NULL);
    g_assert_nonnull(back);
    g_assert_true(g_strv_equal((const char *const *)back->header, (const char *const *)table->header));
    g_assert_cmpuint(back->rows->len, ==, table->rows->len);
    for (guint i = 0; i < table->rows->len; i++)
        g_assert_true(g_strv_equal((const char *const *)((HwCsvRow *)back->rows->pdata[i])->fields,
                                   (const char *const *)((HwCsvRow *)table->rows->pdata[i])->fields));
    return 0;
}
