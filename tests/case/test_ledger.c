/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The journal in memory: its chain, and undo and redo against a model that keeps whole copies of the facts.
 */
#include "core/case/case_error.h"
#include "core/case/ledger.h"

#include <gio/gio.h>
#include <string.h>

#define AT "2027-06-13T16:10:00+02:00"

static void
do_act(HwLedger *ledger, HwAct *act)
{
    g_autoptr(HwAct) owned = act;
    g_autofree char *line = hw_ledger_dup_act_line(ledger, owned, AT, "p1");
    g_autoptr(GError) error = NULL;
    if (line != NULL)
        hw_ledger_append(ledger, line, NULL, &error);
    g_assert_no_error(error);
}

static HwAct *
act_set(const char *name, const char *key, json_t *value)
{
    HwAct *act = hw_act_new(name);
    hw_act_set(act, "marker", key, value);
    return act;
}

/* All facts as one text. */
static char *
dup_state(const HwLedger *ledger)
{
    g_autoptr(GArray) facts = hw_ledger_dup_facts(ledger, NULL);
    GString *text = g_string_new(NULL);
    for (guint i = 0; i < facts->len; i++) {
        const HwFact *fact = &g_array_index(facts, HwFact, i);
        g_autofree char *value = hw_fact_dup_text(fact->value);
        g_string_append_printf(text, "%s %s %s\n", fact->kind, fact->key, value);
    }
    return g_string_free(text, FALSE);
}

static void
digest_is_the_one_sha256sum_gives(void)
{
    /* printf '%064d\n{}' 0 | sha256sum, done by the program of that name. */
    g_autoptr(GSubprocess) sum = NULL;
    g_autoptr(GError) error = NULL;
    sum = g_subprocess_new(G_SUBPROCESS_FLAGS_STDIN_PIPE | G_SUBPROCESS_FLAGS_STDOUT_PIPE, &error,
                           "sha256sum", NULL);
    g_assert_no_error(error);
    g_autofree char *input = g_strdup_printf("%064d\n{\"seq\":1}", 0);
    g_autofree char *output = NULL;
    g_assert_true(g_subprocess_communicate_utf8(sum, input, NULL, &output, NULL, &error));
    HwDigest zeros = hw_entry_first_digest();
    HwDigest digest = hw_entry_digest(&zeros, "{\"seq\":1}");
    g_assert_true(g_str_has_prefix(output, digest.hex));
}

static void
undo_and_redo_follow_the_model(void)
{
    g_autoptr(GRand) random = g_rand_new_with_seed(20270613);
    for (int sequence = 0; sequence < 250; sequence++) {
        g_autoptr(HwLedger) ledger = hw_ledger_new("finish.halfwheel");
        g_autoptr(GPtrArray) before = g_ptr_array_new_with_free_func(g_free); /* states undo must lead to */
        g_autoptr(GPtrArray) after = g_ptr_array_new_with_free_func(g_free);  /* states redo must lead to */
        g_autoptr(GPtrArray) lines = g_ptr_array_new_with_free_func(g_free);
        for (int step = 0; step < 40; step++) {
            g_autofree char *state = dup_state(ledger);
            g_autofree char *line = NULL;
            int what = g_rand_int_range(random, 0, 10);
            if (what < 2) {
                g_autoptr(GError) error = NULL;
                line = hw_ledger_dup_undo_line(ledger, AT, "", &error);
                g_assert_true((line != NULL) == (before->len > 0));
                if (line != NULL)
                    g_ptr_array_add(after, g_steal_pointer(&state));
            } else if (what < 4) {
                line = hw_ledger_dup_redo_line(ledger, AT, "", NULL);
                g_assert_true((line != NULL) == (after->len > 0));
                if (line != NULL)
                    g_ptr_array_add(before, g_steal_pointer(&state));
            } else {
                g_autoptr(HwAct) act = hw_act_new("set");
                for (int n = g_rand_int_range(random, 1, 4); n > 0; n--) {
                    g_autofree char *key = g_strdup_printf("%d", g_rand_int_range(random, 0, 6));
                    hw_act_set(act, "marker", key,
                               g_rand_int_range(random, 0, 3) == 0
                                   ? NULL
                                   : json_real(g_rand_double_range(random, 0, 9)));
                }
                line = hw_ledger_dup_act_line(ledger, act, AT, "");
                if (line != NULL) {
                    g_ptr_array_add(before, g_steal_pointer(&state));
                    g_ptr_array_set_size(after, 0);
                }
            }
            if (line == NULL)
                continue;
            g_autoptr(GError) error = NULL;
            hw_ledger_append(ledger, line, NULL, &error);
            g_assert_no_error(error);
            g_ptr_array_add(lines, g_steal_pointer(&line));
            g_autofree char *now = dup_state(ledger);
            if (what < 2) {
                g_assert_cmpstr(now, ==, g_ptr_array_index(before, before->len - 1));
                g_ptr_array_set_size(before, (int)before->len - 1);
            } else if (what < 4) {
                g_assert_cmpstr(now, ==, g_ptr_array_index(after, after->len - 1));
                g_ptr_array_set_size(after, (int)after->len - 1);
            }
        }
        g_autoptr(HwLedger) rebuilt = hw_ledger_new("finish.halfwheel");
        for (guint i = 0; i < lines->len; i++)
            g_assert_true(hw_ledger_append(rebuilt, g_ptr_array_index(lines, i), NULL, NULL));
        g_autofree char *one = dup_state(ledger);
        g_autofree char *other = dup_state(rebuilt);
        g_assert_cmpstr(one, ==, other);
        g_assert_cmpstr(hw_ledger_get_digest(ledger)->hex, ==, hw_ledger_get_digest(rebuilt)->hex);
    }
}

static void
what_is_kept_ends_undoing(void)
{
    g_autoptr(HwLedger) ledger = hw_ledger_new("finish.halfwheel");
    do_act(ledger, act_set("place_marker", "1", json_integer(1)));
    HwAct *release = act_set("release", "r1", json_string("top 3"));
    hw_act_keep(release);
    do_act(ledger, release);
    g_assert_null(hw_ledger_get_undo_name(ledger));
    g_autoptr(GError) error = NULL;
    g_assert_null(hw_ledger_dup_undo_line(ledger, AT, "", &error));
    g_assert_error(error, HW_CASE_ERROR, HW_CASE_ERROR_ACT);
    do_act(ledger, act_set("place_marker", "2", json_integer(2)));
    g_assert_cmpstr(hw_ledger_get_undo_name(ledger), ==, "place_marker");
}

static void
an_act_that_changes_nothing_is_no_entry(void)
{
    g_autoptr(HwLedger) ledger = hw_ledger_new("finish.halfwheel");
    do_act(ledger, act_set("place_marker", "1", json_integer(1)));
    do_act(ledger, act_set("place_marker", "1", json_integer(1)));
    do_act(ledger, act_set("delete_marker", "2", NULL));
    g_assert_cmpint(hw_ledger_get_revision(ledger), ==, 1);
}

static void
what_does_not_follow_is_refused_and_changes_nothing(void)
{
    static const char *const lines[] = {
        "{\"seq\":3,\"at\":\"" AT "\",\"by\":null,\"act\":\"a\",\"changes\":[]}", /* a gap in the numbers */
        "{\"seq\":2,\"at\":\"" AT
        "\",\"by\":null,\"act\":\"a\",\"changes\":[{\"kind\":\"marker\",\"key\":\"1\",\"from\":9,"
        "\"to\":2}]}",
        "{\"seq\":2,\"at\":\"" AT "\",\"by\":null,\"act\":\"undo\",\"undoes\":1,\"changes\":[]}",
        "{\"seq\":2,\"at\":\"" AT "\",\"by\":null,\"act\":\"redo\",\"redoes\":1,\"changes\":[]}",
        "{\"seq\":2,\"at\":\"" AT
        "\",\"by\":null,\"act\":\"a\",\"changes\":[{\"kind\":\"m\",\"key\":\"2\",\"from\":null,\"to\":1},"
        "{\"kind\":\"m\",\"key\":\"2\",\"from\":null,\"to\":2}]}",
        "{\"seq\":2,\"at\":\"" AT "\",\"act\":\"a\"}",
        "not JSON",
    };
    g_autoptr(HwLedger) ledger = hw_ledger_new("finish.halfwheel");
    do_act(ledger, act_set("place_marker", "1", json_integer(1)));
    g_autofree char *state = dup_state(ledger);
    for (guint i = 0; i < G_N_ELEMENTS(lines); i++) {
        g_autoptr(GError) error = NULL;
        g_assert_false(hw_ledger_append(ledger, lines[i], NULL, &error));
        g_assert_error(error, HW_CASE_ERROR, HW_CASE_ERROR_FALSE);
        g_autofree char *now = dup_state(ledger);
        g_assert_cmpstr(now, ==, state);
        g_assert_cmpint(hw_ledger_get_revision(ledger), ==, 1);
    }
    g_autoptr(HwAct) act = act_set("place_marker", "2", json_integer(1));
    g_autofree char *line = hw_ledger_dup_act_line(ledger, act, AT, "");
    g_autoptr(GError) error = NULL;
    HwDigest zeros = hw_entry_first_digest();
    g_assert_false(hw_ledger_append(ledger, line, zeros.hex, &error));
    g_assert_nonnull(strstr(error->message, "finish.halfwheel: entry 2"));
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
    g_test_add_func("/ledger/digest_is_the_one_sha256sum_gives", digest_is_the_one_sha256sum_gives);
    g_test_add_func("/ledger/undo_and_redo_follow_the_model", undo_and_redo_follow_the_model);
    g_test_add_func("/ledger/what_is_kept_ends_undoing", what_is_kept_ends_undoing);
    g_test_add_func("/ledger/an_act_that_changes_nothing_is_no_entry",
                    an_act_that_changes_nothing_is_no_entry);
    g_test_add_func("/ledger/what_does_not_follow_is_refused_and_changes_nothing",
                    what_does_not_follow_is_refused_and_changes_nothing);
    return g_test_run();
}
