/* SPDX-License-Identifier: GPL-3.0-or-later */
/* halfwheel-sim: line-scan recordings of bicycle finishes of which the truth is known. */
#include "samples/sim/produce.h"
#include "samples/sim/scenario.h"

#include <locale.h>

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
        if (!sim_produce(scenarios[i], output, force, &error)) {
            g_printerr("halfwheel-sim: %s\n", error->message);
            return 1;
        }
    return 0;
}
