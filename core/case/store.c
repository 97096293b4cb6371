/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/case/store.h"

#include "core/case/case_error.h"

#include <sqlite3.h>
#include <string.h>

enum { APPLICATION_ID = 0x48774361 /* "HwCa" */, STORE_VERSION = 1, BUSY_MS = 2000 };

static const struct {
    const char *name;
    const char *sql;
} tables[] = {
    { "fact",
      "CREATE TABLE fact(kind TEXT NOT NULL, key TEXT NOT NULL, value TEXT NOT NULL, PRIMARY KEY(kind, key)) "
      "STRICT, WITHOUT ROWID" },
    { "journal",
      "CREATE TABLE journal(seq INTEGER PRIMARY KEY, line TEXT NOT NULL, digest TEXT NOT NULL) STRICT" },
};

struct HwStore {
    sqlite3 *db;
    char *label;
};

static bool
set_error(GError **error, const HwStore *store, const char *doing)
{
    int code = sqlite3_errcode(store->db);
    bool not_ours = code == SQLITE_NOTADB || code == SQLITE_CORRUPT;
    if (not_ours)
        g_set_error(error, HW_CASE_ERROR, HW_CASE_ERROR_FORMAT,
                    "%s is no case, or was cut or altered (%s); take a copy or the bag.", store->label,
                    sqlite3_errmsg(store->db));
    else
        g_set_error(error, HW_CASE_ERROR, HW_CASE_ERROR_IO, "%s cannot be %s: %s; %s.", store->label, doing,
                    sqlite3_errmsg(store->db),
                    code == SQLITE_FULL ? "make room and do it again" : "check the disk and do it again");
    return false;
}

static bool
run(HwStore *store, const char *sql, const char *doing, GError **error)
{
    return sqlite3_exec(store->db, sql, NULL, NULL, NULL) == SQLITE_OK || set_error(error, store, doing);
}

static sqlite3_stmt *
prepare(HwStore *store, const char *sql, GError **error)
{
    sqlite3_stmt *statement = NULL;
    if (sqlite3_prepare_v2(store->db, sql, -1, &statement, NULL) != SQLITE_OK)
        set_error(error, store, "read");
    return statement;
}

static void
bind_text(sqlite3_stmt *statement, int place, const char *text)
{
    sqlite3_bind_text(statement, place, text, -1, SQLITE_TRANSIENT);
}

static const char *
text_at(sqlite3_stmt *statement, int place)
{
    const char *text = (const char *)sqlite3_column_text(statement, place);
    return text != NULL ? text : "";
}

static HwStore *
open_db(const char *path, int flags, const char *label, GError **error)
{
    g_autoptr(HwStore) store = g_new0(HwStore, 1);
    store->label = g_strdup(label);
    if (sqlite3_open_v2(path, &store->db, flags, NULL) != SQLITE_OK) {
        set_error(error, store, "opened");
        return NULL;
    }
    sqlite3_busy_timeout(store->db, BUSY_MS);
    sqlite3_extended_result_codes(store->db, 0);
    sqlite3_db_config(store->db, SQLITE_DBCONFIG_DEFENSIVE, 1, NULL);
    sqlite3_db_config(store->db, SQLITE_DBCONFIG_TRUSTED_SCHEMA, 0, NULL);
    sqlite3_db_config(store->db, SQLITE_DBCONFIG_ENABLE_TRIGGER, 0, NULL);
    sqlite3_db_config(store->db, SQLITE_DBCONFIG_ENABLE_VIEW, 0, NULL);
    return g_steal_pointer(&store);
}

HwStore *
hw_store_create(const char *path, GError **error)
{
    g_autoptr(HwStore) store = open_db(path, SQLITE_OPEN_READWRITE | SQLITE_OPEN_CREATE, path, error);
    if (store == NULL)
        return NULL;
    g_autofree char *sql =
        g_strdup_printf("PRAGMA journal_mode=DELETE; PRAGMA synchronous=EXTRA; BEGIN IMMEDIATE; %s; %s; "
                        "PRAGMA application_id=%d; PRAGMA user_version=%d; COMMIT;",
                        tables[0].sql, tables[1].sql, APPLICATION_ID, STORE_VERSION);
    return run(store, sql, "made", error) ? g_steal_pointer(&store) : NULL;
}

void
hw_store_close(HwStore *store)
{
    if (store == NULL)
        return;
    sqlite3_close(store->db);
    g_free(store->label);
    g_free(store);
}

/* ---- is it ours ---- */

static bool
read_pragma(HwStore *store, const char *sql, int *value, GError **error)
{
    sqlite3_stmt *statement = prepare(store, sql, error);
    if (statement == NULL)
        return false;
    bool has_row = sqlite3_step(statement) == SQLITE_ROW;
    *value = has_row ? sqlite3_column_int(statement, 0) : 0;
    if (!has_row)
        set_error(error, store, "read");
    sqlite3_finalize(statement);
    return has_row;
}

static bool
refuse_format(GError **error, const HwStore *store, const char *what)
{
    g_set_error(error, HW_CASE_ERROR, HW_CASE_ERROR_FORMAT, "%s %s.", store->label, what);
    return false;
}

/* Our two tables to the letter, and nothing beside them: no trigger or view that could act when we write. */
static bool
check_schema(HwStore *store, GError **error)
{
    sqlite3_stmt *statement = prepare(store, "SELECT name, sql FROM sqlite_schema ORDER BY name", error);
    if (statement == NULL)
        return false;
    guint n = 0;
    bool ours = true;
    while (ours && sqlite3_step(statement) == SQLITE_ROW) {
        ours = n < G_N_ELEMENTS(tables) && strcmp(text_at(statement, 0), tables[n].name) == 0 &&
               strcmp(text_at(statement, 1), tables[n].sql) == 0;
        n++;
    }
    sqlite3_finalize(statement);
    return (ours && n == G_N_ELEMENTS(tables)) ||
           refuse_format(error, store,
                         "holds tables, triggers or views that are not a case's; take a copy or the bag");
}

HwStore *
hw_store_open(const char *path, bool write, const char *label, GError **error)
{
    g_autoptr(HwStore) store =
        open_db(path, write ? SQLITE_OPEN_READWRITE : SQLITE_OPEN_READONLY, label, error);
    int id = 0, version = 0;
    if (store == NULL || !read_pragma(store, "PRAGMA application_id", &id, error) ||
        !read_pragma(store, "PRAGMA user_version", &version, error))
        return NULL;
    if (id != APPLICATION_ID)
        refuse_format(error, store, "is a database of another program and no case; name a case");
    else if (version > STORE_VERSION)
        refuse_format(error, store, "was written by a newer Halfwheel; open it with that one");
    else if (check_schema(store, error) &&
             (!write || run(store, "PRAGMA journal_mode=DELETE; PRAGMA synchronous=EXTRA", "opened", error)))
        return g_steal_pointer(&store);
    return NULL;
}

/* ---- reading ---- */

bool
hw_store_load(HwStore *store, HwLedger *ledger, GError **error)
{
    sqlite3_stmt *statement = prepare(store, "SELECT line, digest FROM journal ORDER BY seq", error);
    if (statement == NULL)
        return false;
    int step;
    bool follows = true;
    while (follows && (step = sqlite3_step(statement)) == SQLITE_ROW)
        follows = hw_ledger_append(ledger, text_at(statement, 0), text_at(statement, 1), error);
    bool good = follows && (step == SQLITE_DONE || set_error(error, store, "read"));
    sqlite3_finalize(statement);
    return good;
}

static bool
differs(GError **error, const HwStore *store, const char *kind, const char *key)
{
    g_set_error(
        error, HW_CASE_ERROR, HW_CASE_ERROR_FALSE,
        "%s: the fact %s %s is not what the journal gives; the case was changed by other means than acts.",
        store->label, kind, key);
    return false;
}

bool
hw_store_compare(HwStore *store, const HwLedger *ledger, GError **error)
{
    g_autoptr(GArray) facts = hw_ledger_dup_facts(ledger, NULL);
    sqlite3_stmt *statement = prepare(store, "SELECT kind, key, value FROM fact", error);
    if (statement == NULL)
        return false;
    guint n = 0;
    int step = SQLITE_DONE;
    bool same = true;
    while (same && (step = sqlite3_step(statement)) == SQLITE_ROW) {
        const char *kind = text_at(statement, 0), *key = text_at(statement, 1);
        const json_t *value = hw_ledger_get_fact(ledger, kind, key);
        g_autofree char *text = value != NULL ? hw_fact_dup_text(value) : NULL;
        same = text != NULL && strcmp(text, text_at(statement, 2)) == 0;
        if (!same)
            differs(error, store, kind, key);
        n++;
    }
    bool read = step == SQLITE_DONE || step == SQLITE_ROW || set_error(error, store, "read");
    sqlite3_finalize(statement);
    if (read && same && n != facts->len)
        same = differs(error, store, "table", "(its number of rows)");
    return read && same;
}

/* ---- writing ---- */

static bool
step_once(HwStore *store, sqlite3_stmt *statement, GError **error)
{
    bool done = sqlite3_step(statement) == SQLITE_DONE || set_error(error, store, "written");
    sqlite3_reset(statement);
    return done;
}

static bool
write_line(HwStore *store, int64_t seq, const char *line, const char *digest, GError **error)
{
    sqlite3_stmt *statement = prepare(store, "INSERT INTO journal VALUES(?1, ?2, ?3)", error);
    if (statement == NULL)
        return false;
    sqlite3_bind_int64(statement, 1, seq);
    bind_text(statement, 2, line);
    bind_text(statement, 3, digest);
    bool done = step_once(store, statement, error);
    sqlite3_finalize(statement);
    return done;
}

static bool
write_fact(HwStore *store, const json_t *change, GError **error)
{
    const json_t *to = json_object_get(change, "to");
    sqlite3_stmt *statement = prepare(store,
                                      json_is_null(to) ? "DELETE FROM fact WHERE kind=?1 AND key=?2"
                                                       : "REPLACE INTO fact VALUES(?1, ?2, ?3)",
                                      error);
    if (statement == NULL)
        return false;
    bind_text(statement, 1, json_string_value(json_object_get(change, "kind")));
    bind_text(statement, 2, json_string_value(json_object_get(change, "key")));
    g_autofree char *text = hw_fact_dup_text(to);
    if (!json_is_null(to))
        bind_text(statement, 3, text);
    bool done = step_once(store, statement, error);
    sqlite3_finalize(statement);
    return done;
}

bool
hw_store_append(HwStore *store, int64_t seq, const char *line, const char *digest, const json_t *changes,
                GError **error)
{
    if (!run(store, "BEGIN IMMEDIATE", "written", error))
        return false;
    bool good = write_line(store, seq, line, digest, error);
    for (size_t i = 0; good && i < json_array_size(changes); i++)
        good = write_fact(store, json_array_get(changes, i), error);
    if (good && run(store, "COMMIT", "written", error))
        return true;
    sqlite3_exec(store->db, "ROLLBACK", NULL, NULL, NULL);
    return false;
}

bool
hw_store_copy(HwStore *store, const char *path, GError **error)
{
    sqlite3_stmt *statement = prepare(store, "VACUUM INTO ?1", error);
    if (statement == NULL)
        return false;
    bind_text(statement, 1, path);
    bool done = step_once(store, statement, error);
    sqlite3_finalize(statement);
    return done;
}
