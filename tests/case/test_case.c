/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A case on the disk: what it keeps, who may write it, and what it refuses. */
#include "core/base/base_error.h"
#include "core/case/case.h"
#include "core/case/case_error.h"

#include <glib/gstdio.h>
#include <sqlite3.h>
#include <string.h>

typedef struct {
    char *folder;
    char *path;
} Desk;

static Desk
desk_new(void)
{
    Desk desk = { .folder = g_dir_make_tmp("hw-case-XXXXXX", NULL) };
    desk.path = g_build_filename(desk.folder, "finish" HW_CASE_SUFFIX, NULL);
    return desk;
}

static guint
count_files(const Desk *desk)
{
    guint n = 0;
    g_autoptr(GDir) folder = g_dir_open(desk->folder, 0, NULL);
    while (g_dir_read_name(folder) != NULL)
        n++;
    return n;
}

static void
desk_clear(Desk *desk)
{
    g_autoptr(GDir) folder = g_dir_open(desk->folder, 0, NULL);
    for (const char *name = g_dir_read_name(folder); name != NULL; name = g_dir_read_name(folder)) {
        g_autofree char *path = g_build_filename(desk->folder, name, NULL);
        g_unlink(path);
    }
    g_rmdir(desk->folder);
    g_free(desk->folder);
    g_free(desk->path);
}

static void
place(HwCase *held, const char *key, double column)
{
    g_autoptr(HwAct) act = hw_act_new("place_marker");
    hw_act_set(act, "marker", key, json_real(column));
    g_autoptr(GError) error = NULL;
    hw_case_do(held, act, &error);
    g_assert_no_error(error);
}

static HwCase *
open_case(const Desk *desk, HwCaseMode mode)
{
    g_autoptr(GError) error = NULL;
    HwCase *held = hw_case_open(desk->path, mode, &error);
    g_assert_no_error(error);
    return held;
}

static void
acts_outlive_the_program(void)
{
    Desk desk = desk_new();
    HwCase *held = hw_case_create(desk.path, false, NULL);
    hw_case_set_desk(held, "p1");
    place(held, "1", 0.1 + 0.2);
    place(held, "2", 1043.5);
    g_assert_true(hw_case_undo(held, NULL));
    HwDigest digest = *hw_case_get_digest(held);
    hw_case_close(held);

    held = open_case(&desk, HW_CASE_WRITE);
    g_assert_cmpint(hw_case_get_revision(held), ==, 3);
    g_assert_cmpstr(hw_case_get_digest(held)->hex, ==, digest.hex);
    g_assert_cmpfloat(json_real_value(hw_case_get_fact(held, "marker", "1")), ==, 0.1 + 0.2);
    g_assert_null(hw_case_get_fact(held, "marker", "2"));
    g_assert_true(hw_case_redo(held, NULL));
    g_assert_nonnull(hw_case_get_fact(held, "marker", "2"));
    g_assert_true(hw_case_verify(held, NULL));
    hw_case_close(held);
    g_assert_cmpuint(count_files(&desk), ==, 1); /* neither lock nor journal is left */
    desk_clear(&desk);
}

static void
one_desk_writes_and_others_read(void)
{
    Desk desk = desk_new();
    HwCase *held = hw_case_create(desk.path, false, NULL);
    place(held, "1", 1);
    g_autoptr(GError) error = NULL;
    g_assert_null(hw_case_open(desk.path, HW_CASE_WRITE, &error));
    g_assert_error(error, HW_CASE_ERROR, HW_CASE_ERROR_READ_ONLY);
    HwCase *second = open_case(&desk, HW_CASE_WRITE_OR_READ);
    g_assert_nonnull(strstr(hw_case_get_why_read_only(second), "another window or desk"));
    g_assert_cmpint(hw_case_get_revision(second), ==, 1);
    g_autoptr(HwAct) act = hw_act_new("place_marker");
    hw_act_set(act, "marker", "9", json_integer(9));
    g_autoptr(GError) refused = NULL;
    g_assert_false(hw_case_do(second, act, &refused));
    g_assert_error(refused, HW_CASE_ERROR, HW_CASE_ERROR_READ_ONLY);
    hw_case_close(second);
    hw_case_close(held);
    held = open_case(&desk, HW_CASE_WRITE);
    g_assert_null(hw_case_get_why_read_only(held));
    g_assert_cmpint(hw_case_get_revision(held), ==, 1);
    hw_case_close(held);
    desk_clear(&desk);
}

static void
run_sql(const Desk *desk, const char *sql)
{
    sqlite3 *db = NULL;
    g_assert_cmpint(sqlite3_open(desk->path, &db), ==, SQLITE_OK);
    g_assert_cmpint(sqlite3_exec(db, sql, NULL, NULL, NULL), ==, SQLITE_OK);
    sqlite3_close(db);
}

static void
other_hands_are_noticed(void)
{
    static const struct {
        const char *sql;
        HwCaseError code;
        const char *named;
    } cases[] = {
        { "UPDATE fact SET value='7' WHERE key='1'", HW_CASE_ERROR_FALSE, "marker 1" },
        { "DELETE FROM fact WHERE key='2'", HW_CASE_ERROR_FALSE, "number of rows" },
        { "INSERT INTO fact VALUES('marker', '3', '1')", HW_CASE_ERROR_FALSE, "marker 3" },
        { "DELETE FROM journal WHERE seq=2", HW_CASE_ERROR_FALSE, "entry 2" },
        { "DELETE FROM journal WHERE seq=3", HW_CASE_ERROR_FALSE, "marker" },
        { "UPDATE journal SET line=replace(line, '1.0', '2.0') WHERE seq=1", HW_CASE_ERROR_FALSE, "entry 1" },
        { "UPDATE journal SET digest='00' WHERE seq=3", HW_CASE_ERROR_FALSE, "entry 3" },
        { "UPDATE journal SET seq=9 WHERE seq=1", HW_CASE_ERROR_FALSE, "entry 1" },
        { "CREATE TRIGGER t AFTER INSERT ON journal BEGIN DELETE FROM fact; END", HW_CASE_ERROR_FORMAT,
          "triggers" },
        { "CREATE VIEW v AS SELECT 1", HW_CASE_ERROR_FORMAT, "views" },
        { "CREATE TABLE extra(a)", HW_CASE_ERROR_FORMAT, "tables" },
        { "PRAGMA user_version=2", HW_CASE_ERROR_FORMAT, "newer" },
        { "PRAGMA application_id=1", HW_CASE_ERROR_FORMAT, "another program" },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        Desk desk = desk_new();
        HwCase *held = hw_case_create(desk.path, false, NULL);
        place(held, "1", 1);
        place(held, "2", 2);
        place(held, "1", 3);
        hw_case_close(held);
        run_sql(&desk, cases[i].sql);
        g_autoptr(GError) error = NULL;
        g_assert_null(hw_case_open(desk.path, HW_CASE_READ, &error));
        g_assert_error(error, HW_CASE_ERROR, (int)cases[i].code);
        g_assert_nonnull(strstr(error->message, cases[i].named));
        desk_clear(&desk);
    }
}

static void
what_is_no_case_is_refused(void)
{
    Desk desk = desk_new();
    g_autoptr(GError) missing = NULL;
    g_assert_null(hw_case_open(desk.path, HW_CASE_WRITE, &missing));
    g_assert_nonnull(strstr(missing->message, desk.path));
    g_assert_true(
        g_file_set_contents(desk.path, "this is a letter and no case at all, of some length", -1, NULL));
    g_autoptr(GError) error = NULL;
    g_assert_null(hw_case_open(desk.path, HW_CASE_READ, &error));
    g_assert_error(error, HW_CASE_ERROR, HW_CASE_ERROR_FORMAT);
    g_unlink(desk.path);

    HwCase *held = hw_case_create(desk.path, false, NULL);
    for (int i = 0; i < 50; i++) {
        g_autofree char *key = g_strdup_printf("%d", i);
        place(held, key, i);
    }
    hw_case_close(held);
    g_autofree char *whole = NULL;
    gsize size;
    g_assert_true(g_file_get_contents(desk.path, &whole, &size, NULL));
    for (gsize cut = 0; cut < size; cut += 1024) {
        g_assert_true(g_file_set_contents(desk.path, whole, (gssize)cut, NULL));
        g_autoptr(GError) cut_error = NULL;
        g_assert_null(hw_case_open(desk.path, HW_CASE_READ, &cut_error));
        g_assert_nonnull(strstr(cut_error->message, desk.path));
    }
    desk_clear(&desk);
}

static void
making_a_case_never_harms_what_is_there(void)
{
    Desk desk = desk_new();
    g_assert_true(g_file_set_contents(desk.path, "mine", -1, NULL));
    g_autoptr(GError) error = NULL;
    g_assert_null(hw_case_create(desk.path, false, &error));
    g_assert_error(error, HW_BASE_ERROR, HW_BASE_ERROR_EXISTS);
    g_autofree char *kept = NULL;
    g_assert_true(g_file_get_contents(desk.path, &kept, NULL, NULL));
    g_assert_cmpstr(kept, ==, "mine");
    g_assert_cmpuint(count_files(&desk), ==, 1);
    HwCase *held = hw_case_create(desk.path, true, NULL);
    g_assert_nonnull(held);
    place(held, "1", 1);

    g_autofree char *copy = g_build_filename(desk.folder, "copy" HW_CASE_SUFFIX, NULL);
    g_assert_true(hw_case_copy(held, copy, false, NULL));
    HwCase *copied = hw_case_open(copy, HW_CASE_WRITE, NULL);
    g_assert_cmpstr(hw_case_get_digest(copied)->hex, ==, hw_case_get_digest(held)->hex);
    hw_case_close(copied);
    hw_case_close(held);
    desk_clear(&desk);
}

/* The journal read by SQLite's own program gives a chain that sha256sum confirms. */
static void
chain_can_be_checked_by_hand(void)
{
    Desk desk = desk_new();
    HwCase *held = hw_case_create(desk.path, false, NULL);
    place(held, "1", 1);
    place(held, "2", 2);
    hw_case_close(held);
    sqlite3 *db = NULL;
    sqlite3_stmt *rows = NULL;
    g_assert_cmpint(sqlite3_open(desk.path, &db), ==, SQLITE_OK);
    g_assert_cmpint(sqlite3_prepare_v2(db, "SELECT line, digest FROM journal ORDER BY seq", -1, &rows, NULL),
                    ==, SQLITE_OK);
    g_autofree char *previous = g_strdup_printf("%064d", 0);
    int n = 0;
    for (; sqlite3_step(rows) == SQLITE_ROW; n++) {
        g_autofree char *text =
            g_strdup_printf("%s\n%s", previous, (const char *)sqlite3_column_text(rows, 0));
        g_autofree char *sum =
            g_compute_checksum_for_string(G_CHECKSUM_SHA256, text, -1); /* GLib's, not libcrypto's */
        g_assert_cmpstr(sum, ==, (const char *)sqlite3_column_text(rows, 1));
        g_free(previous);
        previous = g_steal_pointer(&sum);
    }
    g_assert_cmpint(n, ==, 2);
    sqlite3_finalize(rows);
    sqlite3_close(db);
    desk_clear(&desk);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
    g_test_add_func("/case/acts_outlive_the_program", acts_outlive_the_program);
    g_test_add_func("/case/one_desk_writes_and_others_read", one_desk_writes_and_others_read);
    g_test_add_func("/case/other_hands_are_noticed", other_hands_are_noticed);
    g_test_add_func("/case/what_is_no_case_is_refused", what_is_no_case_is_refused);
    g_test_add_func("/case/making_a_case_never_harms_what_is_there", making_a_case_never_harms_what_is_there);
    g_test_add_func("/case/chain_can_be_checked_by_hand", chain_can_be_checked_by_hand);
    return g_test_run();
}
