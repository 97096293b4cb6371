/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/ruling/markers.h"

#include "core/base/csv.h"
#include "core/base/limits.h"
#include "core/base/number.h"
#include "core/ruling/ruling_error.h"
#include "core/strip/strip_error.h"

#include <math.h>
#include <string.h>

/* The columns of a markers file, in the order they are written. */
typedef enum {
    COL_BIB,
    COL_COLUMN,
    COL_ROW,
    COL_EDGE,
    COL_TIME_NS,
    COL_U_LEAD_NS,
    COL_SPEED_MPS,
    COL_U_SPEED_MPS,
    COL_CATEGORY,
    COL_PASSAGE,
    COL_CAMERA,
    COL_READER,
    COL_STATE,
    COL_BASIS,
    COL_DIRECTION,
    COL_NAME_BASIS,
    COL_NOTE,
    COL_RECORDING,
    N_COLS
} Col;

static const char *const col_names[N_COLS] = {
    "bib",     "column", "row",    "edge",  "time_ns", "u_lead_ns", "speed_mps",  "u_speed_mps", "category",
    "passage", "camera", "reader", "state", "basis",   "direction", "name_basis", "note",        "recording"
};

const char *const hw_marker_edge_words[] = { "front", "rear", NULL };
const char *const hw_marker_state_words[] = { "read", "rough", NULL };
const char *const hw_marker_basis_words[] = { "tyre",   "inferred",    "other_camera",
                                              "caller", "transponder", NULL };
const char *const hw_marker_direction_words[] = { "with", "against", NULL };

HwMarker *
hw_marker_new(const char *bib, double column, double row)
{
    HwMarker *marker = g_new0(HwMarker, 1);
    marker->bib = g_strdup(bib);
    marker->category = g_strdup("");
    marker->passage = g_strdup("");
    marker->camera = g_strdup("");
    marker->reader = g_strdup("");
    marker->name_basis = g_strdup("");
    marker->note = g_strdup("");
    marker->column = column;
    marker->row = row;
    marker->u_lead_ns = marker->speed_mps = marker->u_speed_mps = NAN;
    return marker;
}

HwMarker *
hw_marker_copy(const HwMarker *marker)
{
    HwMarker *copy = g_new(HwMarker, 1);
    *copy = *marker;
    copy->bib = g_strdup(marker->bib);
    copy->category = g_strdup(marker->category);
    copy->passage = g_strdup(marker->passage);
    copy->camera = g_strdup(marker->camera);
    copy->reader = g_strdup(marker->reader);
    copy->name_basis = g_strdup(marker->name_basis);
    copy->note = g_strdup(marker->note);
    return copy;
}

void
hw_marker_free(HwMarker *marker)
{
    if (marker == NULL)
        return;
    g_free(marker->bib);
    g_free(marker->category);
    g_free(marker->passage);
    g_free(marker->camera);
    g_free(marker->reader);
    g_free(marker->name_basis);
    g_free(marker->note);
    g_free(marker);
}

bool
hw_marker_is_unnamed(const HwMarker *marker)
{
    return *marker->bib == '\0' || *marker->bib == '?';
}

HwMarkers *
hw_markers_new(void)
{
    HwMarkers *markers = g_new0(HwMarkers, 1);
    markers->path = g_strdup("");
    markers->names_recording = true;
    markers->markers = g_ptr_array_new_with_free_func((GDestroyNotify)hw_marker_free);
    return markers;
}

HwMarkers *
hw_markers_copy(const HwMarkers *markers)
{
    HwMarkers *copy = hw_markers_new();
    g_free(copy->path);
    copy->path = g_strdup(markers->path);
    copy->names_recording = markers->names_recording;
    for (guint i = 0; i < markers->markers->len; i++)
        g_ptr_array_add(copy->markers, hw_marker_copy(g_ptr_array_index(markers->markers, i)));
    return copy;
}

void
hw_markers_free(HwMarkers *markers)
{
    if (markers == NULL)
        return;
    g_free(markers->path);
    g_ptr_array_unref(markers->markers);
    g_free(markers);
}

/* One row being read: where its cells are, and what to say of them. */
typedef struct {
    const HwCsvTable *table;
    const HwCsvRow *row;
    const guint *places;
} Cells;

static const char *
cell(const Cells *cells, Col col)
{
    return cells->places[col] != G_MAXUINT ? g_strstrip(cells->row->fields[cells->places[col]]) : "";
}

static bool
refuse_cell(const Cells *cells, Col col, const char *mend, GError **error)
{
    g_set_error(error, HW_RULING_ERROR, HW_RULING_ERROR_MARKERS, "%s, line %u: %s is “%s”; %s.",
                cells->table->label, cells->row->line, col_names[col], cell(cells, col), mend);
    return false;
}

static bool
read_number(const Cells *cells, Col col, double min, double *value, GError **error)
{
    const char *text = cell(cells, col);
    if (*text == '\0')
        return true;
    if (!hw_number_parse_double(text, value))
        return refuse_cell(cells, col, "write a number, with a point before its decimals", error);
    return *value >= min || refuse_cell(cells, col, "it must not be below zero", error);
}

static bool
read_word(const Cells *cells, Col col, const char *const *words, int *value, GError **error)
{
    const char *text = cell(cells, col);
    for (int i = 0; words[i] != NULL; i++) {
        if (strcmp(words[i], text) == 0) {
            *value = i;
            return true;
        }
    }
    if (*text == '\0')
        return true;
    g_autofree char *known = g_strjoinv(", ", (char **)words);
    g_autofree char *mend = g_strdup_printf("write one of %s", known);
    return refuse_cell(cells, col, mend, error);
}

static bool
read_words(const Cells *cells, HwMarker *marker, GError **error)
{
    int edge = HW_EDGE_FRONT, state = HW_MARKER_READ, basis = HW_BASIS_TYRE, direction = HW_DIRECTION_WITH;
    if (!read_word(cells, COL_EDGE, hw_marker_edge_words, &edge, error) ||
        !read_word(cells, COL_STATE, hw_marker_state_words, &state, error) ||
        !read_word(cells, COL_BASIS, hw_marker_basis_words, &basis, error) ||
        !read_word(cells, COL_DIRECTION, hw_marker_direction_words, &direction, error))
        return false;
    marker->edge = (HwEdge)edge;
    marker->state = (HwMarkerState)state;
    marker->basis = (HwBasis)basis;
    marker->direction = (HwDirection)direction;
    return true;
}

static bool
read_numbers(const Cells *cells, HwMarker *marker, GError **error)
{
    if (*cell(cells, COL_COLUMN) == '\0')
        return refuse_cell(cells, COL_COLUMN, "every marker needs one", error);
    if (!read_number(cells, COL_COLUMN, -INFINITY, &marker->column, error) ||
        !read_number(cells, COL_ROW, -INFINITY, &marker->row, error) ||
        !read_number(cells, COL_U_LEAD_NS, 0, &marker->u_lead_ns, error) ||
        !read_number(cells, COL_SPEED_MPS, 0, &marker->speed_mps, error) ||
        !read_number(cells, COL_U_SPEED_MPS, 0, &marker->u_speed_mps, error))
        return false;
    const char *time_text = cell(cells, COL_TIME_NS);
    marker->has_time = *time_text != '\0';
    return !marker->has_time ||
           hw_number_parse_int64(time_text, -HW_MAX_JSON_INTEGER, HW_MAX_JSON_INTEGER, &marker->time_ns) ||
           refuse_cell(cells, COL_TIME_NS, "write whole nanoseconds since the epoch", error);
}

static void
take_text(const Cells *cells, Col col, char **text)
{
    g_free(*text);
    *text = g_strdup(cell(cells, col));
}

static HwMarker *
read_marker(const Cells *cells, const HwRecording *recording, GError **error)
{
    g_autoptr(HwMarker) marker = hw_marker_new("", 0, NAN);
    marker->line = cells->row->line;
    take_text(cells, COL_BIB, &marker->bib);
    take_text(cells, COL_CATEGORY, &marker->category);
    take_text(cells, COL_PASSAGE, &marker->passage);
    take_text(cells, COL_CAMERA, &marker->camera);
    take_text(cells, COL_READER, &marker->reader);
    take_text(cells, COL_NAME_BASIS, &marker->name_basis);
    take_text(cells, COL_NOTE, &marker->note);
    const char *made_on = cell(cells, COL_RECORDING);
    if (*made_on != '\0' && g_ascii_strcasecmp(made_on, hw_recording_get_short_identity(recording)) != 0) {
        g_set_error(
            error, HW_RULING_ERROR, HW_RULING_ERROR_MARKERS,
            "%s, line %u: the marker was made on recording %s, and this one is %s; give the markers of this "
            "recording.",
            cells->table->label, marker->line, made_on, hw_recording_get_short_identity(recording));
        return NULL;
    }
    return read_numbers(cells, marker, error) && read_words(cells, marker, error) ? g_steal_pointer(&marker)
                                                                                  : NULL;
}

static HwMarkers *
from_table(const HwCsvTable *table, const HwRecording *recording, GError **error)
{
    guint places[N_COLS];
    for (int col = 0; col < N_COLS; col++)
        places[col] = hw_csv_table_find(table, col_names[col]);
    if (places[COL_BIB] == G_MAXUINT || places[COL_COLUMN] == G_MAXUINT) {
        g_set_error(error, HW_RULING_ERROR, HW_RULING_ERROR_MARKERS,
                    "%s, line 1: a markers file needs the columns bib and column; add “%s”.", table->label,
                    col_names[places[COL_BIB] == G_MAXUINT ? COL_BIB : COL_COLUMN]);
        return NULL;
    }
    g_autoptr(HwMarkers) markers = hw_markers_new();
    g_free(markers->path);
    markers->path = g_strdup(table->label);
    for (guint i = 0; i < table->rows->len; i++) {
        Cells cells = { table, g_ptr_array_index(table->rows, i), places };
        HwMarker *marker = read_marker(&cells, recording, error);
        if (marker == NULL)
            return NULL;
        markers->names_recording &= *cell(&cells, COL_RECORDING) != '\0';
        g_ptr_array_add(markers->markers, marker);
    }
    return g_steal_pointer(&markers);
}

HwMarkers *
hw_markers_parse(const char *data, gsize size, const char *label, const HwRecording *recording,
                 GError **error)
{
    g_autoptr(HwCsvTable) table = hw_csv_table_parse(data, size, label, error);
    return table != NULL ? from_table(table, recording, error) : NULL;
}

HwMarkers *
hw_markers_read(const char *path, const HwRecording *recording, GError **error)
{
    g_autoptr(HwCsvTable) table = hw_csv_table_read(path, error);
    return table != NULL ? from_table(table, recording, error) : NULL;
}

/* "markers.csv, line 3 (bib 12)", or "The marker of bib 12" where it was never in a file. */
static char *
dup_where(const HwMarkers *markers, const HwMarker *marker)
{
    const char *bib = *marker->bib != '\0' ? marker->bib : "?";
    return marker->line > 0 ? g_strdup_printf("%s, line %u (bib %s)", markers->path, marker->line, bib)
                            : g_strdup_printf("The marker of bib %s", bib);
}

/* What a column that no run holds runs into. */
static char *
dup_why_no_picture(const HwTimeBase *base, double column)
{
    for (guint i = 0; i < hw_time_base_get_n_voids(base); i++) {
        const HwVoid *gap = hw_time_base_get_void(base, i);
        if (column >= (double)gap->after_column && column < (double)(gap->after_column + gap->n_cols))
            return g_strdup_printf("has no picture (%s)", gap->reason);
    }
    return g_strdup_printf("is off the strip, which has %" G_GINT64_FORMAT " columns",
                           hw_time_base_get_n_columns(base));
}

bool
hw_markers_check_places(const HwMarkers *markers, HwStrip *strip, GError **error)
{
    const HwTimeBase *base = hw_strip_get_time_base(strip);
    double period_ns = hw_time_base_get_period_ns(base);
    for (guint i = 0; i < markers->markers->len; i++) {
        const HwMarker *marker = g_ptr_array_index(markers->markers, i);
        int64_t time_ns;
        bool on_strip = marker->column < (double)hw_time_base_get_n_columns(base);
        if (!on_strip || !hw_time_base_instant(base, marker->column, &time_ns)) {
            g_autofree char *where = dup_where(markers, marker);
            g_autofree char *why = dup_why_no_picture(base, marker->column);
            g_autofree char *column = hw_number_dup_fixed(marker->column, 3);
            g_set_error(error, HW_RULING_ERROR, HW_RULING_ERROR_MARKERS,
                        "%s: column %s %s; place the marker on the picture.", where, column, why);
            return false;
        }
        double shift_col = ((double)marker->time_ns - (double)time_ns) / period_ns;
        if (marker->has_time && fabs(shift_col) >= 0.5) {
            g_autofree char *where = dup_where(markers, marker);
            g_autofree char *shift = hw_number_dup_fixed(shift_col, 2);
            g_set_error(
                error, HW_RULING_ERROR, HW_RULING_ERROR_MARKERS,
                "%s: its time and its column are %s columns apart on this recording; read the marker again.",
                where, shift);
            return false;
        }
    }
    return true;
}

HwStrip *
hw_markers_check_blocks(const HwMarkers *markers, HwStrip *strip, guint *n_unchecked,
                        GCancellable *cancellable, GError **error)
{
    guint n_blocks = hw_strip_get_n_blocks(strip);
    g_autofree bool *wanted = g_new0(bool, n_blocks);
    for (guint i = 0; i < markers->markers->len; i++) {
        const HwMarker *marker = g_ptr_array_index(markers->markers, i);
        guint block;
        double in_block;
        if (hw_strip_locate(strip, marker->column, &block, &in_block))
            wanted[block] = true;
    }
    *n_unchecked = 0;
    for (guint block = 0; block < n_blocks; block++) {
        if (!wanted[block]) {
            *n_unchecked += hw_strip_get_damage(strip, block) == NULL;
            continue;
        }
        g_autoptr(GError) fault = NULL;
        g_autoptr(HwRaster) raster = hw_strip_get_raster(strip, block, HW_PLANE_GREY, cancellable, &fault);
        if (raster == NULL && !g_error_matches(fault, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED)) {
            g_propagate_error(error, g_steal_pointer(&fault));
            return NULL;
        }
    }
    return hw_strip_refreshed(strip, error);
}

static char *
dup_optional(double value)
{
    return isnan(value) ? g_strdup("") : hw_number_dup_double(value);
}

char *
hw_markers_dup_csv(const HwMarkers *markers, HwStrip *strip)
{
    const HwTimeBase *base = hw_strip_get_time_base(strip);
    const char *identity = hw_recording_get_short_identity(hw_strip_get_recording(strip));
    GString *text = g_string_new(NULL);
    hw_csv_append_record(text, col_names, N_COLS);
    for (guint i = 0; i < markers->markers->len; i++) {
        const HwMarker *marker = g_ptr_array_index(markers->markers, i);
        int64_t time_ns = 0;
        bool has_time = hw_time_base_instant(base, marker->column, &time_ns);
        g_autofree char *column = hw_number_dup_double(marker->column);
        g_autofree char *row = dup_optional(marker->row);
        g_autofree char *time = has_time ? g_strdup_printf("%" G_GINT64_FORMAT, time_ns) : g_strdup("");
        g_autofree char *u_lead = dup_optional(marker->u_lead_ns);
        g_autofree char *speed = dup_optional(marker->speed_mps);
        g_autofree char *u_speed = dup_optional(marker->u_speed_mps);
        const char *fields[N_COLS] = {
            [COL_BIB] = marker->bib,
            [COL_COLUMN] = column,
            [COL_ROW] = row,
            [COL_EDGE] = hw_marker_edge_words[marker->edge],
            [COL_TIME_NS] = time,
            [COL_U_LEAD_NS] = u_lead,
            [COL_SPEED_MPS] = speed,
            [COL_U_SPEED_MPS] = u_speed,
            [COL_CATEGORY] = marker->category,
            [COL_PASSAGE] = marker->passage,
            [COL_CAMERA] = marker->camera,
            [COL_READER] = marker->reader,
            [COL_STATE] = hw_marker_state_words[marker->state],
            [COL_BASIS] = hw_marker_basis_words[marker->basis],
            [COL_DIRECTION] = hw_marker_direction_words[marker->direction],
            [COL_NAME_BASIS] = marker->name_basis,
            [COL_NOTE] = marker->note,
            [COL_RECORDING] = identity,
        };
        hw_csv_append_record(text, fields, N_COLS);
    }
    return g_string_free(text, FALSE);
}
