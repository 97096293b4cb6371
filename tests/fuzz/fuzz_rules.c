/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Any bytes as a rule set: refused with a sentence, or taken and put in words. */
#include "core/ruling/rules.h"
#include "tests/fuzz/fuzz_target.h"

int
LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
    g_autoptr(GError) error = NULL;
    g_autoptr(HwRules) rules = hw_rules_parse((const char *)data, size, "f.json", &error);
    g_assert_true((rules == NULL) == (error != NULL));
    if (rules == NULL)
        return 0;
    g_autofree char *words = hw_rules_dup_text(rules), *line = hw_rules_dup_line(rules);
    g_assert_true(g_utf8_validate(words, -1, NULL) && g_utf8_validate(line, -1, NULL));
    return 0;
}
