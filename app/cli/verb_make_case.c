/* SPDX-License-Identifier: GPL-3.0-or-later */
/* make-case: a case out of a recording and the files a finish list is derived from. */
#include "app/cli/finish_files.h"
#include "app/cli/options.h"
#include "core/case/case_files.h"

#include <string.h>

static const char about[] =
    "Makes a case: one file that keeps the markers, start list, race, rule set and calibration of a finish "
    "as\n"
    "they stand, with the digest of every file of the recording, as the first entry of a journal in which "
    "each\n"
    "entry pins all those before it. The list the case gives is the one rank prints of the same files.";

static const char more[] =
    "Files:\n"
    "  Where an option names no file, those beside the RECORDING are used: NAME.markers.csv, "
    "NAME.startlist.csv,\n"
    "  NAME.race.json, NAME.calibration.json; rank says which these are. The RECORDING itself stays where it "
    "is and\n"
    "  is never changed; the case finds it there, or beside itself by its name. A bare image has to be cut "
    "into a\n"
    "  recording first.\n"
    "\n"
    "With --force only a whole case that nobody has open is replaced, with its journal.\n"
    "\n"
    "Exit status:\n"
    "  0  done\n"
    "  1  a file was refused or could not be read or written; nothing was made\n"
    "  2  the call was wrong\n"
    "\n"
    "Example:\n"
    "  halfwheel-cli make-case samples/aldermoor-sprint --rules road-1s -o sprint.halfwheel\n"
    "\n"
    "A case is a record; the result is ruled by a licensed commissaire under the regulations in force.\n";

static HwRecording *
open_recording(const char *path, GError **error)
{
    if (!hw_recording_path_is_image(path))
        return hw_recording_open(path, error);
    g_autofree char *shown = hw_cli_dup_line(path);
    g_set_error(error, HW_CLI_ERROR, HW_CLI_ERROR_CALL,
                "%s is a bare image, and a case needs a recording: make one of it with “halfwheel-cli cut”.",
                shown);
    return NULL;
}

static bool
check_output(const HwResultOptions *result, GError **error)
{
    if (result->output != NULL && *result->output != '\0' && strcmp(result->output, "-") != 0)
        return true;
    g_set_error_literal(error, HW_CLI_ERROR, HW_CLI_ERROR_CALL,
                        "make-case needs a file to make; name it with -o.");
    return false;
}

static bool
make(const char *path, const HwFinishFiles *files, const HwFinishOptions *options, bool force,
     GCancellable *cancellable, GError **error)
{
    const HwFinishInput input = {
        .strip = files->strip,
        .markers = files->markers,
        .start_list = files->start_list,
        .race = files->race,
        .rules = files->rules,
        .gun = options->start != NULL ? &files->start : NULL,
        .calibration = files->calibration,
        .passage = options->passage,
    };
    g_autofree char *beside = hw_recording_dup_beside(files->recording, ".calibration.json");
    const HwCaseFiles from = {
        .input = &input,
        .list = files->list,
        .map = options->map,
        .rules = options->rules,
        .calibration = options->calibration != NULL ? options->calibration : beside,
    };
    return hw_case_from_files(path, &from, force, cancellable, error);
}

static bool
run(HwCall *call, HwExit *status, GError **error)
{
    (void)status;
    g_auto(HwFinishOptions) finish = { 0 };
    g_auto(HwResultOptions) result = { 0 };
    const GOptionEntry finish_entries[] = { HW_FINISH_ENTRIES(finish), { NULL } };
    const GOptionEntry entries[] = {
        { "output", 'o', 0, G_OPTION_ARG_FILENAME, &result.output, "Case to make (needed)", "CASE" },
        { "force", 0, 0, G_OPTION_ARG_NONE, &result.force, "Replace a case that is there", NULL },
        { NULL },
    };
    const HwOptionTable tables[] = { { "What the case is made from:", finish_entries },
                                     { "Options:", entries } };
    HwParse parsed =
        hw_cli_parse(call, &hw_verb_make_case, about, tables, G_N_ELEMENTS(tables), more, 1, 1, error);
    if (parsed != HW_PARSE_GO)
        return parsed == HW_PARSE_HELP;
    if (!check_output(&result, error))
        return false;
    g_autoptr(HwRecording) recording = open_recording(call->argv[1], error);
    g_auto(HwFinishFiles) files = { 0 };
    return recording != NULL && hw_cli_check_output(result.output, recording, error) &&
           hw_finish_files_read(recording, &finish, true, call->cancellable, &files, error) &&
           make(result.output, &files, &finish, result.force, call->cancellable, error);
}

const HwVerb hw_verb_make_case = {
    "make-case",
    "RECORDING",
    "Make a case of a recording and what was read on it",
    run,
};
