/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/base/number.h"

#include <glib.h>
#include <math.h>
#include <string.h>

bool
hw_number_parse_int64(const char *text, int64_t min, int64_t max, int64_t *value)
{
    const char *digits = text;
    if (*digits == '-' || *digits == '+')
        digits++;
    if (!g_ascii_isdigit(*digits))
        return false;
    gint64 parsed = 0;
    if (*text == '+')
        text++;
    if (!g_ascii_string_to_signed(text, 10, min, max, &parsed, NULL))
        return false;
    *value = parsed;
    return true;
}

/* [sign] digits [. digits] [e [sign] digits], with a digit before or after the point. */
static bool
is_decimal_number(const char *p)
{
    if (*p == '-' || *p == '+')
        p++;
    int digits = 0;
    for (; g_ascii_isdigit(*p); p++)
        digits++;
    if (*p == '.') {
        for (p++; g_ascii_isdigit(*p); p++)
            digits++;
    }
    if (digits == 0)
        return false;
    if (*p == 'e' || *p == 'E') {
        p++;
        if (*p == '-' || *p == '+')
            p++;
        if (!g_ascii_isdigit(*p))
            return false;
        while (g_ascii_isdigit(*p))
            p++;
    }
    return *p == '\0';
}

bool
hw_number_parse_double(const char *text, double *value)
{
    if (!is_decimal_number(text))
        return false;
    double parsed = g_ascii_strtod(text, NULL);
    if (!isfinite(parsed))
        return false;
    *value = parsed;
    return true;
}

bool
hw_number_parse_double_local(const char *text, double *value)
{
    const char *comma = strchr(text, ',');
    if (comma == NULL || strchr(text, '.') != NULL || strchr(comma + 1, ',') != NULL)
        return hw_number_parse_double(text, value);
    g_autofree char *pointed = g_strdup(text);
    pointed[comma - text] = '.';
    return hw_number_parse_double(pointed, value);
}

bool
hw_number_parse_decimal(const char *text, int decimals, int64_t *scaled)
{
    int64_t sum = 0;
    int places = -1; /* before the point */
    bool any = false;
    for (const char *p = text; *p != '\0'; p++) {
        if (*p == '.') {
            if (places >= 0 || p[1] == '\0')
                return false;
            places = 0;
            continue;
        }
        if (!g_ascii_isdigit(*p))
            return false;
        any = true;
        if (places >= 0 && ++places > decimals) {
            if (*p != '0')
                return false;
            places--;
            continue;
        }
        if (__builtin_mul_overflow(sum, (int64_t)10, &sum) ||
            __builtin_add_overflow(sum, (int64_t)(*p - '0'), &sum))
            return false;
    }
    if (!any)
        return false;
    for (int i = MAX(places, 0); i < decimals; i++) {
        if (__builtin_mul_overflow(sum, (int64_t)10, &sum))
            return false;
    }
    *scaled = sum;
    return true;
}

bool
hw_number_nine_decimals(double value, int64_t *scaled)
{
    if (!isfinite(value) || fabs(value) >= 4e6)
        return false;
    int64_t nearest = (int64_t)llround(value * 1e9);
    /* A quotient of two exact doubles is correctly rounded: equal to the text's own value only if it was that
     * decimal. */
    if ((double)nearest / 1e9 != value)
        return false;
    *scaled = nearest;
    return true;
}

char *
hw_number_dup_double(double value)
{
    char text[G_ASCII_DTOSTR_BUF_SIZE];
    for (int digits = 6; digits <= 17; digits++) {
        char format[8];
        g_snprintf(format, sizeof format, "%%.%dg", digits);
        g_ascii_formatd(text, sizeof text, format, value);
        if (g_ascii_strtod(text, NULL) == value)
            break;
    }
    return g_strdup(text);
}

char *
hw_number_dup_fixed(double value, int decimals)
{
    char format[8];
    g_snprintf(format, sizeof format, "%%.%df", decimals);
    char text[400];
    g_ascii_formatd(text, sizeof text, format, value);
    return g_strdup(text);
}
