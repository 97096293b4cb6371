/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "samples/sim/produce.h"

#include "samples/sim/truth.h"

#include <errno.h>
#include <glib/gstdio.h>
#include <string.h>

/* Takes away what an earlier run left; only names that a run writes. */
static void
clear_folder(const char *folder)
{
    g_autoptr(GDir) dir = g_dir_open(folder, 0, NULL);
    for (const char *name; dir != NULL && (name = g_dir_read_name(dir)) != NULL;) {
        if (!g_str_has_prefix(name, "block-") && !g_str_has_prefix(name, "times-") &&
            strcmp(name, "recording.json") != 0)
            continue;
        g_autofree char *path = g_build_filename(folder, name, NULL);
        g_unlink(path);
    }
}

static gboolean
prepare(const char *folder, gboolean force, GError **error)
{
    if (g_file_test(folder, G_FILE_TEST_EXISTS)) {
        if (!force) {
            g_set_error(error, sim_error_quark(), 3, "%s exists already; give --force to write it anew.",
                        folder);
            return FALSE;
        }
        clear_folder(folder);
    }
    if (g_mkdir_with_parents(folder, 0777) != 0) {
        g_set_error(error, sim_error_quark(), 3, "%s can't be made: %s.", folder, g_strerror(errno));
        return FALSE;
    }
    return TRUE;
}

gboolean
sim_produce(const char *path, const char *output, gboolean force, GError **error)
{
    SimScenario *s = sim_scenario_load(path, error);
    if (s == NULL)
        return FALSE;
    g_autofree char *stem = g_build_filename(output, s->name, NULL);
    SimCamera *camera = sim_camera_new(s);
    SimRecorder *recorder = prepare(stem, force, error) ? sim_recorder_run(s, camera, stem, error) : NULL;
    gboolean ok = recorder != NULL;
    if (ok) {
        g_autoptr(GArray) truths = sim_truth_find(camera, recorder);
        ok = sim_truth_write(s, recorder, truths, stem, error);
        sim_recorder_free(recorder);
    }
    sim_camera_free(camera);
    sim_scenario_free(s);
    return ok;
}
