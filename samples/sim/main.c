/* SPDX-License-Identifier: GPL-3.0-or-later */
/* halfwheel-sim: line-scan recordings of bicycle finishes of which the truth is known. */
#include "samples/sim/truth.h"

#include <errno.h>
#include <glib/gstdio.h>
#include <locale.h>
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

static gboolean
simulate(const char *path, const char *output, gboolean force, GError **error)
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

int
main(int argc, char **argv)
{
    g_autofree char *output = NULL;
    gboolean force = FALSE;
    g_auto(GStrv) scenarios = NULL;
    const GOptionEntry OPTIONS[] = {
        { "output", 'o', 0, G_OPTION_ARG_FILENAME, &output, "Folder to write into", "FOLDER" },
        { "force", 0, 0, G_OPTION_ARG_NONE, &force, "Write anew what is there", NULL },
        { G_OPTION_REMAINING, 0, 0, G_OPTION_ARG_FILENAME_ARRAY, &scenarios, NULL, "SCENARIO.txt ..." },
        { NULL },
    };
    setlocale(LC_ALL, "");
    g_autoptr(GOptionContext) context = g_option_context_new(NULL);
    g_autoptr(GError) error = NULL;
    g_option_context_set_summary(
        context,
        "Makes line-scan recordings of bicycle finishes of which the truth is known: for each scenario NAME\n"
        "the recording FOLDER/NAME and beside it NAME.markers.csv, NAME.startlist.csv, NAME.race.json\n"
        "and NAME.truth.csv.");
    g_option_context_set_description(context, sim_scenario_help());
    g_option_context_add_main_entries(context, OPTIONS, NULL);
    if (!g_option_context_parse(context, &argc, &argv, &error)) {
        g_printerr("halfwheel-sim: %s\n", error->message);
        return 2;
    }
    if (output == NULL || scenarios == NULL) {
        g_printerr(
            "halfwheel-sim: name a scenario and the folder to write into, -o FOLDER; --help tells more.\n");
        return 2;
    }
    for (int i = 0; scenarios[i] != NULL; i++)
        if (!simulate(scenarios[i], output, force, &error)) {
            g_printerr("halfwheel-sim: %s\n", error->message);
            return 1;
        }
    return 0;
}
