/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What the files of the window share with one another and with nobody else. */
#pragma once

#include "ui/context_line.h"
#include "ui/finish_panel.h"
#include "ui/picture_view.h"
#include "ui/session.h"
#include "ui/tray.h"
#include "ui/window.h"

struct _HwWindow {
    AdwApplicationWindow parent_instance;

    HwSession *session;
    char *samples;
    GCancellable *opening; /* while something is being opened */
    guint opening_delay;   /* until the wait is shown */
    bool closes_after_save;
    bool closes_anyway;

    AdwWindowTitle *title;
    AdwToastOverlay *toasts;
    AdwToast *undo_toast; /* whose button undoes the last act; gone with the next */
    GtkStack *stack;
    AdwStatusPage *failed;
    GtkWidget *sample_button;
    GtkWidget *back_button;
    GtkWidget *message;
    GtkLabel *message_text;
    GtkWidget *incomplete;
    GtkLabel *incomplete_text;
    HwContextLine *context;
    HwPictureView *picture;
    HwTray *tray;
    HwFinishPanel *panel;
    GtkMenuButton *goto_button;
    GtkEntry *goto_entry;
};

/* One sentence in the bar on top, until it is closed or the next act. */
void hw_window_show_message(HwWindow *window, const char *sentence);
void hw_window_hide_message(HwWindow *window);
/* A passing remark; `undo`: with a button that undoes the act just done, there until the next one. */
void hw_window_toast(HwWindow *window, const char *text, bool undo);

/* "start", "busy", "failed" or "judge"; the others are hidden from everybody. */
void hw_window_show_page(HwWindow *window, const char *name);

void hw_window_add_actions(HwWindow *window);
/* Which acts make sense now. */
void hw_window_update_actions(HwWindow *window);

/* Opening. */
void hw_window_choose_recording(HwWindow *window);
void hw_window_cancel_opening(HwWindow *window);
void hw_window_setup_drop(HwWindow *window);

/* Saving and exporting. */
void hw_window_save_markers(HwWindow *window, bool close_after);
void hw_window_export_list(HwWindow *window, const char *path);
void hw_window_choose_list_export(HwWindow *window);
void hw_window_export_picture(HwWindow *window, const char *path);
void hw_window_choose_picture_export(HwWindow *window);
/* Asks before markers are lost. TRUE: the window must stay for now. */
gboolean hw_window_close_request(GtkWindow *gtk_window);
