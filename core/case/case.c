/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/case/case.h"

#include "core/base/base_error.h"
#include "core/case/case_error.h"
#include "core/case/desk_lock.h"
#include "core/case/ledger.h"
#include "core/case/store.h"

#include <errno.h>
#include <fcntl.h>
#include <glib/gstdio.h>
#include <stdio.h>
#include <string.h>
#include <unistd.h>

struct HwCase {
    char *path;
    char *why_read_only;
    char *desk;
    HwDeskLock *lock;
    HwStore *store;
    HwLedger *ledger;
};

void
hw_case_close(HwCase *held)
{
    if (held == NULL)
        return;
    hw_store_close(held->store);
    hw_desk_lock_release(held->lock);
    hw_ledger_free(held->ledger);
    g_free(held->path);
    g_free(held->why_read_only);
    g_free(held->desk);
    g_free(held);
}

static HwCase *
case_alloc(const char *path)
{
    HwCase *held = g_new0(HwCase, 1);
    held->path = g_strdup(path);
    held->desk = g_strdup("");
    held->ledger = hw_ledger_new(path);
    return held;
}

/* Puts a finished file in its place; its folder's entry is on the disk afterwards. */
static bool
put_in_place(const char *from, const char *path, bool force, GError **error)
{
    int result = force ? rename(from, path) : renameat2(AT_FDCWD, from, AT_FDCWD, path, RENAME_NOREPLACE);
    if (result != 0) {
        int code = errno;
        g_set_error(error, HW_BASE_ERROR, code == EEXIST ? HW_BASE_ERROR_EXISTS : HW_BASE_ERROR_IO,
                    code == EEXIST ? "%s is there already; name another, or add --force.%s"
                                   : "%s cannot be made: %s; check the place and try again.",
                    path, code == EEXIST ? "" : g_strerror(code));
        return false;
    }
    g_autofree char *folder = g_path_get_dirname(path);
    int fd = open(folder, O_RDONLY | O_DIRECTORY | O_CLOEXEC);
    if (fd >= 0) {
        fsync(fd);
        close(fd);
    }
    return true;
}

/* A name beside the path that nothing has. */
static char *
dup_beside(const char *path)
{
    return g_strdup_printf("%s.%08x.part", path, g_random_int());
}

HwCase *
hw_case_create(const char *path, bool force, GError **error)
{
    g_autofree char *beside = dup_beside(path);
    HwStore *made = hw_store_create(beside, error);
    hw_store_close(made);
    if (made == NULL || !put_in_place(beside, path, force, error)) {
        g_unlink(beside);
        return NULL;
    }
    return hw_case_open(path, HW_CASE_WRITE, error);
}

HwCase *
hw_case_open(const char *path, HwCaseMode mode, GError **error)
{
    g_autoptr(HwCase) held = case_alloc(path);
    if (mode != HW_CASE_READ && g_file_test(path, G_FILE_TEST_EXISTS)) {
        g_autoptr(GError) why = NULL;
        held->lock = hw_desk_lock_take(path, &why);
        if (held->lock == NULL && mode == HW_CASE_WRITE) {
            g_propagate_error(error, g_steal_pointer(&why));
            return NULL;
        }
        held->why_read_only = why != NULL ? g_strdup(why->message) : NULL;
    } else if (mode == HW_CASE_READ) {
        held->why_read_only = g_strdup_printf("%s was opened for reading.", path);
    }
    held->store = hw_store_open(path, held->lock != NULL, path, error);
    if (held->store == NULL || !hw_store_load(held->store, held->ledger, error) ||
        !hw_store_compare(held->store, held->ledger, error))
        return NULL;
    return g_steal_pointer(&held);
}

const char *
hw_case_get_path(const HwCase *held)
{
    return held->path;
}

const char *
hw_case_get_why_read_only(const HwCase *held)
{
    return held->why_read_only;
}

int64_t
hw_case_get_revision(const HwCase *held)
{
    return hw_ledger_get_revision(held->ledger);
}

const HwDigest *
hw_case_get_digest(const HwCase *held)
{
    return hw_ledger_get_digest(held->ledger);
}

void
hw_case_set_desk(HwCase *held, const char *person)
{
    g_free(held->desk);
    held->desk = g_strdup(person);
}

/* ---- acts ---- */

/* The clock's word for now, with its offset. The journal's order never depends on it. */
static char *
dup_now(void)
{
    g_autoptr(GDateTime) now = g_date_time_new_now_local();
    return g_date_time_format(now, "%Y-%m-%dT%H:%M:%S.%f%:z");
}

static bool
check_writable(const HwCase *held, GError **error)
{
    if (held->why_read_only == NULL)
        return true;
    g_set_error_literal(error, HW_CASE_ERROR, HW_CASE_ERROR_READ_ONLY, held->why_read_only);
    return false;
}

/* First to the disk, then to memory: what is shown is what was kept. */
static bool
write_line(HwCase *held, const char *line, GError **error)
{
    g_auto(HwEntry) entry = { 0 };
    HwDigest digest = hw_entry_digest(hw_ledger_get_digest(held->ledger), line);
    if (!hw_entry_parse(line, "The act", &entry, error) ||
        !hw_store_append(held->store, entry.seq, line, digest.hex, entry.changes, error))
        return false;
    return hw_ledger_append(held->ledger, line, digest.hex, error);
}

bool
hw_case_do(HwCase *held, const HwAct *act, GError **error)
{
    if (!check_writable(held, error))
        return false;
    g_autofree char *now = dup_now();
    g_autofree char *line = hw_ledger_dup_act_line(held->ledger, act, now, held->desk);
    return line == NULL || write_line(held, line, error);
}

bool
hw_case_undo(HwCase *held, GError **error)
{
    if (!check_writable(held, error))
        return false;
    g_autofree char *now = dup_now();
    g_autofree char *line = hw_ledger_dup_undo_line(held->ledger, now, held->desk, error);
    return line != NULL && write_line(held, line, error);
}

bool
hw_case_redo(HwCase *held, GError **error)
{
    if (!check_writable(held, error))
        return false;
    g_autofree char *now = dup_now();
    g_autofree char *line = hw_ledger_dup_redo_line(held->ledger, now, held->desk, error);
    return line != NULL && write_line(held, line, error);
}

/* ---- reading ---- */

const json_t *
hw_case_get_fact(const HwCase *held, const char *kind, const char *key)
{
    return hw_ledger_get_fact(held->ledger, kind, key);
}

GArray *
hw_case_dup_facts(const HwCase *held, const char *kind)
{
    return hw_ledger_dup_facts(held->ledger, kind);
}

bool
hw_case_verify(HwCase *held, GError **error)
{
    g_autoptr(HwLedger) rebuilt = hw_ledger_new(held->path);
    return hw_store_load(held->store, rebuilt, error) && hw_store_compare(held->store, rebuilt, error);
}

bool
hw_case_copy(HwCase *held, const char *path, bool force, GError **error)
{
    g_autofree char *beside = dup_beside(path);
    bool done = hw_store_copy(held->store, beside, error) && put_in_place(beside, path, force, error);
    if (!done)
        g_unlink(beside);
    return done;
}
