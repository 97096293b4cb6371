/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "samples/sim/scenario_reader.h"

#include "samples/sim/random.h"

#include <math.h>
#include <string.h>

void
sim_entry_clear(SimEntry *e)
{
    char *texts[] = { e->bib,    e->name,   e->team,  e->nation,      e->category,
                      e->uci_id, e->status, e->start, e->start_actual };
    for (guint i = 0; i < G_N_ELEMENTS(texts); i++)
        g_free(texts[i]);
}

static const SimColour SKIN[] = { { .58f, .34f, .25f },
                                  { .50f, .29f, .20f },
                                  { .42f, .23f, .15f },
                                  { .30f, .16f, .10f },
                                  { .13f, .065f, .042f } };

/* What the file doesn't say about a rider is drawn from the rider's own stream. */
static void
draw_rider(SimScenario *s, SimEntry *e)
{
    SimRandom rnd;
    sim_random_init(&rnd, s->seed, g_str_hash(e->bib) ^ g_str_hash(e->category) << 1);
    SimRider *l = &e->look;
    const SimTeam *team = NULL;
    for (guint i = 0; i < s->teams->len; i++)
        if (strcmp(g_array_index(s->teams, SimTeam, i).name, e->team) == 0)
            team = &g_array_index(s->teams, SimTeam, i);
    SimColour grey = { .35f, .35f, .36f };
    SimColour first = team != NULL ? team->first : grey, second = team != NULL ? team->second : grey;
    SimColour shorts = team != NULL ? team->shorts : (SimColour){ .03f, .03f, .03f };
    e->lateral_m = sim_random_between(&rnd, 1.5, s->road_m - 1.2);
    e->speed_mps = sim_random_between(&rnd, 16.5, 18.2);
    e->rider_kg = sim_random_between(&rnd, 64, 82);
    e->bike_kg = sim_random_between(&rnd, 6.9, 7.9);
    e->power_w = sim_random_between(&rnd, 850, 1250);
    e->cda_m2 = sim_random_between(&rnd, .24, .31);
    e->throw_start_s = -.15;
    e->throw_duration_s = .2;
    l->seed = sim_random_next(&rnd);
    l->size = sim_random_between(&rnd, .94, 1.05);
    l->development_m = sim_random_between(&rnd, 8.2, 9.6);
    l->crank_start_rad = sim_random_between(&rnd, 0, 2 * M_PI);
    l->wheel_start_rad = sim_random_between(&rnd, 0, 2 * M_PI);
    l->head_turn = sim_random_between(&rnd, -.8, .9);
    double posture = sim_random_between(&rnd, 0, 1);
    l->posture = posture < .42 ? SIM_POSTURE_SPRINT : posture < .80 ? SIM_POSTURE_SEATED : SIM_POSTURE_HOODS;
    l->jersey = first;
    l->jersey_band = second;
    l->sleeve = sim_random_between(&rnd, 0, 1) < .7 ? second : first;
    l->band_from = .30f;
    l->band_to = .62f;
    l->shorts = shorts;
    l->shorts_band = first;
    l->skin = SKIN[sim_random_next(&rnd) % G_N_ELEMENTS(SKIN)];
    static const SimColour LIGHT_DARK[] = { { .78f, .78f, .76f },
                                            { .03f, .03f, .03f },
                                            { .70f, .70f, .72f } };
    l->sock = LIGHT_DARK[sim_random_next(&rnd) % 3];
    static const SimColour SHOES[] = {
        { .75f, .75f, .75f }, { .025f, .025f, .025f }, { .55f, .04f, .03f }, { .78f, .78f, .74f }
    };
    l->shoe = SHOES[sim_random_next(&rnd) % 4];
    l->helmet = sim_random_between(&rnd, 0, 1) < .6 ? first : second;
    l->number_on_back = l->number_on_frame = true;
    l->read_backwards = s->travel_right;
    g_strlcpy(l->bib, e->bib, sizeof l->bib);

    SimBicycle *b = &l->bicycle;
    b->diameter_m = sim_random_between(&rnd, .666, .674);
    b->wheelbase_m = sim_random_between(&rnd, .975, 1.005) + .02 * (l->size - 1);
    b->saddle_m = .735 * l->size;
    b->rim_m = sim_random_between(&rnd, .028, .062);
    b->front_spokes = 18;
    b->rear_spokes = 22;
    b->drive_near = s->travel_right;
    b->track = s->indoors;
    static const SimColour FRAMES[] = { { .02f, .02f, .022f },
                                        { .55f, .04f, .03f },
                                        { .70f, .70f, .70f },
                                        { .03f, .10f, .30f },
                                        { .03f, .03f, .03f } };
    b->frame = sim_random_between(&rnd, 0, 1) < .5 ? first : FRAMES[sim_random_next(&rnd) % 5];
    b->frame_band = second;
    b->rim = (SimColour){ .024f, .024f, .026f };
    b->bar_tape =
        sim_random_between(&rnd, 0, 1) < .7 ? (SimColour){ .02f, .02f, .02f } : (SimColour){ .7f, .7f, .7f };
    b->bottle = sim_random_between(&rnd, 0, 1) < .5 ? (SimColour){ .7f, .7f, .68f } : second;
    b->seed = l->seed;
}

static gboolean
read_crossings(SimReader *r, SimEntry *e, const char *value, GError **error)
{
    g_auto(GStrv) w = g_strsplit(value, ",", -1);
    e->crossings = 0;
    for (int i = 0; w[i] != NULL; i++) {
        if (i == SIM_PASSAGES_MAX)
            return sim_reader_refuse(r, error, "rider %s has more than %d crossings; leave some out.", e->bib,
                                     SIM_PASSAGES_MAX);
        e->at_s[e->crossings] = NAN;
        if (strcmp(w[i], "-") != 0 && !sim_reader_number(r, w[i], 0, 1e6, &e->at_s[e->crossings], error))
            return FALSE;
        e->crossings++;
    }
    return TRUE;
}

static gboolean
read_throw(SimReader *r, SimEntry *e, const char *value, GError **error)
{
    g_auto(GStrv) w = g_strsplit_set(value, "@/", -1);
    if (g_strv_length(w) != 3)
        return sim_reader_refuse(r, error, "a throw is METRES@START/DURATION.");
    return sim_reader_number(r, w[0], 0, 1, &e->throw_m, error) &&
           sim_reader_number(r, w[1], -3, 3, &e->throw_start_s, error) &&
           sim_reader_number(r, w[2], 0.01, 3, &e->throw_duration_s, error);
}

static gboolean
read_option(SimReader *r, SimEntry *e, const char *key, const char *value, GError **error)
{
    static const char *const POSTURES[] = { "sprint", "seated", "hoods", "extended", NULL };
    int which = 0;
    if (strcmp(key, "at") == 0)
        return read_crossings(r, e, value, error);
    if (strcmp(key, "throw") == 0)
        return read_throw(r, e, value, error);
    if (strcmp(key, "y") == 0)
        return sim_reader_number(r, value, 0, 50, &e->lateral_m, error);
    if (strcmp(key, "v") == 0)
        return sim_reader_number(r, value, 1.5, 30, &e->speed_mps, error);
    if (strcmp(key, "p") == 0)
        return sim_reader_number(r, value, 0, 3000, &e->power_w, error);
    if (strcmp(key, "kg") == 0)
        return sim_reader_number(r, value, 30, 150, &e->rider_kg, error);
    if (strcmp(key, "bike") == 0)
        return sim_reader_number(r, value, 5, 20, &e->bike_kg, error);
    if (strcmp(key, "cda") == 0)
        return sim_reader_number(r, value, .1, .6, &e->cda_m2, error);
    if (strcmp(key, "d") == 0)
        return sim_reader_number(r, value, .5, .75, &e->look.bicycle.diameter_m, error);
    if (strcmp(key, "posture") == 0) {
        if (!sim_reader_one_of(r, value, POSTURES, &which, error))
            return FALSE;
        e->look.posture = (SimPosture)which;
        e->look.bicycle.time_trial = e->look.bicycle.disc_wheel = which == SIM_POSTURE_EXTENDED;
        if (which == SIM_POSTURE_EXTENDED)
            e->look.bicycle.rim_m = .075;
        return TRUE;
    }
    char **place = strcmp(key, "start") == 0     ? &e->start
                   : strcmp(key, "started") == 0 ? &e->start_actual
                   : strcmp(key, "status") == 0  ? &e->status
                   : strcmp(key, "uci") == 0     ? &e->uci_id
                                                 : NULL;
    if (place == NULL)
        return sim_reader_refuse(r, error, "a rider has no option \"%s\"; --help lists them.", key);
    g_free(*place);
    *place = g_strdup(value);
    return TRUE;
}

gboolean
sim_reader_rider(SimReader *r, const char *text, GError **error)
{
    g_auto(GStrv) f = sim_reader_fields(text);
    if (g_strv_length(f) < 5)
        return sim_reader_refuse(r, error, "a rider is BIB | NAME | TEAM | NATION | CATEGORY | options.");
    SimEntry e = { .bib = g_strdup(f[0]),
                   .name = g_strdup(f[1]),
                   .team = g_strdup(f[2]),
                   .nation = g_strdup(f[3]),
                   .category = g_strdup(f[4]) };
    draw_rider(r->s, &e);
    gboolean ok = TRUE;
    g_auto(GStrv) w = sim_reader_words(f[5] != NULL ? f[5] : "");
    for (int i = 0; ok && w[i] != NULL; i++) {
        char *equal = strchr(w[i], '=');
        if (equal == NULL)
            ok = sim_reader_refuse(r, error, "\"%s\" is no option=value.", w[i]);
        else {
            *equal = '\0';
            ok = read_option(r, &e, w[i], equal + 1, error);
        }
    }
    if (!ok) {
        sim_entry_clear(&e);
        return FALSE;
    }
    g_array_append_val(r->s->entries, e);
    return TRUE;
}
