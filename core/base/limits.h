/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The limits that input is held to before anything is allocated or multiplied. */
#pragma once

#include <stdint.h>

#define HW_NS_PER_S INT64_C(1000000000)
#define HW_NS_PER_MIN (60 * HW_NS_PER_S)
#define HW_NS_PER_HOUR (60 * HW_NS_PER_MIN)
#define HW_NS_PER_DAY (24 * HW_NS_PER_HOUR)

/* Integers in JSON files: what every JSON reader keeps exactly. */
#define HW_MAX_JSON_INTEGER ((INT64_C(1) << 53) - 1)

#define HW_MAX_MANIFEST_BYTES ((size_t)16 << 20)
#define HW_MAX_JSON_DEPTH 32
#define HW_MAX_TABLE_BYTES ((size_t)64 << 20)
#define HW_MAX_TABLE_ROWS 1000000
#define HW_MAX_TABLE_FIELDS 256

#define HW_MAX_BLOCK_PIXELS ((int64_t)1 << 27)
#define HW_MAX_BLOCK_FILE_BYTES ((int64_t)1 << 31)
#define HW_MAX_BLOCKS 1000000
#define HW_MAX_COLUMNS (INT64_C(1) << 40)
#define HW_MAX_RATE_HZ 1000000
