/* SPDX-License-Identifier: GPL-3.0-or-later */
/* How light was coded into samples, and back. Measuring is done in linear light. */
#pragma once

#include "core/base/json.h"

#include <glib.h>
#include <stdbool.h>

typedef enum {
    HW_TRANSFER_UNKNOWN, /* sRGB is assumed; the uncertainty budget says so */
    HW_TRANSFER_LINEAR,
    HW_TRANSFER_SRGB, /* IEC 61966-2-1 */
    HW_TRANSFER_GAMMA,
    HW_TRANSFER_TABLE
} HwTransferKind;

typedef struct {
    HwTransferKind kind;
    double gamma;     /* GAMMA: light = code^gamma, 0.1 … 10 */
    float table[256]; /* TABLE: light at code i/255, rising from 0 to 1 */
} HwTransfer;

/* Linear light, 0 … 1, of a code, 0 … 1 (clamped). Between the entries of a table it is linear. */
double hw_transfer_to_light(const HwTransfer *transfer, double code);

/* The code of a light, both 0 … 1: the inverse of the above. */
double hw_transfer_to_code(const HwTransfer *transfer, double light);

/* The manifest's `transfer`: a word, {"gamma": g}, or 256 rising numbers (scaled so that the last is 1);
 * NULL: unknown. */
bool hw_transfer_from_json(const json_t *value, const char *where, HwTransfer *transfer, GError **error);

/* A word ("linear", "srgb") or "gamma:2.2", as on the command line. */
bool hw_transfer_parse(const char *text, HwTransfer *transfer, GError **error);

/* What from_json reads back. New reference; NULL for unknown. */
json_t *hw_transfer_to_json(const HwTransfer *transfer);
