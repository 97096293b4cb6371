/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Any bytes as JSON: refused with a sentence, or taken and written so that they read back alike. */
#include "core/base/json.h"
#include "tests/fuzz/fuzz_target.h"

#include <string.h>

int
LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
    g_autoptr(GError) error = NULL;
    g_autoptr(json_t) root = hw_json_parse((const char *)data, size, "f.json", &error);
    g_assert_true((root == NULL) == (error != NULL));
    if (root == NULL) {
        g_assert_true(g_utf8_validate(error->message, -1, NULL));
        return 0;
    }
    g_autofree char *text = hw_json_dup_text(root);
    g_autoptr(json_t) back = hw_json_parse(text, strlen(text), "f.json", NULL);
    g_assert_nonnull(back);
    g_autofree char *again = hw_json_dup_text(back);
    g_assert_cmpstr(again, ==, text);
    return 0;
}
