/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/ruling/crossing.h"

#include "core/base/number.h"
#include "core/ruling/ruling_error.h"

#include <math.h>
#include <string.h>

void
hw_crossings_free(HwCrossings *crossings)
{
    if (crossings == NULL)
        return;
    g_array_unref(crossings->crossings);
    g_free(crossings->passage);
    g_ptr_array_unref(crossings->problems);
    g_free(crossings);
}

G_GNUC_PRINTF(2, 3)
static void
add_problem(HwCrossings *crossings, const char *format, ...)
{
    va_list arguments;
    va_start(arguments, format);
    g_ptr_array_add(crossings->problems, g_strdup_vprintf(format, arguments));
    va_end(arguments);
}

/* The one passage the markers name where nobody else does. NULL with an error where they name several. */
static const char *
only_passage(const HwMarkers *markers, GError **error)
{
    const char *found = "";
    for (guint i = 0; i < markers->markers->len; i++) {
        const HwMarker *marker = g_ptr_array_index(markers->markers, i);
        if (*marker->passage == '\0' || strcmp(marker->passage, found) == 0)
            continue;
        if (*found != '\0') {
            g_set_error(error, HW_RULING_ERROR, HW_RULING_ERROR_MARKERS,
                        "%s holds markers of the passages “%s” and “%s”; name the one that is meant.",
                        markers->path, found, marker->passage);
            return NULL;
        }
        found = marker->passage;
    }
    return found;
}

/* Which passage is ranked. A marker that names none belongs to it only where none does: a lap is never
 * guessed. */
static const char *
choose_passage(const HwFinishInput *input, GError **error)
{
    const HwMarkers *markers = input->markers;
    const char *wanted = input->passage != NULL ? input->passage : "";
    if (*wanted == '\0' && input->race != NULL)
        wanted = input->race->passage_name;
    if (*wanted == '\0')
        wanted = only_passage(markers, error);
    if (wanted == NULL)
        return NULL;
    const HwMarker *without = NULL;
    bool some_named = false;
    for (guint i = 0; i < markers->markers->len; i++) {
        const HwMarker *marker = g_ptr_array_index(markers->markers, i);
        some_named |= *marker->passage != '\0';
        if (*marker->passage == '\0' && without == NULL)
            without = marker;
    }
    if (some_named && without != NULL) {
        g_set_error(error, HW_RULING_ERROR, HW_RULING_ERROR_MARKERS,
                    "%s, line %u (bib %s): the marker names no passage where others do; name it.",
                    markers->path, without->line, without->bib);
        return NULL;
    }
    return wanted;
}

/* The rider a marker names; *rider NULL where the list does not have the bib. False where two riders could be
 * meant. */
static bool
find_rider(const HwFinishInput *input, const HwMarker *marker, const HwRider **rider, GError **error)
{
    bool ambiguous = false;
    *rider = NULL;
    if (input->start_list != NULL && !hw_marker_is_unnamed(marker))
        *rider = hw_start_list_find(input->start_list, marker->bib, marker->category, &ambiguous);
    if (ambiguous)
        g_set_error(
            error, HW_RULING_ERROR, HW_RULING_ERROR_MARKERS,
            "%s, line %u: bib %s stands in more than one category of the start list; name the category in a "
            "column “category”.",
            input->markers->path, marker->line, marker->bib);
    return !ambiguous;
}

static HwCrossing *
find_crossing(GArray *crossings, const HwMarker *marker, const HwRider *rider)
{
    bool nameless = *marker->bib == '\0' || strcmp(marker->bib, "?") == 0;
    for (guint i = 0; !nameless && i < crossings->len; i++) {
        HwCrossing *crossing = &g_array_index(crossings, HwCrossing, i);
        const HwMarker *other = crossing->front != NULL ? crossing->front : crossing->rear;
        bool same_rider = rider != NULL ? crossing->rider == rider
                                        : crossing->rider == NULL && strcmp(other->bib, marker->bib) == 0 &&
                                              strcmp(other->category, marker->category) == 0;
        if (same_rider)
            return crossing;
    }
    HwCrossing fresh = { .rider = rider, .unnamed = hw_marker_is_unnamed(marker) };
    g_array_append_val(crossings, fresh);
    return &g_array_index(crossings, HwCrossing, crossings->len - 1);
}

static bool
take_marker(HwCrossings *crossings, const HwFinishInput *input, const HwMarker *marker, GError **error)
{
    const HwRider *rider;
    if (!find_rider(input, marker, &rider, error))
        return false;
    if (marker->direction == HW_DIRECTION_AGAINST) {
        g_autofree char *column = hw_number_dup_fixed(marker->column, 3);
        add_problem(crossings, "Bib %s at column %s rode over the line against the travel: no finish.",
                    marker->bib, column);
        return true;
    }
    HwCrossing *crossing = find_crossing(crossings->crossings, marker, rider);
    const HwMarker **edge = marker->edge == HW_EDGE_FRONT ? &crossing->front : &crossing->rear;
    if (*edge != NULL) {
        g_set_error(error, HW_RULING_ERROR, HW_RULING_ERROR_MARKERS,
                    "%s: bib %s has two %s markers in %s%s%s (lines %u and %u); correct one of the bibs, or "
                    "say of each "
                    "marker which passage it is (a column “passage”).",
                    input->markers->path, marker->bib, marker->edge == HW_EDGE_FRONT ? "front" : "rear",
                    *crossings->passage != '\0' ? "passage “" : "one passage", crossings->passage,
                    *crossings->passage != '\0' ? "”" : "", (*edge)->line, marker->line);
        return false;
    }
    *edge = marker;
    return true;
}

/* Standard uncertainty of a reading: as given, else by eye; unknown for a rough marker that does not say its
 * zoom. Columns suspected to be missing from its block add what they may shift. */
static double
reading_u_ns(const HwMarker *marker, const HwTimeBase *base)
{
    double period_ns = hw_time_base_get_period_ns(base);
    double u_ns = marker->u_lead_ns;
    if (isnan(u_ns) && marker->state == HW_MARKER_READ)
        u_ns = hw_u_by_eye_ns(period_ns);
    for (guint i = 0; i < hw_time_base_get_n_drops(base); i++) {
        const HwDrop *drop = hw_time_base_get_drop(base, i);
        if (marker->column >= (double)drop->first_col &&
            marker->column <= (double)(drop->first_col + drop->n_cols))
            u_ns = hypot(u_ns, hw_u_by_eye_ns(period_ns) * fabs((double)drop->missing));
    }
    return u_ns;
}

static const char *
bib_of(const HwCrossing *crossing)
{
    const HwMarker *marker = crossing->front != NULL ? crossing->front : crossing->rear;
    return *marker->bib != '\0' ? marker->bib : "?";
}

/* Instants of both edges, and which one decides. */
static void
time_crossing(HwCrossings *crossings, const HwFinishInput *input, HwEdge deciding, HwCrossing *crossing)
{
    const HwTimeBase *base = hw_strip_get_time_base(input->strip);
    if (crossing->front != NULL)
        (void)hw_time_base_instant(base, crossing->front->column, &crossing->front_ns);
    if (crossing->rear != NULL)
        (void)hw_time_base_instant(base, crossing->rear->column, &crossing->rear_ns);
    if (crossing->front != NULL && crossing->rear != NULL &&
        crossing->rear->column <= crossing->front->column) {
        add_problem(
            crossings,
            "Bib %s: the rear tyre is marked before the front tyre, as of a rider going against the travel; "
            "it is not ranked until that is mended.",
            bib_of(crossing));
        return;
    }
    const HwMarker *decides = deciding == HW_EDGE_FRONT ? crossing->front : crossing->rear;
    if (decides == NULL) {
        add_problem(crossings, "Bib %s has no marker on the %s tyre, which decides here; it is not ranked.",
                    bib_of(crossing), deciding == HW_EDGE_FRONT ? "front" : "rear");
        return;
    }
    crossing->is_ordered = true;
    crossing->order_ns = deciding == HW_EDGE_FRONT ? crossing->front_ns : crossing->rear_ns;
    crossing->order_column = decides->column;
    crossing->u_ns = reading_u_ns(decides, base);
    int run = hw_time_base_run_at(base, decides->column);
    crossing->clock = run >= 0 ? hw_time_base_get_run(base, (guint)run)->clock : 0;
}

/* By instant on one clock, by clock before; where two are equal by bib, never by insertion. */
static gint
compare_crossings(gconstpointer pa, gconstpointer pb)
{
    const HwCrossing *a = pa;
    const HwCrossing *b = pb;
    if (a->is_ordered != b->is_ordered)
        return a->is_ordered ? -1 : 1;
    if (a->is_ordered && a->clock != b->clock)
        return a->clock < b->clock ? -1 : 1;
    if (a->is_ordered && a->order_ns != b->order_ns)
        return a->order_ns < b->order_ns ? -1 : 1;
    int by_bib = hw_bib_compare(bib_of(a), bib_of(b));
    if (by_bib != 0)
        return by_bib;
    return (a->order_column > b->order_column) - (a->order_column < b->order_column);
}

/* How many other passages of the file a crossing's rider is marked in. */
static guint
count_other_passages(const HwFinishInput *input, const HwCrossing *crossing, const char *passage)
{
    g_autoptr(GHashTable) seen = g_hash_table_new(g_str_hash, g_str_equal);
    for (guint i = 0; i < input->markers->markers->len; i++) {
        const HwMarker *marker = g_ptr_array_index(input->markers->markers, i);
        if (strcmp(marker->passage, passage) == 0 || strcmp(marker->bib, crossing->rider->bib) != 0 ||
            marker->direction == HW_DIRECTION_AGAINST)
            continue;
        if (*marker->category == '\0' || strcmp(marker->category, crossing->rider->category) == 0)
            g_hash_table_add(seen, marker->passage);
    }
    return g_hash_table_size(seen);
}

/* A lapped rider is known to be short. */
static bool
is_lapped(const HwFinishInput *input, const HwRider *rider)
{
    const HwRaceStatus *given = hw_race_find_status(input->race, rider->bib, rider->category);
    return (given != NULL ? given->status : rider->status) == HW_STATUS_LAP;
}

/* Within a category everybody should have been seen equally often: fewer passages may be a lap short. */
static void
report_short_of_laps(HwCrossings *crossings, const HwFinishInput *input)
{
    g_autoptr(GHashTable) most = g_hash_table_new(g_str_hash, g_str_equal);
    for (guint i = 0; i < crossings->crossings->len; i++) {
        const HwCrossing *crossing = &g_array_index(crossings->crossings, HwCrossing, i);
        if (crossing->rider == NULL)
            continue;
        guint count = count_other_passages(input, crossing, crossings->passage);
        guint so_far = GPOINTER_TO_UINT(g_hash_table_lookup(most, crossing->rider->category));
        g_hash_table_insert(most, crossing->rider->category, GUINT_TO_POINTER(MAX(count, so_far)));
    }
    for (guint i = 0; i < crossings->crossings->len; i++) {
        const HwCrossing *crossing = &g_array_index(crossings->crossings, HwCrossing, i);
        if (crossing->rider == NULL)
            continue;
        guint count = count_other_passages(input, crossing, crossings->passage);
        guint expected = GPOINTER_TO_UINT(g_hash_table_lookup(most, crossing->rider->category));
        if (count < expected && !is_lapped(input, crossing->rider))
            add_problem(crossings,
                        "Bib %s is marked at %u of the %u other passages its category was seen at: a lap "
                        "short, or not "
                        "marked there.",
                        crossing->rider->bib, count, expected);
    }
}

HwCrossings *
hw_crossings_make(const HwFinishInput *input, GError **error)
{
    const char *passage = choose_passage(input, error);
    if (passage == NULL)
        return NULL;
    g_autoptr(HwCrossings) crossings = g_new0(HwCrossings, 1);
    crossings->crossings = g_array_new(FALSE, TRUE, sizeof(HwCrossing));
    crossings->problems = g_ptr_array_new_with_free_func(g_free);
    crossings->passage = g_strdup(passage);
    for (guint i = 0; i < input->markers->markers->len; i++) {
        const HwMarker *marker = g_ptr_array_index(input->markers->markers, i);
        bool belongs = *marker->passage == '\0' || strcmp(marker->passage, passage) == 0;
        if (belongs && !take_marker(crossings, input, marker, error))
            return NULL;
    }
    HwPassageKind kind = input->race != NULL ? input->race->passage_kind : HW_PASSAGE_FINISH;
    HwEdge deciding = input->rules != NULL ? input->rules->order_edge[kind] : HW_EDGE_FRONT;
    for (guint i = 0; i < crossings->crossings->len; i++)
        time_crossing(crossings, input, deciding, &g_array_index(crossings->crossings, HwCrossing, i));
    g_array_sort(crossings->crossings, compare_crossings);
    report_short_of_laps(crossings, input);
    return g_steal_pointer(&crossings);
}
