/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/base/duration.h"

#include "core/base/limits.h"
#include "core/base/number.h"

#include <glib.h>
#include <string.h>

bool
hw_duration_parse(const char *text, int64_t *ns)
{
    g_auto(GStrv) parts = g_strsplit(text, ":", 4);
    guint n = g_strv_length(parts);
    if (n < 1 || n > 3)
        return false;
    int64_t whole_s = 0;
    for (guint i = 0; i + 1 < n; i++) {
        int64_t value;
        int64_t limit = i == 0 ? 99999 : 59;
        if (!g_ascii_isdigit(parts[i][0]) || !hw_number_parse_int64(parts[i], 0, limit, &value))
            return false;
        whole_s = (whole_s + value) * 60;
    }
    int64_t last_ns;
    if (!g_ascii_isdigit(parts[n - 1][0]) || !hw_number_parse_decimal(parts[n - 1], 9, &last_ns))
        return false;
    if (n > 1 && last_ns >= HW_NS_PER_MIN)
        return false;
    return !__builtin_add_overflow(whole_s * HW_NS_PER_S, last_ns, ns);
}

bool
hw_duration_parse_time_of_day(const char *text, int64_t *ns)
{
    const char *colon = strchr(text, ':');
    if (colon == NULL)
        return false;
    bool has_seconds = strchr(colon + 1, ':') != NULL;
    g_autofree char *full = has_seconds ? g_strdup(text) : g_strconcat(text, ":00", NULL);
    int64_t parsed;
    if (!hw_duration_parse(full, &parsed) || parsed >= HW_NS_PER_DAY)
        return false;
    *ns = parsed;
    return true;
}

static void
append_fraction(GString *text, uint64_t of_second_ns, int decimals)
{
    if (decimals <= 0)
        return;
    char digits[16];
    g_snprintf(digits, sizeof digits, "%09" G_GUINT64_FORMAT, of_second_ns);
    g_string_append_c(text, '.');
    g_string_append_len(text, digits, MIN(decimals, 9));
}

static uint64_t
magnitude(int64_t ns)
{
    return ns < 0 ? (uint64_t)0 - (uint64_t)ns : (uint64_t)ns;
}

static void
append_clock(GString *text, uint64_t ns, int decimals, bool minutes_always)
{
    uint64_t s = ns / HW_NS_PER_S;
    if (s >= 3600)
        g_string_append_printf(text, "%" G_GUINT64_FORMAT ":%02u:%02u", s / 3600, (guint)(s / 60 % 60),
                               (guint)(s % 60));
    else if (s >= 60 || minutes_always)
        g_string_append_printf(text, "%u:%02u", (guint)(s / 60), (guint)(s % 60));
    else
        g_string_append_printf(text, "%u", (guint)s);
    append_fraction(text, ns % HW_NS_PER_S, decimals);
}

char *
hw_duration_dup_text(int64_t ns, int decimals)
{
    GString *text = g_string_new(ns < 0 ? "-" : "");
    append_clock(text, magnitude(ns), decimals, true);
    return g_string_free(text, FALSE);
}

char *
hw_duration_dup_gap(int64_t ns, int decimals)
{
    GString *text = g_string_new(ns < 0 ? "-" : "+");
    append_clock(text, magnitude(ns), decimals, false);
    return g_string_free(text, FALSE);
}

int
hw_duration_decimals(int64_t precision_ns)
{
    int decimals = 9;
    for (int64_t unit = 1; unit < HW_NS_PER_S && precision_ns % (unit * 10) == 0; unit *= 10)
        decimals--;
    return decimals;
}
