/* SPDX-License-Identifier: GPL-3.0-or-later */
/* rank: the finish list of a recording, derived from markers. */
#include "app/cli/finish_files.h"
#include "app/cli/options.h"

static const char about[] =
    "Derives the finish list of a recording from the markers read on it: order, official times under the "
    "rule\n"
    "set, groups, measured gaps with their uncertainty, and whether the recording tells neighbours apart.\n"
    "Without --rules the list is the measured order with times that are not rounded, and says so.";

static const char more[] =
    "Files:\n"
    "  Where an option names no file, those beside the RECORDING are used: NAME.markers.csv, "
    "NAME.startlist.csv,\n"
    "  NAME.race.json, NAME.calibration.json. The text says which were read, and what was understood of a "
    "start\n"
    "  list's encoding, delimiter and headers.\n"
    "\n"
    "Only the blocks that carry markers are decoded; the list says how many others were not checked. On a "
    "damaged\n"
    "recording the list is made as far as markers stand on readable columns, and tells of the damage.\n"
    "\n"
    "JSON keys: rules, list (rank, bib, name, team, category, status, time_ns, time, gap_ns, gap, "
    "gap_prev_ns,\n"
    "distance_prev_m, u_gap_prev_ns, p_order_wrong, separated, group), problems. Times in ns are measured "
    "and\n"
    "never rounded; time and gap are official, null where no start is known.\n"
    "\n"
    "Exit status:\n"
    "  0  done; problems stand in the list\n"
    "  1  a file was refused or could not be read or written; nothing was written\n"
    "  2  the call was wrong\n"
    "\n"
    "Example:\n"
    "  halfwheel-cli rank samples/aldermoor-sprint --rules road-1s --format csv -o list.csv\n"
    "\n"
    "The list is a proposal: the result is ruled by a licensed commissaire under the regulations in force.\n";

static char *
dup_result(const HwFinishFiles *files, HwFormat format)
{
    if (format == HW_FORMAT_JSON)
        return hw_finish_list_dup_json(files->list);
    if (format == HW_FORMAT_CSV)
        return hw_finish_list_dup_csv(files->list);
    g_autofree char *list = hw_finish_list_dup_text(files->list);
    return g_strdup_printf("%s\n%s", files->read->str, list);
}

static bool
run(HwCall *call, HwExit *status, GError **error)
{
    (void)status;
    g_auto(HwScanOptions) scan = { 0 };
    g_auto(HwFinishOptions) finish = { 0 };
    g_auto(HwResultOptions) result = { 0 };
    const GOptionEntry finish_entries[] = { HW_FINISH_ENTRIES(finish), { NULL } };
    const GOptionEntry image_entries[] = { HW_SCAN_ENTRIES(scan), { NULL } };
    const GOptionEntry entries[] = {
        { "format", 0, 0, G_OPTION_ARG_FILENAME, &result.format, "text (unless said), json or csv",
          "FORMAT" },
        HW_OUTPUT_ENTRIES(result, "Write there instead of standard output"),
        { NULL },
    };
    const HwOptionTable tables[] = { { "What the list is made from:", finish_entries },
                                     { "Where RECORDING is a bare image:", image_entries },
                                     { "Options:", entries } };
    HwParse parsed =
        hw_cli_parse(call, &hw_verb_rank, about, tables, G_N_ELEMENTS(tables), more, 1, 1, error);
    if (parsed != HW_PARSE_GO)
        return parsed == HW_PARSE_HELP;
    HwFormat format;
    if (!hw_result_options_get_format(&result, true, &format, error))
        return false;

    g_autoptr(HwRecording) recording = hw_cli_open_recording(call->argv[1], &scan, error);
    g_auto(HwFinishFiles) files = { 0 };
    if (recording == NULL || !hw_cli_check_output(result.output, recording, error) ||
        !hw_finish_files_read(recording, &finish, true, call->cancellable, &files, error))
        return false;
    g_autofree char *text = dup_result(&files, format);
    return hw_result_options_write(&result, text, error);
}

const HwVerb hw_verb_rank = {
    "rank",
    "RECORDING",
    "Print the finish list that markers on a recording give",
    run,
};
