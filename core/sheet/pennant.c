/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/sheet/pennant.h"

#include "core/sheet/reading_line.h"
#include "core/sheet/stagger.h"
#include "core/sheet/text.h"

#include <math.h>

#define PAD_PX 4.0
#define LABEL_GAP_PX 2.0
#define FLAG_LENGTH_PX 14.0
#define FLAG_HALF_PX 7.0

typedef struct {
    char *bib;
    HwPennantState state;
    bool rear;
    bool selected;
    int index;     /* among those given */
    double stem_x; /* left edge of the hairline */
    double edge_x; /* its later edge: where the tyre begins */
    double hub_y;
    bool hub_in_view;
    double x, y, width; /* of the label, where it has one */
    int cluster;        /* −1: a label of its own */
} Placed;

typedef struct {
    double x, y, width;
    GArray *members; /* int, places among those given, in time order */
} Cluster;

struct HwPennantLayout {
    PangoContext *context;
    HwInk ink;
    HwPennantPlace place;
    bool later_left;
    double width_px, height_px; /* of the picture */
    double row_height;
    GArray *placed;   /* Placed */
    GArray *clusters; /* Cluster */
};

static void
clear_placed(gpointer placed)
{
    g_free(((Placed *)placed)->bib);
}

static void
clear_cluster(gpointer cluster)
{
    g_array_unref(((Cluster *)cluster)->members);
}

static HwType
label_type(const HwInk *ink)
{
    return (HwType){ ink->font_family, ink->font_px, true, true };
}

static double
text_width(PangoContext *context, const HwInk *ink, const char *text)
{
    HwType type = label_type(ink);
    g_autoptr(PangoLayout) layout = hw_text_layout(context, &type, text, 0);
    double width;
    hw_text_size(layout, &width, NULL);
    return width;
}

/* Room for the sign of the state beside the bib. */
static double
sign_width(const HwInk *ink, HwPennantState state)
{
    return state == HW_PENNANT_AGREED || state == HW_PENNANT_DISPUTED ? ink->font_px * 0.8 : 0;
}

static Placed *
placed_at(const HwPennantLayout *layout, guint i)
{
    return &g_array_index(layout->placed, Placed, i);
}

static Cluster *
cluster_at(const HwPennantLayout *layout, guint i)
{
    return &g_array_index(layout->clusters, Cluster, i);
}

static void
take_pennants(HwPennantLayout *layout, const HwAxis *axis, const HwViewMap *map, const HwPennant *pennants,
              int n)
{
    for (int i = 0; i < n; i++) {
        const HwPennant *pennant = &pennants[i];
        double cell = hw_axis_position(axis, pennant->column);
        double x = hw_hairline_x(map, cell, &layout->ink);
        if (x + layout->ink.hairline_px < 0 || x > map->width_px)
            continue;
        double hub = hw_view_map_y(map, pennant->row);
        Placed placed = { .bib = g_strdup(pennant->bib),
                          .state = pennant->state,
                          .rear = pennant->rear,
                          .selected = pennant->selected,
                          .index = i,
                          .stem_x = layout->place.picture_x + x,
                          .hub_y = layout->place.picture_y + hub,
                          .hub_in_view = hub >= 0 && hub < map->height_px,
                          .cluster = -1 };
        placed.edge_x = placed.stem_x + (map->later_left ? 0 : layout->ink.hairline_px);
        placed.width = text_width(layout->context, &layout->ink, pennant->bib) +
                       sign_width(&layout->ink, pennant->state) + 2 * PAD_PX;
        g_array_append_val(layout->placed, placed);
    }
}

/* From along time to across the screen, and back: the left edge of something `width` wide. */
static double
along_to_x(const HwPennantLayout *layout, double u, double width)
{
    double x = layout->later_left ? layout->width_px - u - width : u;
    return layout->place.picture_x + x;
}

static int
compare_stems(gconstpointer a, gconstpointer b, gpointer data)
{
    const HwPennantLayout *layout = data;
    double u = 0, v = 0;
    for (guint i = 0; i < layout->placed->len; i++) {
        if (placed_at(layout, i)->index == *(const int *)a)
            u = placed_at(layout, i)->stem_x;
        if (placed_at(layout, i)->index == *(const int *)b)
            v = placed_at(layout, i)->stem_x;
    }
    if (layout->later_left)
        return u > v ? -1 : u < v;
    return u < v ? -1 : u > v;
}

static void
arrange_labels(HwPennantLayout *layout)
{
    int n = (int)layout->placed->len;
    int n_rows = MAX(1, (int)(layout->place.rail_height / layout->row_height));
    g_autofree HwStaggerLabel *labels = g_new0(HwStaggerLabel, MAX(n, 1));
    for (int i = 0; i < n; i++) {
        const Placed *placed = placed_at(layout, (guint)i);
        double x = placed->stem_x - layout->place.picture_x;
        labels[i].pole = layout->later_left ? layout->width_px - x - layout->ink.hairline_px : x;
        labels[i].width = placed->width;
        labels[i].keep = placed->selected;
    }
    double cluster_width = text_width(layout->context, &layout->ink, "+99") + 2 * PAD_PX;
    g_autoptr(GArray) found = hw_stagger(labels, n, n_rows, layout->width_px, LABEL_GAP_PX, cluster_width);
    for (guint i = 0; i < found->len; i++) {
        const HwStaggerCluster *from = &g_array_index(found, HwStaggerCluster, i);
        Cluster cluster = { .x = along_to_x(layout, from->u, from->width),
                            .y = layout->place.rail_y + from->row * layout->row_height,
                            .width = from->width,
                            .members = g_array_new(FALSE, FALSE, sizeof(int)) };
        g_array_append_val(layout->clusters, cluster);
    }
    for (int i = 0; i < n; i++) {
        Placed *placed = placed_at(layout, (guint)i);
        placed->cluster = labels[i].cluster;
        if (placed->cluster >= 0) {
            g_array_append_val(cluster_at(layout, (guint)placed->cluster)->members, placed->index);
            continue;
        }
        placed->x = along_to_x(layout, labels[i].u, placed->width);
        placed->y = layout->place.rail_y + labels[i].row * layout->row_height;
    }
    for (guint i = 0; i < layout->clusters->len; i++)
        g_array_sort_with_data(cluster_at(layout, i)->members, compare_stems, layout);
}

HwPennantLayout *
hw_pennant_layout_new(PangoContext *context, const HwAxis *axis, const HwViewMap *map,
                      const HwPennant *pennants, int n_pennants, const HwPennantPlace *place,
                      const HwInk *ink)
{
    HwPennantLayout *layout = g_new0(HwPennantLayout, 1);
    layout->context = g_object_ref(context);
    layout->ink = *ink;
    layout->place = *place;
    layout->later_left = map->later_left;
    layout->width_px = map->width_px;
    layout->height_px = map->height_px;
    layout->row_height = ceil(ink->font_px * 1.08);
    layout->placed = g_array_new(FALSE, FALSE, sizeof(Placed));
    g_array_set_clear_func(layout->placed, clear_placed);
    layout->clusters = g_array_new(FALSE, FALSE, sizeof(Cluster));
    g_array_set_clear_func(layout->clusters, clear_cluster);
    take_pennants(layout, axis, map, pennants, n_pennants);
    arrange_labels(layout);
    return layout;
}

void
hw_pennant_layout_free(HwPennantLayout *layout)
{
    if (layout == NULL)
        return;
    g_array_unref(layout->placed);
    g_array_unref(layout->clusters);
    g_object_unref(layout->context);
    g_free(layout);
}

/* A stem: its colour next to the tyre, a dark casing on the earlier side. */
static void
draw_stem(const HwPennantLayout *layout, cairo_t *cr, const Placed *placed, double top, double bottom)
{
    const HwInk *ink = &layout->ink;
    double width = ink->hairline_px;
    double casing_x = layout->later_left ? placed->stem_x + width : placed->stem_x - width;
    double casing_width = placed->selected ? 2 * width : width;
    if (placed->selected && !layout->later_left)
        casing_x -= width;
    cairo_rectangle(cr, casing_x, top, casing_width, bottom - top);
    hw_colour_set(cr, &ink->casing);
    cairo_fill(cr);
    hw_colour_set(cr, &ink->state[placed->state]);
    if (placed->state == HW_PENNANT_ROUGH) {
        for (double y = top; y < bottom; y += 7)
            cairo_rectangle(cr, placed->stem_x, y, width, MIN(4, bottom - y));
    } else {
        cairo_rectangle(cr, placed->stem_x, top, width, bottom - top);
    }
    cairo_fill(cr);
}

static void
draw_tick(cairo_t *cr, double x, double y, double size)
{
    cairo_move_to(cr, x, y);
    cairo_line_to(cr, x + size * 0.35, y + size * 0.35);
    cairo_line_to(cr, x + size, y - size * 0.5);
    cairo_set_line_width(cr, MAX(1.2, size / 5));
    cairo_stroke(cr);
}

static void
draw_sign(cairo_t *cr, HwPennantState state, double x, double middle, double size)
{
    if (state == HW_PENNANT_AGREED) {
        draw_tick(cr, x, middle + size * 0.1, size);
    } else if (state == HW_PENNANT_DISPUTED) {
        double width = size * 0.28;
        cairo_rectangle(cr, x + (size - width) / 2, middle - size * 0.6, width, size * 0.75);
        cairo_rectangle(cr, x + (size - width) / 2, middle + size * 0.3, width, size * 0.28);
        cairo_fill(cr);
    }
}

static void
set_dashes(cairo_t *cr, bool dashed)
{
    static const double dashes[] = { 3, 2 };
    cairo_set_dash(cr, dashes, dashed ? 2 : 0, 0);
}

static void
draw_box(const HwPennantLayout *layout, cairo_t *cr, double x, double y, double width, HwPennantState state,
         bool selected)
{
    const HwInk *ink = &layout->ink;
    double height = layout->row_height - 1;
    bool hollow = state == HW_PENNANT_ROUGH;
    cairo_rectangle(cr, x, y, width, height);
    hw_colour_set(cr, hollow ? &ink->paper : &ink->state[state]);
    cairo_fill(cr);
    if (hollow || selected) {
        double line = selected ? 2 : 1;
        cairo_rectangle(cr, x + line / 2, y + line / 2, width - line, height - line);
        hw_colour_set(cr, selected ? &ink->selected : &ink->state[state]);
        cairo_set_line_width(cr, line);
        set_dashes(cr, hollow);
        cairo_stroke(cr);
        set_dashes(cr, false);
    }
}

static void
draw_label(const HwPennantLayout *layout, cairo_t *cr, const Placed *placed)
{
    const HwInk *ink = &layout->ink;
    HwType type = label_type(ink);
    g_autoptr(PangoLayout) text = hw_text_layout(layout->context, &type, placed->bib, 0);
    double height;
    hw_text_size(text, NULL, &height);
    draw_box(layout, cr, placed->x, placed->y, placed->width, placed->state, placed->selected);
    HwColour on = placed->state == HW_PENNANT_ROUGH ? ink->text : hw_colour_on(&ink->state[placed->state]);
    hw_colour_set(cr, &on);
    double middle = placed->y + (layout->row_height - 1) / 2;
    double sign = sign_width(ink, placed->state);
    hw_text_draw(cr, text, placed->x + PAD_PX, middle - height / 2);
    draw_sign(cr, placed->state, placed->x + placed->width - PAD_PX / 2 - sign, middle, sign);
}

static void
draw_cluster(const HwPennantLayout *layout, cairo_t *cr, const Cluster *cluster)
{
    const HwInk *ink = &layout->ink;
    HwType type = label_type(ink);
    g_autofree char *count = g_strdup_printf("+%u", cluster->members->len);
    g_autoptr(PangoLayout) text = hw_text_layout(layout->context, &type, count, cluster->width - PAD_PX);
    double width, height;
    hw_text_size(text, &width, &height);
    cairo_rectangle(cr, cluster->x, cluster->y, cluster->width, layout->row_height - 1);
    hw_colour_set(cr, &ink->paper);
    cairo_fill_preserve(cr);
    hw_colour_set(cr, &ink->text);
    cairo_set_line_width(cr, 1);
    cairo_stroke(cr);
    hw_text_draw(cr, text, cluster->x + (cluster->width - width) / 2,
                 cluster->y + (layout->row_height - 1) / 2 - height / 2);
}

void
hw_pennant_layout_draw_rail(const HwPennantLayout *layout, cairo_t *cr)
{
    const HwPennantPlace *place = &layout->place;
    cairo_save(cr);
    cairo_rectangle(cr, place->picture_x, place->rail_y, layout->width_px, place->picture_y - place->rail_y);
    cairo_clip(cr);
    for (guint i = 0; i < layout->placed->len; i++) {
        const Placed *placed = placed_at(layout, i);
        double top = placed->cluster >= 0 ? cluster_at(layout, (guint)placed->cluster)->y : placed->y;
        draw_stem(layout, cr, placed, top, place->picture_y);
    }
    for (guint i = 0; i < layout->clusters->len; i++)
        draw_cluster(layout, cr, cluster_at(layout, i));
    for (int selected = 0; selected < 2; selected++)
        for (guint i = 0; i < layout->placed->len; i++)
            if (placed_at(layout, i)->cluster < 0 && placed_at(layout, i)->selected == (selected == 1))
                draw_label(layout, cr, placed_at(layout, i));
    cairo_restore(cr);
}

static void
trace_flag(cairo_t *cr, const Placed *placed, double base, double direction)
{
    double tip = base + direction * FLAG_LENGTH_PX;
    cairo_move_to(cr, base, placed->hub_y - FLAG_HALF_PX);
    if (placed->rear) {
        cairo_line_to(cr, tip, placed->hub_y - FLAG_HALF_PX);
        cairo_line_to(cr, tip - direction * FLAG_LENGTH_PX * 0.45, placed->hub_y);
        cairo_line_to(cr, tip, placed->hub_y + FLAG_HALF_PX);
    } else {
        cairo_line_to(cr, tip, placed->hub_y);
    }
    cairo_line_to(cr, base, placed->hub_y + FLAG_HALF_PX);
    cairo_close_path(cr);
}

static void
draw_flag(const HwPennantLayout *layout, cairo_t *cr, const Placed *placed)
{
    const HwInk *ink = &layout->ink;
    double direction = layout->later_left ? 1 : -1;
    double base = placed->edge_x + direction * ink->hairline_px;
    bool hollow = placed->state == HW_PENNANT_ROUGH;
    trace_flag(cr, placed, base, direction);
    if (hollow) {
        cairo_set_source_rgba(cr, ink->paper.red, ink->paper.green, ink->paper.blue, 0.55);
        cairo_fill_preserve(cr);
    } else {
        hw_colour_set(cr, &ink->state[placed->state]);
        cairo_fill_preserve(cr);
    }
    hw_colour_set(cr, placed->selected ? &ink->core : &ink->casing);
    cairo_set_line_width(cr, placed->selected ? 3 : 2);
    cairo_save(cr);
    cairo_clip_preserve(cr);
    set_dashes(cr, hollow);
    cairo_stroke(cr);
    set_dashes(cr, false);
    cairo_restore(cr);
    HwColour on = hw_colour_on(&ink->state[placed->state]);
    hw_colour_set(cr, &on);
    double size = FLAG_HALF_PX * 0.7;
    double left = direction > 0 ? base + 1.5 : base - 1.5 - size;
    draw_sign(cr, placed->state, left, placed->hub_y, size);
}

void
hw_pennant_layout_draw_picture(const HwPennantLayout *layout, cairo_t *cr)
{
    const HwPennantPlace *place = &layout->place;
    cairo_save(cr);
    cairo_rectangle(cr, place->picture_x, place->picture_y, layout->width_px, layout->height_px);
    cairo_clip(cr);
    for (int selected = 0; selected < 2; selected++)
        for (guint i = 0; i < layout->placed->len; i++) {
            const Placed *placed = placed_at(layout, i);
            if (placed->selected != (selected == 1))
                continue;
            draw_stem(layout, cr, placed, place->picture_y, place->picture_y + layout->height_px);
            if (placed->hub_in_view)
                draw_flag(layout, cr, placed);
        }
    cairo_restore(cr);
}

static double
distance_to_box(double x, double y, double left, double top, double width, double height)
{
    double dx = MAX(MAX(left - x, x - left - width), 0);
    double dy = MAX(MAX(top - y, y - top - height), 0);
    return hypot(dx, dy);
}

static bool
hit_rail(const HwPennantLayout *layout, double x, double y, double reach, HwPennantHit *hit)
{
    double nearest = INFINITY;
    double height = layout->row_height - 1;
    for (guint i = 0; i < layout->placed->len; i++) {
        const Placed *placed = placed_at(layout, i);
        double distance = placed->cluster >= 0
                              ? INFINITY
                              : distance_to_box(x, y, placed->x, placed->y, placed->width, height);
        if (distance < nearest || (distance == nearest && placed->selected && distance < INFINITY)) {
            nearest = distance;
            *hit = (HwPennantHit){ HW_PENNANT_LABEL, placed->index, -1 };
        }
    }
    for (guint i = 0; i < layout->clusters->len; i++) {
        const Cluster *cluster = cluster_at(layout, i);
        double distance = distance_to_box(x, y, cluster->x, cluster->y, cluster->width, height);
        if (distance < nearest) {
            nearest = distance;
            *hit = (HwPennantHit){ HW_PENNANT_CLUSTER, g_array_index(cluster->members, int, 0), (int)i };
        }
    }
    /* A box is some 13 high: what is missing to 24 is shared by both sides. */
    return nearest <= MAX(0, reach - height / 2);
}

static bool
hit_picture(const HwPennantLayout *layout, double x, double y, double reach, HwPennantHit *hit)
{
    double nearest_flag = reach, nearest_stem = reach;
    bool found_flag = false, found_stem = false;
    double direction = layout->later_left ? 1 : -1;
    for (guint i = 0; i < layout->placed->len; i++) {
        const Placed *placed = placed_at(layout, i);
        double flag_x = placed->edge_x + direction * FLAG_LENGTH_PX / 2;
        double to_flag = placed->hub_in_view ? hypot(x - flag_x, y - placed->hub_y) : INFINITY;
        double to_stem = fabs(x - placed->edge_x);
        if (to_flag < nearest_flag || (to_flag == nearest_flag && placed->selected)) {
            nearest_flag = to_flag;
            *hit = (HwPennantHit){ HW_PENNANT_FLAG, placed->index, -1 };
            found_flag = true;
        }
        if (!found_flag && (to_stem < nearest_stem || (to_stem == nearest_stem && placed->selected))) {
            nearest_stem = to_stem;
            *hit = (HwPennantHit){ HW_PENNANT_STEM, placed->index, -1 };
            found_stem = true;
        }
    }
    return found_flag || found_stem;
}

HwPennantHit
hw_pennant_layout_hit(const HwPennantLayout *layout, double x, double y, double reach)
{
    const HwPennantPlace *place = &layout->place;
    HwPennantHit hit = { HW_PENNANT_NOTHING, -1, -1 };
    bool across = x >= place->picture_x - reach && x <= place->picture_x + layout->width_px + reach;
    if (across && y < place->picture_y && hit_rail(layout, x, y, reach, &hit))
        return hit;
    hit = (HwPennantHit){ HW_PENNANT_NOTHING, -1, -1 };
    if (across && y >= place->rail_y && y <= place->picture_y + layout->height_px &&
        hit_picture(layout, x, y, reach, &hit))
        return hit;
    return (HwPennantHit){ HW_PENNANT_NOTHING, -1, -1 };
}

int
hw_pennant_layout_get_n_clusters(const HwPennantLayout *layout)
{
    return (int)layout->clusters->len;
}

const int *
hw_pennant_layout_get_cluster(const HwPennantLayout *layout, int cluster, int *n_members)
{
    const Cluster *found = cluster_at(layout, (guint)cluster);
    *n_members = (int)found->members->len;
    return (const int *)(void *)found->members->data;
}

static const Placed *
find_placed(const HwPennantLayout *layout, int index)
{
    for (guint i = 0; i < layout->placed->len; i++)
        if (placed_at(layout, i)->index == index)
            return placed_at(layout, i);
    return NULL;
}

bool
hw_pennant_layout_get_label(const HwPennantLayout *layout, int index, double *x, double *y, double *width,
                            double *height)
{
    const Placed *placed = find_placed(layout, index);
    if (placed == NULL)
        return false;
    const Cluster *cluster = placed->cluster >= 0 ? cluster_at(layout, (guint)placed->cluster) : NULL;
    *x = cluster != NULL ? cluster->x : placed->x;
    *y = cluster != NULL ? cluster->y : placed->y;
    *width = cluster != NULL ? cluster->width : placed->width;
    *height = layout->row_height - 1;
    return true;
}

bool
hw_pennant_layout_get_stem(const HwPennantLayout *layout, int index, double *x)
{
    const Placed *placed = find_placed(layout, index);
    if (placed == NULL)
        return false;
    *x = placed->stem_x;
    return true;
}
