/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/sheet/subject.h"

#include "core/base/limits.h"
#include "core/base/number.h"
#include "core/sheet/sheet_error.h"
#include "core/strip/view_map.h"

#include <math.h>
#include <string.h>

#define NBSP "\u00a0"

/* Room around markers: a bicycle at walking pace needs seconds, one at racing speed a tenth; 0.35 s shows all
 * of a rider down to 5 m/s. */
#define BEFORE_NS (HW_NS_PER_S / 8)
#define BEHIND_NS (HW_NS_PER_S * 35 / 100)

#define CAUTION                                                                                              \
    "This picture is evidence for the officials. It replaces neither the regulations in force nor the "      \
    "decision of a licensed commissaire."

void
hw_subject_free(HwSubject *subject)
{
    if (subject == NULL)
        return;
    g_clear_pointer(&subject->strip, hw_strip_unref);
    g_clear_pointer(&subject->axis, hw_axis_unref);
    for (int i = 0; i < HW_MAX_VIEWS; i++)
        g_free(subject->views[i].title);
    g_clear_pointer(&subject->entries, g_ptr_array_unref);
    g_ptr_array_unref(subject->warnings);
    g_ptr_array_unref(subject->foot);
    g_free(subject->heading);
    g_free(subject->subheading);
    g_free(subject->sentence);
    g_free(subject->caption);
    g_free(subject->scale);
    g_free(subject);
}

/* Cells between two instants, both on the axis. */
static void
set_view(HwSubject *subject, int index, int64_t from_ns, int64_t to_ns)
{
    double first = floor(hw_axis_position_of_instant(subject->axis, from_ns));
    double last = ceil(hw_axis_position_of_instant(subject->axis, to_ns));
    subject->views[index].first_cell = first;
    subject->views[index].n_cells = MAX(last - first, 1);
}

static int64_t
instant_of(const HwSubject *subject, double column)
{
    return hw_axis_instant(subject->axis, hw_axis_position(subject->axis, column));
}

static bool
view_stretch(HwSubject *subject, GError **error)
{
    const HwPicture *picture = &subject->picture;
    int64_t n_cells = hw_axis_get_n_cells(subject->axis);
    int64_t start = hw_axis_instant(subject->axis, 0), end = hw_axis_instant(subject->axis, (double)n_cells);
    if (picture->from_ns >= picture->to_ns || picture->to_ns <= start || picture->from_ns >= end) {
        g_autofree char *wanted_from = hw_number_dup_fixed((double)picture->from_ns * 1e-9, 6);
        g_autofree char *wanted_to = hw_number_dup_fixed((double)picture->to_ns * 1e-9, 6);
        g_autofree char *from = hw_number_dup_fixed((double)start * 1e-9, 6);
        g_autofree char *to = hw_number_dup_fixed((double)end * 1e-9, 6);
        g_set_error(
            error, HW_SHEET_ERROR, HW_SHEET_ERROR_PLACE,
            "%s has no picture between %s s and %s s after its epoch; name a stretch between %s s and %s s.",
            hw_recording_get_path(hw_strip_get_recording(subject->strip)), wanted_from, wanted_to, from, to);
        return false;
    }
    set_view(subject, 0, MAX(picture->from_ns, start), MIN(picture->to_ns, end));
    return true;
}

static bool
find_of_pair(HwSubject *subject, const char *bib, const HwEntry **entry, GError **error)
{
    *entry = bib != NULL ? hw_entries_find(subject->entries, bib) : NULL;
    if (*entry != NULL)
        return true;
    g_set_error(error, HW_SHEET_ERROR, HW_SHEET_ERROR_PLACE,
                "%s: no marker of bib %s; name two bibs that have markers on this recording.",
                hw_recording_get_path(hw_strip_get_recording(subject->strip)), bib != NULL ? bib : "?");
    return false;
}

/* Time in which two lengths of a bicycle cross, by its speed where that was measured. */
static double
room_behind_ns(const HwEntry *entry)
{
    double speed_mps = entry->finish != NULL ? entry->finish->speed_mps : NAN;
    return speed_mps > 1 ? MIN(4.0 / speed_mps * 1e9, 2e9) : (double)BEHIND_NS;
}

/* Both riders with their markers at the same place of equally wide views, so that they can be compared. */
static bool
view_pair(HwSubject *subject, GError **error)
{
    const HwEntry *pair[2];
    if (!find_of_pair(subject, subject->picture.bib_a, &pair[0], error) ||
        !find_of_pair(subject, subject->picture.bib_b, &pair[1], error))
        return false;
    if (pair[0] == pair[1]) {
        g_set_error(error, HW_SHEET_ERROR, HW_SHEET_ERROR_PLACE,
                    "A pair needs two riders; bib %s was named twice.", pair[0]->bib);
        return false;
    }
    double period_ns = hw_time_base_get_period_ns(hw_strip_get_time_base(subject->strip));
    double behind_ns = MAX(room_behind_ns(pair[0]), room_behind_ns(pair[1]));
    double behind = ceil(behind_ns / period_ns), before = ceil(behind_ns / 3 / period_ns);
    subject->n_views = 2;
    for (int i = 0; i < 2; i++) {
        const HwFinishRow *row = pair[i]->finish;
        double cell = floor(hw_axis_position(subject->axis, pair[i]->column));
        subject->views[i].first_cell = cell - before;
        subject->views[i].n_cells = before + behind;
        subject->views[i].title =
            row != NULL && *row->name != '\0'
                ? g_strdup_printf("%s  %s%s%s%s", pair[i]->bib, row->name, *row->team != '\0' ? " (" : "",
                                  row->team, *row->team != '\0' ? ")" : "")
                : g_strdup(pair[i]->bib);
        subject->highlight[i] = pair[i]->bib;
    }
    subject->sentence = hw_entries_dup_pair(&subject->picture, pair[0], pair[1]);
    return true;
}

static void
view_markers(HwSubject *subject)
{
    const GPtrArray *entries = subject->entries;
    int64_t n_cells = hw_axis_get_n_cells(subject->axis);
    if (entries->len == 0) {
        subject->views[0].n_cells = (double)n_cells;
        return;
    }
    const HwEntry *first = g_ptr_array_index(entries, 0),
                  *last = g_ptr_array_index(entries, entries->len - 1);
    set_view(subject, 0, instant_of(subject, first->column) - BEFORE_NS,
             instant_of(subject, last->column) + BEHIND_NS);
}

/* What is in view, on the axis as it is known now. */
static bool
choose_views(HwSubject *subject, GError **error)
{
    HwAxis *axis = hw_axis_new(hw_strip_get_time_base(subject->strip));
    g_clear_pointer(&subject->axis, hw_axis_unref);
    subject->axis = axis;
    g_clear_pointer(&subject->entries, g_ptr_array_unref);
    subject->entries = hw_entries_new(&subject->picture, -INFINITY, INFINITY);
    g_clear_pointer(&subject->sentence, g_free);
    for (int i = 0; i < HW_MAX_VIEWS; i++) {
        g_free(subject->views[i].title);
        subject->views[i] = (HwSubjectView){ 0 };
    }
    subject->n_views = 1;
    switch (subject->picture.excerpt) {
    case HW_EXCERPT_STRETCH:
        if (!view_stretch(subject, error))
            return false;
        break;
    case HW_EXCERPT_PAIR:
        if (!view_pair(subject, error))
            return false;
        break;
    case HW_EXCERPT_MARKERS:
        view_markers(subject);
        break;
    case HW_EXCERPT_ALL:
        subject->views[0].n_cells = (double)hw_axis_get_n_cells(axis);
        break;
    }
    if (subject->sentence == NULL)
        subject->sentence = g_strdup("");
    return true;
}

static bool
cell_in_view(const HwSubject *subject, double cell)
{
    for (int i = 0; i < subject->n_views; i++)
        if (cell >= subject->views[i].first_cell &&
            cell <= subject->views[i].first_cell + subject->views[i].n_cells)
            return true;
    return false;
}

static bool
block_in_view(const HwSubject *subject, guint block)
{
    int64_t first_col, n_cols;
    hw_strip_get_block_columns(subject->strip, block, &first_col, &n_cols);
    if (n_cols == 0)
        return false;
    double from = hw_axis_position(subject->axis, (double)first_col + 0.5);
    double to = hw_axis_position(subject->axis, (double)(first_col + n_cols) - 0.5);
    for (int i = 0; i < subject->n_views; i++)
        if (to >= subject->views[i].first_cell &&
            from <= subject->views[i].first_cell + subject->views[i].n_cells)
            return true;
    return false;
}

/* Decodes what is in view, so that its damage is known before anything is drawn. */
static bool
check_blocks(HwSubject *subject, guint *n_shown, HwProgress progress, gpointer user_data,
             GCancellable *cancellable, GError **error)
{
    guint n_blocks = hw_strip_get_n_blocks(subject->strip);
    *n_shown = 0;
    for (guint i = 0; i < n_blocks; i++) {
        if (!block_in_view(subject, i))
            continue;
        g_autoptr(GError) damage = NULL;
        g_autoptr(HwRaster) raster =
            hw_strip_get_raster(subject->strip, i, HW_PLANE_STORED, cancellable, &damage);
        if (g_cancellable_set_error_if_cancelled(cancellable, error))
            return false;
        (*n_shown)++;
        if (progress != NULL)
            progress(0.1 * (i + 1) / n_blocks, user_data);
    }
    HwStrip *fresh = hw_strip_refreshed(subject->strip, error);
    if (fresh == NULL)
        return false;
    hw_strip_unref(subject->strip);
    subject->strip = subject->picture.strip = fresh;
    return true;
}

/* A pair is shown with its own markers only, on both sides: what lies between them is the matter. */
static bool
is_shown(const HwSubject *subject, const HwEntry *entry)
{
    if (subject->highlight[0] != NULL && strcmp(entry->bib, subject->highlight[0]) != 0 &&
        strcmp(entry->bib, subject->highlight[1]) != 0)
        return false;
    return cell_in_view(subject, hw_axis_position(subject->axis, entry->column));
}

static void
drop_entries_not_shown(HwSubject *subject)
{
    for (guint i = subject->entries->len; i-- > 0;)
        if (!is_shown(subject, g_ptr_array_index(subject->entries, i)))
            g_ptr_array_remove_index(subject->entries, i);
}

static void
add(GPtrArray *lines, char *line)
{
    g_ptr_array_add(lines, line);
}

static void
warn_of_damage(HwSubject *subject)
{
    HwRecording *recording = hw_strip_get_recording(subject->strip);
    guint n_damaged = 0;
    const char *first = NULL;
    for (guint i = 0; i < hw_strip_get_n_blocks(subject->strip); i++) {
        const char *reason = hw_strip_get_damage(subject->strip, i);
        n_damaged += reason != NULL;
        if (first == NULL)
            first = reason;
    }
    if (n_damaged == 1)
        add(subject->warnings, g_strdup_printf("INCOMPLETE RECORDING: %s.", first));
    else if (n_damaged > 1)
        add(subject->warnings,
            g_strdup_printf("INCOMPLETE RECORDING: %u blocks cannot be read; the first: %s.", n_damaged,
                            first));
    if (!hw_recording_is_complete(recording))
        add(subject->warnings, g_strdup("INCOMPLETE RECORDING: the camera was still writing it."));
    if (n_damaged == 0 && subject->picture.list != NULL && !subject->picture.list->recording_whole &&
        hw_recording_is_complete(recording))
        add(subject->warnings,
            g_strdup("INCOMPLETE RECORDING: the order was taken from a damaged recording."));
}

static void
warn(HwSubject *subject)
{
    const HwTimeBase *base = hw_strip_get_time_base(subject->strip);
    warn_of_damage(subject);
    guint n_voids = 0;
    for (guint i = 0; i < hw_time_base_get_n_voids(base); i++)
        n_voids += hw_time_base_get_void(base, i)->kind == HW_VOID_NOT_SCANNED;
    if (n_voids > 0)
        add(subject->warnings,
            g_strdup_printf("No picture in %u stretch%s of time that the camera did not scan; hatched where "
                            "in view.",
                            n_voids, n_voids == 1 ? "" : "es"));
    guint n_drops = hw_time_base_get_n_drops(base);
    if (n_drops > 0)
        add(subject->warnings, g_strdup_printf("Scans suspected to be missing in %u block%s: times there are "
                                               "less sure, see the list’s remarks.",
                                               n_drops, n_drops == 1 ? "" : "s"));
    if (subject->picture.travel == HW_SIDE_UNKNOWN)
        add(subject->warnings,
            g_strdup("Direction of riding not stated: shown as if they ride to the left. If bibs read "
                     "mirrored, state it and make the picture again."));
}

static char *
dup_scale(const HwSubject *subject)
{
    const HwTimeBase *base = hw_strip_get_time_base(subject->strip);
    const HwScan *scan = hw_recording_get_scan(hw_strip_get_recording(subject->strip));
    const HwCalibration *calibration = subject->picture.calibration;
    g_autofree char *column_ms = hw_number_dup_fixed(hw_time_base_get_period_ns(base) * 1e-6, 4);
    g_autofree char *nominal = hw_number_dup_double(scan->rate_hz);
    if (calibration == NULL)
        return g_strdup_printf("1 column = %s" NBSP "ms (nominal %s" NBSP "Hz, not calibrated)", column_ms,
                               nominal);
    double expanded = 2 * calibration->u_rate_hz;
    int decimals = expanded > 0 ? (int)CLAMP(1 - floor(log10(expanded)), 0, 6) : 3;
    g_autofree char *rate = hw_number_dup_fixed(calibration->rate_hz, decimals);
    g_autofree char *spread = hw_number_dup_fixed(expanded, decimals);
    return g_strdup_printf("1 column = %s" NBSP "ms nominal; calibrated %s" NBSP "±" NBSP "%s" NBSP "Hz",
                           column_ms, rate, spread);
}

/* What the picture knows of the recording's blocks. */
static char *
dup_checked(const HwSubject *subject, guint n_shown)
{
    guint n_blocks = hw_strip_get_n_blocks(subject->strip), n_damaged = 0;
    for (guint i = 0; i < n_blocks; i++)
        n_damaged += block_in_view(subject, i) && hw_strip_get_damage(subject->strip, i) != NULL;
    GString *text = g_string_new(NULL);
    if (n_shown < n_blocks)
        g_string_append_printf(text, "%u of %u blocks are in view, the others were not checked", n_shown,
                               n_blocks);
    else
        g_string_append_printf(text, "all %u blocks are in view", n_blocks);
    if (n_damaged > 0)
        g_string_append_printf(text, "; %u of those in view cannot be read", n_damaged);
    return g_string_free(text, FALSE);
}

static void
write_foot(HwSubject *subject, guint n_shown)
{
    const HwPicture *picture = &subject->picture;
    HwRecording *recording = hw_strip_get_recording(subject->strip);
    g_autofree char *epoch = hw_instant_dup_text(hw_recording_get_epoch(recording), 3);
    g_autofree char *name = g_path_get_basename(hw_recording_get_path(recording));
    const char *title = hw_recording_get_title(recording);
    add(subject->foot,
        g_strdup_printf("%s%s%s · recording “%s”, camera %s, epoch %s, identity %s", subject->heading,
                        *subject->subheading != '\0' ? " · " : "", subject->subheading,
                        *title != '\0' ? title : name, hw_recording_get_camera(recording), epoch,
                        hw_recording_get_short_identity(recording)));
    add(subject->foot, picture->rules != NULL && *picture->rules != '\0'
                           ? g_strdup_printf("Rule set: %s", picture->rules)
                           : g_strdup("No rule set applied: measured order, not rounded."));
    g_autofree char *checked = dup_checked(subject, n_shown);
    add(subject->foot, picture->digest != NULL
                           ? g_strdup_printf("Recording SHA-256 %s · %s", picture->digest->hex, checked)
                           : g_strdup_printf("Recording: digest not known · %s", checked));
    add(subject->foot, g_strdup(CAUTION));
}

static char *
dup_caption(const HwSubject *subject)
{
    const HwFinishList *list = subject->picture.list;
    if (list == NULL)
        return g_strdup("Markers in view, not ranked. Time: time of day of the column.");
    return g_strdup_printf("Order of the riders in view. Time and gap: %s. To the one before, to the winner: "
                           "measured on the picture, ± with k" NBSP "=" NBSP "2, evidence and not result.",
                           list->places_only ? "none, places only"
                           : list->unrounded ? "as measured, no rule set applied"
                                             : "official, by the rule set");
}

HwSubject *
hw_subject_new(const HwPicture *picture, HwProgress progress, gpointer user_data, GCancellable *cancellable,
               GError **error)
{
    g_autoptr(HwSubject) subject = g_new0(HwSubject, 1);
    guint n_shown;
    subject->picture = *picture;
    subject->strip = hw_strip_ref(picture->strip);
    subject->warnings = g_ptr_array_new_with_free_func(g_free);
    subject->foot = g_ptr_array_new_with_free_func(g_free);
    subject->later_left = hw_view_later_left(picture->travel, false);
    if (!choose_views(subject, error) ||
        !check_blocks(subject, &n_shown, progress, user_data, cancellable, error) ||
        !choose_views(subject, error))
        return NULL;
    subject->n_rows = hw_strip_get_n_rows(subject->strip);
    drop_entries_not_shown(subject);
    subject->heading =
        g_strdup(picture->event != NULL && *picture->event != '\0' ? picture->event : "Finish picture");
    subject->subheading = g_strdup(picture->passage != NULL ? picture->passage : "");
    subject->caption = dup_caption(subject);
    subject->scale = dup_scale(subject);
    warn(subject);
    write_foot(subject, n_shown);
    return g_steal_pointer(&subject);
}
