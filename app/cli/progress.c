/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "app/cli/progress.h"

#include <stdio.h>
#include <string.h>
#include <unistd.h>

#define INTERVAL_US 100000

HwTerminalProgress
hw_terminal_progress(const char *what)
{
    const char *terminal = g_getenv("TERM");
    bool able = terminal != NULL && strcmp(terminal, "dumb") != 0;
    return (HwTerminalProgress){ what, able && isatty(STDERR_FILENO) == 1, 0 };
}

void
hw_terminal_progress_report(double fraction, gpointer progress)
{
    HwTerminalProgress *line = progress;
    gint64 now_us = g_get_monotonic_time();
    if (!line->on || (line->shown_us != 0 && now_us - line->shown_us < INTERVAL_US))
        return;
    line->shown_us = now_us;
    fprintf(stderr, "\r%s %3.0f %%", line->what, CLAMP(fraction, 0.0, 1.0) * 100.0);
    fflush(stderr);
}

void
hw_terminal_progress_end(HwTerminalProgress *progress)
{
    if (progress->shown_us != 0) {
        fputs("\r\033[K", stderr);
        fflush(stderr);
    }
    progress->shown_us = 0;
}
