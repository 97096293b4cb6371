/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * The simulator is only a truth if it is right itself: its physics against published figures, its picture's
 * edges and time base against places worked out here from geometry, its files against what they say.
 */
#include "samples/sim/image_file.h"
#include "samples/sim/kernel.h"
#include "samples/sim/truth.h"

#include <glib/gstdio.h>
#include <jansson.h>
#include <math.h>
#include <png.h>
#include <string.h>

static void
assert_near(const char *what, double got, double wanted, double within)
{
    if (!(fabs(got - wanted) <= within))
        g_error("%s: is %.9g, should be %.9g within %.3g", what, got, wanted, within);
}

/*
 * The worked example of J. C. Martin et al., J Appl Biomech 14 (1998) 276-291: 90 kg, rise 0.003, CdA 0.2565
 * m2, wheels 0.0044 m2, air 1.2234 kg/m3, 8.3623 m/s over the road, 10.9084 m/s through the air. The parts
 * are recomputed from the paper's formulas with g = 9.81 and a coefficient of rolling of 0.0032 (from
 * memory); the paper prints 213 W in all.
 */
static void
power_follows_martins_example(void)
{
    SimBody b;
    sim_body_init(&b);
    b.rider_kg = 82;
    b.bike_kg = 8;
    b.cda_m2 = 0.2565;
    b.wheel_drag_m2 = 0.0044;
    b.air_kgm3 = 1.2234;
    b.head_wind_mps = 2.5461;
    b.grade = 0.003;
    b.rolling = 0.0032;
    b.wheel_radius_m = 0.311;
    const double speed = 471.8 / 56.42;
    SimLoss l = sim_body_loss(&b, speed);
    assert_near("air", l.air_w, 158.803, 0.01);
    assert_near("rolling", l.rolling_w, 23.626, 0.005);
    assert_near("bearings", l.bearing_w, 1.369, 0.002);
    assert_near("slope", l.slope_w, 22.149, 0.005);

    /* 8.28 to 8.45 m/s in 56.42 s is the mean acceleration; the power that gives it is the example's total.
     */
    double low = 100, high = 400, wanted = (8.45 - 8.28) / 56.42;
    for (int i = 0; i < 60; i++) {
        b.power_w = (low + high) / 2;
        if (sim_body_acceleration(&b, speed) < wanted)
            low = b.power_w;
        else
            high = b.power_w;
    }
    assert_near("power", b.power_w, 213, 0.5);
    assert_near("power, recomputed", b.power_w, 213.159, 0.05);
}

/* On the level and in balance the speed stays; the integration must not drift. */
static void
balanced_power_keeps_the_speed(void)
{
    SimBody b;
    sim_body_init(&b);
    b.power_w = sim_body_loss(&b, 15).net_w / b.chain_efficiency;
    SimThrow none = { 0, 0, 1 };
    SimMotion *m = sim_motion_new(&b, &none, 15, 3);
    assert_near("speed", sim_motion_speed(m, 1.5), 15, 1e-9);
    assert_near("place", sim_motion_place(m, 1.5), 22.5, 1e-9);
    sim_motion_free(m);
}

/*
 * With air alone, dv/dt = -c v2 has the solution v = v0 / (1 + c v0 t), x = ln(1 + c v0 t) / c. The bearings
 * slow a little more, by a bounded amount.
 */
static void
coasting_in_air_follows_the_closed_form(void)
{
    SimBody b;
    sim_body_init(&b);
    b.power_w = 0;
    b.rolling = 0;
    b.cda_m2 = 1;
    SimThrow none = { 0, 0, 1 };
    double mass = b.rider_kg + b.bike_kg + b.wheel_inertia_kgm2 / (b.wheel_radius_m * b.wheel_radius_m);
    double c = 0.5 * b.air_kgm3 * (b.cda_m2 + b.wheel_drag_m2) / mass;
    SimMotion *m = sim_motion_new(&b, &none, 18, 0);
    /* The bearings' drag, 0.091 N + 0.0087 N s/m v, takes at most this from the speed in a second. */
    double bearing = (0.091 + 0.0087 * 18) / mass;
    assert_near("speed", sim_motion_speed(m, 1), 18 / (1 + c * 18), bearing);
    assert_near("place", sim_motion_place(m, 1), log(1 + c * 18) / c, bearing);
    g_assert_cmpfloat(sim_motion_speed(m, 1), <, 18 / (1 + c * 18));
    sim_motion_free(m);
}

/* First two rows: a worked figure published in a technical column (72 kg on 8 kg, 20 cm); the others from
 * momentum. */
static void
throw_keeps_the_common_centre_of_mass(void)
{
    static const struct {
        double rider_kg, bike_kg, shift_m, bike_forward_m;
    } CASES[] = {
        { 72, 8, 0.2, 0.18 },
        { 72, 8, 0.1, 0.09 },
        { 70, 7, 0.3, 0.272727 },
        { 68, 6.8, 0.25, 0.227273 },
    };
    for (guint i = 0; i < G_N_ELEMENTS(CASES); i++) {
        SimBody b;
        sim_body_init(&b);
        b.rider_kg = CASES[i].rider_kg;
        b.bike_kg = CASES[i].bike_kg;
        b.power_w = sim_body_loss(&b, 15).net_w / b.chain_efficiency;
        SimThrow none = { 0, 0, 1 }, thrown = { CASES[i].shift_m, -0.3, 0.2 };
        SimMotion *plain = sim_motion_new(&b, &none, 15, 3), *m = sim_motion_new(&b, &thrown, 15, 3);
        double gained = (sim_motion_place(m, 0.5) - sim_motion_place(m, -0.5)) -
                        (sim_motion_place(plain, 0.5) - sim_motion_place(plain, -0.5));
        assert_near("bicycle", gained, CASES[i].bike_forward_m, 1e-6);
        double rider = gained - sim_motion_shift(m, 0.5);
        assert_near("centre", b.rider_kg * rider + b.bike_kg * gained, 0, 1e-9);
        assert_near("foremost point", sim_motion_place(m, 0), 0, 1e-12);
        sim_motion_free(plain);
        sim_motion_free(m);
    }
}

/* The closed form of the folded kernel against a sum over it. */
static void
kernel_is_the_fold_of_its_parts(void)
{
    const double a = 0.0068, b = 0.005, s = 0.0015;
    SimKernel k;
    sim_kernel_init(&k, a, b, s);
    for (double x = -0.015; x <= 0.015; x += 0.00171) {
        double sum = 0;
        const int n = 400;
        for (int i = 0; i < n; i++)
            for (int j = 0; j < n; j++)
                sum += 0.5 * erfc(-(x + a * ((i + .5) / n - .5) + b * ((j + .5) / n - .5)) / s * M_SQRT1_2);
        assert_near("kernel", sim_kernel_share(&k, x), sum / n / n, 1.5e-5);
    }
}

typedef struct {
    SimScenario *s;
    SimCamera *camera;
    char *folder; /* of the recording, once made */
    SimRecorder *recorder;
} Fixture;

static char *
temporary_folder(void)
{
    g_autoptr(GError) error = NULL;
    char *folder = g_dir_make_tmp("halfwheel-sim-XXXXXX", &error);
    g_assert_no_error(error);
    return folder;
}

static void
remove_folder(const char *folder)
{
    g_autoptr(GDir) dir = g_dir_open(folder, 0, NULL);
    for (const char *name; (name = g_dir_read_name(dir)) != NULL;) {
        g_autofree char *path = g_build_filename(folder, name, NULL);
        g_unlink(path);
    }
    g_rmdir(folder);
}

/* A scenario of plain keys, with one rider before a road without shadow or noise, and what the case adds. */
static Fixture
fixture_new(const char *recording, const char *scene, const char *riders)
{
    g_autofree char *folder = temporary_folder();
    g_autofree char *path = g_build_filename(folder, "bare.txt", NULL);
    g_autofree char *text = g_strdup_printf(
        "[recording]\ntitle = bare\nepoch = 2027-01-02T03:04:05Z\ntransfer = linear\nformat = png\n"
        "grey = yes\nwell_electrons = 0\nread_electrons = 0\n%s\n[scene]\nsun_across = 0\n%s\n[riders]\n%s\n",
        recording, scene, riders);
    g_autoptr(GError) error = NULL;
    g_file_set_contents(path, text, -1, &error);
    g_assert_no_error(error);
    Fixture f = { sim_scenario_load(path, &error), NULL, NULL, NULL };
    g_assert_no_error(error);
    f.camera = sim_camera_new(f.s);
    remove_folder(folder);
    return f;
}

static void
fixture_record(Fixture *f)
{
    g_autoptr(GError) error = NULL;
    f->folder = temporary_folder();
    f->recorder = sim_recorder_run(f->s, f->camera, f->folder, &error);
    g_assert_no_error(error);
}

static void
fixture_clear(Fixture *f)
{
    sim_recorder_free(f->recorder);
    if (f->folder != NULL)
        remove_folder(f->folder);
    g_free(f->folder);
    sim_camera_free(f->camera);
    sim_scenario_free(f->s);
}

/* The row whose middle is nearest to the front hub, and the mean over it of how far the tyre lies behind its
 * tangent. */
static int
hub_row(const Fixture *f, double *behind_m)
{
    const SimCrossing *c = &g_array_index(sim_camera_get_crossings(f->camera), SimCrossing, 0);
    const SimScene *scene = sim_camera_get_scene(f->camera);
    double r = c->entry->look.bicycle.diameter_m / 2;
    int row = (int)floor(sim_scene_row(scene, c->entry->lateral_m, r));
    const int n = 1000;
    *behind_m = 0;
    for (int i = 0; i < n; i++) {
        double h = sim_scene_height(scene, sim_scene_fall(scene, row + (i + .5) / n), c->entry->lateral_m);
        *behind_m += (r - sqrt(r * r - (h - r) * (h - r))) / n;
    }
    return row;
}

/*
 * A scan without dead time loses nothing: the light that the tyre takes away, summed from
 * before the edge to a column that it fills, tells the edge's place exactly. Compared with the instant that
 * the motion gives.
 */
static void
tyre_edge_is_right_to_a_thousandth_of_a_column(void)
{
    static const struct {
        const char *rate, *exposure, *slit;
        double at_s, speed;
    } CASES[] = {
        { "20000", "50", "0", 0.0500000, 17 },  { "20000", "50", "0", 0.0500137, 17 },
        { "20000", "50", "0", 0.0500311, 12 },  { "10000", "100", "0", 0.0500219, 8.5 },
        { "10000", "100", "0", 0.0500733, 19 }, { "5000", "200", "0", 0.0500411, 6.3 },
        { "5000", "200", "0", 0.0501277, 9.1 }, { "20000", "50", "2", 0.0500137, 17 },
        { "20000", "50", "4", 0.0500311, 12 },
    };
    double worst = 0;
    for (guint i = 0; i < G_N_ELEMENTS(CASES); i++) {
        g_autofree char *recording =
            g_strdup_printf("rate_hz = %s\nexposure_us = %s\nslit_mm = %s\nlens_mm = 0\nrows = 480",
                            CASES[i].rate, CASES[i].exposure, CASES[i].slit);
        g_autofree char *rider = g_strdup_printf("1 | A | T | N | C | at=%.7f y=3 v=%g throw=0.2@-0.1/0.2",
                                                 CASES[i].at_s, CASES[i].speed);
        Fixture f = fixture_new(recording, "", rider);
        const SimCrossing *c = &g_array_index(sim_camera_get_crossings(f.camera), SimCrossing, 0);
        double behind, speed = sim_motion_speed(c->motion, 0);
        int row = hub_row(&f, &behind);
        int64_t edge = llrint(CASES[i].at_s * f.s->rate_hz), from = edge - 4;
        /* The tread is 16 mm broad here and of one colour. */
        int64_t full = edge + (int64_t)floor(0.0125 / speed * f.s->rate_hz);
        g_assert_cmpint(full, >, edge + 1);
        g_autofree float *light = g_new(float, f.s->rows);
        sim_camera_expose(f.camera, from, light);
        double ground = light[row], sum = 0;
        sim_camera_expose(f.camera, full, light);
        double tread = light[row];
        g_assert_cmpfloat(ground - tread, >, 0.05);
        for (int64_t scan = from; scan <= full; scan++) {
            sim_camera_expose(f.camera, scan, light);
            sum += (light[row] - tread) / (ground - tread);
        }
        double seen = (double)from + sum;
        /* Column i covers [i, i + 1) and its centre is the middle of the exposure, here i + 0.5 periods after
         * the epoch. */
        double wanted = (CASES[i].at_s + sim_motion_when(c->motion, behind)) * f.s->rate_hz;
        worst = fmax(worst, fabs(seen - wanted));
        assert_near("column of the edge", seen, wanted, 0.001);
        fixture_clear(&f);
    }
    g_test_message("worst: %.6f column", worst);
}

/* With dead time the one partly covered column tells when, within its exposure, the edge came. */
static void
short_exposure_is_covered_by_the_share_after_the_edge(void)
{
    for (int i = 0; i < 9; i++) {
        /* Scan 1000 of 20 kHz is exposed from 50.000 ms for 20 us. */
        double at = 0.0500 + 20e-6 * (i + .5) / 9;
        g_autofree char *rider = g_strdup_printf("1 | A | T | N | C | at=%.9f y=3 v=17", at);
        Fixture f =
            fixture_new("rate_hz = 20000\nexposure_us = 20\nslit_mm = 0\nlens_mm = 0\nrows = 480", "", rider);
        const SimCrossing *c = &g_array_index(sim_camera_get_crossings(f.camera), SimCrossing, 0);
        double behind;
        int row = hub_row(&f, &behind);
        g_autofree float *light = g_new(float, f.s->rows);
        sim_camera_expose(f.camera, 990, light);
        double ground = light[row];
        sim_camera_expose(f.camera, 1006, light);
        double tread = light[row];
        sim_camera_expose(f.camera, 1000, light);
        double covered = (ground - light[row]) / (ground - tread);
        double edge = at + sim_motion_when(c->motion, behind);
        assert_near("covered share", covered, CLAMP((0.05002 - edge) / 20e-6, 0, 1), 0.002);
        fixture_clear(&f);
    }
}

/* Each stamp, turned to the middle of its exposure, must give back the true instant; the edge's column
 * likewise. */
static void
stamps_and_columns_tell_the_true_time(void)
{
    static const char *const STAMPS[] = { "start", "middle", "end" };
    for (guint i = 0; i < G_N_ELEMENTS(STAMPS); i++)
        for (int listed = 0; listed < 2; listed++) {
            g_autofree char *recording =
                g_strdup_printf("rate_hz = 1000\nexposure_us = 300\nstamp = %s\nstamps_listed = %s\nrows = "
                                "16\nblock_columns = 64\nrecord = 0 0.5",
                                STAMPS[i], listed ? "yes" : "no");
            Fixture f = fixture_new(recording, "", "1 | A | T | N | C | at=0.2345678 y=3 v=16");
            fixture_record(&f);
            g_autoptr(GArray) truths = sim_truth_find(f.camera, f.recorder);
            const SimTruth *t = &g_array_index(truths, SimTruth, 0);
            /* Scan 234 is exposed around 234.15 ms: its centre is column 234.5. */
            assert_near("column", t->front_column, 234.5 + 0.4178, 1e-7);
            assert_near("stamped", sim_recorder_stamped(f.recorder, t->front_column), 234567800, 1);
            assert_near("truth", t->front_s, 0.2345678, 1e-12);
            fixture_clear(&f);
        }
}

/* Positive X reads late by X / v; yaw grows with y, lean with height. */
static void
slit_out_of_plane_reads_late(void)
{
    static const struct {
        const char *scene;
        double x_m; /* at y = 3 m and hub height, from X = x0 + y tan(yaw) + h tan(lean) */
    } CASES[] = {
        { "x0_mm = 12", 0.012 },
        { "x0_mm = -12", -0.012 },
        { "yaw_deg = 0.2", 0.0104720 },
        { "lean_deg = 0.5", 0.0029147 },
    };
    for (guint i = 0; i < G_N_ELEMENTS(CASES); i++) {
        Fixture f = fixture_new("rate_hz = 2000\nexposure_us = 400\nrows = 32\nrecord = 0 0.5",
                                CASES[i].scene, "1 | A | T | N | C | at=0.25 y=3 v=16 d=0.668");
        const SimCrossing *c = &g_array_index(sim_camera_get_crossings(f.camera), SimCrossing, 0);
        double late = sim_crossing_read(f.camera, c, 0, 0.334) - 0.25;
        assert_near("late", late, CASES[i].x_m / sim_motion_speed(c->motion, 0), 2e-7);
        fixture_clear(&f);
    }
}

/*
 * A roll pivots at the camera's height: X = tan(roll) ((y - yc) sin b + (h - hc) cos b). From a camera 4 m up
 * that looks level (b = 0), one degree is -4 tan 1 deg = -69.8 mm on the ground, and nothing at the camera's
 * own height.
 */
static void
roll_turns_about_the_camera(void)
{
    SimScenario s = { .camera_height_m = 4,
                      .distance_m = 5,
                      .bottom_m = 1,
                      .rows = 100,
                      .focal_rows = 100,
                      .road_m = 6,
                      .roll_deg = 1 };
    SimScene scene;
    sim_scene_init(&scene, &s);
    scene.tilt_rad = 0;
    assert_near("ground", sim_scene_plane(&scene, 3, 0), -0.069820, 1e-6);
    assert_near("camera's height", sim_scene_plane(&scene, 3, 4), 0, 1e-12);
}

/* Places go to rows and back: row, height and the ground under the sight agree. */
static void
rows_and_heights_are_each_other_s_inverse(void)
{
    Fixture f = fixture_new("rows = 480", "", "1 | A | T | N | C | at=1 y=3");
    const SimScene *scene = sim_camera_get_scene(f.camera);
    for (double y = 0; y < 7; y += 1.3)
        for (double h = 0; h < 1.8; h += .31) {
            double row = sim_scene_row(scene, y, h);
            assert_near("height", sim_scene_height(scene, sim_scene_fall(scene, row), y), h, 1e-9);
        }
    assert_near("lowest row", sim_scene_row(scene, f.s->bottom_m, 0), 480, 1e-9);
    fixture_clear(&f);
}

/* Scans that the camera hides move everything after them; those it admits leave a gap that no column fills.
 */
static void
drops_shift_columns_but_not_the_truth(void)
{
    const char *base = "rate_hz = 1000\nexposure_us = 500\nrows = 16\nblock_columns = 100\nrecord = 0 0.6";
    g_autofree char *hidden = g_strconcat(base, "\ndrop = hidden 0.120 3", NULL);
    g_autofree char *honest = g_strconcat(base, "\ndrop = honest 0.120 3", NULL);
    const char *rider = "1 | A | T | N | C | at=0.3004 y=3 v=16";
    const char *recordings[] = { base, hidden, honest };
    const double lost[] = { 0, 3, 3 };
    for (guint i = 0; i < G_N_ELEMENTS(recordings); i++) {
        Fixture f = fixture_new(recordings[i], "", rider);
        fixture_record(&f);
        double column = 0;
        g_assert_true(sim_recorder_column(f.recorder, 0.3004, &column));
        assert_near("column", column, 300.65 - lost[i], 1e-7);
        g_assert_cmpint(sim_recorder_columns(f.recorder), ==, 600 - (int)lost[i]);
        gboolean kept = sim_recorder_column(f.recorder, 0.1215, &column);
        g_assert_cmpint(kept, ==, i == 0);
        const GArray *blocks = sim_recorder_get_blocks(f.recorder);
        const SimBlock *second = &g_array_index(blocks, SimBlock, 1);
        /* The hidden drop: even stamps over 100 columns that span 102 periods; the honest one ends the block.
         */
        g_assert_cmpint(second->columns, ==, i == 2 ? 20 : 100);
        g_assert_cmpint(second->last_ns - second->first_ns, ==,
                        i == 0   ? 99000000
                        : i == 1 ? 102000000
                                 : 19000000);
        fixture_clear(&f);
    }
}

/* A camera 37 ppm fast stamps a second of true time as 1.000037 s. */
static void
wrong_rate_stretches_the_stamps(void)
{
    Fixture f = fixture_new("rate_hz = 1000\nrate_off_ppm = 37\nexposure_us = 500\nrows = 16\nrecord = 0 2",
                            "", "1 | A | T | N | C | at=1.5 y=3 v=16");
    fixture_record(&f);
    double column = 0;
    g_assert_true(sim_recorder_column(f.recorder, 1.5, &column));
    assert_near("stamped", sim_recorder_stamped(f.recorder, column), 1500055500, 2);
    fixture_clear(&f);
}

/* A spoke through the hub with phase th0 at the hub's crossing stands at h = -v t cot(th0 + v t / R) over the
 * hub. */
static void
spokes_follow_rolling_without_slip(void)
{
    Fixture f = fixture_new("rows = 16", "", "1 | A | T | N | C | at=1 y=3 v=16");
    SimRider *look = &g_array_index(f.s->entries, SimEntry, 0).look;
    double r = look->bicycle.diameter_m / 2;
    static SimShapeList pose;
    for (double vt = -0.2; vt < 0.2; vt += 0.031) {
        sim_rider_pose(look, r + vt, 0, &pose);
        int spoke = 0;
        for (int i = 0; i < pose.count; i++) {
            const SimShape *s = &pose.shape[i];
            if (s->kind != SIM_SHAPE_CAPSULE || s->ra != .0012 || s->u_max > 2 * r + .01)
                continue;
            /* The front wheel's spokes stand in order of their phase. */
            double th0 = look->wheel_start_rad + 1 + .3 + 2 * M_PI * spoke++ / look->bicycle.front_spokes;
            double wanted = -vt / tan(th0 + vt / r);
            double slope = (s->b.h - s->a.h) / (s->b.u - s->a.u);
            assert_near("height over the hub", s->a.h - r + slope * (r + vt - s->a.u), wanted,
                        1e-7 * (1 + fabs(wanted)));
        }
        g_assert_cmpint(spoke, ==, look->bicycle.front_spokes);
    }
    fixture_clear(&f);
}

/* Wheelbase 0.89-1.15 m (UCI 1.3.016); the saddle's nose 5 cm behind the bracket (UCI 1.3.013, from
 * memory). */
static void
bicycles_have_real_proportions(void)
{
    Fixture f = fixture_new("rows = 16", "",
                            "1 | A | T | N | C | at=1\n2 | B | T | N | C | at=2\n3 | D | T | N | C | at=3\n4 "
                            "| E | T | N | C | at=4");
    for (guint i = 0; i < f.s->entries->len; i++) {
        const SimBicycle *b = &g_array_index(f.s->entries, SimEntry, i).look.bicycle;
        SimBicyclePoints p;
        sim_bicycle_points(b, &p);
        g_assert_cmpfloat(b->wheelbase_m, >, 0.89);
        g_assert_cmpfloat(b->wheelbase_m, <, 1.15);
        /* A 700C rim is 622 mm at the bead seat (ISO 5775-1, ETRTO); with tyres of 20 to 28 mm the wheel is
         * that and twice the section. UCI 1.3.018 bears 0.55 to 0.70 m. */
        g_assert_cmpfloat(b->diameter_m, >=, 0.622 + 2 * 0.020);
        g_assert_cmpfloat(b->diameter_m, <=, 0.622 + 2 * 0.028);
        g_assert_true(b->diameter_m > 0.55 && b->diameter_m < 0.70);
        g_assert_cmpfloat(p.nose.u - .013 - p.bottom_bracket.u, >=, 0.05);
        assert_near("chain stay", hypot(p.rear_hub.u - p.bottom_bracket.u, p.rear_hub.h - p.bottom_bracket.h),
                    .408, 1e-9);
        assert_near("front", p.front_hub.u - b->diameter_m / 2, 0, 1e-12);
        /* Two such wheels and the way between them. */
        assert_near("length", sim_bicycle_length(b), p.rear_hub.u + b->diameter_m / 2, 1e-12);
    }
    fixture_clear(&f);
}

static char *
contents(const char *folder, const char *name, gsize *size)
{
    g_autofree char *path = g_build_filename(folder, name, NULL);
    g_autoptr(GError) error = NULL;
    char *data = NULL;
    g_file_get_contents(path, &data, size, &error);
    g_assert_no_error(error);
    return data;
}

/* Digests and identity by GLib's own SHA-256, not the library that wrote them. */
static void
manifest_tells_the_truth_about_its_files(void)
{
    Fixture f =
        fixture_new("rate_hz = 1000\nexposure_us = 500\nrows = 24\nblock_columns = 200\nrecord = 0 0.5", "",
                    "1 | A | T | N | C | at=0.3 y=3 v=16");
    fixture_record(&f);
    gsize size = 0;
    g_autofree char *text = contents(f.folder, "recording.json", &size);
    json_t *root = json_loadb(text, size, JSON_REJECT_DUPLICATES, NULL);
    g_assert_nonnull(root);
    json_t *blocks = json_object_get(root, "blocks");
    g_assert_cmpint((int)json_array_size(blocks), ==, 3);
    for (size_t i = 0; i < 3; i++) {
        json_t *b = json_array_get(blocks, i);
        gsize n = 0;
        g_autofree char *data = contents(f.folder, json_string_value(json_object_get(b, "file")), &n);
        g_autofree char *sum = g_compute_checksum_for_data(G_CHECKSUM_SHA256, (const guchar *)data, n);
        g_assert_cmpstr(sum, ==, json_string_value(json_object_get(b, "sha256")));
    }
    g_autofree char *identity =
        g_compute_checksum_for_string(G_CHECKSUM_SHA256, "2027-01-02T03:04:05Z\nA\nblock-00000.png\n0\n", -1);
    identity[16] = '\0';
    g_assert_cmpstr(identity, ==, sim_recorder_get_identity(f.recorder));
    json_decref(root);
    fixture_clear(&f);
}

static uint8_t *
grey_png(const char *path, unsigned *width, unsigned *height)
{
    png_image image = { .version = PNG_IMAGE_VERSION };
    g_assert_true(png_image_begin_read_from_file(&image, path));
    image.format = PNG_FORMAT_GRAY;
    uint8_t *data = g_malloc(PNG_IMAGE_SIZE(image));
    g_assert_true(png_image_finish_read(&image, NULL, data, 0, NULL));
    *width = image.width;
    *height = image.height;
    return data;
}

/* The same race with later columns on the left is the same picture mirrored. */
static void
later_left_mirrors_the_image(void)
{
    uint8_t *picture[2];
    unsigned w = 0, h = 0;
    for (int i = 0; i < 2; i++) {
        g_autofree char *recording =
            g_strdup_printf("rate_hz = 1000\nexposure_us = 500\nrows = 48\nblock_columns = 300\nrecord = 0 "
                            "0.3\nlater = %s\ntravel = right",
                            i ? "left" : "right");
        Fixture f = fixture_new(recording, "focal_rows = 180", "1 | A | T | N | C | at=0.1 y=3 v=16");
        fixture_record(&f);
        g_autofree char *path = g_build_filename(f.folder, "block-00000.png", NULL);
        picture[i] = grey_png(path, &w, &h);
        fixture_clear(&f);
    }
    g_assert_cmpuint(w, ==, 300);
    gboolean same = TRUE, symmetric = TRUE;
    for (unsigned y = 0; y < h; y++)
        for (unsigned x = 0; x < w; x++) {
            same = same && picture[0][y * w + x] == picture[1][y * w + w - 1 - x];
            symmetric = symmetric && picture[0][y * w + x] == picture[0][y * w + w - 1 - x];
        }
    g_assert_true(same);
    g_assert_false(symmetric);
    g_free(picture[0]);
    g_free(picture[1]);
}

static void
same_scenario_gives_the_same_bytes(void)
{
    const char *recording = "rate_hz = 1000\nexposure_us = 500\nrows = 48\nblock_columns = 300\nrecord = 0 "
                            "0.3\nformat = jpeg\nwell_electrons = 4000";
    char *data[3];
    gsize size[3];
    const char *seeds[] = { "\nseed = 5", "\nseed = 5", "\nseed = 6" };
    for (int i = 0; i < 3; i++) {
        g_autofree char *all = g_strconcat(recording, seeds[i], NULL);
        Fixture f = fixture_new(all, "", "1 | A | T | N | C | at=0.1 y=3 v=16");
        fixture_record(&f);
        data[i] = contents(f.folder, "block-00000.jpg", &size[i]);
        fixture_clear(&f);
    }
    g_assert_cmpmem(data[0], size[0], data[1], size[1]);
    g_assert_false(size[0] == size[2] && memcmp(data[0], data[2], size[0]) == 0);
    for (int i = 0; i < 3; i++)
        g_free(data[i]);
}

/* A rider right beside another is hidden by the nearer one; the nearer one by nobody. */
static void
hidden_arc_counts_nearer_riders_only(void)
{
    Fixture f =
        fixture_new("rate_hz = 1000\nexposure_us = 500\nrows = 48\nrecord = 0 1", "camera_height_m = 1.2",
                    "1 | A | T | N | C | at=0.4 y=2.0 v=16\n2 | B | T | N | C | at=0.43 y=2.6 v=16\n3 | D | "
                    "T | N | C | at=0.8 y=4 v=16");
    fixture_record(&f);
    g_autoptr(GArray) truths = sim_truth_find(f.camera, f.recorder);
    g_assert_cmpfloat(g_array_index(truths, SimTruth, 0).hidden_deg, ==, 0);
    g_assert_cmpfloat(g_array_index(truths, SimTruth, 1).hidden_deg, >, 20);
    g_assert_cmpfloat(g_array_index(truths, SimTruth, 2).hidden_deg, ==, 0);
    g_assert_cmpint(g_array_index(truths, SimTruth, 1).order, ==, 2);
    fixture_clear(&f);
}

static void
bad_scenarios_are_refused_with_their_line(void)
{
    static const struct {
        const char *text, *says;
    } CASES[] = {
        { "[recording]\nrate = 5\n", "line 2" },
        { "[recording]\ntitle = a\nepoch = b\nexposure_us = nought\n", "line 4" },
        { "[recording]\ntitle = a\nepoch = b\nrate_hz = 5000\nexposure_us = 300\n", "longer than a scan" },
        { "[riders]\n1 | A\n", "line 2" },
        { "[riders]\n1 | A | T | N | C | at=1,2,x\n", "line 2" },
        { "[riders]\n1 | A | T | N | C | colour=red\n", "no option" },
        { "[teams]\nA = #12345 #000000 #000000\n", "no colour" },
        { "[race]\nevent = a\n", "needs a title" },
    };
    g_autofree char *folder = temporary_folder();
    g_autofree char *path = g_build_filename(folder, "bad.txt", NULL);
    for (guint i = 0; i < G_N_ELEMENTS(CASES); i++) {
        g_autoptr(GError) error = NULL;
        g_assert_true(g_file_set_contents(path, CASES[i].text, -1, NULL));
        g_assert_null(sim_scenario_load(path, &error));
        g_assert_error(error, sim_error_quark(), 1);
        g_assert_nonnull(strstr(error->message, CASES[i].says));
    }
    remove_folder(folder);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
    g_test_add_func("/sim/motion/power_follows_martins_example", power_follows_martins_example);
    g_test_add_func("/sim/motion/balanced_power_keeps_the_speed", balanced_power_keeps_the_speed);
    g_test_add_func("/sim/motion/coasting_in_air_follows_the_closed_form",
                    coasting_in_air_follows_the_closed_form);
    g_test_add_func("/sim/motion/throw_keeps_the_common_centre_of_mass",
                    throw_keeps_the_common_centre_of_mass);
    g_test_add_func("/sim/kernel/is_the_fold_of_its_parts", kernel_is_the_fold_of_its_parts);
    g_test_add_func("/sim/picture/tyre_edge_is_right_to_a_thousandth_of_a_column",
                    tyre_edge_is_right_to_a_thousandth_of_a_column);
    g_test_add_func("/sim/picture/short_exposure_is_covered_by_the_share_after_the_edge",
                    short_exposure_is_covered_by_the_share_after_the_edge);
    g_test_add_func("/sim/picture/later_left_mirrors_the_image", later_left_mirrors_the_image);
    g_test_add_func("/sim/picture/same_scenario_gives_the_same_bytes", same_scenario_gives_the_same_bytes);
    g_test_add_func("/sim/scene/slit_out_of_plane_reads_late", slit_out_of_plane_reads_late);
    g_test_add_func("/sim/scene/roll_turns_about_the_camera", roll_turns_about_the_camera);
    g_test_add_func("/sim/scene/rows_and_heights_are_each_other_s_inverse",
                    rows_and_heights_are_each_other_s_inverse);
    g_test_add_func("/sim/time/stamps_and_columns_tell_the_true_time", stamps_and_columns_tell_the_true_time);
    g_test_add_func("/sim/time/drops_shift_columns_but_not_the_truth", drops_shift_columns_but_not_the_truth);
    g_test_add_func("/sim/time/wrong_rate_stretches_the_stamps", wrong_rate_stretches_the_stamps);
    g_test_add_func("/sim/rider/spokes_follow_rolling_without_slip", spokes_follow_rolling_without_slip);
    g_test_add_func("/sim/rider/bicycles_have_real_proportions", bicycles_have_real_proportions);
    g_test_add_func("/sim/truth/hidden_arc_counts_nearer_riders_only", hidden_arc_counts_nearer_riders_only);
    g_test_add_func("/sim/files/manifest_tells_the_truth_about_its_files",
                    manifest_tells_the_truth_about_its_files);
    g_test_add_func("/sim/files/bad_scenarios_are_refused_with_their_line",
                    bad_scenarios_are_refused_with_their_line);
    return g_test_run();
}
