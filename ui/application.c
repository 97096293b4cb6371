/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "ui/application.h"

#include "core/base/number.h"
#include "ui/resources.h"
#include "ui/window.h"

#include <glib/gi18n.h>

struct _HwApplication {
    AdwApplication parent_instance;

    char *samples;
};

G_DEFINE_FINAL_TYPE(HwApplication, hw_application, ADW_TYPE_APPLICATION)

static const GOptionEntry entries[] = {
    { "markers", 0, 0, G_OPTION_ARG_FILENAME, NULL, N_("Markers (CSV)"), N_("FILE") },
    { "startlist", 0, 0, G_OPTION_ARG_FILENAME, NULL, N_("Start list (CSV)"), N_("FILE") },
    { "race", 0, 0, G_OPTION_ARG_FILENAME, NULL, N_("Race (JSON)"), N_("FILE") },
    { "rules", 0, 0, G_OPTION_ARG_FILENAME, NULL, N_("Rule set: an id or a file"), N_("ID|FILE") },
    { "passage", 0, 0, G_OPTION_ARG_STRING, NULL, N_("Passage to rank, of several"), N_("NAME") },
    { "rate", 0, 0, G_OPTION_ARG_STRING, NULL, N_("Scan rate of a bare image, columns per second"),
      N_("HZ") },
    { "epoch", 0, 0, G_OPTION_ARG_STRING, NULL, N_("Instant of a bare image's first column (RFC 3339)"),
      N_("INSTANT") },
    { "version", 0, 0, G_OPTION_ARG_NONE, NULL, N_("Show the version"), NULL },
    { G_OPTION_REMAINING, 0, 0, G_OPTION_ARG_FILENAME_ARRAY, NULL, NULL, N_("[RECORDING]") },
    { NULL, 0, 0, G_OPTION_ARG_NONE, NULL, NULL, NULL },
};

static const struct {
    const char *action;
    const char *keys[4];
} accels[] = {
    { "win.open", { "<Control>o", NULL } },
    { "win.save-markers", { "<Control>s", NULL } },
    { "win.choose-list-export", { "<Control>e", NULL } },
    { "win.choose-picture-export", { "<Control><Shift>e", NULL } },
    { "win.undo", { "<Control>z", NULL } },
    { "win.redo", { "<Control><Shift>z", "<Control>y", NULL } },
    { "win.zoom-in", { "<Control>plus", "<Control>equal", "<Control>KP_Add", NULL } },
    { "win.zoom-out", { "<Control>minus", "<Control>KP_Subtract", NULL } },
    { "win.zoom-fit", { "<Control>0", "<Control>KP_0", NULL } },
    { "win.zoom-1-1", { "<Control>1", "<Control>KP_1", NULL } },
    { "win.ask-time", { "<Control>l", NULL } },
    { "win.panels", { "F9", NULL } },
    { "win.show-help-overlay", { "<Control>question", "F1", NULL } },
    { "win.close", { "<Control>w", NULL } },
    { "app.quit", { "<Control>q", NULL } },
};

static HwWindow *
window_for_opening(HwApplication *application)
{
    GtkWindow *window = gtk_application_get_active_window(GTK_APPLICATION(application));

    if (HW_IS_WINDOW(window) && hw_window_is_empty(HW_WINDOW(window)))
        return HW_WINDOW(window);
    return hw_window_new(GTK_APPLICATION(application), application->samples);
}

static void
hw_application_activate(GApplication *application)
{
    gtk_window_present(GTK_WINDOW(window_for_opening(HW_APPLICATION(application))));
}

/* A path as the user's shell meant it; an id of a rule set stays one. */
static char *
dup_path(GApplicationCommandLine *line, GVariantDict *options, const char *name)
{
    g_autoptr(GVariant) value = g_variant_dict_lookup_value(options, name, G_VARIANT_TYPE_BYTESTRING);
    g_autoptr(GFile) file = NULL;

    if (!value)
        return NULL;
    file = g_application_command_line_create_file_for_arg(line, g_variant_get_bytestring(value));
    return g_file_get_path(file);
}

static char *
dup_rules(GApplicationCommandLine *line, GVariantDict *options)
{
    g_autoptr(GVariant) value = g_variant_dict_lookup_value(options, "rules", G_VARIANT_TYPE_BYTESTRING);

    if (!value)
        return NULL;
    if (g_strv_contains(hw_rules_get_ids(), g_variant_get_bytestring(value)))
        return g_strdup(g_variant_get_bytestring(value));
    return dup_path(line, options, "rules");
}

/* What a bare image is told. False with a sentence. */
static bool
read_scan(GVariantDict *options, HwOpenRequest *request, char **sentence)
{
    const char *rate = NULL;
    const char *epoch = NULL;
    g_autoptr(GError) error = NULL;

    g_variant_dict_lookup(options, "rate", "&s", &rate);
    g_variant_dict_lookup(options, "epoch", "&s", &epoch);
    if (!rate && !epoch)
        return true;
    if (!rate || !epoch) {
        *sentence = g_strdup(_("A bare image needs both --rate and --epoch."));
        return false;
    }
    request->scan = (HwImageScan){ .stamp = HW_STAMP_MIDDLE, .later = HW_SIDE_RIGHT };
    if (!hw_number_parse_decimal(rate, 9, &request->scan.rate_nhz) || request->scan.rate_nhz <= 0) {
        *sentence = g_strdup_printf(_("--rate %s is no scan rate: write columns per second, as 2000."), rate);
        return false;
    }
    if (!hw_instant_parse(epoch, &request->scan.epoch, &error)) {
        *sentence = g_strdup_printf(_("--epoch: %s; write it as 2027-06-13T16:02:11+02:00."), error->message);
        return false;
    }
    request->scan.epoch_text = g_strdup(epoch);
    request->has_scan = true;
    return true;
}

static int
hw_application_command_line(GApplication *app, GApplicationCommandLine *line)
{
    HwApplication *application = HW_APPLICATION(app);
    GVariantDict *options = g_application_command_line_get_options_dict(line);
    g_autoptr(HwOpenRequest) request = NULL;
    g_autofree const char **paths = NULL;
    g_autoptr(GFile) file = NULL;
    g_autofree char *path = NULL;
    g_autofree char *sentence = NULL;
    HwWindow *window;

    g_variant_dict_lookup(options, G_OPTION_REMAINING, "^a&ay", &paths);
    if (!paths || !paths[0]) {
        g_application_activate(app);
        return 0;
    }
    if (paths[1]) {
        g_application_command_line_printerr(line, "halfwheel: %s\n", _("Name one recording, not several."));
        return 2;
    }
    file = g_application_command_line_create_file_for_arg(line, paths[0]);
    path = g_file_get_path(file);
    request = hw_open_request_new(path);
    request->markers = dup_path(line, options, "markers");
    request->start_list = dup_path(line, options, "startlist");
    request->race = dup_path(line, options, "race");
    request->rules = dup_rules(line, options);
    g_variant_dict_lookup(options, "passage", "s", &request->passage);
    if (!read_scan(options, request, &sentence)) {
        g_application_command_line_printerr(line, "halfwheel: %s\n", sentence);
        return 2;
    }
    window = window_for_opening(application);
    hw_window_open(window, g_steal_pointer(&request));
    gtk_window_present(GTK_WINDOW(window));
    return 0;
}

static int
hw_application_local_options(GApplication *application, GVariantDict *options)
{
    (void)application;
    if (g_variant_dict_contains(options, "version")) {
        g_print("halfwheel %s\n", HALFWHEEL_VERSION);
        return 0;
    }
    return -1;
}

static void
quit_cb(GSimpleAction *action, GVariant *parameter, gpointer data)
{
    GtkApplication *application = data;
    g_autoptr(GList) windows = g_list_copy(gtk_application_get_windows(application));

    (void)action;
    (void)parameter;
    /* Each asks for its own markers; the program ends with the last. */
    for (GList *item = windows; item; item = item->next)
        gtk_window_close(item->data);
}

static void
about_cb(GSimpleAction *action, GVariant *parameter, gpointer data)
{
    (void)action;
    (void)parameter;
    adw_show_about_window(
        gtk_application_get_active_window(data), "application-name", "Halfwheel", "application-icon",
        "org.halfwheel.Halfwheel", "version", HALFWHEEL_VERSION, "license-type", GTK_LICENSE_GPL_3_0,
        "comments",
        _("The desk at which close finishes of bicycle races are decided from line-scan pictures.\n\nThe "
          "commissaires decide. The program measures, says how sure the measurement is, and records; it "
          "replaces neither the regulations in force nor a licensed commissaire."),
        NULL);
}

static void
hw_application_startup(GApplication *app)
{
    const GActionEntry actions[] = {
        { .name = "quit", .activate = quit_cb },
        { .name = "about", .activate = about_cb },
    };
    g_autoptr(GtkCssProvider) style = NULL;

    g_resources_register(hw_ui_get_resource());
    G_APPLICATION_CLASS(hw_application_parent_class)->startup(app);
    gtk_window_set_default_icon_name("org.halfwheel.Halfwheel");
    g_action_map_add_action_entries(G_ACTION_MAP(app), actions, G_N_ELEMENTS(actions), app);
    for (guint i = 0; i < G_N_ELEMENTS(accels); i++)
        gtk_application_set_accels_for_action(GTK_APPLICATION(app), accels[i].action, accels[i].keys);
}

static void
hw_application_finalize(GObject *object)
{
    g_free(HW_APPLICATION(object)->samples);
    G_OBJECT_CLASS(hw_application_parent_class)->finalize(object);
}

static void
hw_application_class_init(HwApplicationClass *class)
{
    GApplicationClass *application_class = G_APPLICATION_CLASS(class);

    G_OBJECT_CLASS(class)->finalize = hw_application_finalize;
    application_class->startup = hw_application_startup;
    application_class->activate = hw_application_activate;
    application_class->command_line = hw_application_command_line;
    application_class->handle_local_options = hw_application_local_options;
}

static void
hw_application_init(HwApplication *application)
{
    g_application_add_main_option_entries(G_APPLICATION(application), entries);
    g_application_set_option_context_parameter_string(G_APPLICATION(application), NULL);
    g_application_set_option_context_summary(G_APPLICATION(application),
                                             _("Judge a finish of a bicycle race from its line-scan picture. "
                                               "RECORDING is a folder with recording.json, "
                                               "or a bare PNG or JPEG image with --rate and --epoch. Where "
                                               "no option names a file, the ones beside the "
                                               "recording are taken: NAME.markers.csv, NAME.startlist.csv, "
                                               "NAME.race.json, NAME.calibration.json."));
}

HwApplication *
hw_application_new(const char *samples)
{
    HwApplication *application =
        g_object_new(HW_TYPE_APPLICATION, "application-id", "org.halfwheel.Halfwheel", "flags",
                     G_APPLICATION_HANDLES_COMMAND_LINE, NULL);
    const char *named = g_getenv("HALFWHEEL_SAMPLES");

    if (named)
        samples = named;
    if (samples && g_file_test(samples, G_FILE_TEST_IS_DIR))
        application->samples = g_strdup(samples);
    return application;
}
