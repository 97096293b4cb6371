/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * A scenario file while it is read: the place in it, for errors, and what is kept until its end. Inside the
 * scenario's own sources only.
 */
#pragma once

#include "samples/sim/scenario.h"

typedef struct {
    const char *path;
    int line;
    SimScenario *s;
    GPtrArray *given, *family; /* names for drawn riders */
    GPtrArray *bunches;        /* lines that are made into riders at the end */
} SimReader;

/* FALSE, with an error that names file and line. */
G_GNUC_PRINTF(3, 4)
gboolean sim_reader_refuse(const SimReader *r, GError **error, const char *format, ...);
/* A number within bounds; value untouched on failure. */
gboolean sim_reader_number(const SimReader *r, const char *text, double low, double high, double *value,
                           GError **error);
/* Which of the words, which end with NULL. */
gboolean sim_reader_one_of(const SimReader *r, const char *text, const char *const *words, int *which,
                           GError **error);
/* The words of a line, parted by blanks, and its fields, parted by |. Free with g_strfreev. */
char **sim_reader_words(const char *text);
char **sim_reader_fields(const char *text);

/* A line of [riders] or [bunch]: adds to the scenario's entries. */
gboolean sim_reader_rider(SimReader *r, const char *text, GError **error);
gboolean sim_reader_bunch(SimReader *r, const char *text, GError **error);
void sim_entry_clear(SimEntry *e);
