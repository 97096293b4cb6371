/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Labels in rows: none overlap, none is lost. */
#include "core/sheet/stagger.h"

#include <glib.h>

#define GAP 2.0
#define CLUSTER 30.0

static bool
overlap(double a, double a_width, double b, double b_width)
{
    return a < b + b_width && b < a + a_width;
}

static void
check(const HwStaggerLabel *labels, int n, const GArray *clusters, int n_rows, double length)
{
    guint counted = 0;
    for (guint i = 0; i < clusters->len; i++) {
        const HwStaggerCluster *cluster = &g_array_index(clusters, HwStaggerCluster, i);
        int members = 0;
        for (int k = 0; k < n; k++)
            members += labels[k].cluster == (int)i;
        g_assert_cmpint(members, ==, cluster->count);
        g_assert_cmpint(labels[cluster->first].cluster, ==, (int)i);
        g_assert_cmpfloat(cluster->u, >=, 0);
        g_assert_cmpfloat(cluster->u + cluster->width, <=, length + 1e-9);
        counted += (guint)members;
        for (guint j = i + 1; j < clusters->len; j++) {
            const HwStaggerCluster *other = &g_array_index(clusters, HwStaggerCluster, j);
            g_assert_false(cluster->row == other->row &&
                           overlap(cluster->u, cluster->width, other->u, other->width));
        }
    }
    for (int i = 0; i < n; i++) {
        const HwStaggerLabel *label = &labels[i];
        g_assert_true((label->row >= 0) != (label->cluster >= 0));
        if (label->row < 0)
            continue;
        counted++;
        g_assert_cmpint(label->row, <, n_rows);
        g_assert_cmpfloat(label->u, >=, 0);
        g_assert_cmpfloat(label->u + label->width, <=, length + 1e-9);
        for (int j = i + 1; j < n; j++)
            g_assert_false(labels[j].row == label->row &&
                           overlap(label->u, label->width, labels[j].u, labels[j].width));
        for (guint j = 0; j < clusters->len; j++) {
            const HwStaggerCluster *cluster = &g_array_index(clusters, HwStaggerCluster, j);
            g_assert_false(cluster->row == label->row &&
                           overlap(label->u, label->width, cluster->u, cluster->width));
        }
    }
    g_assert_cmpuint(counted, ==, (guint)n);
}

static void
labels_never_overlap_and_none_is_lost(void)
{
    for (guint32 seed = 1; seed <= 300; seed++) {
        g_autoptr(GRand) random = g_rand_new_with_seed(seed);
        int n = g_rand_int_range(random, 0, 120), n_rows = g_rand_int_range(random, 1, 6);
        double length = g_rand_double_range(random, 200, 3000);
        g_autofree HwStaggerLabel *labels = g_new0(HwStaggerLabel, MAX(n, 1));
        double centre = g_rand_double_range(random, 0, length);
        for (int i = 0; i < n; i++) {
            bool bunch = g_rand_boolean(random);
            double pole = bunch ? centre + g_rand_double_range(random, -60, 60)
                                : g_rand_double_range(random, 0, length);
            labels[i].pole = CLAMP(pole, 0, length - 1);
            labels[i].width = g_rand_double_range(random, 18, 60);
            labels[i].keep = i == 0;
        }
        g_autoptr(GArray) clusters = hw_stagger(labels, n, n_rows, length, GAP, CLUSTER);
        check(labels, n, clusters, n_rows, length);
        if (n > 0)
            g_assert_cmpint(labels[0].row, >=, 0);
    }
}

static void
labels_with_room_stand_at_their_poles_in_one_row(void)
{
    HwStaggerLabel labels[] = { { .pole = 300, .width = 40 },
                                { .pole = 10, .width = 40 },
                                { .pole = 100, .width = 40 } };
    g_autoptr(GArray) clusters = hw_stagger(labels, 3, 1, 400, GAP, CLUSTER);
    g_assert_cmpuint(clusters->len, ==, 0);
    for (int i = 0; i < 3; i++) {
        g_assert_cmpint(labels[i].row, ==, 0);
        g_assert_cmpfloat(labels[i].u, ==, labels[i].pole);
    }
}

static void
close_ones_cascade_towards_the_picture_so_that_no_pole_goes_behind_a_label(void)
{
    HwStaggerLabel labels[] = { { .pole = 10, .width = 40 },
                                { .pole = 20, .width = 40 },
                                { .pole = 30, .width = 40 } };
    g_autoptr(GArray) clusters = hw_stagger(labels, 3, 3, 400, GAP, CLUSTER);
    g_assert_cmpuint(clusters->len, ==, 0);
    for (int i = 0; i < 3; i++)
        g_assert_cmpint(labels[i].row, ==, i);
}

static void
a_bunch_without_room_becomes_one_count(void)
{
    HwStaggerLabel labels[6];
    for (int i = 0; i < 6; i++)
        labels[i] = (HwStaggerLabel){ .pole = 100 + i, .width = 40, .keep = i == 3 };
    g_autoptr(GArray) clusters = hw_stagger(labels, 6, 1, 400, GAP, CLUSTER);
    g_assert_cmpuint(clusters->len, ==, 1);
    g_assert_cmpint(g_array_index(clusters, HwStaggerCluster, 0).count, ==, 5);
    g_assert_cmpint(g_array_index(clusters, HwStaggerCluster, 0).first, ==, 0);
    g_assert_cmpint(labels[3].row, ==, 0);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
#define CASE(name) g_test_add_func("/sheet/stagger/" #name, name)
    CASE(labels_never_overlap_and_none_is_lost);
    CASE(labels_with_room_stand_at_their_poles_in_one_row);
    CASE(close_ones_cascade_towards_the_picture_so_that_no_pole_goes_behind_a_label);
    CASE(a_bunch_without_room_becomes_one_count);
    return g_test_run();
}
