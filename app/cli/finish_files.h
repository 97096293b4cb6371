/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The files a finish list is made from, as rank and picture name them: read, held against each other, and the
 * list derived. */
#pragma once

#include "app/cli/cli.h"
#include "core/ruling/finish_list.h"

#include <glib.h>
#include <stdbool.h>

/* As written on the command line; NULL where not given. */
typedef struct {
    char *markers;
    char *start_list;
    char *map;
    char *race;
    char *rules;
    char *start;
    char *calibration;
    char *passage;
} HwFinishOptions;

#define HW_FINISH_ENTRIES(options)                                                                            \
    { "markers", 0, 0, G_OPTION_ARG_FILENAME, &(options).markers, "Markers (CSV)", "FILE" },                  \
        { "startlist", 0, 0, G_OPTION_ARG_FILENAME, &(options).start_list, "Start list (CSV)", "FILE" },      \
        { "map",                                                                                              \
          0,                                                                                                  \
          0,                                                                                                  \
          G_OPTION_ARG_FILENAME,                                                                              \
          &(options).map,                                                                                     \
          "What the start list's headers mean: bib=Dossard,name=Nom",                                         \
          "MAP" },                                                                                            \
        { "race", 0, 0, G_OPTION_ARG_FILENAME, &(options).race, "Race (JSON)", "FILE" },                      \
        { "rules", 0, 0, G_OPTION_ARG_FILENAME, &(options).rules, "Rule set: an id or a file", "ID|FILE" },   \
        { "start",                                                                                            \
          0,                                                                                                  \
          0,                                                                                                  \
          G_OPTION_ARG_FILENAME,                                                                              \
          &(options).start,                                                                                   \
          "Instant of the start, for riders without one of their own",                                        \
          "INSTANT" },                                                                                        \
        { "calibration", 0, 0, G_OPTION_ARG_FILENAME, &(options).calibration, "Calibration (JSON)", "FILE" }, \
    {                                                                                                         \
        "passage", 0, 0, G_OPTION_ARG_FILENAME, &(options).passage, "Passage to rank, of several", "NAME"     \
    }

void hw_finish_options_clear(HwFinishOptions *options);

/* Everything read. Fields that were neither named nor found are NULL. */
typedef struct {
    HwRecording *recording;
    HwStrip *strip; /* knows the damage of the blocks that carry markers */
    HwMarkers *markers;
    HwStartList *start_list;
    HwRace *race;
    HwRules *rules;
    HwCalibration *calibration;
    HwInstant start;
    HwFinishList *list; /* NULL without markers */
    GString *read;      /* which files were read and what was understood of them, in lines for people */
} HwFinishFiles;

void hw_finish_files_clear(HwFinishFiles *files);

/* Reads what the options name, and what lies beside the recording where they name nothing, and derives the
 * list. `markers_needed`: no markers is a wrong call. On failure *files holds what was read till then; clear
 * it in any case. Takes no ownership of `recording`. */
bool hw_finish_files_read(HwRecording *recording, const HwFinishOptions *options, bool markers_needed,
                          GCancellable *cancellable, HwFinishFiles *files, GError **error);

G_DEFINE_AUTO_CLEANUP_CLEAR_FUNC(HwFinishOptions, hw_finish_options_clear)
G_DEFINE_AUTO_CLEANUP_CLEAR_FUNC(HwFinishFiles, hw_finish_files_clear)
