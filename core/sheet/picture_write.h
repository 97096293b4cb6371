/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The two writers behind hw_picture_write. Neither commits the output. */
#pragma once

#include "core/base/output.h"
#include "core/sheet/plate.h"
#include "core/sheet/subject.h"

/* How a write goes on: from 0.1 (decoding came before) to 1. */
typedef struct {
    HwProgress progress; /* may be NULL */
    gpointer user_data;
    GCancellable *cancellable;
} HwWriting;

/* Tells how far it is; false with G_IO_ERROR_CANCELLED. */
bool hw_writing_step(const HwWriting *writing, double fraction, GError **error);

/* `path` says beside what the pixels of a picture in the making are kept ("-": the folder for temporary
 * files). */
bool hw_picture_write_png(const HwSubject *subject, HwOutput *output, const char *path,
                          const HwWriting *writing, GError **error);
bool hw_picture_write_pdf(const HwSubject *subject, HwOutput *output, const HwWriting *writing,
                          GError **error);
