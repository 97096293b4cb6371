/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "ui/naming.h"

#include "ui/words.h"

#include <glib/gi18n.h>
#include <math.h>
#include <string.h>

/* Half a wheel (0.334 m) at 12 m/s: nearer than this a second marker may be the same rider's. A guard against
 * slips only; nothing is measured by it. */
#define NEAR_NS INT64_C(28000000)
/* A line this near a marker stands on it: closer than half a column no eye sets it. */
#define HERE_CELLS 0.5

static double
marker_cell(HwSession *session, int index)
{
    return hw_axis_position(hw_session_get_axis(session), hw_session_get_marker(session, index)->column);
}

int
hw_naming_find_marker(HwSession *session, double reach_px, int *n_within)
{
    double line = hw_session_get_reading_cell(session);
    double reach = MAX(reach_px * hw_session_get_view(session)->cells_per_px, 0.5);
    int selected = hw_session_get_selection(session);
    int found = -1;
    double best = INFINITY;

    *n_within = 0;
    for (int i = 0; i < (int)hw_session_get_n_markers(session); i++) {
        double cell = marker_cell(session, i);
        double away = fabs(cell - line);

        if (away > reach || !hw_session_is_in_view(session, cell))
            continue;
        ++*n_within;
        if (found == selected && found >= 0)
            continue;
        if (i == selected || away < best) {
            best = away;
            found = i;
        }
    }
    return found;
}

/* The nearest marker in time to the line but one; −1 where none is near. */
static int
find_near(HwSession *session, int but, int64_t *away_ns)
{
    HwAxis *axis = hw_session_get_axis(session);
    int64_t line_ns = hw_axis_instant(axis, hw_session_get_reading_cell(session));
    int64_t best = NEAR_NS;
    int found = -1;

    for (int i = 0; i < (int)hw_session_get_n_markers(session); i++) {
        int64_t away = ABS(hw_axis_instant(axis, marker_cell(session, i)) - line_ns);

        if (i == but || away >= best)
            continue;
        best = away;
        found = i;
    }
    *away_ns = best;
    return found;
}

static HwNaming *
refuse(HwNaming *naming, char *sentence)
{
    naming->state = HW_NAMING_REFUSED;
    naming->sentence = sentence;
    return naming;
}

static HwNaming *
ask(HwNaming *naming, char *doubt)
{
    naming->state = HW_NAMING_ASK;
    naming->sentence = g_strdup_printf(naming->marker >= 0 ? _("%s Enter twice names it so all the same.")
                                                           : _("%s Enter twice places it all the same."),
                                       doubt);
    g_free(doubt);
    return naming;
}

static char *
dup_status_doubt(const HwRider *rider, const char *bib)
{
    switch (rider->status) {
    case HW_STATUS_DNS:
        return g_strdup_printf(_("%s did not start (DNS)."), bib);
    case HW_STATUS_DNF:
    case HW_STATUS_ABD:
    case HW_STATUS_OTL:
    case HW_STATUS_DSQ:
        return g_strdup_printf(_("The start list has %s as %s."), bib, hw_status_get_word(rider->status));
    case HW_STATUS_OK:
    case HW_STATUS_LAP:
    case HW_STATUS_NOT_SEEN:
    case HW_STATUS_UNKNOWN:
    default:
        return NULL;
    }
}

/* "4 women" is number 4 of the category that begins so, where a rider of the list is meant by it; anything
 * else is a bib as it stands. */
static void
part_category(const HwStartList *list, HwNaming *naming)
{
    const char *space = naming->bib ? strrchr(naming->bib, ' ') : NULL;
    g_autofree char *bib = NULL;
    g_autofree char *wanted = NULL;

    if (!list || !space)
        return;
    bib = g_strstrip(g_strndup(naming->bib, (gsize)(space - naming->bib)));
    wanted = g_utf8_casefold(space + 1, -1);
    for (guint i = 0; i < list->riders->len; i++) {
        const HwRider *rider = g_ptr_array_index(list->riders, i);
        g_autofree char *category = g_utf8_casefold(rider->category, -1);

        if (strcmp(rider->bib, bib) != 0 || !g_str_has_prefix(category, wanted))
            continue;
        g_free(naming->bib);
        naming->bib = g_steal_pointer(&bib);
        naming->category = g_strdup(rider->category);
        return;
    }
}

/* Two riders with one number: a place would go to whoever the list finds first. NULL: one rider, or none. */
static char *
dup_ambiguity(const HwStartList *list, const HwNaming *naming)
{
    bool ambiguous = false;

    if (!list || !naming->bib || naming->category)
        return NULL;
    hw_start_list_find(list, naming->bib, NULL, &ambiguous);
    for (guint i = 0; ambiguous && i < list->riders->len; i++) {
        const HwRider *rider = g_ptr_array_index(list->riders, i);

        if (strcmp(rider->bib, naming->bib) == 0)
            return g_strdup_printf(_("Number %s is worn in several categories: add which, as in “%s %s”."),
                                   naming->bib, naming->bib, rider->category);
    }
    return NULL;
}

/* What is doubtful about the number itself; NULL: nothing. */
static char *
dup_bib_doubt(HwSession *session, HwNaming *naming)
{
    const HwStartList *list = hw_session_get_document(session)->start_list;
    int used = hw_session_find_rider(session, naming->bib, naming->category, naming->marker);
    const HwRider *rider = NULL;
    bool ambiguous = false;

    if (list)
        rider = hw_start_list_find(list, naming->bib, naming->category, &ambiguous);
    if (rider) {
        g_free(naming->rider);
        naming->rider = hw_words_dup_rider(rider);
    }
    if (used >= 0) {
        g_autofree char *time = hw_words_dup_time_of_day(session, marker_cell(session, used));

        return g_strdup_printf(_("%s already stands at %s."), naming->bib, time);
    }
    if (list && !rider)
        return g_strdup_printf(_("No rider has number %s in the start list."), naming->bib);
    return rider ? dup_status_doubt(rider, naming->bib) : NULL;
}

static char *
dup_ready_sentence(HwSession *session, const HwNaming *naming)
{
    const HwMarker *marker = hw_session_get_marker(session, naming->marker);

    if (!marker)
        return g_strdup(naming->bib ? _("Enter places a marker with this number at the line.")
                                    : _("Enter places an unnamed marker at the line."));
    if (!naming->bib)
        return g_strdup(_("Enter takes the name off this marker."));
    if (strcmp(marker->bib, naming->bib) == 0)
        return g_strdup(_("This marker bears that number already."));
    if (hw_marker_is_unnamed(marker))
        return g_strdup_printf(_("Enter names marker %s."), marker->bib);
    return g_strdup_printf(_("Enter renames marker %s."), marker->bib);
}

static char *
dup_near_doubt(HwSession *session, int near, int64_t away_ns)
{
    g_autofree char *name = hw_words_dup_marker(hw_session_get_marker(session, near));
    g_autofree char *away = g_strdup_printf("%.1f", (double)away_ns / 1e6);

    return g_strdup_printf(_("Marker %s stands only %s ms away."), name, away);
}

/* Another rider's marker than the one typed. */
static bool
is_anothers(const HwMarker *marker, const HwNaming *naming)
{
    if (!marker || hw_marker_is_unnamed(marker))
        return false;
    return !naming->bib || strcmp(marker->bib, naming->bib) != 0 ||
           (naming->category && *marker->category && strcmp(marker->category, naming->category) != 0);
}

/* A named rider is never renamed by the way: what stands exactly here is asked about, what stands beside it
 * is left alone. Asks where true. */
static bool
ask_about_another(HwSession *session, HwNaming *naming, const char *doubt)
{
    const HwMarker *marker = hw_session_get_marker(session, naming->marker);
    g_autofree char *here = NULL;
    g_autofree char *end = NULL;

    if (!is_anothers(marker, naming))
        return false;
    here = g_strdup_printf(_("Marker %s stands here."), marker->bib);
    end = naming->bib ? g_strdup_printf(_("Enter twice renames it to %s."), naming->bib)
                      : g_strdup(_("Enter twice takes its name off."));
    naming->state = HW_NAMING_ASK;
    naming->sentence = doubt ? g_strjoin(" ", doubt, here, end, NULL) : g_strjoin(" ", here, end, NULL);
    return true;
}

HwNaming *
hw_naming_make(HwSession *session, const char *text, double reach_px, bool renames)
{
    HwNaming *naming = g_new0(HwNaming, 1);
    g_autofree char *typed = g_strstrip(g_strdup(text));
    double line = hw_session_get_reading_cell(session);
    const char *reason;
    int64_t away_ns;
    double column;
    char *doubt = NULL;
    int n_within, near;

    naming->rider = g_strdup("");
    naming->bib = *typed && *typed != '?' ? g_strdup(typed) : NULL;
    part_category(hw_session_get_document(session)->start_list, naming);
    naming->marker = hw_naming_find_marker(session, reach_px, &n_within);
    if (!hw_session_is_in_view(session, line))
        return refuse(naming,
                      g_strdup(_("The reading line is out of view: bring it back with ← or →, or click.")));
    if (n_within > 1 && naming->marker != hw_session_get_selection(session))
        return refuse(
            naming,
            g_strdup_printf(_("%d markers stand at the line: click the one meant, or zoom in."), n_within));
    if (!renames && is_anothers(hw_session_get_marker(session, naming->marker), naming) &&
        fabs(marker_cell(session, naming->marker) - line) > HERE_CELLS)
        naming->marker = -1;
    reason = hw_words_void_reason(session, line);
    if (naming->marker < 0 && reason)
        return refuse(naming, g_strdup_printf(_("There is no picture here: %s. Move the line."), reason));
    if (naming->marker < 0 && !hw_axis_column(hw_session_get_axis(session), line, &column))
        return refuse(naming, g_strdup(_("The line stands outside the picture: move it.")));
    doubt = dup_ambiguity(hw_session_get_document(session)->start_list, naming);
    if (doubt)
        return refuse(naming, doubt);
    if (naming->bib)
        doubt = dup_bib_doubt(session, naming);
    if (!renames && ask_about_another(session, naming, doubt)) {
        g_free(doubt);
        return naming;
    }
    near = naming->marker < 0 ? find_near(session, -1, &away_ns) : -1;
    if (!doubt && near >= 0)
        doubt = dup_near_doubt(session, near, away_ns);
    if (doubt)
        return ask(naming, doubt);
    naming->sentence = dup_ready_sentence(session, naming);
    return naming;
}

void
hw_naming_free(HwNaming *naming)
{
    if (!naming)
        return;
    g_free(naming->bib);
    g_free(naming->category);
    g_free(naming->rider);
    g_free(naming->sentence);
    g_free(naming);
}

bool
hw_naming_equal(const HwNaming *a, const HwNaming *b)
{
    return a->state == b->state && a->marker == b->marker && g_strcmp0(a->bib, b->bib) == 0 &&
           g_strcmp0(a->category, b->category) == 0 && strcmp(a->sentence, b->sentence) == 0;
}

bool
hw_naming_commit(HwSession *session, const HwNaming *naming)
{
    if (naming->state == HW_NAMING_REFUSED)
        return false;
    if (naming->marker >= 0) {
        hw_session_set_selection(session, naming->marker);
        hw_session_rename_marker(session, naming->marker, naming->bib, naming->category);
        return true;
    }
    return hw_session_place_marker(session, hw_session_get_reading_cell(session),
                                   hw_session_get_hand_row(session), naming->bib, naming->category) >= 0;
}
