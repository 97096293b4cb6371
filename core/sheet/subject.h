/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What a picture shows, worked out once: the strip with its damage known, the stretches of the axis, and
 * every sentence around them. */
#pragma once

#include "core/sheet/entry.h"
#include "core/sheet/picture.h"
#include "core/strip/axis.h"

#include <gio/gio.h>
#include <glib.h>
#include <stdbool.h>

enum { HW_MAX_VIEWS = 2 };

/* A stretch of the axis to be shown. */
typedef struct {
    double first_cell;
    double n_cells; /* whole */
    char *title;    /* "" where it needs none */
} HwSubjectView;

typedef struct {
    HwPicture picture; /* as given, but with the refreshed strip */
    HwStrip *strip;
    HwAxis *axis;
    int n_rows;
    HwSubjectView views[HW_MAX_VIEWS];
    int n_views;
    bool later_left;
    GPtrArray *entries;  /* HwEntry in any of the views, by column, each once */
    GPtrArray *warnings; /* char*, said loudly */
    char *heading;       /* event */
    char *subheading;    /* passage */
    char *sentence;      /* of a pair; "" else */
    char *caption;       /* of the table */
    char *scale;         /* what a column is */
    GPtrArray *foot;     /* char*, lines; the last is the caution */
    const char *highlight[2];
} HwSubject;

/* Decodes the blocks in view. Errors as of hw_picture_write. */
HwSubject *hw_subject_new(const HwPicture *picture, HwProgress progress, gpointer user_data,
                          GCancellable *cancellable, GError **error);
void hw_subject_free(HwSubject *subject);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwSubject, hw_subject_free)
