/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/ruling/start_list.h"

#include "core/base/csv.h"
#include "core/base/duration.h"
#include "core/base/input.h"
#include "core/base/limits.h"
#include "core/base/number.h"
#include "core/ruling/column_map.h"
#include "core/ruling/ruling_error.h"

#include <string.h>

static const double min_diameter_m = 0.3;
static const double max_diameter_m = 1.0;

static void
rider_free(gpointer data)
{
    HwRider *rider = data;
    g_free(rider->bib);
    g_free(rider->name);
    g_free(rider->team);
    g_free(rider->nation);
    g_free(rider->category);
    g_free(rider->uci_id);
    g_free(rider);
}

void
hw_start_list_free(HwStartList *list)
{
    if (list == NULL)
        return;
    g_free(list->path);
    g_free(list->understood);
    g_ptr_array_unref(list->riders);
    g_free(list);
}

static const char *
cell(const HwCsvRow *row, const HwColumnMap *map, HwField field)
{
    guint column = map->column[field];
    return column != G_MAXUINT ? row->fields[column] : "";
}

static char *
dup_cell(const HwCsvRow *row, const HwColumnMap *map, HwField field)
{
    return g_strstrip(g_strdup(cell(row, map, field)));
}

static bool
refuse_cell(const HwCsvTable *table, const HwCsvRow *row, HwField field, const char *text, const char *mend,
            GError **error)
{
    g_set_error(error, HW_RULING_ERROR, HW_RULING_ERROR_START_LIST, "%s, line %u: %s is “%s”; %s.",
                table->label, row->line, hw_field_get_name(field), text, mend);
    return false;
}

static bool
read_start(const HwCsvTable *table, const HwCsvRow *row, const HwColumnMap *map, HwField field,
           HwStartTime *start, GError **error)
{
    g_autofree char *text = dup_cell(row, map, field);
    if (*text == '\0')
        return true;
    start->known = true;
    if (hw_duration_parse_time_of_day(text, &start->time_of_day_ns))
        return true;
    start->is_instant = true;
    return hw_instant_parse(text, &start->instant, NULL) ||
           refuse_cell(table, row, field, text,
                       "write a time of day, 14:05:30, or an instant, "
                       "2027-06-13T14:05:30+02:00",
                       error);
}

static bool
read_diameter(const HwCsvTable *table, const HwCsvRow *row, const HwColumnMap *map, double *diameter_m,
              GError **error)
{
    g_autofree char *text = dup_cell(row, map, HW_FIELD_DIAMETER_M);
    if (*text == '\0')
        return true;
    return (hw_number_parse_double_local(text, diameter_m) && *diameter_m >= min_diameter_m &&
            *diameter_m <= max_diameter_m) ||
           refuse_cell(table, row, HW_FIELD_DIAMETER_M, text,
                       "write the front wheel's diameter in metres, 0.668", error);
}

static HwRider *
read_rider(const HwCsvTable *table, const HwCsvRow *row, const HwColumnMap *map, GError **error)
{
    HwRider *rider = g_new0(HwRider, 1);
    rider->line = row->line;
    rider->bib = dup_cell(row, map, HW_FIELD_BIB);
    rider->team = dup_cell(row, map, HW_FIELD_TEAM);
    rider->nation = dup_cell(row, map, HW_FIELD_NATION);
    rider->category = dup_cell(row, map, HW_FIELD_CATEGORY);
    rider->uci_id = dup_cell(row, map, HW_FIELD_UCI_ID);
    g_autofree char *first = dup_cell(row, map, HW_FIELD_FIRST_NAME);
    g_autofree char *last = dup_cell(row, map, HW_FIELD_NAME);
    rider->name = g_strstrip(g_strjoin(" ", first, last, NULL));

    g_autofree char *status = dup_cell(row, map, HW_FIELD_STATUS);
    bool good = true;
    if (*rider->bib == '\0')
        good = refuse_cell(table, row, HW_FIELD_BIB, "", "give every rider one", error);
    else if (*rider->bib == '?')
        good = refuse_cell(table, row, HW_FIELD_BIB, rider->bib,
                           "a bib beginning with “?” stands for a rider not yet "
                           "named",
                           error);
    else if (!hw_status_parse(status, &rider->status, &rider->laps_behind))
        good = refuse_cell(table, row, HW_FIELD_STATUS, status,
                           "write DNS, DNF, ABD, OTL, DSQ, LAP or nothing", error);
    good = good && read_start(table, row, map, HW_FIELD_START, &rider->start, error) &&
           read_start(table, row, map, HW_FIELD_START_ACTUAL, &rider->start_actual, error) &&
           read_diameter(table, row, map, &rider->diameter_m, error);
    if (!good)
        g_clear_pointer(&rider, rider_free);
    return rider;
}

static HwStartList *
from_table(const HwCsvTable *table, const char *map_by_hand, GError **error)
{
    HwColumnMap map;
    if (!hw_column_map_make(table, map_by_hand, &map, error))
        return NULL;
    if (map.column[HW_FIELD_BIB] == G_MAXUINT) {
        g_autofree char *known = g_strjoinv(", ", table->header);
        g_set_error(error, HW_RULING_ERROR, HW_RULING_ERROR_START_LIST,
                    "%s has no column of bibs among %s; say which it is with bib=HEADER.", table->label,
                    known);
        return NULL;
    }
    g_autoptr(HwStartList) list = g_new0(HwStartList, 1);
    g_autofree char *format = hw_csv_table_dup_format(table);
    g_autofree char *mapping = hw_column_map_dup_text(&map, table);
    list->path = g_strdup(table->label);
    list->understood = g_strdup_printf("%s; %s", format, mapping);
    list->riders = g_ptr_array_new_with_free_func(rider_free);

    g_autoptr(GHashTable) seen = g_hash_table_new_full(g_str_hash, g_str_equal, g_free, NULL);
    for (guint i = 0; i < table->rows->len; i++) {
        HwRider *rider = read_rider(table, g_ptr_array_index(table->rows, i), &map, error);
        if (rider == NULL)
            return NULL;
        g_ptr_array_add(list->riders, rider);
        char *key = g_strjoin("\n", rider->category, rider->bib, NULL);
        const HwRider *first = g_hash_table_lookup(seen, key);
        if (first != NULL) {
            g_set_error(
                error, HW_RULING_ERROR, HW_RULING_ERROR_START_LIST,
                "%s, line %u: bib %s stands in line %u already%s%s; a bib is given once in a category.",
                table->label, rider->line, rider->bib, first->line,
                *rider->category != '\0' ? ", in category " : "", rider->category);
            g_free(key);
            return NULL;
        }
        g_hash_table_insert(seen, key, rider);
    }
    return g_steal_pointer(&list);
}

HwStartList *
hw_start_list_parse(const char *data, gsize size, const char *label, const char *map_by_hand, GError **error)
{
    g_autoptr(HwCsvTable) table = hw_csv_table_parse(data, size, label, error);
    return table != NULL ? from_table(table, map_by_hand, error) : NULL;
}

HwStartList *
hw_start_list_read(const char *path, const char *map_by_hand, GError **error)
{
    g_autoptr(HwCsvTable) table = hw_csv_table_read(path, error);
    return table != NULL ? from_table(table, map_by_hand, error) : NULL;
}

const HwRider *
hw_start_list_find(const HwStartList *list, const char *bib, const char *category, bool *ambiguous)
{
    const HwRider *found = NULL;
    *ambiguous = false;
    for (guint i = 0; i < list->riders->len; i++) {
        const HwRider *rider = g_ptr_array_index(list->riders, i);
        if (strcmp(rider->bib, bib) != 0)
            continue;
        if (category != NULL && *category != '\0') {
            if (strcmp(rider->category, category) == 0)
                return rider;
        } else if (found != NULL) {
            *ambiguous = true;
            return NULL;
        } else {
            found = rider;
        }
    }
    return found;
}

int
hw_bib_compare(const char *a, const char *b)
{
    guint64 number_a = g_ascii_strtoull(a, NULL, 10);
    guint64 number_b = g_ascii_strtoull(b, NULL, 10);
    bool numeric_a = g_ascii_isdigit(*a);
    bool numeric_b = g_ascii_isdigit(*b);
    if (numeric_a != numeric_b)
        return numeric_a ? -1 : 1;
    if (number_a != number_b)
        return number_a < number_b ? -1 : 1;
    return strcmp(a, b);
}
