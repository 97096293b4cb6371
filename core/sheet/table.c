/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/sheet/table.h"

#include "core/sheet/entry.h"
#include "core/sheet/text.h"

#include <math.h>

#define ROW_PX 19.0
#define HEAD_PX 22.0
#define BETWEEN_PX 32.0
#define CELL_GAP_PX 10.0
#define AFTER_FIGURES_PX 14.0 /* text that stands right of figures */

static const struct {
    const char *head;
    double width;
    bool flush_right;
} columns[HW_N_CELLS] = {
    [HW_CELL_PLACE] = { "Place", 58, true },
    [HW_CELL_BIB] = { "Bib", 52, true },
    [HW_CELL_NAME] = { "Name", 182, false },
    [HW_CELL_TEAM] = { "Team", 150, false },
    [HW_CELL_TIME] = { "Time", 104, true },
    [HW_CELL_GAP] = { "Gap", 76, true },
    [HW_CELL_BEFORE] = { "To the one before", 150, true },
    [HW_CELL_WINNER] = { "To the winner", 150, true },
    [HW_CELL_APART] = { "Told apart", 134, false },
};

struct HwTable {
    PangoContext *context;
    HwInk ink;
    GPtrArray *rows;        /* const HwEntry* */
    bool shown[HW_N_CELLS]; /* columns that say something in some row of the whole table */
    double width;           /* of a block */
    guint n_blocks;         /* side by side */
    guint rows_per_block;
};

HwTable *
hw_table_new(PangoContext *context, const HwInk *ink, const GPtrArray *entries, guint first, double width,
             double max_height)
{
    HwTable *table = g_new0(HwTable, 1);
    table->context = g_object_ref(context);
    table->ink = *ink;
    table->rows = g_ptr_array_new();
    for (guint i = 0; i < entries->len; i++)
        for (int cell = 0; cell < HW_N_CELLS; cell++) {
            const char *text = ((const HwEntry *)g_ptr_array_index(entries, i))->cells[cell];
            table->shown[cell] |= text != NULL && *text != '\0';
        }
    for (int cell = 0; cell < HW_N_CELLS; cell++)
        table->width += table->shown[cell] ? columns[cell].width : 0;
    table->n_blocks = MAX(1, (guint)((width + BETWEEN_PX) / (table->width + BETWEEN_PX)));
    guint fit = (guint)MAX(0, (max_height - HEAD_PX) / ROW_PX);
    guint passed = 0;
    for (guint i = 0; i < entries->len; i++) {
        HwEntry *entry = g_ptr_array_index(entries, i);
        if (entry->cells[HW_CELL_BIB] == NULL || passed++ < first)
            continue;
        if (table->rows->len < (guint64)fit * table->n_blocks)
            g_ptr_array_add(table->rows, entry);
    }
    /* A short table stays in one piece: eight rows a block at least. */
    guint even = (table->rows->len + table->n_blocks - 1) / table->n_blocks;
    table->rows_per_block = MIN(MAX(even, 8), MAX(fit, 1));
    return table;
}

void
hw_table_free(HwTable *table)
{
    if (table == NULL)
        return;
    g_ptr_array_unref(table->rows);
    g_object_unref(table->context);
    g_free(table);
}

double
hw_table_get_height(const HwTable *table)
{
    return table->rows->len == 0 ? 0 : HEAD_PX + ROW_PX * MIN(table->rows->len, table->rows_per_block);
}

guint
hw_table_get_n_rows(const HwTable *table)
{
    return table->rows->len;
}

static void
draw_cells(const HwTable *table, cairo_t *cr, const char *const *cells, double y, double height, bool bold)
{
    HwType type = { table->ink.font_family, table->ink.font_px, bold, true };
    double x = 0;
    for (int i = 0; i < HW_N_CELLS; i++) {
        double room = columns[i].width - CELL_GAP_PX - (i == HW_CELL_APART ? AFTER_FIGURES_PX : 0);
        if (!table->shown[i])
            continue;
        if (cells[i] != NULL && *cells[i] != '\0') {
            HwType cell_type = type;
            cell_type.bold = bold || i == HW_CELL_BIB;
            g_autoptr(PangoLayout) layout = hw_text_layout(table->context, &cell_type, cells[i], room);
            double width, text_height;
            hw_text_size(layout, &width, &text_height);
            double text_x = columns[i].flush_right ? x + room - width : x;
            hw_text_draw(cr, layout, i == HW_CELL_APART ? text_x + AFTER_FIGURES_PX : text_x,
                         y + (height - text_height) / 2);
        }
        x += columns[i].width;
    }
}

static void
draw_block(const HwTable *table, cairo_t *cr, guint first, guint n)
{
    const HwInk *ink = &table->ink;
    const char *heads[HW_N_CELLS];
    for (int i = 0; i < HW_N_CELLS; i++)
        heads[i] = columns[i].head;
    hw_colour_set(cr, &ink->text);
    draw_cells(table, cr, heads, 0, HEAD_PX - 2, true);
    cairo_rectangle(cr, 0, HEAD_PX - 1.5, table->width - CELL_GAP_PX, 1);
    cairo_fill(cr);
    for (guint i = 0; i < n; i++) {
        const HwEntry *entry = g_ptr_array_index(table->rows, first + i);
        double y = HEAD_PX + i * ROW_PX;
        hw_colour_set(cr, &ink->text);
        draw_cells(table, cr, (const char *const *)entry->cells, y, ROW_PX, false);
        HwColour faint = ink->rule;
        faint.alpha = 0.35;
        hw_colour_set(cr, &faint);
        cairo_rectangle(cr, 0, y + ROW_PX - 0.5, table->width - CELL_GAP_PX, 0.5);
        cairo_fill(cr);
    }
}

void
hw_table_draw(const HwTable *table, cairo_t *cr)
{
    double low, top, high, bottom;
    cairo_clip_extents(cr, &low, &top, &high, &bottom);
    for (guint block = 0; block * table->rows_per_block < table->rows->len; block++) {
        double x = block * (table->width + BETWEEN_PX);
        if (x > high || x + table->width < low || top > hw_table_get_height(table) || bottom < 0)
            continue;
        guint first = block * table->rows_per_block;
        cairo_save(cr);
        cairo_translate(cr, x, 0);
        draw_block(table, cr, first, MIN(table->rows_per_block, table->rows->len - first));
        cairo_restore(cr);
    }
}
