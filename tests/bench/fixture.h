/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Recordings made for measuring, in a temporary folder: every block is the same picture, streaked like a
 * finish, under another name. */
#pragma once

#include <glib.h>
#include <stdbool.h>

typedef enum { FIXTURE_PNG, FIXTURE_JPEG } FixtureKind;

enum { FIXTURE_COLUMNS = 1024, FIXTURE_ROWS = 480 };

typedef struct {
    char *folder;
    guint n_blocks;
    FixtureKind kind;
    char *manifest; /* its text */
} Fixture;

/* With digests in its manifest or without. A failure ends the program. */
Fixture *fixture_new(FixtureKind kind, guint n_blocks, bool with_digests);

/* Path of a block. Owned by the caller. */
char *fixture_dup_block_path(const Fixture *fixture, guint block);

/* Removes the folder. */
void fixture_free(Fixture *fixture);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(Fixture, fixture_free)
