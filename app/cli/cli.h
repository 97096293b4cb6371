/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What every verb of halfwheel-cli shares: the call, its end, and how the command line is read. A verb writes
 * results to standard output or to the file named with -o, and nothing else there; main says in one line on
 * standard error why it failed. */
#pragma once

#include <gio/gio.h>
#include <glib.h>
#include <stdbool.h>

typedef enum {
    HW_EXIT_DONE = 0,
    HW_EXIT_FAILED = 1, /* refused or failed: a sentence on standard error, outputs untouched */
    HW_EXIT_CALL = 2,   /* the call was wrong */
    HW_EXIT_FALSE = 3   /* read whole, and something in it is false */
} HwExit;

typedef enum { HW_CLI_ERROR_CALL } HwCliError;

/* Errors of this domain are wrong calls and end with HW_EXIT_CALL; those of all others with HW_EXIT_FAILED.
 */
#define HW_CLI_ERROR (hw_cli_error_quark())
GQuark hw_cli_error_quark(void);

/* One use of a verb. argv[0] is the verb; what is left after hw_cli_parse are its arguments from argv[1]. */
typedef struct {
    int argc;
    char **argv;
    GCancellable *cancellable; /* cancelled by SIGINT, SIGTERM, SIGHUP */
} HwCall;

/* A verb of the table in main.c. `run` returns false with an error, or true with *status (DONE unless set).
 */
typedef struct {
    const char *name;
    const char *arguments; /* of the synopsis */
    const char *does;      /* one line */
    bool (*run)(HwCall *call, HwExit *status, GError **error);
} HwVerb;

extern const HwVerb hw_verb_inspect;
extern const HwVerb hw_verb_cut;
extern const HwVerb hw_verb_rules;
extern const HwVerb hw_verb_rank;
extern const HwVerb hw_verb_picture;
extern const HwVerb hw_verb_make_case;
extern const HwVerb hw_verb_export;

/* A titled table of options on a verb's help page. */
typedef struct {
    const char *title; /* "Options:" */
    const GOptionEntry *entries;
} HwOptionTable;

typedef enum { HW_PARSE_GO, HW_PARSE_HELP, HW_PARSE_FAILED } HwParse;

/* Reads the options of a verb out of the call and holds the number of its arguments to min_args … max_args.
 * --help prints the page: synopsis, `about`, the tables, then `more` (files, exit status, an example), and
 * gives HELP. FAILED comes with an error. */
HwParse hw_cli_parse(HwCall *call, const HwVerb *verb, const char *about, const HwOptionTable *tables,
                     guint n_tables, const char *more, int min_args, int max_args, GError **error);

/* The text whole to standard output; an error where it does not take it. */
bool hw_cli_print(const char *text, GError **error);

/* Place of `value` among the NULL-ended words; false with an error that names option and words. */
bool hw_cli_word(const char *option, const char *value, const char *const *words, int *index, GError **error);

/* Holds an option's text, which may be NULL, to UTF-8. */
bool hw_cli_text(const char *option, const char *value, GError **error);

/* A file name or text as it may stand in a line for people: valid UTF-8, control characters made visible.
 * Owned by the caller. */
char *hw_cli_dup_line(const char *text);
