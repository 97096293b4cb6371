/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What every fuzz target is: one function, named as libFuzzer wants it. Always returns 0; a broken rule
 * aborts. */
#pragma once

#include <stddef.h>
#include <stdint.h>

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size);
