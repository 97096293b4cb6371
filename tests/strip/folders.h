/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Folders of recordings made for tests, below a temporary one that is removed with its contents. */
#pragma once

#include <glib.h>

typedef struct {
    char *path;
} TestFolder;

TestFolder *test_folder_new(void);
void test_folder_free(TestFolder *folder);

/* A file of the folder, its folders made as needed. */
void test_folder_write(TestFolder *folder, const char *name, const char *text);

/* recording.json with the scan and blocks given as JSON text; small files for blocks b0.png … b2.png. */
void test_folder_write_manifest(TestFolder *folder, const char *scan, const char *blocks);

/* What a program prints; it must end well. Owned by the caller. */
char *test_output_of(const char *folder, const char *const *call);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(TestFolder, test_folder_free)
