/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The window from inside: what it draws, and when. Needs a screen (with-display). */
#include "ui/application.h"
#include "ui/window.h"

#include <stdbool.h>

/* How long the window must be at rest, and how long we wait for it to come to rest. */
#define REST_US (3 * G_USEC_PER_SEC)
#define PATIENCE_US (60 * G_USEC_PER_SEC)

static HwWindow *window;
static guint n_frames;

static void
count_frame_cb(void)
{
    n_frames++;
}

static bool
is_open(void)
{
    return g_action_group_get_action_enabled(G_ACTION_GROUP(window), "save-markers");
}

/* Runs the main loop for a while without drawing anything of its own. */
static void
run_for(gint64 us)
{
    gint64 end = g_get_monotonic_time() + us;

    while (g_get_monotonic_time() < end)
        if (!g_main_context_iteration(NULL, FALSE))
            g_usleep(2000);
}

static void
open_sample(void)
{
    g_autofree char *path = g_build_filename(g_getenv("HALFWHEEL_SAMPLES"), "aldermoor-sprint", NULL);
    gint64 end = g_get_monotonic_time() + PATIENCE_US;
    GdkFrameClock *clock;

    hw_window_open(window, hw_open_request_new(path));
    gtk_window_present(GTK_WINDOW(window));
    while (!is_open() && g_get_monotonic_time() < end)
        g_main_context_iteration(NULL, TRUE);
    g_assert_true(is_open());
    clock = gtk_widget_get_frame_clock(GTK_WIDGET(window));
    g_signal_connect(clock, "after-paint", G_CALLBACK(count_frame_cb), NULL);
}

static void
nothing_is_drawn_while_nothing_changes(void)
{
    gint64 end = g_get_monotonic_time() + PATIENCE_US;
    guint before;

    open_sample();
    do {
        before = n_frames;
        run_for(G_USEC_PER_SEC / 2);
    } while (n_frames != before && g_get_monotonic_time() < end);
    before = n_frames;
    run_for(REST_US);
    g_assert_cmpuint(n_frames, ==, before);
    /* And the counting itself is seen to count. */
    g_action_group_activate_action(G_ACTION_GROUP(window), "zoom-in", NULL);
    end = g_get_monotonic_time() + PATIENCE_US;
    while (n_frames == before && g_get_monotonic_time() < end)
        g_main_context_iteration(NULL, TRUE);
    g_assert_cmpuint(n_frames, >, before);
}

static int status;

static void
activate_cb(GtkApplication *application)
{
    window = hw_window_new(application, NULL);
    status = g_test_run();
    gtk_window_destroy(GTK_WINDOW(window));
}

static int
no_command_line_cb(void)
{
    return 0;
}

int
main(int argc, char **argv)
{
    g_autoptr(HwApplication) application = NULL;
    char *alone[] = { argv[0], NULL };

    g_test_init(&argc, &argv, NULL);
    g_test_add_func("/window/nothing_is_drawn_while_nothing_changes", nothing_is_drawn_while_nothing_changes);
    application = hw_application_new(NULL);
    /* Ours stands in for the program's own window. */
    g_signal_connect(application, "command-line", G_CALLBACK(no_command_line_cb), NULL);
    g_signal_connect_after(application, "startup", G_CALLBACK(activate_cb), NULL);
    g_application_run(G_APPLICATION(application), 1, alone);
    return status;
}
