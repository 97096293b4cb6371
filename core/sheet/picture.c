/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/sheet/picture.h"

#include "core/sheet/picture_write.h"
#include "core/sheet/sheet_error.h"

#include <string.h>

void
hw_picture_init(HwPicture *picture, HwStrip *strip)
{
    HwRecording *recording = hw_strip_get_recording(strip);
    *picture = (HwPicture){ .strip = strip,
                            .travel = hw_recording_get_travel(recording),
                            .excerpt = HW_EXCERPT_ALL,
                            .event = hw_recording_get_title(recording),
                            .passage = "",
                            .rules = "",
                            .version = "provisional",
                            .p_order_limit = 0.01,
                            .px_per_column = 1.0 };
}

bool
hw_picture_format_of(const char *path, HwPictureFormat *format, GError **error)
{
    g_autofree char *folded = g_ascii_strdown(path, -1);
    if (strcmp(path, "-") == 0 || g_str_has_suffix(folded, ".png")) {
        *format = HW_PICTURE_PNG;
        return true;
    }
    if (g_str_has_suffix(folded, ".pdf")) {
        *format = HW_PICTURE_PDF;
        return true;
    }
    g_set_error(error, HW_SHEET_ERROR, HW_SHEET_ERROR_FORMAT,
                "%s names no kind of picture; let its name end in .png or .pdf.", path);
    return false;
}

bool
hw_writing_step(const HwWriting *writing, double fraction, GError **error)
{
    if (g_cancellable_set_error_if_cancelled(writing->cancellable, error))
        return false;
    if (writing->progress != NULL)
        writing->progress(fraction, writing->user_data);
    return true;
}

bool
hw_picture_write(const HwPicture *picture, const char *path, HwPictureFormat format, bool force,
                 HwProgress progress, gpointer user_data, GCancellable *cancellable, GError **error)
{
    HwWriting writing = { progress, user_data, cancellable };
    /* Before the work, so that a place that cannot be written is told at once. */
    g_autoptr(HwOutput) output = hw_output_open(path, force, error);
    if (output == NULL)
        return false;
    g_autoptr(HwSubject) subject = hw_subject_new(picture, progress, user_data, cancellable, error);
    if (subject == NULL)
        return false;
    bool written = format == HW_PICTURE_PDF ? hw_picture_write_pdf(subject, output, &writing, error)
                                            : hw_picture_write_png(subject, output, path, &writing, error);
    if (!written || !hw_output_commit(output, error))
        return false;
    if (progress != NULL)
        progress(1.0, user_data);
    return true;
}
