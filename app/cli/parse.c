/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "app/cli/cli.h"

#include "core/base/output.h"

#include <string.h>

G_DEFINE_QUARK(hw - cli - error - quark, hw_cli_error)

bool
hw_cli_print(const char *text, GError **error)
{
    return hw_output_write_file("-", false, text, strlen(text), error);
}

static GOptionContext *
make_context(const HwVerb *verb, const char *about, const HwOptionTable *tables, guint n_tables,
             const char *more, const GOptionEntry *help)
{
    GOptionContext *context = g_option_context_new(verb->arguments);
    /* Our own --help: the page goes the way of all results, so that a full disk or closed pipe is noticed. */
    g_option_context_set_help_enabled(context, FALSE);
    g_option_context_set_summary(context, about);
    g_option_context_set_description(context, more);
    for (guint i = 0; i < n_tables; i++) {
        GOptionGroup *group =
            g_option_group_new(tables[i].title, tables[i].title, tables[i].title, NULL, NULL);
        g_option_group_add_entries(group, tables[i].entries);
        if (i + 1 == n_tables)
            g_option_group_add_entries(group, help);
        g_option_context_add_group(context, group);
    }
    return context;
}

/* GLib's reasons are clauses without a final stop. */
static void
set_call_error(const HwVerb *verb, const char *reason, GError **error)
{
    g_set_error(error, HW_CLI_ERROR, HW_CLI_ERROR_CALL, "%s; “halfwheel-cli %s --help” shows how it is used.",
                reason, verb->name);
}

HwParse
hw_cli_parse(HwCall *call, const HwVerb *verb, const char *about, const HwOptionTable *tables, guint n_tables,
             const char *more, int min_args, int max_args, GError **error)
{
    gboolean wants_help = FALSE;
    const GOptionEntry help[] = {
        { "help", 'h', 0, G_OPTION_ARG_NONE, &wants_help, "Show this page", NULL },
        { NULL },
    };
    g_autoptr(GOptionContext) context = make_context(verb, about, tables, n_tables, more, help);
    g_autofree char *program = g_strconcat("halfwheel-cli ", verb->name, NULL);
    g_set_prgname(program);

    g_autoptr(GError) fault = NULL;
    if (!g_option_context_parse(context, &call->argc, &call->argv, &fault)) {
        set_call_error(verb, fault->message, error);
        return HW_PARSE_FAILED;
    }
    if (wants_help) {
        g_autofree char *page = g_option_context_get_help(context, FALSE, NULL);
        return hw_cli_print(page, error) ? HW_PARSE_HELP : HW_PARSE_FAILED;
    }
    /* GLib leaves a lone "--" that parts options from arguments. */
    if (call->argc > 1 && strcmp(call->argv[1], "--") == 0) {
        call->argv[1] = call->argv[0];
        call->argv++;
        call->argc--;
    }
    int n_args = call->argc - 1;
    if (n_args < min_args || n_args > max_args) {
        g_autofree char *extra = n_args > max_args ? hw_cli_dup_line(call->argv[1 + max_args]) : NULL;
        g_autofree char *reason =
            extra != NULL ? g_strdup_printf("“%s” is one argument too many for %s", extra, verb->name)
                          : g_strdup_printf("%s needs %s", verb->name, verb->arguments);
        set_call_error(verb, reason, error);
        return HW_PARSE_FAILED;
    }
    return HW_PARSE_GO;
}

bool
hw_cli_word(const char *option, const char *value, const char *const *words, int *index, GError **error)
{
    for (int i = 0; words[i] != NULL; i++) {
        if (strcmp(words[i], value) == 0) {
            *index = i;
            return true;
        }
    }
    g_autofree char *shown = hw_cli_dup_line(value);
    g_autofree char *known = g_strjoinv(", ", (char **)words);
    g_set_error(error, HW_CLI_ERROR, HW_CLI_ERROR_CALL, "%s “%s” is not known; give one of %s.", option,
                shown, known);
    return false;
}

bool
hw_cli_text(const char *option, const char *value, GError **error)
{
    if (value == NULL || g_utf8_validate(value, -1, NULL))
        return true;
    g_set_error(error, HW_CLI_ERROR, HW_CLI_ERROR_CALL, "%s is not UTF-8 text; write it so.", option);
    return false;
}

char *
hw_cli_dup_line(const char *text)
{
    g_autofree char *valid = g_utf8_make_valid(text, -1);
    GString *line = g_string_new(NULL);
    for (const char *p = valid; *p != '\0'; p = g_utf8_next_char(p)) {
        gunichar c = g_utf8_get_char(p);
        if (g_unichar_iscntrl(c))
            g_string_append_printf(line, "\\x%02x", c);
        else
            g_string_append_unichar(line, c);
    }
    return g_string_free(line, FALSE);
}
