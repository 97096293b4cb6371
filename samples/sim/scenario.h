/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * What is to be simulated: the camera, the place, the race, the riders and when each is to cross, read from a
 * small text file. Own it with sim_scenario_free. Errors are one sentence with file and line.
 */
#pragma once

#include "samples/sim/rider.h"

#include <glib.h>
#include <stdint.h>

enum { SIM_PASSAGES_MAX = 8 };

typedef struct {
    char *name, *kind;
    int laps_to_go; /* -1: not said */
} SimPassage;

typedef struct {
    char *bib, *name, *team, *nation, *category, *uci_id, *status, *start, *start_actual;
    double at_s[SIM_PASSAGES_MAX]; /* true crossing of each passage from the epoch; NAN = none */
    int crossings;
    double lateral_m, speed_mps, power_w, rider_kg, bike_kg;
    double throw_m, throw_start_s, throw_duration_s;
    double cda_m2;
    SimRider look;
} SimEntry;

typedef struct {
    char *name;
    SimColour first, second, shorts;
} SimTeam;

typedef struct {
    double at_s;
    int scans;
    gboolean hidden;
} SimDrop;

typedef enum {
    SIM_DAMAGE_CUT,
    SIM_DAMAGE_MISSING,
    SIM_DAMAGE_ALTERED,
} SimDamageKind;

typedef struct {
    SimDamageKind kind;
    int block;
} SimDamage;

typedef enum {
    SIM_FORMAT_JPEG,
    SIM_FORMAT_PNG,
} SimFormat;

typedef enum {
    SIM_STAMP_START,
    SIM_STAMP_MIDDLE,
    SIM_STAMP_END,
} SimStamp;

typedef struct {
    char *name; /* of the file, without folder and ending */
    char *title, *epoch, *camera;
    gboolean travel_right, later_left;
    char *rate_text;
    double rate_hz, rate_off_ppm, exposure_us, slit_mm, lens_mm;
    SimStamp stamp;
    char *transfer; /* srgb or linear */
    SimFormat format;
    gboolean grey;
    int bits, quality, rows, block_columns;
    gboolean stamps_listed; /* a times file a block */
    GArray *windows;        /* pairs of double, s; empty: around every crossing */
    double around_s;
    GArray *drops, *damages;
    uint64_t seed;
    double well_electrons, read_electrons, gain;

    double camera_height_m, distance_m, road_m, bottom_m, focal_rows;
    double x0_mm, yaw_deg, lean_deg, roll_deg;
    double sun_along, sun_across;
    int lamp_from, lamp_to;
    double lamp_first_s, lamp_period_s, lamp_width_s;
    gboolean indoors;

    char *event;
    double distance_km;
    GPtrArray *starts;    /* "category instant" */
    GPtrArray *officials; /* "role: name" */
    SimPassage passage[SIM_PASSAGES_MAX];
    int passages;
    gboolean rear_markers;
    GArray *teams;   /* SimTeam */
    GArray *entries; /* SimEntry */
} SimScenario;

/* NULL and an error where the file can't be read or says something that can't be. */
SimScenario *sim_scenario_load(const char *path, GError **error);
void sim_scenario_free(SimScenario *s);
/* The keys, for --help. */
const char *sim_scenario_help(void);
GQuark sim_error_quark(void);
