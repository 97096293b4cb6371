/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "samples/sim/produce.h"

#include "samples/sim/truth.h"

#include <errno.h>
#include <glib/gstdio.h>
#include <string.h>

static const char *const BESIDE[] = { ".markers.csv", ".startlist.csv", ".race.json", ".truth.csv" };

static gboolean
is_ours(const char *name)
{
    return g_str_has_prefix(name, "block-") || g_str_has_prefix(name, "times-") ||
           strcmp(name, "recording.json") == 0;
}

/* Whether a folder holds nothing but what a run writes: only then may it be written anew. */
static gboolean
holds_only_ours(const char *folder, GError **error)
{
    g_autoptr(GDir) dir = g_dir_open(folder, 0, error);
    if (dir == NULL)
        return FALSE;
    for (const char *name; (name = g_dir_read_name(dir)) != NULL;)
        if (!is_ours(name)) {
            g_set_error(error, sim_error_quark(), 3,
                        "%s holds %s, which is no part of a recording; choose another folder.", folder, name);
            return FALSE;
        }
    return TRUE;
}

static void
remove_folder(const char *folder)
{
    g_autoptr(GDir) dir = g_dir_open(folder, 0, NULL);
    for (const char *name; dir != NULL && (name = g_dir_read_name(dir)) != NULL;) {
        g_autofree char *path = g_build_filename(folder, name, NULL);
        if (is_ours(name))
            g_unlink(path);
    }
    g_rmdir(folder);
}

static gboolean
may_write(const char *stem, gboolean force, GError **error)
{
    gboolean folder = g_file_test(stem, G_FILE_TEST_EXISTS), taken = folder;
    g_autofree char *which = g_strdup(stem);
    for (guint i = 0; i < G_N_ELEMENTS(BESIDE) && !taken; i++) {
        g_free(which);
        which = g_strconcat(stem, BESIDE[i], NULL);
        taken = g_file_test(which, G_FILE_TEST_EXISTS);
    }
    if (taken && !force) {
        g_set_error(error, sim_error_quark(), 3, "%s exists already; give --force to write it anew.", which);
        return FALSE;
    }
    return !folder || holds_only_ours(stem, error);
}

static gboolean
move_into_place(const char *part, const char *stem, GError **error)
{
    if (g_file_test(stem, G_FILE_TEST_EXISTS))
        remove_folder(stem);
    if (g_rename(part, stem) == 0)
        return TRUE;
    g_set_error(error, sim_error_quark(), 3, "%s can't be put in place: %s.", stem, g_strerror(errno));
    return FALSE;
}

/* Films beside the final place, so that a failure leaves what was there. */
static gboolean
film(const SimScenario *s, const char *stem, GError **error)
{
    g_autofree char *part = g_strconcat(stem, ".part", NULL);
    remove_folder(part);
    if (g_mkdir_with_parents(part, 0777) != 0) {
        g_set_error(error, sim_error_quark(), 3, "%s can't be made: %s.", part, g_strerror(errno));
        return FALSE;
    }
    SimCamera *camera = sim_camera_new(s);
    SimRecorder *recorder = sim_recorder_run(s, camera, part, error);
    gboolean ok = recorder != NULL && move_into_place(part, stem, error);
    if (ok) {
        g_autoptr(GArray) truths = sim_truth_find(camera, recorder);
        ok = sim_truth_write(s, recorder, truths, stem, error);
    } else
        remove_folder(part);
    sim_recorder_free(recorder);
    sim_camera_free(camera);
    return ok;
}

gboolean
sim_produce(const char *path, const char *output, gboolean force, GError **error)
{
    SimScenario *s = sim_scenario_load(path, error);
    if (s == NULL)
        return FALSE;
    g_autofree char *stem = g_build_filename(output, s->name, NULL);
    gboolean ok = may_write(stem, force, error) && film(s, stem, error);
    sim_scenario_free(s);
    return ok;
}
