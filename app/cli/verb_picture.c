/* SPDX-License-Identifier: GPL-3.0-or-later */
/* picture: the annotated picture of a finish, or of two riders side by side. */
#include "app/cli/finish_files.h"
#include "app/cli/options.h"
#include "app/cli/progress.h"
#include "core/base/duration.h"
#include "core/sheet/picture.h"

#include <string.h>

static const char about[] = "Draws the annotated picture: riders facing the way they rode, with time ruler, "
                            "markers, places and gaps, what\n"
                            "it rests on and how sure it is. With --pair, two riders side by side at the "
                            "same scale. By default from before\n"
                            "the first marker to behind the last.";

static const char more[] =
    "T is an RFC 3339 instant, or a duration since the recording's epoch: 3.25, 1:02.5, 0:01:02.5.\n"
    "\n"
    "Files:\n"
    "  FILE ends in .png (any width) or .pdf (A4 pages that overlap). Markers, start list, race and "
    "calibration\n"
    "  beside the RECORDING are used where no option names others, as for rank; without markers the picture "
    "bears\n"
    "  none.\n"
    "\n"
    "Exit status:\n"
    "  0  done\n"
    "  1  a file was refused or could not be read or written; nothing was written\n"
    "  2  the call was wrong\n"
    "\n"
    "Example:\n"
    "  halfwheel-cli picture samples/aldermoor-sprint --rules road-1s --pair 2,33 -o pair.png\n"
    "\n"
    "The picture is evidence, not a ruling: the result is ruled by a licensed commissaire under the "
    "regulations in\n"
    "force.\n";

typedef struct {
    HwScanOptions scan;
    HwFinishOptions finish;
    HwResultOptions result;
    char *pair;
    char *from;
    char *to;
    gboolean all;
} HwPictureOptions;

static void
picture_options_clear(HwPictureOptions *options)
{
    hw_scan_options_clear(&options->scan);
    hw_finish_options_clear(&options->finish);
    hw_result_options_clear(&options->result);
    g_clear_pointer(&options->pair, g_free);
    g_clear_pointer(&options->from, g_free);
    g_clear_pointer(&options->to, g_free);
}

G_DEFINE_AUTO_CLEANUP_CLEAR_FUNC(HwPictureOptions, picture_options_clear)

static bool
wrong_call(const char *sentence, GError **error)
{
    g_set_error_literal(error, HW_CLI_ERROR, HW_CLI_ERROR_CALL, sentence);
    return false;
}

/* What does not need the recording: so that a wrong call is told at once. */
static bool
check_options(const HwPictureOptions *options, HwPictureFormat *format, char ***pair, GError **error)
{
    if (options->result.output == NULL)
        return wrong_call("picture needs a file to make; name it with -o.", error);
    g_autoptr(GError) fault = NULL;
    if (!hw_picture_format_of(options->result.output, format, &fault))
        return wrong_call(fault->message, error);
    if ((options->from == NULL) != (options->to == NULL))
        return wrong_call("--from and --to go together; give both.", error);
    if ((options->pair != NULL) + (options->from != NULL) + (options->all != FALSE) > 1)
        return wrong_call("--pair, --from with --to, and --all exclude each other; give one.", error);
    if (!hw_cli_text("--pair", options->pair, error))
        return false;
    if (options->pair == NULL)
        return true;
    g_auto(GStrv) bibs = g_strsplit(options->pair, ",", 3);
    if (g_strv_length(bibs) != 2 || *bibs[0] == '\0' || *bibs[1] == '\0' || strcmp(bibs[0], bibs[1]) == 0)
        return wrong_call("--pair takes two different bibs parted by a comma, such as 2,33.", error);
    *pair = g_steal_pointer(&bibs);
    return true;
}

static bool
read_moment(const char *option, const char *text, const HwRecording *recording, int64_t *ns, GError **error)
{
    HwInstant instant;
    if (g_utf8_validate(text, -1, NULL) &&
        (hw_duration_parse(text, ns) ||
         (hw_instant_parse(text, &instant, NULL) &&
          hw_instant_difference(&instant, hw_recording_get_epoch(recording), ns))))
        return true;
    g_autofree char *shown = hw_cli_dup_line(text);
    g_set_error(
        error, HW_CLI_ERROR, HW_CLI_ERROR_CALL,
        "%s “%s” is neither a duration since the epoch (3.25, 1:02.5) nor an RFC 3339 instant with its "
        "offset; correct it.",
        option, shown);
    return false;
}

static bool
choose_excerpt(HwPicture *picture, const HwPictureOptions *options, char **pair, const HwRecording *recording,
               GError **error)
{
    picture->excerpt = HW_EXCERPT_MARKERS;
    if (options->all)
        picture->excerpt = HW_EXCERPT_ALL;
    if (pair != NULL) {
        picture->excerpt = HW_EXCERPT_PAIR;
        picture->bib_a = pair[0];
        picture->bib_b = pair[1];
    }
    if (options->from == NULL)
        return true;
    picture->excerpt = HW_EXCERPT_STRETCH;
    if (!read_moment("--from", options->from, recording, &picture->from_ns, error) ||
        !read_moment("--to", options->to, recording, &picture->to_ns, error))
        return false;
    return picture->from_ns < picture->to_ns ||
           wrong_call("--from must lie before --to; exchange them.", error);
}

/* One start for all riders on the picture, so that its ruler can count from it. */
static void
find_start(HwPicture *picture, const HwFinishFiles *files, bool given)
{
    const HwInstant *start = given ? &files->start : NULL;
    if (start == NULL && files->race != NULL && files->race->waves->len == 1)
        start = &g_array_index(files->race->waves, HwWave, 0).instant;
    picture->has_start =
        start != NULL &&
        hw_instant_difference(start, hw_recording_get_epoch(files->recording), &picture->start_ns);
}

static bool
draw(const HwPictureOptions *options, char **pair, HwPictureFormat format, const HwFinishFiles *files,
     GCancellable *cancellable, GError **error)
{
    HwPicture picture;
    hw_picture_init(&picture, files->strip);
    picture.list = files->list;
    picture.markers = files->markers;
    picture.calibration = files->calibration;
    if (!choose_excerpt(&picture, options, pair, files->recording, error))
        return false;
    if (files->race != NULL && *files->race->event != '\0')
        picture.event = files->race->event;
    if (files->list != NULL)
        picture.passage = files->list->passage;
    g_autofree char *rules = files->rules != NULL ? hw_rules_dup_line(files->rules) : g_strdup("");
    picture.rules = rules;
    find_start(&picture, files, options->finish.start != NULL);

    g_auto(HwTerminalProgress) adding = hw_terminal_progress("Adding up the digest");
    HwDigest digest;
    bool known = false;
    if (!hw_recording_digest(files->recording, hw_terminal_progress_report, &adding, cancellable, &known,
                             &digest, error))
        return false;
    hw_terminal_progress_end(&adding);
    picture.digest = known ? &digest : NULL;
    g_auto(HwTerminalProgress) drawing = hw_terminal_progress("Drawing");
    return hw_picture_write(&picture, options->result.output, format, options->result.force,
                            hw_terminal_progress_report, &drawing, cancellable, error);
}

static bool
run(HwCall *call, HwExit *status, GError **error)
{
    (void)status;
    g_auto(HwPictureOptions) options = { 0 };
    const GOptionEntry excerpt_entries[] = {
        { "pair", 0, 0, G_OPTION_ARG_FILENAME, &options.pair, "Two riders side by side", "A,B" },
        { "from", 0, 0, G_OPTION_ARG_FILENAME, &options.from, "Begin there, with --to", "T" },
        { "to", 0, 0, G_OPTION_ARG_FILENAME, &options.to, "End there", "T" },
        { "all", 0, 0, G_OPTION_ARG_NONE, &options.all, "The whole recording", NULL },
        { NULL },
    };
    const GOptionEntry finish_entries[] = { HW_FINISH_ENTRIES(options.finish), { NULL } };
    const GOptionEntry scan_entries[] = { HW_SCAN_ENTRIES(options.scan), { NULL } };
    const GOptionEntry entries[] = {
        HW_OUTPUT_ENTRIES(options.result, "Picture to make, .png or .pdf (needed)"),
        { NULL },
    };
    const HwOptionTable tables[] = { { "What is shown:", excerpt_entries },
                                     { "What stands on it:", finish_entries },
                                     { "Where RECORDING is a bare image:", scan_entries },
                                     { "Options:", entries } };
    HwParse parsed =
        hw_cli_parse(call, &hw_verb_picture, about, tables, G_N_ELEMENTS(tables), more, 1, 1, error);
    if (parsed != HW_PARSE_GO)
        return parsed == HW_PARSE_HELP;
    HwPictureFormat format;
    g_auto(GStrv) pair = NULL;
    if (!check_options(&options, &format, &pair, error))
        return false;

    g_autoptr(HwRecording) recording = hw_cli_open_recording(call->argv[1], &options.scan, error);
    g_auto(HwFinishFiles) files = { 0 };
    return recording != NULL && hw_cli_check_output(options.result.output, recording, error) &&
           hw_finish_files_read(recording, &options.finish, false, call->cancellable, &files, error) &&
           draw(&options, pair, format, &files, call->cancellable, error);
}

const HwVerb hw_verb_picture = {
    "picture",
    "RECORDING",
    "Draw the annotated picture, or two riders side by side",
    run,
};
