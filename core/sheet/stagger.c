/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/sheet/stagger.h"

#include <math.h>

typedef struct {
    HwStaggerLabel *labels;
    int n;
    int *order; /* labels by pole */
    int n_rows;
    double length;
    double gap;
    double cluster_width;
    GArray *clusters;
} Stagger;

static int
by_pole(gconstpointer a, gconstpointer b, gpointer labels)
{
    const HwStaggerLabel *all = labels;
    int i = *(const int *)a, j = *(const int *)b;
    if (all[i].pole != all[j].pole)
        return all[i].pole < all[j].pole ? -1 : 1;
    return i - j;
}

static bool
apart(const Stagger *stagger, double a, double a_width, double b, double b_width)
{
    return a >= b + b_width + stagger->gap || b >= a + a_width + stagger->gap;
}

static bool
is_free(const Stagger *stagger, int row, double u, double width, bool beside_clusters)
{
    for (int i = 0; i < stagger->n; i++) {
        const HwStaggerLabel *other = &stagger->labels[i];
        if (other->row == row && !apart(stagger, u, width, other->u, other->width))
            return false;
    }
    for (guint i = 0; beside_clusters && i < stagger->clusters->len; i++) {
        const HwStaggerCluster *other = &g_array_index(stagger->clusters, HwStaggerCluster, i);
        if (other->row == row && !apart(stagger, u, width, other->u, other->width))
            return false;
    }
    return true;
}

/* Poles hang down from a label's row through the rows nearer the picture. */
static int
count_crossings(const Stagger *stagger, const HwStaggerLabel *label, int row, double u)
{
    int count = 0;
    for (int i = 0; i < stagger->n; i++) {
        const HwStaggerLabel *other = &stagger->labels[i];
        if (other == label || other->row < 0)
            continue;
        if (other->row > row && label->pole >= other->u && label->pole <= other->u + other->width)
            count++;
        if (other->row < row && other->pole >= u && other->pole <= u + label->width)
            count++;
    }
    return count;
}

static void
place_label(Stagger *stagger, HwStaggerLabel *label)
{
    double u = MAX(0, MIN(label->pole, stagger->length - label->width));
    int best = -1, fewest = G_MAXINT;
    for (int row = 0; row < stagger->n_rows; row++) {
        if (!is_free(stagger, row, u, label->width, false))
            continue;
        int crossings = count_crossings(stagger, label, row, u);
        if (crossings < fewest) {
            fewest = crossings;
            best = row;
        }
    }
    label->row = best;
    label->u = u;
}

/* A free place for "+n" as near to `wanted` as there is within `reach`. */
static bool
place_cluster(const Stagger *stagger, HwStaggerCluster *cluster, double wanted, double reach)
{
    double best = INFINITY;
    double last = MAX(0, stagger->length - cluster->width);
    for (int row = 0; row < stagger->n_rows; row++) {
        double step = MAX(1, cluster->width / 8);
        for (double off = 0; off <= reach && off < best; off += step)
            for (int side = -1; side <= 1; side += 2) {
                double u = CLAMP(wanted + side * off, 0, last);
                if (fabs(u - wanted) < best && fabs(u - wanted) <= reach &&
                    is_free(stagger, row, u, cluster->width, true)) {
                    best = fabs(u - wanted);
                    cluster->row = row;
                    cluster->u = u;
                }
            }
    }
    return best < INFINITY;
}

/* Gives up the label of the neighbour in time that is nearest and may go. False where there is none. */
static bool
evict_nearest(Stagger *stagger, int first, int last)
{
    int best = -1;
    double nearest = INFINITY;
    double from = stagger->labels[stagger->order[first]].pole,
           to = stagger->labels[stagger->order[last]].pole;
    for (int k = 0; k < stagger->n; k++) {
        const HwStaggerLabel *label = &stagger->labels[stagger->order[k]];
        if (label->row < 0 || label->keep)
            continue;
        double distance = k < first ? from - label->pole : label->pole - to;
        if (distance < nearest) {
            nearest = distance;
            best = stagger->order[k];
        }
    }
    if (best < 0)
        return false;
    stagger->labels[best].row = -1;
    return true;
}

static void
add_cluster(Stagger *stagger, const HwStaggerCluster *cluster, int first, int last)
{
    int index = (int)stagger->clusters->len;
    g_array_append_val(stagger->clusters, *cluster);
    for (int k = first; k <= last; k++) {
        HwStaggerLabel *label = &stagger->labels[stagger->order[k]];
        if (label->row < 0)
            label->cluster = index;
    }
}

/* One try to put all labels without a place into clusters of neighbours in time; false where a label was
 * given up to make room, and it must be tried again. */
static bool
gather(Stagger *stagger)
{
    g_array_set_size(stagger->clusters, 0);
    for (int k = 0; k < stagger->n; k++) {
        HwStaggerLabel *label = &stagger->labels[stagger->order[k]];
        label->cluster = -1;
        if (label->row >= 0)
            continue;
        int last = k, count = 1;
        for (int next = k + 1; next < stagger->n; next++) {
            const HwStaggerLabel *other = &stagger->labels[stagger->order[next]];
            if (other->row >= 0 && !other->keep)
                break;
            if (other->row < 0) {
                last = next;
                count++;
            }
        }
        double to = stagger->labels[stagger->order[last]].pole;
        double reach = (to - label->pole) / 2 + 2 * stagger->cluster_width;
        HwStaggerCluster cluster = { .width = stagger->cluster_width,
                                     .first = stagger->order[k],
                                     .count = count };
        double wanted = (label->pole + to) / 2 - cluster.width / 2;
        if (!place_cluster(stagger, &cluster, wanted, reach)) {
            if (evict_nearest(stagger, k, last))
                return false;
            if (!place_cluster(stagger, &cluster, wanted, stagger->length)) {
                cluster.row = 0;
                cluster.u = CLAMP(wanted, 0, MAX(0, stagger->length - cluster.width));
            }
        }
        add_cluster(stagger, &cluster, k, last);
        k = last;
    }
    return true;
}

GArray *
hw_stagger(HwStaggerLabel *labels, int n, int n_rows, double length, double gap, double cluster_width)
{
    Stagger stagger = { .labels = labels,
                        .n = n,
                        .order = g_new(int, MAX(n, 1)),
                        .n_rows = MAX(n_rows, 1),
                        .length = length,
                        .gap = gap,
                        .cluster_width = cluster_width,
                        .clusters = g_array_new(FALSE, FALSE, sizeof(HwStaggerCluster)) };
    for (int i = 0; i < n; i++) {
        stagger.order[i] = i;
        labels[i].row = -1;
        labels[i].cluster = -1;
    }
    g_qsort_with_data(stagger.order, n, sizeof *stagger.order, by_pole, labels);
    for (int k = 0; k < n; k++)
        if (labels[stagger.order[k]].keep)
            place_label(&stagger, &labels[stagger.order[k]]);
    for (int k = 0; k < n; k++)
        if (!labels[stagger.order[k]].keep)
            place_label(&stagger, &labels[stagger.order[k]]);
    while (!gather(&stagger))
        ;
    g_free(stagger.order);
    return stagger.clusters;
}
