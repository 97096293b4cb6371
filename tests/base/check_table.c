/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/base/check_table.h"

#include <string.h>

HwCsvTable *
check_table_read(const char *name)
{
    g_autofree char *path = g_test_build_filename(G_TEST_DIST, "base", "data", name, NULL);
    g_autofree char *text = NULL;
    g_autoptr(GError) error = NULL;
    g_file_get_contents(path, &text, NULL, &error);
    g_assert_no_error(error);
    const char *table_text = text;
    while (*table_text == '#')
        table_text = strchr(table_text, '\n') + 1;
    HwCsvTable *table = hw_csv_table_parse(table_text, strlen(table_text), name, &error);
    g_assert_no_error(error);
    g_assert_cmpuint(table->rows->len, >, 0);
    return table;
}

const char *
check_table_get(const HwCsvTable *table, guint row, const char *column)
{
    guint place = hw_csv_table_find(table, column);
    g_assert_cmpuint(place, !=, G_MAXUINT);
    return ((HwCsvRow *)table->rows->pdata[row])->fields[place];
}
