/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A case made from the files a finish list was derived from. */
#pragma once

#include "core/ruling/finish_list.h"

#include <gio/gio.h>
#include <glib.h>
#include <stdbool.h>

/* What was read, and what it was read from. */
typedef struct {
    const HwFinishInput *input; /* start list and race bear the paths they were read from */
    const HwFinishList *list;   /* what it gives; the case must give the same */
    const char *map;            /* of the start list's headers; NULL where none was given; likewise below */
    const char *rules;          /* id or path */
    const char *calibration;    /* path */
} HwCaseFiles;

/* Makes the case at `path` by one act, "make_case", which undo passes by, and holds the list it gives against
 * the one it was made from. Whole or not at all: on failure nothing is at `path` but what was there before.
 * What is there already is refused without `force` (HW_BASE_ERROR_EXISTS); with it only a whole case that no
 * other desk is writing is replaced. */
bool hw_case_from_files(const char *path, const HwCaseFiles *files, bool force, GCancellable *cancellable,
                        GError **error);
