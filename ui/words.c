/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "ui/words.h"

#include "core/base/duration.h"
#include "core/base/number.h"

#include <glib/gi18n.h>
#include <math.h>

/* Decimals of a second that show a column. */
static int
decimals(HwSession *session)
{
    double period_ns = hw_time_base_get_period_ns(hw_strip_get_time_base(hw_session_get_strip(session)));

    if (period_ns >= 1e6)
        return 3;
    return period_ns >= 1e5 ? 4 : 5;
}

char *
hw_words_dup_time_of_day(HwSession *session, double cell)
{
    const HwDocument *document = hw_session_get_document(session);
    HwInstant instant =
        hw_instant_plus(hw_recording_get_epoch(document->recording), hw_axis_instant(document->axis, cell));

    return hw_instant_dup_time_of_day(&instant, decimals(session));
}

char *
hw_words_dup_elapsed(HwSession *session, double cell, const char *category)
{
    const HwDocument *document = hw_session_get_document(session);
    const HwRace *race = document->race;
    HwElapsed elapsed;

    if (!race || race->waves->len == 0)
        return NULL;
    if (!category && race->waves->len == 1)
        category = g_array_index(race->waves, HwWave, 0).category;
    if (!hw_elapsed_make(hw_recording_get_epoch(document->recording), hw_axis_instant(document->axis, cell),
                         NULL, category ? category : "*", race, NULL, &elapsed))
        return NULL;
    if (elapsed.source == HW_START_NONE)
        return NULL;
    return hw_duration_dup_text(elapsed.elapsed_ns, decimals(session));
}

const char *
hw_words_void_reason(HwSession *session, double cell)
{
    HwAxis *axis = hw_session_get_axis(session);
    const HwAxisSpan *span = hw_axis_get_span(axis, hw_axis_span_at(axis, cell));

    if (span->void_index < 0)
        return NULL;
    return hw_time_base_get_void(hw_strip_get_time_base(hw_session_get_strip(session)),
                                 (guint)span->void_index)
        ->reason;
}

char *
hw_words_dup_column(HwSession *session, double cell)
{
    const char *reason = hw_words_void_reason(session, cell);
    g_autofree char *number = NULL;
    double column;

    if (reason)
        return g_strdup_printf(_("no picture: %s"), reason);
    if (!hw_axis_column(hw_session_get_axis(session), cell, &column))
        return g_strdup(_("outside the picture"));
    number = hw_number_dup_fixed(column, 1);
    return g_strdup_printf(_("column %s"), number);
}

char *
hw_words_dup_scale(double cells_per_px)
{
    double ratio = cells_per_px >= 1.0 ? cells_per_px : 1.0 / cells_per_px;
    g_autofree char *number = NULL;

    if (fabs(ratio - 1.0) < 1e-9)
        return g_strdup("1 : 1");
    number = hw_number_dup_fixed(ratio, fabs(ratio - round(ratio)) < 0.05 ? 0 : 1);
    return g_strdup_printf(cells_per_px >= 1.0 ? "1 : %s" : "× %s", number);
}

char *
hw_words_dup_rider(const HwRider *rider)
{
    if (rider->name[0] && rider->team[0])
        return g_strdup_printf("%s · %s", rider->name, rider->team);
    return g_strdup(rider->name[0] ? rider->name : rider->team);
}

char *
hw_words_dup_picture(HwSession *session)
{
    guint n_markers = hw_session_get_n_markers(session);
    g_autofree char *time = NULL;
    g_autofree char *count = NULL;

    if (!hw_session_get_document(session))
        return g_strdup(_("nothing open"));
    time = hw_words_dup_time_of_day(session, hw_session_get_reading_cell(session));
    count = g_strdup_printf(ngettext("%u marker", "%u markers", n_markers), n_markers);
    return g_strdup_printf(_("reading line at %s, %s"), time, count);
}

const char *
hw_words_passage_kind(HwPassageKind kind)
{
    switch (kind) {
    case HW_PASSAGE_SPRINT:
        return _("Intermediate sprint");
    case HW_PASSAGE_LAP:
        return _("Lap");
    case HW_PASSAGE_ELIMINATION:
        return _("Elimination");
    case HW_PASSAGE_FINAL_SPRINT:
        return _("Final sprint");
    case HW_PASSAGE_FINISH:
    default:
        return _("Finish");
    }
}

char *
hw_words_dup_marker(const HwMarker *marker)
{
    if (hw_marker_is_unnamed(marker))
        return g_strdup_printf(_("unnamed %s"), marker->bib);
    return g_strdup(marker->bib);
}
