/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/strip/transfer.h"

#include "core/base/number.h"
#include "core/strip/strip_error.h"

#include <math.h>
#include <string.h>

enum { TABLE_SIZE = 256 };

#define MIN_GAMMA 0.1
#define MAX_GAMMA 10.0

/* The curve of IEC 61966-2-1. The inverse turns from line to power where the line ends, not at the standard's
 * rounded 0.0031308, so that the two undo each other. */
#define SRGB_LINE_END 0.04045
#define SRGB_SLOPE 12.92

static double
srgb_to_light(double code)
{
    return code <= SRGB_LINE_END ? code / SRGB_SLOPE : pow((code + 0.055) / 1.055, 2.4);
}

static double
srgb_to_code(double light)
{
    return light <= SRGB_LINE_END / SRGB_SLOPE ? light * SRGB_SLOPE : 1.055 * pow(light, 1.0 / 2.4) - 0.055;
}

static double
table_to_light(const float *table, double code)
{
    double place = code * (TABLE_SIZE - 1);
    int below = MIN((int)place, TABLE_SIZE - 2);
    double share = place - below;
    return (1.0 - share) * (double)table[below] + share * (double)table[below + 1];
}

static double
table_to_code(const float *table, double light)
{
    if (light <= (double)table[0])
        return 0.0;
    int low = 0, high = TABLE_SIZE - 1;
    while (high - low > 1) {
        int middle = (low + high) / 2;
        if ((double)table[middle] <= light)
            low = middle;
        else
            high = middle;
    }
    double share = (light - (double)table[low]) / ((double)table[high] - (double)table[low]);
    return (low + share) / (TABLE_SIZE - 1);
}

double
hw_transfer_to_light(const HwTransfer *transfer, double code)
{
    code = CLAMP(code, 0.0, 1.0);
    switch (transfer->kind) {
    case HW_TRANSFER_LINEAR:
        return code;
    case HW_TRANSFER_GAMMA:
        return pow(code, transfer->gamma);
    case HW_TRANSFER_TABLE:
        return table_to_light(transfer->table, code);
    case HW_TRANSFER_UNKNOWN:
    case HW_TRANSFER_SRGB:
        break;
    }
    return srgb_to_light(code);
}

double
hw_transfer_to_code(const HwTransfer *transfer, double light)
{
    light = CLAMP(light, 0.0, 1.0);
    switch (transfer->kind) {
    case HW_TRANSFER_LINEAR:
        return light;
    case HW_TRANSFER_GAMMA:
        return pow(light, 1.0 / transfer->gamma);
    case HW_TRANSFER_TABLE:
        return table_to_code(transfer->table, light);
    case HW_TRANSFER_UNKNOWN:
    case HW_TRANSFER_SRGB:
        break;
    }
    return srgb_to_code(light);
}

static bool
refuse(const char *where, GError **error)
{
    g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_MANIFEST,
                "%s: “transfer” must be “linear”, “srgb”, {\"gamma\": 2.2} or a list of %d rising numbers.",
                where, TABLE_SIZE);
    return false;
}

static bool
table_from_json(const json_t *list, const char *where, HwTransfer *transfer, GError **error)
{
    HwTransfer made = { .kind = HW_TRANSFER_TABLE };
    const json_t *last = json_array_get(list, TABLE_SIZE - 1);
    double scale = last != NULL ? json_number_value(last) : 0.0;
    if (json_array_size(list) != TABLE_SIZE || !(scale > 0.0) || !isfinite(scale))
        return refuse(where, error);
    for (size_t i = 0; i < TABLE_SIZE; i++) {
        const json_t *entry = json_array_get(list, i);
        double light = json_number_value(entry) / scale;
        if (!json_is_number(entry) || !(light >= 0.0) || !(light <= 1.0))
            return refuse(where, error);
        made.table[i] = (float)light;
        if (i > 0 && !(made.table[i] > made.table[i - 1]))
            return refuse(where, error);
    }
    *transfer = made;
    return true;
}

bool
hw_transfer_from_json(const json_t *value, const char *where, HwTransfer *transfer, GError **error)
{
    if (value == NULL || json_is_null(value)) {
        *transfer = (HwTransfer){ .kind = HW_TRANSFER_UNKNOWN };
        return true;
    }
    if (json_is_string(value)) {
        bool linear = strcmp(json_string_value(value), "linear") == 0;
        if (!linear && strcmp(json_string_value(value), "srgb") != 0)
            return refuse(where, error);
        *transfer = (HwTransfer){ .kind = linear ? HW_TRANSFER_LINEAR : HW_TRANSFER_SRGB };
        return true;
    }
    if (json_is_array(value))
        return table_from_json(value, where, transfer, error);
    if (!json_is_object(value))
        return refuse(where, error);
    double gamma = 0.0;
    g_autofree char *place = g_strconcat(where, ": transfer", NULL);
    if (!hw_json_get_double(value, "gamma", HW_JSON_REQUIRED, MIN_GAMMA, MAX_GAMMA, place, &gamma, error))
        return false;
    *transfer = (HwTransfer){ .kind = HW_TRANSFER_GAMMA, .gamma = gamma };
    return true;
}

bool
hw_transfer_parse(const char *text, HwTransfer *transfer, GError **error)
{
    double gamma;
    if (strcmp(text, "linear") == 0) {
        *transfer = (HwTransfer){ .kind = HW_TRANSFER_LINEAR };
    } else if (strcmp(text, "srgb") == 0) {
        *transfer = (HwTransfer){ .kind = HW_TRANSFER_SRGB };
    } else if (g_str_has_prefix(text, "gamma:") && hw_number_parse_double(text + strlen("gamma:"), &gamma) &&
               gamma >= MIN_GAMMA && gamma <= MAX_GAMMA) {
        *transfer = (HwTransfer){ .kind = HW_TRANSFER_GAMMA, .gamma = gamma };
    } else {
        g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_MANIFEST,
                    "“%s” is no transfer; write “linear”, “srgb” or “gamma:2.2” (from 0.1 to 10).", text);
        return false;
    }
    return true;
}

json_t *
hw_transfer_to_json(const HwTransfer *transfer)
{
    json_t *list;
    switch (transfer->kind) {
    case HW_TRANSFER_LINEAR:
        return json_string("linear");
    case HW_TRANSFER_SRGB:
        return json_string("srgb");
    case HW_TRANSFER_GAMMA:
        return json_pack("{s:f}", "gamma", transfer->gamma);
    case HW_TRANSFER_TABLE:
        list = json_array();
        for (int i = 0; i < TABLE_SIZE; i++)
            json_array_append_new(list, json_real((double)transfer->table[i]));
        return list;
    case HW_TRANSFER_UNKNOWN:
        break;
    }
    return NULL;
}
