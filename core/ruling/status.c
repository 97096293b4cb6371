/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/ruling/status.h"

#include "core/base/number.h"

#include <glib.h>
#include <string.h>

const char *
hw_status_get_word(HwStatus status)
{
    static const char *const words[] = {
        "ok", "LAP", "OTL", "DNF", "ABD", "DSQ", "DNS", "not_seen", "unknown"
    };
    return words[status];
}

bool
hw_status_parse(const char *text, HwStatus *status, int *laps_behind)
{
    static const struct {
        const char *word;
        HwStatus status;
    } known[] = {
        { "", HW_STATUS_OK },     { "OK", HW_STATUS_OK },   { "DNS", HW_STATUS_DNS },
        { "NP", HW_STATUS_DNS },  { "DNF", HW_STATUS_DNF }, { "AB", HW_STATUS_DNF },
        { "ABD", HW_STATUS_ABD }, { "OTL", HW_STATUS_OTL }, { "HD", HW_STATUS_OTL },
        { "DSQ", HW_STATUS_DSQ }, { "LAP", HW_STATUS_LAP }, { "DBL", HW_STATUS_LAP },
    };
    g_autofree char *upper = g_ascii_strup(text, -1);
    g_strstrip(upper);
    char *laps_text = strpbrk(upper, " \t-");
    int64_t laps = 0;
    if (laps_text != NULL) {
        *laps_text++ = '\0';
        g_strstrip(laps_text);
        if (!hw_number_parse_int64(laps_text, 1, 999, &laps))
            return false;
    }
    for (guint i = 0; i < G_N_ELEMENTS(known); i++) {
        if (strcmp(known[i].word, upper) == 0 && (laps == 0 || known[i].status == HW_STATUS_LAP)) {
            *status = known[i].status;
            *laps_behind = (int)laps;
            return true;
        }
    }
    return false;
}
