/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Labels on poles, in rows, so that none overlap: pure arithmetic. Positions run along time: u grows from the
 * earlier edge of the view to the later. A label stands with its earlier edge at its pole. */
#pragma once

#include <glib.h>
#include <stdbool.h>

typedef struct {
    double pole;  /* u of the pole; labels come in any order */
    double width; /* of the label */
    bool keep;    /* placed before the others (the selected one) */
    /* results: */
    int row;     /* from 0, the row farthest from the picture; −1: in a cluster */
    double u;    /* earlier edge of the label */
    int cluster; /* place in the clusters, −1 where it has a label of its own */
} HwStaggerLabel;

/* Labels for which there was no room, shown as "+3". */
typedef struct {
    int row;
    double u;
    double width;
    int first; /* the earliest label in it */
    int count;
} HwStaggerCluster;

/* Places n labels into at most n_rows rows between u = 0 and u = length, `gap` between neighbours. A pole
 * goes behind as few labels as can be. `cluster_width` is the room of "+n". Returns the clusters (GArray of
 * HwStaggerCluster, owned by the caller). Labels with `keep` are placed first, so that one of them goes into
 * a cluster only where others with `keep` take all the room */
GArray *hw_stagger(HwStaggerLabel *labels, int n, int n_rows, double length, double gap,
                   double cluster_width);
