/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The gap between two crossings: its ±, the chance of the wrong order, and when the two count as told apart.
 */
#include "core/measure/gap.h"

#include <glib.h>
#include <math.h>

static HwLead
lead(double time_ms, double u_ms, double speed_mps)
{
    return (HwLead){ (int64_t)llround(time_ms * 1e6), u_ms * 1e6, speed_mps, NAN };
}

static HwSetup
setup_measured(void)
{
    HwSetup setup = hw_setup_unmeasured();
    setup.rate_known = setup.alignment_known = true;
    return setup;
}

static void
reading_by_eye_is_a_rectangle_of_one_column(void)
{
    /* GUM 4.3.7: 1/(f √12) for one reading at 2 kHz is 0.1443 ms, 1/(f √6) for a difference 0.2041 ms. */
    double u_ns = hw_u_by_eye_ns(500000.0);
    g_assert_cmpfloat_with_epsilon(u_ns * 1e-6, 0.1443, 5e-5);
    HwLead a = lead(0, u_ns * 1e-6, NAN), b = lead(5, u_ns * 1e-6, NAN);
    HwSetup setup = setup_measured();
    HwGap gap = hw_gap_between(&a, &b, &setup, 0.01);
    g_assert_cmpfloat_with_epsilon(gap.u_gap_ns * 1e-6, 0.2041, 5e-5);
    g_assert_cmpint(gap.gap_ns, ==, 5000000);
}

static void
chance_of_the_wrong_order_is_the_normal_tail(void)
{
    /* Upper tail of the normal distribution (tables): z = 1.644854 5 %, 2.326348 1 %, 3.090232 0.1 %. */
    static const struct {
        double z, p;
    } table[] = { { 0.0, 0.5 }, { 1.644854, 0.05 }, { 2.326348, 0.01 }, { 3.090232, 0.001 } };
    HwSetup setup = setup_measured();
    for (guint i = 0; i < G_N_ELEMENTS(table); i++) {
        HwLead a = lead(0, 3.0, NAN), b = lead(5.0 * table[i].z, 4.0, NAN); /* u = 5 ms */
        HwGap gap = hw_gap_between(&a, &b, &setup, 0.01);
        g_assert_cmpfloat_with_epsilon(gap.p_order_wrong, table[i].p, 2e-6);
    }
}

static void
distance_is_speed_of_the_one_behind_times_the_gap(void)
{
    /* d = v·Δt, u(d)² = (Δt·u(v))² + (v·u(Δt))² (GUM 5.1.2): 17 m/s, 4 ms, u(v) 0.05 and 1.2 for a throw,
     * u(Δt) 0.05 ms: √((4e-3·1.20104)² + (17·5e-5)²). */
    HwLead a = lead(0, 0.03, 20), b = lead(4, 0.04, 17);
    b.u_speed_mps = 0.05;
    HwSetup setup = setup_measured();
    HwGap gap = hw_gap_between(&a, &b, &setup, 0.01);
    g_assert_cmpfloat_with_epsilon(gap.distance_m, 0.068, 1e-9);
    g_assert_cmpfloat_with_epsilon(gap.u_distance_m, 0.0048787, 1e-6);
}

static void
distance_is_unknown_without_a_speed(void)
{
    HwLead a = lead(0, 0.1, 17), b = lead(4, 0.1, NAN);
    HwSetup setup = hw_setup_unmeasured();
    HwGap gap = hw_gap_between(&a, &b, &setup, 0.01);
    g_assert_true(isnan(gap.distance_m) && isnan(gap.u_distance_m));
    b.speed_mps = 17; /* how well it is known is not said: no ± for the distance either */
    gap = hw_gap_between(&a, &b, &setup, 0.01);
    g_assert_cmpfloat_with_epsilon(gap.distance_m, 0.068, 1e-9);
    g_assert_true(isnan(gap.u_distance_m));
}

static void
scan_rate_adds_its_share(void)
{
    HwLead a = lead(0, 0, NAN), b = lead(1000, 0, NAN);
    HwSetup setup = setup_measured();
    setup.u_rate = 10e-6; /* a gap of 1 s sees 10 µs */
    HwGap gap = hw_gap_between(&a, &b, &setup, 0.01);
    g_assert_cmpfloat_with_epsilon(gap.u_gap_ns, 10000.0, 1e-6);
}

static void
unmeasured_alignment_prevents_told_apart_within_its_worst_case(void)
{
    /* 8 m × (tan 0.5° + tan 1°) = 0.2095 m: 12.3 ms at 17 m/s, 41.9 ms at the stated 5 m/s. */
    static const struct {
        double gap_ms, speed;
        HwSeparated separated;
    } cases[] = {
        { 0.1, 17, HW_SEPARATED_NO },
        { 5, 17, HW_SEPARATED_NOT_ESTABLISHED },
        { 12.2, 17, HW_SEPARATED_NOT_ESTABLISHED },
        { 13.5, 17, HW_SEPARATED_YES },
        { 13.5, NAN, HW_SEPARATED_NOT_ESTABLISHED },
        { 43, NAN, HW_SEPARATED_YES },
    };
    HwSetup setup = hw_setup_unmeasured();
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        HwLead a = lead(0, 0.15, cases[i].speed), b = lead(cases[i].gap_ms, 0.15, cases[i].speed);
        g_assert_cmpint(hw_gap_between(&a, &b, &setup, 0.01).separated, ==, cases[i].separated);
    }
}

static void
measured_alignment_lets_the_reading_decide(void)
{
    HwLead a = lead(0, 0.15, 17), b = lead(5, 0.15, 17);
    HwSetup setup = setup_measured();
    g_assert_cmpint(hw_gap_between(&a, &b, &setup, 0.01).separated, ==, HW_SEPARATED_YES);
}

static void
unknown_uncertainty_never_tells_apart(void)
{
    HwLead a = lead(0, NAN, 17), b = lead(500, 0.15, 17);
    HwSetup setup = setup_measured();
    HwGap gap = hw_gap_between(&a, &b, &setup, 0.01);
    g_assert_true(isnan(gap.p_order_wrong));
    g_assert_cmpint(gap.separated, ==, HW_SEPARATED_NOT_ESTABLISHED);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
    g_test_add_func("/gap/reading_by_eye_is_a_rectangle_of_one_column",
                    reading_by_eye_is_a_rectangle_of_one_column);
    g_test_add_func("/gap/chance_of_the_wrong_order_is_the_normal_tail",
                    chance_of_the_wrong_order_is_the_normal_tail);
    g_test_add_func("/gap/distance_is_speed_of_the_one_behind_times_the_gap",
                    distance_is_speed_of_the_one_behind_times_the_gap);
    g_test_add_func("/gap/distance_is_unknown_without_a_speed", distance_is_unknown_without_a_speed);
    g_test_add_func("/gap/scan_rate_adds_its_share", scan_rate_adds_its_share);
    g_test_add_func("/gap/unmeasured_alignment_prevents_told_apart_within_its_worst_case",
                    unmeasured_alignment_prevents_told_apart_within_its_worst_case);
    g_test_add_func("/gap/measured_alignment_lets_the_reading_decide",
                    measured_alignment_lets_the_reading_decide);
    g_test_add_func("/gap/unknown_uncertainty_never_tells_apart", unknown_uncertainty_never_tells_apart);
    return g_test_run();
}
