/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/base/instant.h"

#include "core/base/base_error.h"
#include "core/base/limits.h"

#include <string.h>

__extension__ typedef __int128 HwWide;

/* Unix time of the first second after each leap second: 1 January or 1 July. Source: IERS, as in tzdata's
 * leapseconds. */
static const int64_t leap_ends_unix_s[] = {
    78796800,  94694400,  126230400, 157766400, 189302400,  220924800,  252460800,  283996800,  315532800,
    362793600, 394329600, 425865600, 489024000, 567993600,  631152000,  662688000,  709948800,  741484800,
    773020800, 820454400, 867715200, 915148800, 1136073600, 1230768000, 1341100800, 1435708800, 1483228800,
};

static int
leaps_before(int64_t unix_s)
{
    int n = 0;
    while (n < (int)G_N_ELEMENTS(leap_ends_unix_s) && leap_ends_unix_s[n] <= unix_s)
        n++;
    return n;
}

/* Counted seconds to Unix seconds; *leap where the instant lies inside a leap second, whose Unix time is then
 * that of second 59. */
static int64_t
to_unix(int64_t counted_s, bool *leap)
{
    *leap = false;
    for (int n = (int)G_N_ELEMENTS(leap_ends_unix_s); n > 0; n--) {
        int64_t end_counted = leap_ends_unix_s[n - 1] + n;
        if (counted_s >= end_counted)
            return counted_s - n;
        if (counted_s == end_counted - 1) {
            *leap = true;
            return leap_ends_unix_s[n - 1] - 1;
        }
    }
    return counted_s;
}

/* Days from 1970-01-01 in the proleptic Gregorian calendar, by counting 400-year eras from 1 March. */
static int64_t
days_from_civil(int year, int month, int day)
{
    int64_t y = month <= 2 ? year - 1 : year;
    int64_t era = (y >= 0 ? y : y - 399) / 400;
    int64_t year_of_era = y - era * 400;
    int64_t day_of_year = (153 * (month + (month > 2 ? -3 : 9)) + 2) / 5 + day - 1;
    int64_t day_of_era = year_of_era * 365 + year_of_era / 4 - year_of_era / 100 + day_of_year;
    return era * 146097 + day_of_era - 719468;
}

static void
civil_from_days(int64_t days, int *year, int *month, int *day)
{
    days += 719468;
    int64_t era = (days >= 0 ? days : days - 146096) / 146097;
    int64_t day_of_era = days - era * 146097;
    int64_t year_of_era = (day_of_era - day_of_era / 1460 + day_of_era / 36524 - day_of_era / 146096) / 365;
    int64_t day_of_year = day_of_era - (365 * year_of_era + year_of_era / 4 - year_of_era / 100);
    int64_t shifted_month = (5 * day_of_year + 2) / 153;
    *day = (int)(day_of_year - (153 * shifted_month + 2) / 5 + 1);
    *month = (int)(shifted_month + (shifted_month < 10 ? 3 : -9));
    *year = (int)(year_of_era + era * 400 + (*month <= 2 ? 1 : 0));
}

static int
days_in_month(int year, int month)
{
    static const int days[] = { 31, 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31 };
    bool leap_year = (year % 4 == 0 && year % 100 != 0) || year % 400 == 0;
    return month == 2 && leap_year ? 29 : days[month - 1];
}

/* Exactly `digits` digits; moves *p past them. */
static bool
take_digits(const char **p, int digits, int *value)
{
    int sum = 0;
    for (int i = 0; i < digits; i++) {
        if (!g_ascii_isdigit((*p)[i]))
            return false;
        sum = sum * 10 + ((*p)[i] - '0');
    }
    *p += digits;
    *value = sum;
    return true;
}

static bool
take_char(const char **p, char wanted)
{
    if (g_ascii_toupper(**p) != wanted)
        return false;
    (*p)++;
    return true;
}

/* The decimals after the point, nine kept, the rest rounded half to even; may give 10^9. */
static bool
take_fraction(const char **p, int32_t *ns)
{
    int32_t kept = 0;
    int places = 0;
    bool rest_above_zero = false;
    int tenth = -1;
    for (; g_ascii_isdigit(**p); (*p)++, places++) {
        int digit = **p - '0';
        if (places < 9)
            kept = kept * 10 + digit;
        else if (places == 9)
            tenth = digit;
        else
            rest_above_zero |= digit != 0;
    }
    if (places == 0)
        return false;
    for (int i = places; i < 9; i++)
        kept *= 10;
    if (tenth > 5 || (tenth == 5 && (rest_above_zero || kept % 2 != 0)))
        kept++;
    *ns = kept;
    return true;
}

static bool
take_offset(const char **p, HwInstant *instant)
{
    if (take_char(p, 'Z'))
        return true;
    bool west = **p == '-';
    if (!west && **p != '+')
        return false;
    (*p)++;
    int hours, minutes;
    if (!take_digits(p, 2, &hours) || !take_char(p, ':') || !take_digits(p, 2, &minutes) || hours > 23 ||
        minutes > 59)
        return false;
    int total = hours * 60 + minutes;
    instant->offset_unknown = west && total == 0;
    instant->offset_min = (int16_t)(west ? -total : total);
    return true;
}

static bool
refuse(GError **error, const char *text, const char *reason)
{
    g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_SYNTAX,
                "“%s” %s; write an instant as 2027-06-13T16:02:11.5+02:00", text, reason);
    return false;
}

bool
hw_instant_parse(const char *text, HwInstant *instant, GError **error)
{
    const char *p = text;
    int year, month, day, hour, minute, second;
    if (!take_digits(&p, 4, &year) || !take_char(&p, '-') || !take_digits(&p, 2, &month) ||
        !take_char(&p, '-') || !take_digits(&p, 2, &day) || !take_char(&p, 'T') ||
        !take_digits(&p, 2, &hour) || !take_char(&p, ':') || !take_digits(&p, 2, &minute) ||
        !take_char(&p, ':') || !take_digits(&p, 2, &second))
        return refuse(error, text, "is not an RFC 3339 date and time");
    if (month < 1 || month > 12 || day < 1 || day > days_in_month(year, month) || hour > 23 || minute > 59 ||
        second > 60)
        return refuse(error, text, "is no date and time of the calendar");

    HwInstant parsed = { 0 };
    if (take_char(&p, '.') && !take_fraction(&p, &parsed.ns))
        return refuse(error, text, "has no digits after its point");
    if (*p == '\0')
        return refuse(error, text, "has no offset from UTC");
    if (!take_offset(&p, &parsed) || *p != '\0')
        return refuse(error, text, "does not end with an offset such as +02:00 or Z");

    int64_t unix_s = days_from_civil(year, month, day) * 86400 + hour * 3600 + minute * 60 + MIN(second, 59) -
                     parsed.offset_min * 60;
    parsed.s = unix_s + leaps_before(unix_s);
    if (second == 60) {
        if (leaps_before(unix_s + 1) == leaps_before(unix_s))
            return refuse(error, text, "names a second 60 where no leap second is known");
        parsed.s++;
    }
    if (parsed.ns == HW_NS_PER_S) {
        parsed.ns = 0;
        parsed.s++;
    }
    *instant = parsed;
    return true;
}

typedef struct {
    int year, month, day, hour, minute, second;
} Civil;

static Civil
to_civil(const HwInstant *instant)
{
    bool leap;
    int64_t local_s = to_unix(instant->s, &leap) + instant->offset_min * 60;
    int64_t days = local_s / 86400;
    int64_t of_day = local_s % 86400;
    if (of_day < 0) {
        of_day += 86400;
        days--;
    }
    Civil civil = { .hour = (int)(of_day / 3600),
                    .minute = (int)(of_day / 60 % 60),
                    .second = (int)(of_day % 60) + (leap ? 1 : 0) };
    civil_from_days(days, &civil.year, &civil.month, &civil.day);
    return civil;
}

static void
append_seconds(GString *text, int second, int32_t ns, int decimals)
{
    g_string_append_printf(text, "%02d", second);
    if (decimals > 0) {
        char digits[16];
        g_snprintf(digits, sizeof digits, "%09d", ns);
        g_string_append_c(text, '.');
        g_string_append_len(text, digits, CLAMP(decimals, 1, 9));
    }
}

char *
hw_instant_dup_text(const HwInstant *instant, int decimals)
{
    Civil c = to_civil(instant);
    GString *text = g_string_new(NULL);
    g_string_printf(text, "%04d-%02d-%02dT%02d:%02d:", c.year, c.month, c.day, c.hour, c.minute);
    append_seconds(text, c.second, instant->ns, decimals);
    int offset = ABS((int)instant->offset_min);
    char sign = instant->offset_min < 0 || instant->offset_unknown ? '-' : '+';
    g_string_append_printf(text, "%c%02d:%02d", sign, offset / 60, offset % 60);
    return g_string_free(text, FALSE);
}

char *
hw_instant_dup_time_of_day(const HwInstant *instant, int decimals)
{
    Civil c = to_civil(instant);
    GString *text = g_string_new(NULL);
    g_string_printf(text, "%02d:%02d:", c.hour, c.minute);
    append_seconds(text, c.second, instant->ns, decimals);
    return g_string_free(text, FALSE);
}

bool
hw_instant_difference(const HwInstant *later, const HwInstant *earlier, int64_t *ns)
{
    /* Through 128 bits: seconds alone may pass the limit that seconds and ns together keep. */
    HwWide sum = ((HwWide)later->s - earlier->s) * HW_NS_PER_S + later->ns - earlier->ns;
    if (sum > INT64_MAX || sum < INT64_MIN)
        return false;
    *ns = (int64_t)sum;
    return true;
}

HwInstant
hw_instant_plus(const HwInstant *start, int64_t ns)
{
    int64_t seconds = ns / HW_NS_PER_S;
    int64_t rest = start->ns + ns % HW_NS_PER_S;
    if (rest < 0) {
        rest += HW_NS_PER_S;
        seconds--;
    } else if (rest >= HW_NS_PER_S) {
        rest -= HW_NS_PER_S;
        seconds++;
    }
    HwInstant sum = *start;
    sum.s += seconds;
    sum.ns = (int32_t)rest;
    return sum;
}

int
hw_instant_compare(const HwInstant *a, const HwInstant *b)
{
    if (a->s != b->s)
        return a->s < b->s ? -1 : 1;
    return (a->ns > b->ns) - (a->ns < b->ns);
}

HwInstant
hw_instant_latest_time_of_day(const HwInstant *limit, int64_t time_of_day_ns)
{
    Civil day = to_civil(limit);
    int64_t midnight = days_from_civil(day.year, day.month, day.day) * 86400 - limit->offset_min * 60;
    HwInstant found = *limit;
    for (int days_back = 0; days_back < 2; days_back++) {
        int64_t unix_s = midnight - days_back * INT64_C(86400) + time_of_day_ns / HW_NS_PER_S;
        found.s = unix_s + leaps_before(unix_s);
        found.ns = (int32_t)(time_of_day_ns % HW_NS_PER_S);
        if (hw_instant_compare(&found, limit) <= 0)
            break;
    }
    return found;
}

int
hw_instant_tai_minus_utc_s(const HwInstant *instant)
{
    bool leap;
    return 10 + leaps_before(to_unix(instant->s, &leap));
}
