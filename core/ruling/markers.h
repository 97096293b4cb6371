/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Markers: judged crossings on one recording. A marker's time is always that of its column on the strip's
 * time base; a time in a file is only compared with it. */
#pragma once

#include "core/strip/strip.h"

#include <gio/gio.h>
#include <glib.h>
#include <stdbool.h>
#include <stdint.h>

typedef enum { HW_EDGE_FRONT, HW_EDGE_REAR } HwEdge;
typedef enum { HW_MARKER_READ, HW_MARKER_ROUGH } HwMarkerState;
typedef enum {
    HW_BASIS_TYRE,
    HW_BASIS_INFERRED,
    HW_BASIS_OTHER_CAMERA,
    HW_BASIS_CALLER,
    HW_BASIS_TRANSPONDER
} HwBasis;
typedef enum { HW_DIRECTION_WITH, HW_DIRECTION_AGAINST } HwDirection;

typedef struct {
    char *bib;      /* or a placeholder, "?1" */
    char *category; /* "" unless needed to tell two riders with one bib apart */
    double column;
    double row; /* NAN where not given */
    HwEdge edge;
    char *passage; /* "" where not said */
    char *camera;
    char *reader;
    HwMarkerState state;
    HwBasis basis;
    HwDirection direction; /* AGAINST: over the line against the travel, no finish */
    char *name_basis;
    char *note;
    bool has_time;
    int64_t time_ns;  /* as in the file */
    double u_lead_ns; /* NAN where not given; likewise below */
    double speed_mps;
    double u_speed_mps;
    guint line; /* of the file; 0 where it has none */
} HwMarker;

/* As in files, NULL-ended, in the order of the enumerations. */
extern const char *const hw_marker_edge_words[];
extern const char *const hw_marker_state_words[];
extern const char *const hw_marker_basis_words[];
extern const char *const hw_marker_direction_words[];

HwMarker *hw_marker_new(const char *bib, double column, double row);
HwMarker *hw_marker_copy(const HwMarker *marker);
void hw_marker_free(HwMarker *marker);

/* True for "?1", "?", "": nobody named yet. */
bool hw_marker_is_unnamed(const HwMarker *marker);

typedef struct {
    char *path;
    bool names_recording; /* every marker says which recording it was made on */
    GPtrArray *markers;   /* of HwMarker*, in the file's order */
} HwMarkers;

HwMarkers *hw_markers_new(void);
HwMarkers *hw_markers_copy(const HwMarkers *markers);
void hw_markers_free(HwMarkers *markers);

/* Reads the CSV and holds it against the recording. Fails (HW_RULING_ERROR_MARKERS): columns bib or column
 * missing, a number that is none, an unknown word, a marker of another recording. */
HwMarkers *hw_markers_read(const char *path, const HwRecording *recording, GError **error);
HwMarkers *hw_markers_parse(const char *data, gsize size, const char *label, const HwRecording *recording,
                            GError **error);

/* Fails where a marker stands off the strip, in a void, or its time in the file is half a column or more from
 * that of its column. */
bool hw_markers_check_places(const HwMarkers *markers, HwStrip *strip, GError **error);

/* Decodes the blocks that carry markers, so that damage in them is known: returns the refreshed strip (new
 * reference), and how many blocks carry none. NULL with an error where nothing readable is left, or
 * cancelled. */
HwStrip *hw_markers_check_blocks(const HwMarkers *markers, HwStrip *strip, guint *n_unchecked,
                                 GCancellable *cancellable, GError **error);

/* The CSV, with `recording` always written and times by the strip's time base. Owned by the caller. */
char *hw_markers_dup_csv(const HwMarkers *markers, HwStrip *strip);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwMarker, hw_marker_free)
G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwMarkers, hw_markers_free)
