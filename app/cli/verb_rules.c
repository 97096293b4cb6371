/* SPDX-License-Identifier: GPL-3.0-or-later */
/* rules: the rule sets that come with the program, and any rule set in words. */
#include "app/cli/options.h"
#include "core/base/json.h"
#include "core/ruling/rules.h"

#include <string.h>

static const char about[] = "Without an argument, lists the rule sets that come with the program. With the "
                            "id of one, or the path of a\n"
                            "rule set file, says in words what it prescribes; with --format json prints that "
                            "file byte for byte, as a\n"
                            "start for a rule set of your own.";

static const char more[] = "Rule sets name the article and edition they follow. Regulations change, and "
                           "national ones differ: those in\n"
                           "force and the commissaires' panel decide.\n"
                           "\n"
                           "Exit status:\n"
                           "  0  done\n"
                           "  1  the rule set was refused, or could not be read or written\n"
                           "  2  the call was wrong\n"
                           "\n"
                           "Example:\n"
                           "  halfwheel-cli rules road-1s --format json -o club.json\n";

static char *
dup_list_text(GError **error)
{
    GString *text = g_string_new(NULL);
    const char *const *ids = hw_rules_get_ids();
    for (guint i = 0; ids[i] != NULL; i++) {
        g_autoptr(HwRules) rules = hw_rules_read(ids[i], error);
        if (rules == NULL) {
            g_string_free(text, TRUE);
            return NULL;
        }
        g_autofree char *line = hw_rules_dup_line(rules);
        g_string_append_printf(text, "%-18s %s\n", ids[i], line);
    }
    return g_string_free(text, FALSE);
}

static char *
dup_list_json(GError **error)
{
    g_autoptr(json_t) root = json_object();
    json_object_set_new(root, "halfwheel", json_string("rules/1"));
    json_t *list = json_array();
    json_object_set_new(root, "rules", list);
    const char *const *ids = hw_rules_get_ids();
    for (guint i = 0; ids[i] != NULL; i++) {
        g_autoptr(HwRules) rules = hw_rules_read(ids[i], error);
        if (rules == NULL)
            return NULL;
        json_t *entry = json_object();
        json_object_set_new(entry, "id", json_string(rules->id));
        json_object_set_new(entry, "title", json_string(rules->title));
        json_object_set_new(entry, "article", json_string(rules->article));
        json_object_set_new(entry, "edition", json_string(rules->edition));
        json_array_append_new(list, entry);
    }
    return hw_json_dup_text(root);
}

static char *
dup_one(const char *id_or_path, HwFormat format, GError **error)
{
    g_autoptr(HwRules) rules = hw_rules_read(id_or_path, error);
    if (rules == NULL)
        return NULL;
    if (format == HW_FORMAT_JSON)
        return g_strdup(rules->json);
    g_autofree char *text = hw_rules_dup_text(rules);
    return g_strconcat(text, g_str_has_suffix(text, "\n") ? "" : "\n", NULL);
}

static bool
run(HwCall *call, HwExit *status, GError **error)
{
    (void)status;
    g_auto(HwResultOptions) result = { 0 };
    const GOptionEntry entries[] = {
        { "format", 0, 0, G_OPTION_ARG_FILENAME, &result.format, "text (unless said) or json", "FORMAT" },
        HW_OUTPUT_ENTRIES(result, "Write there instead of standard output"),
        { NULL },
    };
    const HwOptionTable tables[] = { { "Options:", entries } };
    HwParse parsed =
        hw_cli_parse(call, &hw_verb_rules, about, tables, G_N_ELEMENTS(tables), more, 0, 1, error);
    if (parsed != HW_PARSE_GO)
        return parsed == HW_PARSE_HELP;
    HwFormat format;
    if (!hw_result_options_get_format(&result, false, &format, error))
        return false;

    g_autofree char *text = call->argc > 1             ? dup_one(call->argv[1], format, error)
                            : format == HW_FORMAT_JSON ? dup_list_json(error)
                                                       : dup_list_text(error);
    return text != NULL && hw_result_options_write(&result, text, error);
}

const HwVerb hw_verb_rules = {
    "rules",
    "[ID | FILE]",
    "List the rule sets, or say one in words",
    run,
};
