/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "samples/sim/scenario_reader.h"

#include <math.h>
#include <string.h>

G_DEFINE_QUARK(halfwheel - sim - error, sim_error)

typedef enum {
    KEY_TEXT,
    KEY_NUMBER,
    KEY_COUNT,
    KEY_YES,
} KeyKind;

typedef struct {
    const char *section, *name;
    KeyKind kind;
    size_t offset;
    double low, high;
    const char *what;
} Key;

#define AT(field) offsetof(SimScenario, field)
static const Key KEYS[] = {
    { "recording", "title", KEY_TEXT, AT(title), 0, 0, "what the recording is called" },
    { "recording", "epoch", KEY_TEXT, AT(epoch), 0, 0, "RFC 3339 instant of time 0" },
    { "recording", "camera", KEY_TEXT, AT(camera), 0, 0, "letter of the camera" },
    { "recording", "rate_hz", KEY_TEXT, AT(rate_text), 0, 0, "nominal scan rate" },
    { "recording", "rate_off_ppm", KEY_NUMBER, AT(rate_off_ppm), -1e5, 1e5,
      "how much faster the camera truly scans" },
    { "recording", "exposure_us", KEY_NUMBER, AT(exposure_us), 0.001, 1e6, "exposure of a scan" },
    { "recording", "slit_mm", KEY_NUMBER, AT(slit_mm), 0, 100,
      "footprint of the slit along the travel, middle of the road" },
    { "recording", "lens_mm", KEY_NUMBER, AT(lens_mm), 0, 50, "blur of the lens, one standard deviation" },
    { "recording", "transfer", KEY_TEXT, AT(transfer), 0, 0, "srgb or linear" },
    { "recording", "grey", KEY_YES, AT(grey), 0, 0, "no colour" },
    { "recording", "bits", KEY_COUNT, AT(bits), 8, 16, "8 or 16 (PNG)" },
    { "recording", "quality", KEY_COUNT, AT(quality), 1, 100, "of JPEG" },
    { "recording", "rows", KEY_COUNT, AT(rows), 8, 8192, "height of the picture" },
    { "recording", "block_columns", KEY_COUNT, AT(block_columns), 2, 65000, "scans a block" },
    { "recording", "stamps_listed", KEY_YES, AT(stamps_listed), 0, 0,
      "a file of stamps a block instead of first and last" },
    { "recording", "around_s", KEY_NUMBER, AT(around_s), 0.01, 60,
      "without record: so much around each crossing" },
    { "recording", "well_electrons", KEY_NUMBER, AT(well_electrons), 0, 1e9,
      "signal of white: shot noise; 0 = no noise" },
    { "recording", "read_electrons", KEY_NUMBER, AT(read_electrons), 0, 1e6, "read noise" },
    { "recording", "gain", KEY_NUMBER, AT(gain), 0.01, 100, "brightness" },
    { "scene", "camera_height_m", KEY_NUMBER, AT(camera_height_m), 0.2, 50, "above the road" },
    { "scene", "distance_m", KEY_NUMBER, AT(distance_m), 0.5, 200,
      "from the camera to the road's near edge" },
    { "scene", "road_m", KEY_NUMBER, AT(road_m), 1, 50, "width of the road" },
    { "scene", "bottom_m", KEY_NUMBER, AT(bottom_m), -20, 40,
      "the lowest row sees the road so far beyond its near edge" },
    { "scene", "focal_rows", KEY_NUMBER, AT(focal_rows), 10, 1e6, "focal length in rows" },
    { "scene", "x0_mm", KEY_NUMBER, AT(x0_mm), -1000, 1000, "slit beyond the line's plane at the near edge" },
    { "scene", "yaw_deg", KEY_NUMBER, AT(yaw_deg), -20, 20, "slit turned about the upright" },
    { "scene", "lean_deg", KEY_NUMBER, AT(lean_deg), -20, 20, "slit leaning forward with height" },
    { "scene", "roll_deg", KEY_NUMBER, AT(roll_deg), -20, 20, "camera rolled about its own axis" },
    { "scene", "sun_along", KEY_NUMBER, AT(sun_along), -3, 3, "shadow forward of the rider, per height" },
    { "scene", "sun_across", KEY_NUMBER, AT(sun_across), -3, 3,
      "shadow away from the camera, per height; 0 = no sun" },
    { "scene", "indoors", KEY_YES, AT(indoors), 0, 0, "a track hall instead of a street" },
    { "scene", "lamp_from", KEY_COUNT, AT(lamp_from), 0, 8192, "first row of the reference lamp" },
    { "scene", "lamp_to", KEY_COUNT, AT(lamp_to), 0, 8192, "row after its last" },
    { "scene", "lamp_first_s", KEY_NUMBER, AT(lamp_first_s), -1e6, 1e6, "true time of a flash" },
    { "scene", "lamp_period_s", KEY_NUMBER, AT(lamp_period_s), 0.001, 1e6, "true time between flashes" },
    { "scene", "lamp_width_s", KEY_NUMBER, AT(lamp_width_s), 1e-6, 10, "length of a flash" },
    { "race", "event", KEY_TEXT, AT(event), 0, 0, "name of the event" },
    { "race", "distance_km", KEY_NUMBER, AT(distance_km), 0, 10000, "length of the race" },
    { "race", "rear_markers", KEY_YES, AT(rear_markers), 0, 0, "markers of rear wheels too" },
};

static const char OTHER_KEYS[] =
    "  [recording] travel, later   left or right\n"
    "  [recording] stamp           start, middle or end\n"
    "  [recording] format          jpeg or png\n"
    "  [recording] record          FROM TO in seconds; may stand several times\n"
    "  [recording] seed            whole number\n"
    "  [recording] drop            honest|hidden SECOND SCANS; may stand several times\n"
    "  [recording] damage          cut|missing|altered BLOCK; may stand several times\n"
    "  [race] passage              NAME | KIND | LAPS TO GO; may stand several times, in the order of the "
    "crossings\n"
    "  [race] start                CATEGORY or *, then the instant; may stand several times\n"
    "  [race] official             ROLE: NAME; may stand several times\n"
    "  [teams]                     NAME = #first #second #shorts\n"
    "  [riders]                    BIB | NAME | TEAM | NATION | CATEGORY | option=value ...\n"
    "    at=S[,S ...] (- where a passage was not ridden), y=M across the road, v=M/S three seconds before "
    "the line,\n"
    "    p=W, kg=KG, bike=KG, cda=M2, throw=METRES@START/DURATION, posture=sprint|seated|hoods|extended, "
    "d=METRES of the wheels,\n"
    "    start=INSTANT, started=INSTANT, status=DNF, uci=ID\n"
    "  [bunch]                     COUNT | FIRST BIB | FROM S | TO S | CATEGORY: drawn riders, names from "
    "[given] and [family]\n";

const char *
sim_scenario_help(void)
{
    static char *text;
    if (text == NULL) {
        GString *s = g_string_new("Scenario files: key = value under [sections]; # begins a comment.\n");
        for (guint i = 0; i < G_N_ELEMENTS(KEYS); i++)
            g_string_append_printf(s, "  [%s] %-18s %s\n", KEYS[i].section, KEYS[i].name, KEYS[i].what);
        g_string_append(s, OTHER_KEYS);
        text = g_string_free(s, FALSE);
    }
    return text;
}

static void
fill_defaults(SimScenario *s)
{
    s->camera = g_strdup("A");
    s->rate_text = g_strdup("2000");
    s->transfer = g_strdup("srgb");
    s->exposure_us = 400;
    s->slit_mm = 5;
    s->lens_mm = 1.5;
    s->bits = 8;
    s->quality = 88;
    s->rows = 480;
    s->block_columns = 1024;
    s->around_s = 0.6;
    s->seed = 1;
    s->well_electrons = 6000;
    s->read_electrons = 12;
    s->gain = 1;
    s->camera_height_m = 2.6;
    s->distance_m = 7;
    s->road_m = 7;
    s->bottom_m = 1;
    s->focal_rows = 1850;
    s->sun_along = 0.25;
    s->sun_across = 0.35;
    s->windows = g_array_new(FALSE, FALSE, sizeof(double));
    s->drops = g_array_new(FALSE, FALSE, sizeof(SimDrop));
    s->damages = g_array_new(FALSE, FALSE, sizeof(SimDamage));
    s->starts = g_ptr_array_new_with_free_func(g_free);
    s->officials = g_ptr_array_new_with_free_func(g_free);
    s->teams = g_array_new(FALSE, TRUE, sizeof(SimTeam));
    s->entries = g_array_new(FALSE, TRUE, sizeof(SimEntry));
}

void
sim_scenario_free(SimScenario *s)
{
    if (s == NULL)
        return;
    char *texts[] = { s->name, s->title, s->epoch, s->camera, s->rate_text, s->transfer, s->event };
    for (guint i = 0; i < G_N_ELEMENTS(texts); i++)
        g_free(texts[i]);
    for (guint i = 0; i < s->entries->len; i++)
        sim_entry_clear(&g_array_index(s->entries, SimEntry, i));
    for (guint i = 0; i < s->teams->len; i++)
        g_free(g_array_index(s->teams, SimTeam, i).name);
    for (int i = 0; i < s->passages; i++) {
        g_free(s->passage[i].name);
        g_free(s->passage[i].kind);
    }
    g_array_unref(s->windows);
    g_array_unref(s->drops);
    g_array_unref(s->damages);
    g_array_unref(s->teams);
    g_array_unref(s->entries);
    g_ptr_array_unref(s->starts);
    g_ptr_array_unref(s->officials);
    g_free(s);
}

static float
linear_of(int code)
{
    double c = code / 255.0;
    return (float)(c <= 0.04045 ? c / 12.92 : pow((c + 0.055) / 1.055, 2.4));
}

static gboolean
colour_of(SimReader *r, const char *text, SimColour *c, GError **error)
{
    char *end = NULL;
    guint64 v = text[0] == '#' ? g_ascii_strtoull(text + 1, &end, 16) : 0;
    if (text[0] != '#' || strlen(text) != 7 || *end != '\0')
        return sim_reader_refuse(r, error, "\"%s\" is no colour; write it as #rrggbb.", text);
    *c = (SimColour){ linear_of((int)(v >> 16 & 255)), linear_of((int)(v >> 8 & 255)),
                      linear_of((int)(v & 255)) };
    return TRUE;
}

static gboolean
read_plain(SimReader *r, const Key *k, const char *value, GError **error)
{
    char *base = (char *)r->s + k->offset;
    double v = 0;
    int which = 0;
    static const char *const YES[] = { "no", "yes", NULL };
    switch (k->kind) {
    case KEY_TEXT:
        g_free(*(char **)(void *)base);
        *(char **)(void *)base = g_strdup(value);
        return TRUE;
    case KEY_NUMBER:
        return sim_reader_number(r, value, k->low, k->high, (double *)(void *)base, error);
    case KEY_COUNT:
        if (!sim_reader_number(r, value, k->low, k->high, &v, error))
            return FALSE;
        *(int *)(void *)base = (int)v;
        return TRUE;
    case KEY_YES:
        if (!sim_reader_one_of(r, value, YES, &which, error))
            return FALSE;
        *(gboolean *)(void *)base = which;
        return TRUE;
    }
    return FALSE;
}

static gboolean
read_drop(SimReader *r, const char *value, GError **error)
{
    static const char *const KINDS[] = { "honest", "hidden", NULL };
    g_auto(GStrv) w = sim_reader_words(value);
    int kind = 0;
    double at = 0, scans = 0;
    if (g_strv_length(w) != 3)
        return sim_reader_refuse(r, error, "a drop is honest or hidden, its second and its number of scans.");
    if (!sim_reader_one_of(r, w[0], KINDS, &kind, error) || !sim_reader_number(r, w[1], 0, 1e6, &at, error) ||
        !sim_reader_number(r, w[2], 1, 1e6, &scans, error))
        return FALSE;
    SimDrop d = { at, (int)scans, kind == 1 };
    g_array_append_val(r->s->drops, d);
    return TRUE;
}

static gboolean
read_damage(SimReader *r, const char *value, GError **error)
{
    static const char *const KINDS[] = { "cut", "missing", "altered", NULL };
    g_auto(GStrv) w = sim_reader_words(value);
    int kind = 0;
    double block = 0;
    if (g_strv_length(w) != 2)
        return sim_reader_refuse(r, error,
                                 "a damage is cut, missing or altered, and the number of its block.");
    if (!sim_reader_one_of(r, w[0], KINDS, &kind, error) ||
        !sim_reader_number(r, w[1], 0, 1e6, &block, error))
        return FALSE;
    SimDamage d = { (SimDamageKind)kind, (int)block };
    g_array_append_val(r->s->damages, d);
    return TRUE;
}

static gboolean
read_passage(SimReader *r, const char *value, GError **error)
{
    g_auto(GStrv) f = sim_reader_fields(value);
    double laps = -1;
    if (g_strv_length(f) < 2 || r->s->passages == SIM_PASSAGES_MAX)
        return sim_reader_refuse(r, error, "a passage is NAME | KIND | LAPS TO GO, at most %d of them.",
                                 SIM_PASSAGES_MAX);
    if (f[2] != NULL && !sim_reader_number(r, f[2], 0, 1000, &laps, error))
        return FALSE;
    r->s->passage[r->s->passages++] = (SimPassage){ g_strdup(f[0]), g_strdup(f[1]), (int)laps };
    return TRUE;
}

static gboolean
read_key(SimReader *r, const char *section, const char *key, const char *value, GError **error)
{
    static const char *const SIDES[] = { "left", "right", NULL };
    static const char *const STAMPS[] = { "start", "middle", "end", NULL };
    static const char *const FORMATS[] = { "jpeg", "png", NULL };
    SimScenario *s = r->s;
    int which = 0;
    for (guint i = 0; i < G_N_ELEMENTS(KEYS); i++)
        if (strcmp(section, KEYS[i].section) == 0 && strcmp(key, KEYS[i].name) == 0)
            return read_plain(r, &KEYS[i], value, error);
    g_autofree char *full = g_strconcat(section, ".", key, NULL);
    if (strcmp(full, "recording.travel") == 0)
        return sim_reader_one_of(r, value, SIDES, &s->travel_right, error);
    if (strcmp(full, "recording.later") == 0) {
        gboolean ok = sim_reader_one_of(r, value, SIDES, &which, error);
        s->later_left = which == 0;
        return ok;
    }
    if (strcmp(full, "recording.stamp") == 0) {
        gboolean ok = sim_reader_one_of(r, value, STAMPS, &which, error);
        s->stamp = (SimStamp)which;
        return ok;
    }
    if (strcmp(full, "recording.format") == 0) {
        gboolean ok = sim_reader_one_of(r, value, FORMATS, &which, error);
        s->format = (SimFormat)which;
        return ok;
    }
    if (strcmp(full, "recording.seed") == 0) {
        double v = 0;
        gboolean ok = sim_reader_number(r, value, 0, 4294967295.0, &v, error);
        s->seed = (uint64_t)v;
        return ok;
    }
    if (strcmp(full, "recording.record") == 0) {
        g_auto(GStrv) w = sim_reader_words(value);
        double from = 0, to = 0;
        if (g_strv_length(w) != 2)
            return sim_reader_refuse(r, error, "record takes two numbers, from and to in seconds.");
        if (!sim_reader_number(r, w[0], 0, 1e6, &from, error) ||
            !sim_reader_number(r, w[1], from, 1e6, &to, error))
            return FALSE;
        g_array_append_val(s->windows, from);
        g_array_append_val(s->windows, to);
        return TRUE;
    }
    if (strcmp(full, "recording.drop") == 0)
        return read_drop(r, value, error);
    if (strcmp(full, "recording.damage") == 0)
        return read_damage(r, value, error);
    if (strcmp(full, "race.passage") == 0)
        return read_passage(r, value, error);
    if (strcmp(full, "race.start") == 0 || strcmp(full, "race.official") == 0) {
        g_ptr_array_add(strcmp(key, "start") == 0 ? s->starts : s->officials, g_strdup(value));
        return TRUE;
    }
    if (strcmp(section, "teams") == 0) {
        g_auto(GStrv) w = sim_reader_words(value);
        SimTeam t = { 0 };
        if (g_strv_length(w) != 3)
            return sim_reader_refuse(r, error, "a team has three colours: jersey, band, shorts.");
        if (!colour_of(r, w[0], &t.first, error) || !colour_of(r, w[1], &t.second, error) ||
            !colour_of(r, w[2], &t.shorts, error))
            return FALSE;
        t.name = g_strdup(key);
        g_array_append_val(s->teams, t);
        return TRUE;
    }
    return sim_reader_refuse(r, error, "there is no key \"%s\" under [%s]; --help lists them.", key, section);
}

static gboolean
read_line(SimReader *r, char **section, char *line, GError **error)
{
    g_strstrip(line);
    size_t n = strlen(line);
    if (n == 0 || line[0] == '#')
        return TRUE;
    if (line[0] == '[') {
        if (line[n - 1] != ']')
            return sim_reader_refuse(r, error, "a section is written [name].");
        g_free(*section);
        *section = g_strndup(line + 1, n - 2);
        return TRUE;
    }
    if (strcmp(*section, "riders") == 0)
        return sim_reader_rider(r, line, error);
    GPtrArray *list = strcmp(*section, "given") == 0    ? r->given
                      : strcmp(*section, "family") == 0 ? r->family
                      : strcmp(*section, "bunch") == 0  ? r->bunches
                                                        : NULL;
    if (list != NULL) {
        g_ptr_array_add(list, g_strdup(line));
        return TRUE;
    }
    char *equal = strchr(line, '=');
    if (equal == NULL)
        return sim_reader_refuse(r, error, "\"%s\" is no key = value.", line);
    *equal = '\0';
    g_strstrip(line);
    g_strstrip(equal + 1);
    return read_key(r, *section, line, equal + 1, error);
}

static gboolean
check(SimReader *r, GError **error)
{
    SimScenario *s = r->s;
    r->line = 0;
    if (s->title == NULL || s->epoch == NULL)
        return sim_reader_refuse(r, error, "the scenario needs a title and an epoch.");
    if (!sim_reader_number(r, s->rate_text, 1, 1e6, &s->rate_hz, error))
        return FALSE;
    if (s->exposure_us * s->rate_hz > 1e6 * (1 + 1e-9))
        return sim_reader_refuse(r, error, "an exposure of %g microseconds is longer than a scan at %g Hz.",
                                 s->exposure_us, s->rate_hz);
    if (strcmp(s->transfer, "srgb") != 0 && strcmp(s->transfer, "linear") != 0)
        return sim_reader_refuse(r, error, "transfer is srgb or linear.");
    if (s->bits != 8 && s->bits != 16)
        return sim_reader_refuse(r, error, "bits is 8 or 16.");
    if (s->event == NULL)
        s->event = g_strdup(s->title);
    if (s->passages == 0)
        s->passage[s->passages++] = (SimPassage){ g_strdup("finish"), g_strdup("finish"), -1 };
    for (guint i = 0; i < s->entries->len; i++)
        if (g_array_index(s->entries, SimEntry, i).crossings > s->passages)
            return sim_reader_refuse(r, error, "rider %s has more crossings than there are passages.",
                                     g_array_index(s->entries, SimEntry, i).bib);
    return TRUE;
}

SimScenario *
sim_scenario_load(const char *path, GError **error)
{
    g_autofree char *text = NULL;
    if (!g_file_get_contents(path, &text, NULL, error))
        return NULL;
    SimScenario *s = g_new0(SimScenario, 1);
    fill_defaults(s);
    g_autofree char *base = g_path_get_basename(path);
    char *dot = strrchr(base, '.');
    s->name = g_strndup(base, dot != NULL ? (gsize)(dot - base) : strlen(base));
    SimReader r = { path,
                    0,
                    s,
                    g_ptr_array_new_with_free_func(g_free),
                    g_ptr_array_new_with_free_func(g_free),
                    g_ptr_array_new_with_free_func(g_free) };
    g_autofree char *section = g_strdup("");
    g_auto(GStrv) lines = g_strsplit(text, "\n", -1);
    gboolean ok = TRUE;
    for (int i = 0; ok && lines[i] != NULL; i++) {
        r.line = i + 1;
        ok = read_line(&r, &section, lines[i], error);
    }
    for (guint i = 0; ok && i < r.bunches->len; i++)
        ok = sim_reader_bunch(&r, g_ptr_array_index(r.bunches, i), error);
    ok = ok && check(&r, error);
    g_ptr_array_unref(r.given);
    g_ptr_array_unref(r.family);
    g_ptr_array_unref(r.bunches);
    if (!ok)
        g_clear_pointer(&s, sim_scenario_free);
    return s;
}
