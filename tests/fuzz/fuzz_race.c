/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Any bytes as a race file: refused with a sentence, or taken. */
#include "core/ruling/race.h"
#include "tests/fuzz/fuzz_target.h"

int
LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
    g_autoptr(GError) error = NULL;
    g_autoptr(HwRace) race = hw_race_parse((const char *)data, size, "f.json", &error);
    g_assert_true((race == NULL) == (error != NULL));
    return 0;
}
