/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A file or folder being made: written beside its place, flushed to the disk, then renamed. Until committed
 * nothing is at its place, and what was there stays as it was. */
#pragma once

#include <glib.h>
#include <stdbool.h>
#include <stddef.h>

typedef struct HwOutput HwOutput;

/* `path` "-" is standard output, kept back until the commit; so is what goes to a device or pipe. An existing
 * file is refused without `force`, a folder always.
 * Free with hw_output_free, which drops what was not committed. */
HwOutput *hw_output_open(const char *path, bool force, GError **error);

bool hw_output_write(HwOutput *output, const void *data, size_t size, GError **error);

/* Makes the file appear. After a failure nothing of it remains but what was there before. */
bool hw_output_commit(HwOutput *output, GError **error);

void hw_output_free(HwOutput *output);

/* Open, write, commit in one. */
bool hw_output_write_file(const char *path, bool force, const void *data, size_t size, GError **error);

/* A folder: files are put below hw_output_folder_get_path; committing renames it to its place. With `force`
 * an existing folder is exchanged for the new one in one step, then removed, links not followed; but only
 * where it holds a file named `sign` (or nothing at all), so that no other folder is ever lost to a mistyped
 * name. */
typedef struct HwOutputFolder HwOutputFolder;

HwOutputFolder *hw_output_folder_open(const char *path, const char *sign, bool force, GError **error);
const char *hw_output_folder_get_path(const HwOutputFolder *folder);
bool hw_output_folder_commit(HwOutputFolder *folder, GError **error);
void hw_output_folder_free(HwOutputFolder *folder);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwOutput, hw_output_free)
G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwOutputFolder, hw_output_folder_free)
