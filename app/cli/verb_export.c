/* SPDX-License-Identifier: GPL-3.0-or-later */
/* export: the finish list of a case. */
#include "app/cli/options.h"
#include "core/base/base_error.h"
#include "core/case/case_finish.h"

static const char about[] =
    "Prints the finish list that a case gives: derived anew from what the case keeps and from the recording "
    "it\n"
    "was made on, never stored. The case is only read, its journal and facts checked against each other.";

static const char more[] =
    "The recording is looked for where it lay, then beside the case by its name. Another one is refused. "
    "Files of it\n"
    "that are no longer what they were when the case was made are named as problems of the list, with the "
    "bibs\n"
    "whose markers stand on them; where a changed block can no longer be read, its markers have no time and "
    "the list\n"
    "is refused.\n"
    "\n"
    "Text tells the case's revision and the digest of its journal, which pins every entry. JSON and CSV are "
    "those of\n"
    "rank.\n"
    "\n"
    "Exit status:\n"
    "  0  done; problems stand in the list\n"
    "  1  case or recording was refused, or the output could not be written; nothing was written\n"
    "  2  the call was wrong\n"
    "\n"
    "Example:\n"
    "  halfwheel-cli export sprint.halfwheel --format csv -o list.csv\n"
    "\n"
    "The list is a proposal: the result is ruled by a licensed commissaire under the regulations in force.\n";

static char *
dup_text(const HwCase *held, const HwCaseFinish *finish, const HwFinishList *list)
{
    g_autofree char *path = hw_cli_dup_line(hw_case_get_path(held));
    g_autofree char *place = hw_cli_dup_line(hw_recording_get_path(finish->recording));
    g_autofree char *text = hw_finish_list_dup_text(list);
    return g_strdup_printf("Case         %s\n"
                           "Revision     %" G_GINT64_FORMAT "\n"
                           "Journal      SHA-256 %s\n"
                           "Recording    %s\n"
                           "\n%s",
                           path, hw_case_get_revision(held), hw_case_get_digest(held)->hex, place, text);
}

static char *
dup_result(const HwCase *held, const HwCaseFinish *finish, const HwFinishList *list, HwFormat format)
{
    if (format == HW_FORMAT_JSON)
        return hw_finish_list_dup_json(list);
    return format == HW_FORMAT_CSV ? hw_finish_list_dup_csv(list) : dup_text(held, finish, list);
}

/* A list never takes the place of the case, even with --force. */
static bool
check_output(const char *output, const char *case_path, GError **error)
{
    if (output == NULL || !hw_cli_lies_in(output, case_path))
        return true;
    g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_UNSAFE,
                "%s is the case itself, which export only reads; name another file.", output);
    return false;
}

static bool
run(HwCall *call, HwExit *status, GError **error)
{
    (void)status;
    g_auto(HwResultOptions) result = { 0 };
    const GOptionEntry entries[] = {
        { "format", 0, 0, G_OPTION_ARG_FILENAME, &result.format, "text (unless said), json or csv",
          "FORMAT" },
        HW_OUTPUT_ENTRIES(result, "Write there instead of standard output"),
        { NULL },
    };
    const HwOptionTable tables[] = { { "Options:", entries } };
    HwParse parsed =
        hw_cli_parse(call, &hw_verb_export, about, tables, G_N_ELEMENTS(tables), more, 1, 1, error);
    if (parsed != HW_PARSE_GO)
        return parsed == HW_PARSE_HELP;
    HwFormat format;
    const char *path = call->argv[1];
    if (!hw_result_options_get_format(&result, true, &format, error) ||
        !check_output(result.output, path, error))
        return false;
    g_autoptr(HwCase) held = hw_case_open(path, HW_CASE_READ, error);
    g_autoptr(HwCaseFinish) finish =
        held != NULL ? hw_case_finish_read(held, call->cancellable, error) : NULL;
    if (finish == NULL || !hw_cli_check_output(result.output, finish->recording, error))
        return false;
    g_autoptr(HwFinishList) list = hw_case_finish_derive(finish, call->cancellable, error);
    if (list == NULL)
        return false;
    g_autofree char *text = dup_result(held, finish, list, format);
    return hw_result_options_write(&result, text, error);
}

const HwVerb hw_verb_export = {
    "export",
    "CASE",
    "Print the finish list that a case gives",
    run,
};
