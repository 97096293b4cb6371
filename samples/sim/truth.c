/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "samples/sim/truth.h"

#include <jansson.h>
#include <math.h>
#include <string.h>

static int
by_passage_and_time(gconstpointer a, gconstpointer b)
{
    const SimTruth *x = a, *y = b;
    if (x->crossing->passage != y->crossing->passage)
        return x->crossing->passage - y->crossing->passage;
    return x->front_s < y->front_s ? -1 : x->front_s > y->front_s;
}

/* Degrees of the front tyre's leading half that riders nearer the camera hide, read where it comes to the
 * slit. */
static double
hidden_arc(SimCamera *camera, const SimCrossing *c)
{
    double r = sim_rider_hub(&c->entry->look), hidden = 0;
    for (int i = 0; i < 180; i++) {
        double a = (i + .5 - 90) * M_PI / 180, u = r - (r - .002) * cos(a), h = r + (r - .002) * sin(a);
        hidden += sim_camera_hidden(camera, c, u, h, sim_crossing_read(camera, c, u, h));
    }
    return hidden;
}

GArray *
sim_truth_find(SimCamera *camera, const SimRecorder *recorder)
{
    const GArray *crossings = sim_camera_get_crossings(camera);
    GArray *truths = g_array_new(FALSE, TRUE, sizeof(SimTruth));
    for (guint i = 0; i < crossings->len; i++) {
        const SimCrossing *c = &g_array_index(crossings, SimCrossing, i);
        double hub = sim_rider_hub(&c->entry->look), length = sim_bicycle_length(&c->entry->look.bicycle);
        SimTruth t = { .crossing = c };
        t.front_s = c->at_s;
        t.rear_s = c->at_s + sim_motion_when(c->motion, length);
        t.front_seen = sim_recorder_column(recorder, sim_crossing_read(camera, c, 0, hub), &t.front_column);
        t.rear_seen =
            sim_recorder_column(recorder, sim_crossing_read(camera, c, length, hub), &t.rear_column);
        t.hub_row = sim_scene_row(sim_camera_get_scene(camera), c->entry->lateral_m, hub);
        t.speed_mps = sim_motion_speed(c->motion, sim_motion_when(c->motion, hub));
        t.hidden_deg = hidden_arc(camera, c);
        g_array_append_val(truths, t);
    }
    g_array_sort(truths, by_passage_and_time);
    for (guint i = 0; i < truths->len; i++) {
        SimTruth *t = &g_array_index(truths, SimTruth, i);
        const SimTruth *before = i > 0 ? t - 1 : NULL;
        t->order =
            before != NULL && before->crossing->passage == t->crossing->passage ? before->order + 1 : 1;
    }
    return truths;
}

/* Adds a field and what parts it from the former (RFC 4180). */
static void
add_field(GString *s, const char *text)
{
    if (s->len > 0 && s->str[s->len - 1] != '\n')
        g_string_append_c(s, ',');
    if (text != NULL && strpbrk(text, ",\"\n\r") != NULL) {
        g_auto(GStrv) parts = g_strsplit(text, "\"", -1);
        g_autofree char *doubled = g_strjoinv("\"\"", parts);
        g_string_append_printf(s, "\"%s\"", doubled);
    } else
        g_string_append(s, text != NULL ? text : "");
}

static void
add_number(GString *s, double v, int decimals)
{
    char format[16], text[G_ASCII_DTOSTR_BUF_SIZE];
    g_snprintf(format, sizeof format, "%%.%df", decimals);
    add_field(s, isnan(v) ? "" : g_ascii_formatd(text, sizeof text, format, v));
}

static void
add_ns(GString *s, double seconds)
{
    g_autofree char *text = g_strdup_printf("%" G_GINT64_FORMAT, (gint64)llrint(seconds * 1e9));
    add_field(s, text);
}

/* Whether a bib is worn in two categories, so that it does not tell the rider. */
static gboolean
shares_bibs(const SimScenario *sc)
{
    g_autoptr(GHashTable) seen = g_hash_table_new(g_str_hash, g_str_equal);
    for (guint i = 0; i < sc->entries->len; i++) {
        if (!g_hash_table_add(seen, g_array_index(sc->entries, SimEntry, i).bib))
            return TRUE;
    }
    return FALSE;
}

static void
add_marker(GString *s, const SimScenario *sc, const SimRecorder *recorder, const SimTruth *t, gboolean rear)
{
    const SimEntry *e = t->crossing->entry;
    double column = rear ? t->rear_column : t->front_column;
    double around = e->look.bicycle.diameter_m * sc->rate_hz / t->speed_mps;
    gboolean seen = rear ? t->rear_seen : t->front_seen;
    if (!seen || !sim_recorder_readable(recorder, rear ? column - around : fmax(column - 2, 0),
                                        rear ? column + 2 : column + around))
        return;
    add_field(s, e->bib);
    add_number(s, column, 9);
    add_number(s, t->hub_row, 4);
    add_field(s, rear ? "rear" : "front");
    add_ns(s, sim_recorder_stamped(recorder, column) * 1e-9);
    add_number(s, t->speed_mps, 4);
    add_field(s, "0.0001"); /* known to its last decimal */
    add_field(s, sc->passage[t->crossing->passage].name);
    add_field(s, sc->camera);
    add_field(s, "truth");
    add_field(s, "read");
    /* Who can see next to nothing of the wheel must infer it. */
    add_field(s, t->hidden_deg >= 170 ? "inferred" : "tyre");
    add_field(s, sim_recorder_get_identity(recorder));
    if (shares_bibs(sc))
        add_field(s, e->category);
    g_string_append_c(s, '\n');
}

static char *
markers_text(const SimScenario *sc, const SimRecorder *recorder, const GArray *truths)
{
    GString *s = g_string_new(
        "bib,column,row,edge,time_ns,speed_mps,u_speed_mps,passage,camera,reader,state,basis,recording");
    g_string_append(s, shares_bibs(sc) ? ",category\n" : "\n");
    for (guint i = 0; i < truths->len; i++) {
        const SimTruth *t = &g_array_index(truths, SimTruth, i);
        add_marker(s, sc, recorder, t, FALSE);
        if (sc->rear_markers)
            add_marker(s, sc, recorder, t, TRUE);
    }
    return g_string_free(s, FALSE);
}

static char *
start_list_text(const SimScenario *sc)
{
    GString *s = g_string_new("bib,name,team,nation,category,start,start_actual,diameter_m,status,uci_id\n");
    for (guint i = 0; i < sc->entries->len; i++) {
        const SimEntry *e = &g_array_index(sc->entries, SimEntry, i);
        const char *texts[] = { e->bib, e->name, e->team, e->nation, e->category, e->start, e->start_actual };
        for (guint j = 0; j < G_N_ELEMENTS(texts); j++)
            add_field(s, texts[j]);
        add_number(s, e->look.bicycle.diameter_m, 4);
        add_field(s, e->status);
        add_field(s, e->uci_id);
        g_string_append_c(s, '\n');
    }
    return g_string_free(s, FALSE);
}

static char *
truth_text(const SimScenario *sc, const SimRecorder *recorder, const GArray *truths)
{
    GString *s =
        g_string_new("bib,passage,order,front_ns,rear_ns,front_column,rear_column,front_stamped_ns,hub_row,"
                     "speed_mps,lateral_m,hidden_arc_deg,throw_gain_m\n");
    for (guint i = 0; i < truths->len; i++) {
        const SimTruth *t = &g_array_index(truths, SimTruth, i);
        const SimEntry *e = t->crossing->entry;
        add_field(s, e->bib);
        add_field(s, sc->passage[t->crossing->passage].name);
        add_number(s, t->order, 0);
        add_ns(s, t->front_s);
        add_ns(s, t->rear_s);
        add_number(s, t->front_seen ? t->front_column : NAN, 9);
        add_number(s, t->rear_seen ? t->rear_column : NAN, 9);
        if (t->front_seen)
            add_ns(s, sim_recorder_stamped(recorder, t->front_column) * 1e-9);
        else
            add_field(s, "");
        add_number(s, t->hub_row, 4);
        add_number(s, t->speed_mps, 6);
        add_number(s, e->lateral_m, 4);
        add_number(s, t->hidden_deg, 0);
        add_number(s, t->crossing->gain_m, 6);
        g_string_append_c(s, '\n');
    }
    return g_string_free(s, FALSE);
}

static char *
race_text(const SimScenario *sc, int passage)
{
    const SimPassage *p = &sc->passage[passage];
    json_t *place = json_pack("{s:s, s:s}", "name", p->name, "kind", p->kind);
    if (p->laps_to_go >= 0)
        json_object_set_new(place, "laps_to_go", json_integer(p->laps_to_go));
    json_t *starts = json_array(), *statuses = json_array(), *officials = json_array();
    for (guint i = 0; i < sc->starts->len; i++) {
        const char *text = g_ptr_array_index(sc->starts, i), *cut = strrchr(text, ' ');
        g_autofree char *category = g_strstrip(g_strndup(text, cut != NULL ? (gsize)(cut - text) : 0));
        json_array_append_new(
            starts, json_pack("{s:s, s:s}", "category", category, "instant", cut != NULL ? cut + 1 : text));
    }
    for (guint i = 0; i < sc->officials->len; i++) {
        g_auto(GStrv) f = g_strsplit(g_ptr_array_index(sc->officials, i), ":", 2);
        if (f[0] != NULL && f[1] != NULL)
            json_array_append_new(
                officials, json_pack("{s:s, s:s}", "role", g_strstrip(f[0]), "name", g_strstrip(f[1])));
    }
    json_t *root = json_pack("{s:i, s:s, s:o, s:o, s:o, s:o}", "halfwheel_race", 1, "event", sc->event,
                             "passage", place, "starts", starts, "status", statuses, "officials", officials);
    if (sc->distance_km > 0)
        json_object_set_new(root, "distance_km", json_real(sc->distance_km));
    char *text = json_dumps(root, JSON_INDENT(2) | JSON_REAL_PRECISION(12));
    char *line = g_strconcat(text, "\n", NULL);
    json_decref(root);
    free(text);
    return line;
}

static gboolean
write_text(const char *stem, const char *ending, char *text, GError **error)
{
    g_autofree char *path = g_strconcat(stem, ending, NULL);
    g_autofree char *owned = text;
    return g_file_set_contents(path, owned, -1, error);
}

gboolean
sim_truth_write(const SimScenario *s, const SimRecorder *recorder, const GArray *truths, const char *stem,
                GError **error)
{
    return write_text(stem, ".markers.csv", markers_text(s, recorder, truths), error) &&
           write_text(stem, ".startlist.csv", start_list_text(s), error) &&
           write_text(stem, ".race.json", race_text(s, s->passages - 1), error) &&
           write_text(stem, ".truth.csv", truth_text(s, recorder, truths), error);
}
