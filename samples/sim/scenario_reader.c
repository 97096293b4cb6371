/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "samples/sim/scenario_reader.h"

#include <math.h>
#include <string.h>

gboolean
sim_reader_refuse(const SimReader *r, GError **error, const char *format, ...)
{
    va_list args;
    va_start(args, format);
    g_autofree char *text = g_strdup_vprintf(format, args);
    va_end(args);
    g_set_error(error, sim_error_quark(), 1, "%s, line %d: %s", r->path, r->line, text);
    return FALSE;
}

gboolean
sim_reader_number(const SimReader *r, const char *text, double low, double high, double *value,
                  GError **error)
{
    char *end = NULL;
    double v = g_ascii_strtod(text, &end);
    if (end == text || *end != '\0' || !isfinite(v) || v < low || v > high)
        return sim_reader_refuse(r, error, "\"%s\" is no number from %g to %g; put one there.", text, low,
                                 high);
    *value = v;
    return TRUE;
}

gboolean
sim_reader_one_of(const SimReader *r, const char *text, const char *const *words, int *which, GError **error)
{
    for (int i = 0; words[i] != NULL; i++)
        if (strcmp(text, words[i]) == 0) {
            *which = i;
            return TRUE;
        }
    g_autofree char *all = g_strjoinv(", ", (char **)words);
    return sim_reader_refuse(r, error, "\"%s\" is none of %s; put one of these.", text, all);
}

/* The words of a line, parted by blanks. */
char **
sim_reader_words(const char *text)
{
    g_auto(GStrv) raw = g_strsplit_set(text, " \t", -1);
    g_autoptr(GPtrArray) words = g_ptr_array_new();
    for (int i = 0; raw[i] != NULL; i++)
        if (raw[i][0] != '\0')
            g_ptr_array_add(words, g_strdup(raw[i]));
    g_ptr_array_add(words, NULL);
    return (char **)g_ptr_array_free(g_steal_pointer(&words), FALSE);
}

/* The fields of a line, parted by |. */
char **
sim_reader_fields(const char *text)
{
    char **f = g_strsplit(text, "|", -1);
    for (int i = 0; f[i] != NULL; i++)
        g_strstrip(f[i]);
    return f;
}
