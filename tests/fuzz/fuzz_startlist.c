/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Any bytes as a start list: refused with a sentence, or taken, every rider found by bib and category. */
#include "core/ruling/start_list.h"
#include "tests/fuzz/fuzz_target.h"

int
LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
    g_autoptr(GError) error = NULL;
    g_autoptr(HwStartList) list = hw_start_list_parse((const char *)data, size, "f.csv", NULL, &error);
    g_assert_true((list == NULL) == (error != NULL));
    for (guint i = 0; list != NULL && i < list->riders->len; i++) {
        const HwRider *rider = list->riders->pdata[i];
        bool ambiguous = false;
        const HwRider *found = hw_start_list_find(list, rider->bib, rider->category, &ambiguous);
        g_assert_true(*rider->category == '\0' || found == rider);
        g_assert_cmpint(hw_bib_compare(rider->bib, rider->bib), ==, 0);
    }
    return 0;
}
