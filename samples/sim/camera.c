/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "samples/sim/camera.h"

#include "samples/sim/kernel.h"
#include "samples/sim/random.h"

#include <math.h>
#include <string.h>

enum {
    SUBROWS = 4,
    PIECES_MAX = 24,
    ACTIVE_MAX = 64,
};
#define TALLEST_M 1.8

/* A rider before the slit during one exposure. */
typedef struct {
    const SimCrossing *crossing;
    double place_m;
    SimKernel kernel;
    SimShapeList pose;
    const SimShape *near[SIM_SHAPES_MAX]; /* those that this exposure can meet, nearest first */
    int near_count;
    const SimShape *shade[SIM_SHAPES_MAX]; /* those whose shadow it can meet */
    int shade_count;
} Active;

struct SimCamera {
    const SimScenario *scenario;
    SimScene scene;
    GArray *crossings;
    double *fall; /* of every subrow; likewise what stands still there */
    SimColour *still;
    double *ground_y;
    bool *moves;
    Active *active;
    int active_count;
    float *blurred;
    float *answer; /* of every row's cell, near 1 */
    double lens_rows;
};

static int
nearer(gconstpointer a, gconstpointer b)
{
    const SimCrossing *x = a, *y = b;
    return x->entry->lateral_m < y->entry->lateral_m ? -1 : x->entry->lateral_m > y->entry->lateral_m;
}

static void
add_crossings(SimCamera *k)
{
    const SimScenario *s = k->scenario;
    for (guint i = 0; i < s->entries->len; i++) {
        const SimEntry *e = &g_array_index(s->entries, SimEntry, i);
        for (int p = 0; p < e->crossings; p++) {
            if (isnan(e->at_s[p]))
                continue;
            SimBody body;
            sim_body_init(&body);
            body.power_w = e->power_w;
            body.rider_kg = e->rider_kg;
            body.bike_kg = e->bike_kg;
            body.cda_m2 = e->cda_m2;
            body.wheel_radius_m = e->look.bicycle.diameter_m / 2;
            SimThrow thrown = { e->throw_m, e->throw_start_s, e->throw_duration_s };
            SimCrossing c = { e, p, e->at_s[p], sim_motion_new(&body, &thrown, e->speed_mps, 3),
                              sim_throw_gain(&body, &thrown) };
            g_array_append_val(k->crossings, c);
        }
    }
    g_array_sort(k->crossings, nearer);
}

SimCamera *
sim_camera_new(const SimScenario *scenario)
{
    SimCamera *k = g_new0(SimCamera, 1);
    k->scenario = scenario;
    sim_scene_init(&k->scene, scenario);
    k->crossings = g_array_new(FALSE, FALSE, sizeof(SimCrossing));
    add_crossings(k);
    k->active = g_new0(Active, ACTIVE_MAX);
    k->fall = g_new(double, scenario->rows *SUBROWS);
    int subrows = scenario->rows * SUBROWS;
    k->still = g_new(SimColour, subrows);
    k->ground_y = g_new(double, subrows);
    k->moves = g_new(bool, subrows);
    for (int i = 0; i < subrows; i++) {
        k->fall[i] = sim_scene_fall(&k->scene, (i + 0.5) / SUBROWS);
        k->still[i] = sim_scene_background(&k->scene, k->fall[i], 0, &k->ground_y[i], &k->moves[i]);
    }
    double distance = scenario->distance_m + scenario->road_m / 2;
    k->lens_rows = scenario->lens_mm * 1e-3 * scenario->focal_rows / distance;
    k->blurred = g_new(float, scenario->rows * 3);
    k->answer = g_new(float, scenario->rows);
    SimRandom rnd;
    sim_random_init(&rnd, scenario->seed, 17);
    for (int i = 0; i < scenario->rows; i++)
        k->answer[i] = scenario->well_electrons > 0 ? (float)(1 + .006 * sim_random_normal(&rnd)) : 1;
    return k;
}

void
sim_camera_free(SimCamera *k)
{
    if (k == NULL)
        return;
    for (guint i = 0; i < k->crossings->len; i++)
        sim_motion_free(g_array_index(k->crossings, SimCrossing, i).motion);
    g_array_unref(k->crossings);
    g_free(k->active);
    g_free(k->fall);
    g_free(k->still);
    g_free(k->ground_y);
    g_free(k->moves);
    g_free(k->blurred);
    g_free(k->answer);
    g_free(k);
}

const SimScene *
sim_camera_get_scene(const SimCamera *k)
{
    return &k->scene;
}

const GArray *
sim_camera_get_crossings(const SimCamera *k)
{
    return k->crossings;
}

int
sim_camera_channels(const SimCamera *k)
{
    return k->scenario->grey ? 1 : 3;
}

double
sim_camera_middle(const SimCamera *k, int64_t scan)
{
    double by_own_clock = (double)scan / k->scenario->rate_hz + k->scenario->exposure_us * 0.5e-6;
    return by_own_clock / (1 + k->scenario->rate_off_ppm * 1e-6);
}

int64_t
sim_camera_stamp(const SimCamera *k, int64_t scan)
{
    const SimScenario *s = k->scenario;
    double share = s->stamp == SIM_STAMP_START ? 0 : s->stamp == SIM_STAMP_MIDDLE ? 0.5 : 1;
    return llrint((double)scan * 1e9 / s->rate_hz) + llrint(share * s->exposure_us * 1e3);
}

double
sim_crossing_read(const SimCamera *k, const SimCrossing *c, double u_m, double h_m)
{
    return c->at_s + sim_motion_when(c->motion, u_m + sim_scene_plane(&k->scene, c->entry->lateral_m, h_m));
}

static double
exposure_of(const SimCamera *k)
{
    return k->scenario->exposure_us * 1e-6 / (1 + k->scenario->rate_off_ppm * 1e-6);
}

/* The extremes of the slit's plane over a rider's height. */
static void
plane_range(const SimCamera *k, double y, double *low, double *high)
{
    double a = sim_scene_plane(&k->scene, y, 0), b = sim_scene_plane(&k->scene, y, TALLEST_M);
    *low = fmin(a, b);
    *high = fmax(a, b);
}

static void
keep_near_shapes(const SimCamera *k, Active *a)
{
    double low, high, reach = a->kernel.half_m;
    plane_range(k, a->crossing->entry->lateral_m, &low, &high);
    double from = a->place_m - high - reach, to = a->place_m - low + reach;
    double lean = k->scenario->sun_along * TALLEST_M;
    double shade_from = from + fmin(lean, 0) - .1, shade_to = to + fmax(lean, 0) + .1;
    a->near_count = a->shade_count = 0;
    for (int i = 0; i < a->pose.count; i++) {
        const SimShape *s = &a->pose.shape[i];
        double wide = s->stretch < 1 ? reach * (1 / s->stretch - 1) : 0;
        if (s->u_max + wide > from && s->u_min - wide < to)
            a->near[a->near_count++] = s;
        if (s->shadow && s->u_max > shade_from && s->u_min < shade_to)
            a->shade[a->shade_count++] = s;
    }
}

static void
find_active(SimCamera *k, double middle_s)
{
    k->active_count = 0;
    for (guint i = 0; i < k->crossings->len && k->active_count < ACTIVE_MAX; i++) {
        const SimCrossing *c = &g_array_index(k->crossings, SimCrossing, i);
        double t = middle_s - c->at_s;
        if (t < -1 || t > 2)
            continue;
        double place = sim_motion_place(c->motion, t), low, high;
        plane_range(k, c->entry->lateral_m, &low, &high);
        double lean = fabs(k->scenario->sun_along) * TALLEST_M + .3;
        if (place - low < -lean || place - high > sim_bicycle_length(&c->entry->look.bicycle) + lean)
            continue;
        Active *a = &k->active[k->active_count++];
        a->crossing = c;
        a->place_m = place;
        double way = sim_motion_speed(c->motion, t) * exposure_of(k);
        sim_kernel_init(&a->kernel, way, sim_scene_slit(&k->scene, c->entry->lateral_m),
                        k->scenario->lens_mm * 1e-3);
        sim_rider_pose(&c->entry->look, place, sim_motion_shift(c->motion, t), &a->pose);
        keep_near_shapes(k, a);
    }
}

/* What of an exposure is not yet covered: stretches of its kernel's share, 0 to 1. */
typedef struct {
    double from[PIECES_MAX], to[PIECES_MAX];
    int count;
    double left;
} Open;

/* Takes a stretch out; returns how much of it was open. */
static double
cover(Open *o, double from, double to)
{
    double taken = 0;
    int n = o->count;
    for (int i = 0; i < n; i++) {
        double a = fmax(from, o->from[i]), b = fmin(to, o->to[i]);
        if (b <= a)
            continue;
        taken += b - a;
        if (b < o->to[i] && a > o->from[i] && o->count < PIECES_MAX) {
            o->from[o->count] = b;
            o->to[o->count++] = o->to[i];
            o->to[i] = a;
        } else if (a > o->from[i])
            o->to[i] = a;
        else
            o->from[i] = b;
    }
    o->left -= taken;
    return taken;
}

static void
add_light(double *sum, SimColour c, double share)
{
    sum[0] += c.r * share;
    sum[1] += c.g * share;
    sum[2] += c.b * share;
}

/* One rider's part of one subrow. */
static void
cover_rider(const SimCamera *k, const Active *a, double h, Open *open, double *sum)
{
    double uc = a->place_m - sim_scene_plane(&k->scene, a->crossing->entry->lateral_m, h);
    for (int i = 0; i < a->near_count && open->left > 1e-7; i++) {
        const SimShape *s = a->near[i];
        if (h <= s->h_min || h >= s->h_max)
            continue;
        double span[4];
        int n = sim_shape_spans(s, h, span);
        for (int j = 0; j < n; j++) {
            double from = (span[2 * j] - uc) * s->stretch, to = (span[2 * j + 1] - uc) * s->stretch;
            double p = sim_kernel_share(&a->kernel, from), q = sim_kernel_share(&a->kernel, to);
            if (q <= p)
                continue;
            double share = cover(open, p, q);
            if (share > 1e-9)
                add_light(sum, sim_shape_colour(s, CLAMP(uc, span[2 * j], span[2 * j + 1]), h), share);
        }
    }
}

/* Share of the ground at y that lies in some rider's shadow. */
static double
shadow_at(const SimCamera *k, double y)
{
    const SimScenario *c = k->scenario;
    double light = 1;
    if (c->sun_across == 0)
        return 0;
    for (int i = 0; i < k->active_count; i++) {
        const Active *a = &k->active[i];
        double h = (y - a->crossing->entry->lateral_m) / c->sun_across;
        if (h <= -.02 || h >= TALLEST_M)
            continue;
        h = fmax(h, .002);
        Open open = { { 0 }, { 1 }, 1, 1 };
        double uc = a->place_m - sim_scene_plane(&k->scene, y, 0) + c->sun_along * h;
        for (int j = 0; j < a->shade_count && open.left > 1e-3; j++) {
            const SimShape *s = a->shade[j];
            double span[4];
            if (h <= s->h_min || h >= s->h_max)
                continue;
            int n = sim_shape_spans(s, h, span);
            for (int m = 0; m < n; m++)
                cover(&open, sim_kernel_share(&a->kernel, span[2 * m] - uc),
                      sim_kernel_share(&a->kernel, span[2 * m + 1] - uc));
        }
        light *= open.left;
    }
    return 1 - light;
}

static void
blur_rows(SimCamera *k, float *light, int channels)
{
    double s = k->lens_rows;
    if (s < .05)
        return;
    int rows = k->scenario->rows, reach = (int)ceil(3 * s);
    double weight[32], sum = 0;
    reach = MIN(reach, 15);
    for (int i = -reach; i <= reach; i++)
        sum += weight[i + reach] = exp(-.5 * i * i / (s * s));
    for (int r = 0; r < rows; r++)
        for (int c = 0; c < channels; c++) {
            double v = 0;
            for (int i = -reach; i <= reach; i++)
                v += weight[i + reach] * light[CLAMP(r + i, 0, rows - 1) * channels + c];
            k->blurred[r * channels + c] = (float)(v / sum);
        }
    memcpy(light, k->blurred, sizeof(float) * (size_t)(rows * channels));
}

void
sim_camera_expose(SimCamera *k, int64_t scan, float *light)
{
    const SimScenario *s = k->scenario;
    double middle = sim_camera_middle(k, scan), half = exposure_of(k) / 2;
    find_active(k, middle);
    double lamp = s->lamp_to > s->lamp_from ? sim_scene_lamp(&k->scene, middle - half, middle + half) : 0;
    int channels = sim_camera_channels(k);
    for (int row = 0; row < s->rows; row++) {
        double sum[3] = { 0 };
        for (int sub = 0; sub < SUBROWS; sub++) {
            double fall = k->fall[row * SUBROWS + sub];
            Open open = { { 0 }, { 1 }, 1, 1 };
            for (int i = 0; i < k->active_count && open.left > 1e-7; i++) {
                double h = sim_scene_height(&k->scene, fall, k->active[i].crossing->entry->lateral_m);
                if (h > 0 && h < TALLEST_M)
                    cover_rider(k, &k->active[i], h, &open, sum);
            }
            if (open.left <= 1e-7)
                continue;
            int at = row * SUBROWS + sub;
            double y = k->ground_y[at];
            bool moves;
            SimColour back =
                k->moves[at] ? sim_scene_background(&k->scene, fall, middle, &y, &moves) : k->still[at];
            double lit = isnan(y) ? 1 : 1 - (s->indoors ? .35 : .62) * shadow_at(k, y);
            add_light(sum, back, open.left * lit);
        }
        double scale = s->gain / SUBROWS;
        if (row >= s->lamp_from && row < s->lamp_to)
            for (int i = 0; i < 3; i++)
                sum[i] = (.02 + .75 * lamp) * SUBROWS / s->gain;
        if (channels == 1)
            light[row] = (float)((.299 * sum[0] + .587 * sum[1] + .114 * sum[2]) * scale);
        else
            for (int i = 0; i < 3; i++)
                light[row * 3 + i] = (float)(sum[i] * scale);
    }
    blur_rows(k, light, channels);
}

void
sim_camera_read(SimCamera *k, int64_t scan, const float *light, uint16_t *samples)
{
    const SimScenario *s = k->scenario;
    SimRandom rnd;
    sim_random_init(&rnd, s->seed, (uint64_t)scan + 1000003);
    gboolean srgb = strcmp(s->transfer, "srgb") == 0;
    double top = s->bits == 16 ? 65535 : 255;
    int channels = sim_camera_channels(k), n = s->rows * channels;
    for (int i = 0; i < n; i++) {
        /* No two cells of the slit answer quite alike. */
        double v = light[i] * k->answer[i / channels];
        if (s->well_electrons > 0) {
            double electrons = fmax(v, 0) * s->well_electrons + s->read_electrons * s->read_electrons;
            v += sim_random_normal(&rnd) * sqrt(electrons) / s->well_electrons;
        }
        v = CLAMP(v, 0, 1);
        if (srgb)
            v = v <= .0031308 ? 12.92 * v : 1.055 * pow(v, 1 / 2.4) - .055;
        samples[i] = (uint16_t)lrint(v * top);
    }
}

gboolean
sim_camera_hidden(SimCamera *k, const SimCrossing *crossing, double u_m, double h_m, double t_s)
{
    (void)u_m;
    double fall = sim_scene_fall(&k->scene, sim_scene_row(&k->scene, crossing->entry->lateral_m, h_m));
    for (guint i = 0; i < k->crossings->len; i++) {
        const SimCrossing *c = &g_array_index(k->crossings, SimCrossing, i);
        if (c->entry->lateral_m >= crossing->entry->lateral_m)
            break;
        double t = t_s - c->at_s;
        if (t < -1 || t > 2)
            continue;
        double h = sim_scene_height(&k->scene, fall, c->entry->lateral_m);
        double place = sim_motion_place(c->motion, t),
               u = place - sim_scene_plane(&k->scene, c->entry->lateral_m, h);
        if (h <= 0 || h >= TALLEST_M || u < -.1 || u > sim_bicycle_length(&c->entry->look.bicycle) + .1)
            continue;
        SimShapeList *pose = &k->active[0].pose;
        sim_rider_pose(&c->entry->look, place, sim_motion_shift(c->motion, t), pose);
        for (int j = 0; j < pose->count; j++) {
            double span[4];
            int n = sim_shape_spans(&pose->shape[j], h, span);
            for (int m = 0; m < n; m++)
                if (u > span[2 * m] && u < span[2 * m + 1])
                    return TRUE;
        }
    }
    return FALSE;
}
