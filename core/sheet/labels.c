/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/sheet/labels.h"

#include "core/sheet/entry.h"
#include "core/sheet/reading_line.h"
#include "core/sheet/stagger.h"
#include "core/sheet/text.h"

#include <math.h>
#include <string.h>

#define FULL_MAX_WIDTH 210.0
#define GAP_PX 4.0
#define PAD_PX 4.0
#define HEAD_PX 18.0
#define LINE_PX 14.0

enum { HW_MAX_LINES = 2 };

typedef struct {
    const HwEntry *entry;
    double stem_x; /* left edge of the hairline, in the view */
    double x, y, width, height;
    int cluster; /* −1: stands by itself */
    PangoLayout *bib;
    PangoLayout *place;
    double short_width; /* without lines */
    PangoLayout *lines[HW_MAX_LINES];
} Label;

typedef struct {
    double x, y, width;
    int count;
} Cluster;

struct HwLabels {
    PangoContext *context;
    HwInk ink;
    bool later_left;
    double width_px;
    double row_height;
    int n_rows;
    int n_hidden;
    GArray *labels;   /* Label */
    GArray *clusters; /* Cluster */
};

static void
clear_label(gpointer data)
{
    Label *label = data;
    g_clear_object(&label->bib);
    g_clear_object(&label->place);
    for (int i = 0; i < HW_MAX_LINES; i++)
        g_clear_object(&label->lines[i]);
}

static Label *
label_at(const HwLabels *labels, guint i)
{
    return &g_array_index(labels->labels, Label, i);
}

static double
width_of(PangoLayout *layout)
{
    double width;
    hw_text_size(layout, &width, NULL);
    return width;
}

static void
shape_label(const HwLabels *labels, Label *label)
{
    HwType bold = { labels->ink.font_family, labels->ink.font_px * 1.08, true, true };
    const HwEntry *entry = label->entry;
    label->bib = hw_text_layout(labels->context, &bold, entry->bib, 90);
    g_autofree char *place = entry->rear ? g_strdup("rear tyre") : g_strdup(entry->place);
    label->place = hw_text_layout(labels->context, &bold, place, 90);
    label->short_width = PAD_PX + width_of(label->bib) + 2 * PAD_PX;
    if (*place != '\0')
        label->short_width += width_of(label->place) + 2 * PAD_PX;
}

/* The gaps below bib and place. */
static void
shape_lines(const HwLabels *labels, Label *label)
{
    HwType type = { labels->ink.font_family, labels->ink.font_px * 0.92, false, true };
    const char *texts[HW_MAX_LINES] = { label->entry->before, label->entry->winner };
    for (int i = 0; i < HW_MAX_LINES; i++)
        if (*texts[i] != '\0')
            label->lines[i] = hw_text_layout(labels->context, &type, texts[i], FULL_MAX_WIDTH - 2 * PAD_PX);
}

/* Leaves each label at most n lines. Returns the height of a row. */
static double
set_lines(HwLabels *labels, int n_lines)
{
    double tallest = HEAD_PX;
    for (guint i = 0; i < labels->labels->len; i++) {
        Label *label = label_at(labels, i);
        label->width = label->short_width;
        label->height = HEAD_PX;
        for (int line = 0; line < HW_MAX_LINES; line++) {
            if (line >= n_lines)
                g_clear_object(&label->lines[line]);
            if (label->lines[line] == NULL)
                continue;
            label->width = MAX(label->width, width_of(label->lines[line]) + 2 * PAD_PX);
            label->height += LINE_PX;
        }
        if (label->height > HEAD_PX)
            label->height += 2;
        tallest = MAX(tallest, label->height);
    }
    return tallest + GAP_PX;
}

static bool
is_highlit(const char *const *highlight, const HwEntry *entry)
{
    return highlight != NULL && !entry->rear &&
           (strcmp(entry->bib, highlight[0]) == 0 || strcmp(entry->bib, highlight[1]) == 0);
}

static void
take_entries(HwLabels *labels, const GPtrArray *entries, const HwAxis *axis, const HwViewMap *map)
{
    for (guint i = 0; i < entries->len; i++) {
        Label label = { .entry = g_ptr_array_index(entries, i), .cluster = -1 };
        label.stem_x = hw_hairline_x(map, hw_axis_position(axis, label.entry->column), &labels->ink);
        if (label.stem_x + labels->ink.hairline_px < 0 || label.stem_x > map->width_px)
            continue;
        shape_label(labels, &label);
        shape_lines(labels, &label);
        g_array_append_val(labels->labels, label);
    }
}

/* One arrangement in n rows. Returns the clusters. */
static GArray *
stagger(const HwLabels *labels, HwStaggerLabel *places, int n_rows, const char *const *highlight)
{
    for (guint i = 0; i < labels->labels->len; i++) {
        const Label *label = label_at(labels, i);
        double x = label->stem_x;
        places[i].pole = labels->later_left ? labels->width_px - x - labels->ink.hairline_px : x;
        places[i].width = label->width;
        places[i].keep = is_highlit(highlight, label->entry);
    }
    return hw_stagger(places, (int)labels->labels->len, n_rows, labels->width_px, GAP_PX, 42);
}

static void
settle(HwLabels *labels, const HwStaggerLabel *places, const GArray *clusters, int n_rows)
{
    int top_row = n_rows;
    for (guint i = 0; i < labels->labels->len; i++)
        if (places[i].row >= 0)
            top_row = MIN(top_row, places[i].row);
    for (guint i = 0; i < clusters->len; i++)
        top_row = MIN(top_row, g_array_index(clusters, HwStaggerCluster, i).row);
    labels->n_rows = MAX(n_rows - top_row, 0);
    for (guint i = 0; i < labels->labels->len; i++) {
        Label *label = label_at(labels, i);
        label->cluster = places[i].cluster;
        label->x = labels->later_left ? labels->width_px - places[i].u - label->width : places[i].u;
        label->y = (places[i].row - top_row) * labels->row_height;
    }
    for (guint i = 0; i < clusters->len; i++) {
        const HwStaggerCluster *from = &g_array_index(clusters, HwStaggerCluster, i);
        Cluster cluster = { .x = labels->later_left ? labels->width_px - from->u - from->width : from->u,
                            .y = (from->row - top_row) * labels->row_height,
                            .width = from->width,
                            .count = from->count };
        labels->n_hidden += cluster.count;
        g_array_append_val(labels->clusters, cluster);
    }
}

/* Tries ever more rows of this height; takes the first that hides none, or, if `must`, the most there are. */
static bool
arrange(HwLabels *labels, double row_height, double max_height, bool must, const char *const *highlight)
{
    guint n = labels->labels->len;
    g_autofree HwStaggerLabel *places = g_new0(HwStaggerLabel, MAX(n, 1));
    int most = MAX(1, (int)(max_height / row_height));
    labels->row_height = row_height;
    for (int rows = 1; rows <= most; rows++) {
        g_autoptr(GArray) clusters = stagger(labels, places, rows, highlight);
        if (clusters->len > 0 && !(must && rows == most))
            continue;
        settle(labels, places, clusters, rows);
        return true;
    }
    return false;
}

HwLabels *
hw_labels_new(PangoContext *context, const HwInk *ink, const GPtrArray *entries, const HwAxis *axis,
              const HwViewMap *map, double max_height, const char *const *highlight)
{
    HwLabels *labels = g_new0(HwLabels, 1);
    labels->context = g_object_ref(context);
    labels->ink = *ink;
    labels->later_left = map->later_left;
    labels->width_px = map->width_px;
    labels->labels = g_array_new(FALSE, FALSE, sizeof(Label));
    g_array_set_clear_func(labels->labels, clear_label);
    labels->clusters = g_array_new(FALSE, FALSE, sizeof(Cluster));
    take_entries(labels, entries, axis, map);

    /* Both gaps where there is room, else the one to the rider before, else bib and place alone. */
    for (int n_lines = HW_MAX_LINES; n_lines >= 0; n_lines--) {
        double row = set_lines(labels, n_lines);
        if (arrange(labels, row, max_height, n_lines == 0, highlight))
            break;
    }
    return labels;
}

void
hw_labels_free(HwLabels *labels)
{
    if (labels == NULL)
        return;
    g_array_unref(labels->labels);
    g_array_unref(labels->clusters);
    g_object_unref(labels->context);
    g_free(labels);
}

double
hw_labels_get_height(const HwLabels *labels)
{
    return labels->n_rows * labels->row_height;
}

int
hw_labels_get_n_hidden(const HwLabels *labels)
{
    return labels->n_hidden;
}

/* Bib on its chip, filled or hollow as the pennant's flag is, and the place. */
static void
draw_head(const HwLabels *labels, cairo_t *cr, const Label *label)
{
    static const double dashes[] = { 3, 2 };
    const HwInk *ink = &labels->ink;
    const HwColour *state = &ink->state[label->entry->state];
    bool hollow = label->entry->state == HW_PENNANT_ROUGH;
    double chip = width_of(label->bib) + 2 * PAD_PX, height;
    hw_text_size(label->bib, NULL, &height);
    cairo_rectangle(cr, label->x + 1, label->y + 1, chip, HEAD_PX - 2);
    hw_colour_set(cr, hollow ? &ink->paper : state);
    cairo_fill_preserve(cr);
    hw_colour_set(cr, state);
    cairo_set_line_width(cr, 1);
    cairo_set_dash(cr, dashes, hollow ? 2 : 0, 0);
    cairo_stroke(cr);
    cairo_set_dash(cr, dashes, 0, 0);
    HwColour on = hollow ? ink->text : hw_colour_on(state);
    hw_colour_set(cr, &on);
    double y = label->y + (HEAD_PX - height) / 2;
    hw_text_draw(cr, label->bib, label->x + 1 + PAD_PX, y);
    hw_colour_set(cr, &ink->text);
    hw_text_draw(cr, label->place, label->x + 1 + chip + PAD_PX, y);
}

static void
draw_label(const HwLabels *labels, cairo_t *cr, const Label *label)
{
    const HwInk *ink = &labels->ink;
    cairo_rectangle(cr, label->x, label->y, label->width, label->height);
    hw_colour_set(cr, &ink->paper);
    cairo_fill_preserve(cr);
    hw_colour_set(cr, &ink->rule);
    cairo_set_line_width(cr, 0.6);
    cairo_stroke(cr);
    draw_head(labels, cr, label);
    hw_colour_set(cr, &ink->text);
    double y = label->y + HEAD_PX;
    for (int i = 0; i < HW_MAX_LINES; i++)
        if (label->lines[i] != NULL) {
            hw_text_draw(cr, label->lines[i], label->x + PAD_PX, y);
            y += LINE_PX;
        }
}

static void
draw_cluster(const HwLabels *labels, cairo_t *cr, const Cluster *cluster)
{
    HwType type = { labels->ink.font_family, labels->ink.font_px, true, true };
    g_autofree char *count = g_strdup_printf("+%d", cluster->count);
    g_autoptr(PangoLayout) text = hw_text_layout(labels->context, &type, count, cluster->width - 4);
    double width, height;
    hw_text_size(text, &width, &height);
    cairo_rectangle(cr, cluster->x, cluster->y, cluster->width, HEAD_PX);
    hw_colour_set(cr, &labels->ink.paper);
    cairo_fill_preserve(cr);
    hw_colour_set(cr, &labels->ink.text);
    cairo_set_line_width(cr, 1);
    cairo_stroke(cr);
    hw_text_draw(cr, text, cluster->x + (cluster->width - width) / 2, cluster->y + (HEAD_PX - height) / 2);
}

static void
draw_stem(const HwLabels *labels, cairo_t *cr, const Label *label, double bottom)
{
    const HwInk *ink = &labels->ink;
    double top = label->cluster >= 0 ? g_array_index(labels->clusters, Cluster, label->cluster).y : label->y;
    hw_colour_set(cr, &ink->state[label->entry->state]);
    if (label->entry->state == HW_PENNANT_ROUGH)
        for (double y = top; y < bottom; y += 7)
            cairo_rectangle(cr, label->stem_x, y, ink->hairline_px, MIN(4, bottom - y));
    else
        cairo_rectangle(cr, label->stem_x, top, ink->hairline_px, bottom - top);
    cairo_fill(cr);
}

void
hw_labels_draw(const HwLabels *labels, cairo_t *cr, double stem_bottom)
{
    double low, top, high, bottom;
    cairo_clip_extents(cr, &low, &top, &high, &bottom);
    for (guint i = 0; i < labels->labels->len; i++)
        if (label_at(labels, i)->stem_x >= low - 4 && label_at(labels, i)->stem_x <= high + 4)
            draw_stem(labels, cr, label_at(labels, i), stem_bottom);
    for (guint i = 0; i < labels->clusters->len; i++) {
        const Cluster *cluster = &g_array_index(labels->clusters, Cluster, i);
        if (cluster->x <= high + 2 && cluster->x + cluster->width >= low - 2)
            draw_cluster(labels, cr, cluster);
    }
    for (guint i = 0; i < labels->labels->len; i++) {
        const Label *label = label_at(labels, i);
        if (label->cluster < 0 && label->x <= high + 2 && label->x + label->width >= low - 2)
            draw_label(labels, cr, label);
    }
}

bool
hw_labels_get_box(const HwLabels *labels, guint i, double *x, double *y, double *width, double *height)
{
    for (guint k = 0; k < labels->labels->len; k++) {
        const Label *label = label_at(labels, k);
        if (label->cluster >= 0 || i-- != 0)
            continue;
        *x = label->x;
        *y = label->y;
        *width = label->width;
        *height = label->height;
        return true;
    }
    if (i >= labels->clusters->len)
        return false;
    const Cluster *cluster = &g_array_index(labels->clusters, Cluster, i);
    *x = cluster->x;
    *y = cluster->y;
    *width = cluster->width;
    *height = HEAD_PX;
    return true;
}
