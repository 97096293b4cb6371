/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A calibration holds for its own camera, nominal rate and exposure, and is refused by name for any other. */
#include "core/base/limits.h"
#include "core/measure/calibration.h"
#include "core/measure/measure_error.h"

#include <glib/gstdio.h>
#include <string.h>

static const char manifest[] =
    "{\"halfwheel_recording\":1,\"epoch\":\"2027-06-13T16:02:11+02:00\",\"camera\":\"A\","
    "\"scan\":{\"rate_hz\":2000,\"exposure_us\":400,\"stamp\":\"start\"},"
    "\"blocks\":[{\"file\":\"a.png\",\"columns\":8,\"first_ns\":0}]}";

static const char good[] =
    "{\"halfwheel_calibration\":1,\"camera\":\"A\",\"recording\":\"ab\",\"made\":"
    "\"2027-06-13T14:20:00+02:00\",\"by\":\"R. Hale\",\"nominal_rate_hz\":2000,\"exposure_us\":400,"
    "\"rate_hz\":1999.926,\"u_rate_hz\":0.0002,\"plane\":null}";

static char *
dup_file(const char *folder, const char *name, const char *text)
{
    char *path = g_build_filename(folder, name, NULL);
    g_assert_true(g_file_set_contents(path, text, -1, NULL));
    return path;
}

static char *
dup_replaced(const char *text, const char *what, const char *with)
{
    g_assert_nonnull(strstr(text, what));
    g_auto(GStrv) parts = g_strsplit(text, what, 2);
    return g_strjoinv(with, parts);
}

static void
other_setups_are_refused_by_name(void)
{
    static const struct {
        const char *what, *with, *named;
    } cases[] = {
        { "\"camera\":\"A\"", "\"camera\":\"B\"", "camera B" },
        { "\"nominal_rate_hz\":2000", "\"nominal_rate_hz\":1000", "1000 Hz" },
        { "\"exposure_us\":400", "\"exposure_us\":200", "200 µs" },
    };
    g_autofree char *folder = g_dir_make_tmp("hw-calibration-XXXXXX", NULL);
    g_autofree char *recording_path = dup_file(folder, "recording.json", manifest);
    g_autoptr(HwRecording) recording = hw_recording_open(folder, NULL);
    g_assert_nonnull(recording);
    g_autofree char *path = dup_file(folder, "good.json", good);
    g_autoptr(HwCalibration) calibration = hw_calibration_read(path, NULL);
    g_assert_nonnull(calibration);
    g_assert_cmpfloat(calibration->rate_hz, ==, 1999.926);
    g_assert_false(calibration->has_plane);
    g_assert_true(hw_calibration_check(calibration, recording, path, NULL));
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        g_autofree char *text = dup_replaced(good, cases[i].what, cases[i].with);
        g_autofree char *other_path = dup_file(folder, "other.json", text);
        g_autoptr(HwCalibration) other = hw_calibration_read(other_path, NULL);
        g_autoptr(GError) error = NULL;
        g_assert_false(hw_calibration_check(other, recording, other_path, &error));
        g_assert_error(error, HW_MEASURE_ERROR, HW_MEASURE_ERROR_OTHER_SETUP);
        g_assert_nonnull(strstr(error->message, cases[i].named));
        g_assert_nonnull(strstr(error->message, other_path));
    }
}

static void
broken_files_say_what_is_missing(void)
{
    static const struct {
        const char *what, *with, *named;
    } cases[] = {
        { "\"halfwheel_calibration\":1,", "", "halfwheel_calibration" },
        { "\"halfwheel_calibration\":1", "\"halfwheel_calibration\":2", "halfwheel_calibration" },
        { "\"u_rate_hz\":0.0002,", "", "u_rate_hz" },
        { "\"rate_hz\":1999.926", "\"rate_hz\":-1", "rate_hz" },
    };
    g_autofree char *folder = g_dir_make_tmp("hw-calibration-XXXXXX", NULL);
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        g_autofree char *text = dup_replaced(good, cases[i].what, cases[i].with);
        g_autofree char *path = dup_file(folder, "broken.json", text);
        g_autoptr(GError) error = NULL;
        g_assert_null(hw_calibration_read(path, &error));
        g_assert_nonnull(strstr(error->message, cases[i].named));
        g_assert_nonnull(strstr(error->message, path));
    }
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
    g_test_add_func("/calibration/other_setups_are_refused_by_name", other_setups_are_refused_by_name);
    g_test_add_func("/calibration/broken_files_say_what_is_missing", broken_files_say_what_is_missing);
    return g_test_run();
}
