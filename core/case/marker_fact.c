/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/case/marker_fact.h"

#include "core/base/limits.h"
#include "core/base/number.h"
#include "core/case/case_error.h"

#include <math.h>
#include <string.h>

static json_t *
number_or_null(double value)
{
    return isfinite(value) ? json_real(value) : json_null();
}

static void
set_texts(json_t *fact, const HwMarker *marker)
{
    json_object_set_new(fact, "bib", json_string(marker->bib));
    json_object_set_new(fact, "category", json_string(marker->category));
    json_object_set_new(fact, "passage", json_string(marker->passage));
    json_object_set_new(fact, "camera", json_string(marker->camera));
    json_object_set_new(fact, "reader", json_string(marker->reader));
    json_object_set_new(fact, "edge", json_string(hw_marker_edge_words[marker->edge]));
    json_object_set_new(fact, "state", json_string(hw_marker_state_words[marker->state]));
    json_object_set_new(fact, "basis", json_string(hw_marker_basis_words[marker->basis]));
    json_object_set_new(fact, "direction", json_string(hw_marker_direction_words[marker->direction]));
    json_object_set_new(fact, "name_basis", json_string(marker->name_basis));
    json_object_set_new(fact, "note", json_string(marker->note));
}

json_t *
hw_marker_to_fact(const HwMarker *marker, HwStrip *strip, bool names_recording, GError **error)
{
    guint block;
    double in_block;
    int64_t time_ns;
    if (!hw_strip_locate(strip, marker->column, &block, &in_block) ||
        !hw_time_base_instant(hw_strip_get_time_base(strip), marker->column, &time_ns)) {
        g_autofree char *column = hw_number_dup_fixed(marker->column, 3);
        g_set_error(error, HW_CASE_ERROR, HW_CASE_ERROR_ACT,
                    "The marker of bib %s stands off the picture (column %s); place it on the picture.",
                    marker->bib, column);
        return NULL;
    }
    HwRecording *recording = hw_strip_get_recording(strip);
    json_t *fact = json_object();
    json_object_set_new(fact, "recording", json_string(hw_recording_get_short_identity(recording)));
    json_object_set_new(fact, "names_recording", json_boolean(names_recording));
    json_object_set_new(fact, "block", json_string(hw_recording_get_block(recording, block)->file));
    json_object_set_new(fact, "column_in_block", json_real(in_block));
    json_object_set_new(fact, "row", number_or_null(marker->row));
    json_object_set_new(fact, "time_ns", json_integer(time_ns));
    json_object_set_new(fact, "u_lead_ns", number_or_null(marker->u_lead_ns));
    json_object_set_new(fact, "speed_mps", number_or_null(marker->speed_mps));
    json_object_set_new(fact, "u_speed_mps", number_or_null(marker->u_speed_mps));
    set_texts(fact, marker);
    return fact;
}

static bool
read_text(const json_t *fact, const char *key, const char *where, char **text, GError **error)
{
    const char *found = NULL;
    if (!hw_json_get_string(fact, key, HW_JSON_REQUIRED, where, &found, error))
        return false;
    g_free(*text);
    *text = g_strdup(found);
    return true;
}

static bool
read_texts(const json_t *fact, const char *where, HwMarker *marker, GError **error)
{
    return read_text(fact, "bib", where, &marker->bib, error) &&
           read_text(fact, "category", where, &marker->category, error) &&
           read_text(fact, "passage", where, &marker->passage, error) &&
           read_text(fact, "camera", where, &marker->camera, error) &&
           read_text(fact, "reader", where, &marker->reader, error) &&
           read_text(fact, "name_basis", where, &marker->name_basis, error) &&
           read_text(fact, "note", where, &marker->note, error);
}

static bool
read_words(const json_t *fact, const char *where, HwMarker *marker, GError **error)
{
    int edge, state, basis, direction;
    if (!hw_json_get_word(fact, "edge", HW_JSON_REQUIRED, hw_marker_edge_words, where, &edge, error) ||
        !hw_json_get_word(fact, "state", HW_JSON_REQUIRED, hw_marker_state_words, where, &state, error) ||
        !hw_json_get_word(fact, "basis", HW_JSON_REQUIRED, hw_marker_basis_words, where, &basis, error) ||
        !hw_json_get_word(fact, "direction", HW_JSON_REQUIRED, hw_marker_direction_words, where, &direction,
                          error))
        return false;
    marker->edge = (HwEdge)edge;
    marker->state = (HwMarkerState)state;
    marker->basis = (HwBasis)basis;
    marker->direction = (HwDirection)direction;
    return true;
}

static bool
read_numbers(const json_t *fact, const char *where, HwMarker *marker, GError **error)
{
    marker->has_time = true;
    return hw_json_get_int64(fact, "time_ns", HW_JSON_REQUIRED, INT64_MIN, INT64_MAX, where, &marker->time_ns,
                             error) &&
           hw_json_get_double(fact, "row", HW_JSON_OPTIONAL, -INFINITY, INFINITY, where, &marker->row,
                              error) &&
           hw_json_get_double(fact, "u_lead_ns", HW_JSON_OPTIONAL, 0.0, INFINITY, where, &marker->u_lead_ns,
                              error) &&
           hw_json_get_double(fact, "speed_mps", HW_JSON_OPTIONAL, 0.0, INFINITY, where, &marker->speed_mps,
                              error) &&
           hw_json_get_double(fact, "u_speed_mps", HW_JSON_OPTIONAL, 0.0, INFINITY, where,
                              &marker->u_speed_mps, error);
}

/* The column on this strip of a place in a block. */
static bool
find_column(HwStrip *strip, const char *file, double in_block, double *column)
{
    const HwRecording *recording = hw_strip_get_recording(strip);
    for (guint block = 0; block < hw_strip_get_n_blocks(strip); block++) {
        if (strcmp(hw_recording_get_block(recording, block)->file, file) != 0)
            continue;
        int64_t first_col, n_cols;
        hw_strip_get_block_columns(strip, block, &first_col, &n_cols);
        /* Exact: in_block was taken as the difference of the two. */
        *column = (double)first_col + in_block;
        return in_block < (double)n_cols;
    }
    return false;
}

static bool
read_place(const json_t *fact, HwStrip *strip, const char *where, HwMarker *marker, GError **error)
{
    const char *made_on = NULL, *file = NULL;
    double in_block = 0.0;
    if (!hw_json_get_string(fact, "recording", HW_JSON_REQUIRED, where, &made_on, error) ||
        !hw_json_get_string(fact, "block", HW_JSON_REQUIRED, where, &file, error) ||
        !hw_json_get_double(fact, "column_in_block", HW_JSON_REQUIRED, 0.0, HW_MAX_COLUMNS, where, &in_block,
                            error))
        return false;
    const char *here = hw_recording_get_short_identity(hw_strip_get_recording(strip));
    if (strcmp(made_on, here) != 0) {
        g_set_error(error, HW_CASE_ERROR, HW_CASE_ERROR_FORMAT,
                    "%s was made on recording %s, and this one is %s; give the recording of the case.", where,
                    made_on, here);
        return false;
    }
    if (find_column(strip, file, in_block, &marker->column))
        return true;
    g_autofree char *column = hw_number_dup_fixed(in_block, 3);
    g_set_error(error, HW_CASE_ERROR, HW_CASE_ERROR_FORMAT,
                "%s (bib %s) stands on column %s of %s, which the recording no longer has; give the "
                "recording as it was.",
                where, marker->bib, column, file);
    return false;
}

HwMarker *
hw_marker_from_fact(const json_t *fact, HwStrip *strip, const char *where, bool *names_recording,
                    GError **error)
{
    g_autoptr(HwMarker) marker = hw_marker_new("", 0.0, NAN);
    if (!read_texts(fact, where, marker, error) || !read_words(fact, where, marker, error) ||
        !read_numbers(fact, where, marker, error) || !read_place(fact, strip, where, marker, error) ||
        !hw_json_get_bool(fact, "names_recording", where, names_recording, error))
        return NULL;
    return g_steal_pointer(&marker);
}
