/* SPDX-License-Identifier: GPL-3.0-or-later */
/* halfwheel-cli: the table of verbs, and how a call ends. */
#include "app/cli/cli.h"

#include <errno.h>
#include <fcntl.h>
#include <pthread.h>
#include <signal.h>
#include <stdio.h>
#include <string.h>
#include <unistd.h>

static const HwVerb *const verbs[] = {
    &hw_verb_inspect, &hw_verb_cut,       &hw_verb_rules,  &hw_verb_rank,
    &hw_verb_picture, &hw_verb_make_case, &hw_verb_export,
};

static const char more[] =
    "Wherever a RECORDING is asked for, a folder with recording.json is meant, or a bare PNG or JPEG "
    "together\n"
    "with --rate and --epoch. “-” as an output is standard output. Results go to standard output, one "
    "sentence\n"
    "to standard error where something fails. An output that is there is never replaced without --force.\n"
    "\n"
    "Exit status:\n"
    "  0  done\n"
    "  1  refused or failed; nothing was written\n"
    "  2  the call was wrong\n"
    "  3  read whole, and something in it is false (inspect)\n"
    "\n"
    "Example:\n"
    "  halfwheel-cli rank samples/aldermoor-sprint --rules road-1s\n"
    "\n"
    "Halfwheel measures and advises; the result is ruled by a licensed commissaire under the regulations in "
    "force.\n";

static char *
dup_help(void)
{
    GString *page =
        g_string_new("Usage:\n"
                     "  halfwheel-cli VERB [OPTION…] ARGUMENT…\n"
                     "  halfwheel-cli VERB --help\n"
                     "  halfwheel-cli --version\n"
                     "\n"
                     "Decides close finishes of bicycle races from line-scan pictures, without a display.\n"
                     "\n"
                     "Verbs:\n");
    for (guint i = 0; i < G_N_ELEMENTS(verbs); i++)
        g_string_append_printf(page, "  %-9s %s\n", verbs[i]->name, verbs[i]->does);
    g_string_append_printf(page, "\n%s", more);
    return g_string_free(page, FALSE);
}

/* Standard descriptors that the caller closed are taken up, so that no file that is opened later gets their
 * number and results written into it. Writing to the stand-in fails, as it should. */
static void
hold_standard_descriptors(void)
{
    for (int fd = STDIN_FILENO; fd <= STDERR_FILENO; fd++) {
        if (fcntl(fd, F_GETFD) < 0 && errno == EBADF)
            (void)!open("/dev/null", fd == STDIN_FILENO ? O_WRONLY : O_RDONLY);
    }
}

static sigset_t stop_signals;

/* The first signal asks the verb to stop and clear away what it began; the second does not ask. */
static void *
wait_for_stop(void *cancellable)
{
    int caught;
    if (sigwait(&stop_signals, &caught) == 0)
        g_cancellable_cancel(cancellable);
    if (sigwait(&stop_signals, &caught) == 0)
        _exit(128 + caught);
    return NULL;
}

static void
watch_for_stop(GCancellable *cancellable)
{
    sigemptyset(&stop_signals);
    sigaddset(&stop_signals, SIGINT);
    sigaddset(&stop_signals, SIGTERM);
    sigaddset(&stop_signals, SIGHUP);
    pthread_t thread;
    pthread_sigmask(SIG_BLOCK, &stop_signals, NULL);
    if (pthread_create(&thread, NULL, wait_for_stop, cancellable) == 0)
        pthread_detach(thread);
    else
        pthread_sigmask(SIG_UNBLOCK, &stop_signals, NULL);
}

static HwExit
end_with(const GError *error)
{
    const char *sentence = g_error_matches(error, G_IO_ERROR, G_IO_ERROR_CANCELLED)
                               ? "Stopped on request; nothing was written."
                               : error->message;
    g_autofree char *line = hw_cli_dup_line(sentence);
    fprintf(stderr, "halfwheel-cli: %s\n", line);
    return error->domain == HW_CLI_ERROR ? HW_EXIT_CALL : HW_EXIT_FAILED;
}

static bool
run(int argc, char **argv, GCancellable *cancellable, HwExit *status, GError **error)
{
    if (argc < 2) {
        g_set_error_literal(error, HW_CLI_ERROR, HW_CLI_ERROR_CALL,
                            "No verb was given; “halfwheel-cli --help” lists them.");
        return false;
    }
    if (strcmp(argv[1], "--help") == 0 || strcmp(argv[1], "-h") == 0) {
        g_autofree char *page = dup_help();
        return hw_cli_print(page, error);
    }
    if (strcmp(argv[1], "--version") == 0)
        return hw_cli_print("halfwheel-cli " HALFWHEEL_VERSION "\n", error);
    for (guint i = 0; i < G_N_ELEMENTS(verbs); i++) {
        if (strcmp(argv[1], verbs[i]->name) == 0) {
            HwCall call = { argc - 1, argv + 1, cancellable };
            return verbs[i]->run(&call, status, error);
        }
    }
    g_autofree char *shown = hw_cli_dup_line(argv[1]);
    g_set_error(error, HW_CLI_ERROR, HW_CLI_ERROR_CALL,
                "“%s” is no verb; “halfwheel-cli --help” lists those there are.", shown);
    return false;
}

int
main(int argc, char **argv)
{
    hold_standard_descriptors();
    signal(SIGPIPE, SIG_IGN);
    g_autoptr(GCancellable) cancellable = g_cancellable_new();
    watch_for_stop(cancellable);

    HwExit status = HW_EXIT_DONE;
    g_autoptr(GError) error = NULL;
    return run(argc, argv, cancellable, &status, &error) ? (int)status : (int)end_with(error);
}
