/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Progress on a terminal: one line on standard error that is wiped when the work ends. Silent where standard
 * error is a file or pipe. */
#pragma once

#include <glib.h>
#include <stdbool.h>

typedef struct {
    const char *what; /* "Reading" */
    bool on;          /* standard error is a terminal that can wipe a line */
    gint64 shown_us;  /* when it was last drawn; 0: never */
} HwTerminalProgress;

HwTerminalProgress hw_terminal_progress(const char *what);

/* Fits HwProgress: user_data is the HwTerminalProgress. Draws at most ten times a second. */
void hw_terminal_progress_report(double fraction, gpointer progress);

/* Wipes the line. */
void hw_terminal_progress_end(HwTerminalProgress *progress);

G_DEFINE_AUTO_CLEANUP_CLEAR_FUNC(HwTerminalProgress, hw_terminal_progress_end)
