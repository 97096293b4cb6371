/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "ui/pair_words.h"

#include <glib/gi18n.h>
#include <math.h>
#include <string.h>

/* Decimals that show an uncertainty with two figures at most. */
static int
decimals_for(double u)
{
    if (!(u > 0.0))
        return 1;
    return CLAMP((int)ceil(-log10(u)), 0, 3);
}

static const char *
told_apart(HwSeparated separated)
{
    switch (separated) {
    case HW_SEPARATED_YES:
        return _("Told apart: yes.");
    case HW_SEPARATED_NO:
        return _("Told apart: no.");
    case HW_SEPARATED_NOT_ESTABLISHED:
    default:
        return _("Told apart: cannot be shown, as long as rate and alignment are not measured.");
    }
}

/* ", 6.8 ± 0.4 cm", from a metre on ", 13.9 ± 2.7 m". */
static char *
dup_distance(double metres, double u)
{
    if (metres >= 1.0)
        return g_strdup_printf(_(", %.*f ± %.*f m"), decimals_for(u), metres, decimals_for(u), u);
    return g_strdup_printf(_(", %.*f ± %.*f cm"), decimals_for(u * 100.0), metres * 100.0,
                           decimals_for(u * 100.0), u * 100.0);
}

char *
hw_pair_words_dup(const HwFinishRow *ahead, const HwFinishRow *row)
{
    double gap_ms = (double)row->prev.gap_ns / 1e6;
    double u_ms = 2.0 * row->prev.u_gap_ns / 1e6;
    int places = decimals_for(u_ms);
    g_autofree char *distance = NULL;

    if (!row->has_prev || !ahead)
        return NULL;
    if (!isnan(row->prev.distance_m) && !isnan(row->prev.u_distance_m))
        distance = dup_distance(row->prev.distance_m, 2.0 * row->prev.u_distance_m);
    return g_strdup_printf(_("%s ahead of %s by %.*f ± %.*f ms%s. %s"), ahead->bib, row->bib, places, gap_ms,
                           places, u_ms, distance ? distance : "", told_apart(row->prev.separated));
}

const HwFinishRow *
hw_pair_words_find_ahead(const HwFinishList *list, guint index)
{
    const HwFinishRow *row = g_ptr_array_index(list->rows, index);

    for (guint i = index; i-- > 0;) {
        const HwFinishRow *before = g_ptr_array_index(list->rows, i);

        if (before->crossed && strcmp(before->category, row->category) == 0)
            return before;
    }
    return NULL;
}

static void
add_count(GString *text, int count, const char *word)
{
    if (count == 0)
        return;
    g_string_append_printf(text, " · %d %s", count, word);
}

/* Without a start list nobody is accounted for: who has a place is counted. */
static int
count_ranked(const HwFinishList *list)
{
    int ranked = 0;

    if (list->has_start_list)
        return list->check.ranked;
    for (guint i = 0; i < list->rows->len; i++)
        ranked += ((const HwFinishRow *)g_ptr_array_index(list->rows, i))->rank > 0;
    return ranked;
}

char *
hw_pair_words_dup_check(const HwFinishList *list)
{
    const HwRiderCheck *check = &list->check;
    GString *text = g_string_new(NULL);

    g_string_append_printf(text, _("%d ranked"), count_ranked(list));
    add_count(text, check->lap, "LAP");
    add_count(text, check->otl, "OTL");
    add_count(text, check->dnf, "DNF");
    add_count(text, check->abd, "ABD");
    add_count(text, check->dsq, "DSQ");
    if (list->has_start_list)
        g_string_append_printf(text, _(" · %d missing"), check->missing);
    add_count(text, check->unnamed, _("unnamed"));
    if (list->has_start_list)
        add_count(text, check->not_in_list, _("not in the start list"));
    else
        g_string_append(text, _(" · no start list, so nobody can be missed"));
    return g_string_free(text, FALSE);
}

char *
hw_pair_words_dup_check_whole(const HwFinishList *list)
{
    const HwRiderCheck *check = &list->check;

    if (!list->has_start_list)
        return g_strdup("");
    return g_strdup_printf(
        _("%d entered − %d DNS = %d starters = %d ranked + %d LAP + %d OTL + %d DNF + %d ABD + "
          "%d DSQ + %d still missing"),
        check->entered, check->dns, check->starters, check->ranked, check->lap, check->otl, check->dnf,
        check->abd, check->dsq, check->missing);
}
