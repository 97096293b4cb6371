/* SPDX-License-Identifier: GPL-3.0-or-later */
/* From what instant a rider's time counts, and how much of it is taken off. */
#pragma once

#include "core/ruling/race.h"
#include "core/ruling/start_list.h"

#include <stdbool.h>
#include <stdint.h>

typedef enum {
    HW_START_NONE,      /* no start known: times count from the epoch and are no race times */
    HW_START_GUN,       /* one instant for all, given by hand */
    HW_START_WAVE,      /* of the category, or "*" */
    HW_START_SCHEDULED, /* the rider's own, from the start list */
    HW_START_GATE       /* the rider's own, as the gate took it */
} HwStartSource;

/* "none", "gun", "wave", "scheduled", "gate": as in files. */
const char *hw_start_source_get_word(HwStartSource source);

/* The gate's time counts where it is at most this much early or late (UCI 2.4.013: slightly before zero,
 * within 5 s after; how much "slightly" is, is our reading). */
#define HW_GATE_EARLY_NS (1 * INT64_C(1000000000))
#define HW_GATE_LATE_NS (5 * INT64_C(1000000000))

typedef struct {
    HwStartSource source;
    bool gate_refused;      /* the gate's time was outside its limits, the scheduled one counts */
    HwInstant start;        /* where source is not NONE */
    int64_t neutralised_ns; /* taken off */
    int64_t elapsed_ns;     /* crossing − start − neutralised; from the epoch where source is NONE */
} HwElapsed;

/* A rider's own start wins over the wave of the category, that over the wave "*", that over `gun`. rider,
 * race, gun may be NULL; `category` is the rider's. False where the difference does not fit (then *elapsed is
 * untouched). */
bool hw_elapsed_make(const HwInstant *epoch, int64_t crossing_ns, const HwRider *rider, const char *category,
                     const HwRace *race, const HwInstant *gun, HwElapsed *elapsed);
