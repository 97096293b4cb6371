/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/ruling/elapsed.h"

#include <string.h>

const char *
hw_start_source_get_word(HwStartSource source)
{
    static const char *const words[] = { "none", "gun", "wave", "scheduled", "gate" };
    return words[source];
}

static HwInstant
resolve(const HwStartTime *start, const HwInstant *crossing)
{
    return start->is_instant ? start->instant
                             : hw_instant_latest_time_of_day(crossing, start->time_of_day_ns);
}

/* The rider's own start, if the start list has one. */
static bool
own_start(const HwRider *rider, const HwInstant *crossing, HwElapsed *elapsed)
{
    if (rider == NULL || (!rider->start.known && !rider->start_actual.known))
        return false;
    elapsed->source = rider->start_actual.known ? HW_START_GATE : HW_START_SCHEDULED;
    elapsed->start = resolve(rider->start_actual.known ? &rider->start_actual : &rider->start, crossing);
    if (rider->start.known && rider->start_actual.known) {
        HwInstant scheduled = resolve(&rider->start, crossing);
        int64_t late_ns;
        if (!hw_instant_difference(&elapsed->start, &scheduled, &late_ns) || late_ns < -HW_GATE_EARLY_NS ||
            late_ns > HW_GATE_LATE_NS) {
            elapsed->source = HW_START_SCHEDULED;
            elapsed->start = scheduled;
            elapsed->gate_refused = true;
        }
    }
    return true;
}

/* The wave of the category, else that of all. */
static bool
wave_start(const HwRace *race, const char *category, HwElapsed *elapsed)
{
    const HwWave *found = NULL;
    for (guint i = 0; race != NULL && i < race->waves->len; i++) {
        const HwWave *wave = &g_array_index(race->waves, HwWave, i);
        if (strcmp(wave->category, category) == 0) {
            found = wave;
            break;
        }
        if (strcmp(wave->category, "*") == 0)
            found = wave;
    }
    if (found == NULL)
        return false;
    elapsed->source = HW_START_WAVE;
    elapsed->start = found->instant;
    return true;
}

static HwInstant
later_of(HwInstant a, HwInstant b)
{
    return hw_instant_compare(&a, &b) >= 0 ? a : b;
}

static HwInstant
earlier_of(HwInstant a, HwInstant b)
{
    return hw_instant_compare(&a, &b) <= 0 ? a : b;
}

/* How much of the neutralised stretches lies between start and crossing. */
static bool
neutralised_between(const HwRace *race, const HwInstant *start, const HwInstant *crossing, int64_t *ns)
{
    *ns = 0;
    for (guint i = 0; race != NULL && i < race->neutralised->len; i++) {
        const HwNeutralised *stretch = &g_array_index(race->neutralised, HwNeutralised, i);
        HwInstant from = later_of(stretch->from, *start);
        HwInstant to = earlier_of(stretch->to, *crossing);
        int64_t overlap_ns;
        if (hw_instant_compare(&to, &from) <= 0)
            continue;
        if (!hw_instant_difference(&to, &from, &overlap_ns))
            return false;
        *ns += overlap_ns;
    }
    return true;
}

bool
hw_elapsed_make(const HwInstant *epoch, int64_t crossing_ns, const HwRider *rider, const char *category,
                const HwRace *race, const HwInstant *gun, HwElapsed *elapsed)
{
    HwInstant crossing = hw_instant_plus(epoch, crossing_ns);
    HwElapsed made = { .source = HW_START_NONE, .start = *epoch };
    if (!own_start(rider, &crossing, &made) && !wave_start(race, category, &made) && gun != NULL) {
        made.source = HW_START_GUN;
        made.start = *gun;
    }
    int64_t since_start_ns;
    if (!hw_instant_difference(&crossing, &made.start, &since_start_ns))
        return false;
    if (made.source != HW_START_NONE &&
        !neutralised_between(race, &made.start, &crossing, &made.neutralised_ns))
        return false;
    made.elapsed_ns = since_start_ns - made.neutralised_ns;
    *elapsed = made;
    return true;
}
