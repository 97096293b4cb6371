/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/case/ledger.h"

#include "core/case/case_error.h"

#include <string.h>

/* What an act changed, kept for its undoing and redoing. */
typedef struct {
    int64_t seq;
    char *name;
    json_t *changes;
} Done;

typedef struct {
    char *kind;
    char *key;
    json_t *value;
} Stored;

struct HwLedger {
    char *label;
    GHashTable *facts; /* "kind\nkey" → Stored */
    GArray *done;      /* Done, that undo can take back, oldest first */
    GArray *undone;    /* Done, that redo can make again, last undone last */
    int64_t revision;
    HwDigest digest;
};

static void
done_clear(gpointer data)
{
    Done *done = data;
    g_free(done->name);
    json_decref(done->changes);
}

static void
stored_free(gpointer data)
{
    Stored *stored = data;
    g_free(stored->kind);
    g_free(stored->key);
    json_decref(stored->value);
    g_free(stored);
}

static GArray *
done_array(void)
{
    GArray *array = g_array_new(FALSE, TRUE, sizeof(Done));
    g_array_set_clear_func(array, done_clear);
    return array;
}

HwLedger *
hw_ledger_new(const char *label)
{
    HwLedger *ledger = g_new0(HwLedger, 1);
    ledger->label = g_strdup(label);
    ledger->facts = g_hash_table_new_full(g_str_hash, g_str_equal, g_free, stored_free);
    ledger->done = done_array();
    ledger->undone = done_array();
    ledger->digest = hw_entry_first_digest();
    return ledger;
}

void
hw_ledger_free(HwLedger *ledger)
{
    if (ledger == NULL)
        return;
    g_hash_table_unref(ledger->facts);
    g_array_unref(ledger->done);
    g_array_unref(ledger->undone);
    g_free(ledger->label);
    g_free(ledger);
}

int64_t
hw_ledger_get_revision(const HwLedger *ledger)
{
    return ledger->revision;
}

const HwDigest *
hw_ledger_get_digest(const HwLedger *ledger)
{
    return &ledger->digest;
}

static char *
dup_place(const char *kind, const char *key)
{
    return g_strjoin("\n", kind, key, NULL);
}

const json_t *
hw_ledger_get_fact(const HwLedger *ledger, const char *kind, const char *key)
{
    g_autofree char *place = dup_place(kind, key);
    const Stored *stored = g_hash_table_lookup(ledger->facts, place);
    return stored != NULL ? stored->value : NULL;
}

/* ---- changes as JSON ---- */

static const char *
text_of(const json_t *change, const char *name)
{
    return json_string_value(json_object_get(change, name));
}

/* A change's value before or after; NULL where the fact is not. */
static json_t *
value_of(const json_t *change, const char *name)
{
    json_t *value = json_object_get(change, name);
    return json_is_null(value) ? NULL : value;
}

static bool
same_value(const json_t *a, const json_t *b)
{
    return a == NULL || b == NULL ? a == b : json_equal(a, b);
}

static json_t *
change_new(const char *kind, const char *key, const json_t *from, const json_t *to)
{
    json_t *change = json_object();
    json_object_set_new(change, "kind", json_string(kind));
    json_object_set_new(change, "key", json_string(key));
    json_object_set_new(change, "from", from != NULL ? json_incref((json_t *)from) : json_null());
    json_object_set_new(change, "to", to != NULL ? json_incref((json_t *)to) : json_null());
    return change;
}

/* The changes that lead back. */
static json_t *
dup_reversed(const json_t *changes)
{
    json_t *reversed = json_array();
    for (size_t i = json_array_size(changes); i > 0; i--) {
        const json_t *change = json_array_get(changes, i - 1);
        json_array_append_new(reversed, change_new(text_of(change, "kind"), text_of(change, "key"),
                                                   value_of(change, "to"), value_of(change, "from")));
    }
    return reversed;
}

/* ---- taking an entry ---- */

static bool
refuse(GError **error, const HwLedger *ledger, const char *what)
{
    g_set_error(error, HW_CASE_ERROR, HW_CASE_ERROR_FALSE,
                "%s: entry %" G_GINT64_FORMAT
                " of the journal %s; the case was changed by other means than acts.",
                ledger->label, ledger->revision + 1, what);
    return false;
}

static const Done *
top(const GArray *stack)
{
    return stack->len > 0 ? &g_array_index(stack, Done, stack->len - 1) : NULL;
}

/* An undo takes back the last act that can be, and does just that; likewise a redo. */
static bool
check_reversal(const HwLedger *ledger, const HwEntry *entry, GError **error)
{
    if (entry->undoes == 0 && entry->redoes == 0)
        return true;
    const Done *target = top(entry->undoes > 0 ? ledger->done : ledger->undone);
    int64_t seq = entry->undoes > 0 ? entry->undoes : entry->redoes;
    if (target == NULL || target->seq != seq || (entry->undoes > 0 && entry->redoes > 0))
        return refuse(error, ledger, "takes back or makes again what is not the last act");
    g_autoptr(json_t) expected =
        entry->undoes > 0 ? dup_reversed(target->changes) : json_incref(target->changes);
    return json_equal(expected, entry->changes) || refuse(error, ledger, "does not take back what it names");
}

static bool
check_changes(const HwLedger *ledger, const HwEntry *entry, GError **error)
{
    g_autoptr(GHashTable) seen = g_hash_table_new_full(g_str_hash, g_str_equal, g_free, NULL);
    for (size_t i = 0; i < json_array_size(entry->changes); i++) {
        const json_t *change = json_array_get(entry->changes, i);
        const char *kind = text_of(change, "kind"), *key = text_of(change, "key");
        if (!g_hash_table_add(seen, dup_place(kind, key)))
            return refuse(error, ledger, "changes a fact twice");
        if (!same_value(hw_ledger_get_fact(ledger, kind, key), value_of(change, "from")))
            return refuse(error, ledger, "starts from facts that were not so");
    }
    return true;
}

static void
apply_changes(HwLedger *ledger, const json_t *changes)
{
    for (size_t i = 0; i < json_array_size(changes); i++) {
        const json_t *change = json_array_get(changes, i);
        const char *kind = text_of(change, "kind"), *key = text_of(change, "key");
        json_t *to = value_of(change, "to");
        char *place = dup_place(kind, key);
        if (to == NULL) {
            g_hash_table_remove(ledger->facts, place);
            g_free(place);
            continue;
        }
        Stored *stored = g_new(Stored, 1);
        *stored = (Stored){ g_strdup(kind), g_strdup(key), json_incref(to) };
        g_hash_table_replace(ledger->facts, place, stored);
    }
}

static void
move_top(GArray *from, GArray *to)
{
    Done moved = g_array_index(from, Done, from->len - 1);
    g_array_index(from, Done, from->len - 1) = (Done){ 0 };
    g_array_set_size(from, from->len - 1);
    g_array_append_val(to, moved);
}

static void
keep_for_undo(HwLedger *ledger, const HwEntry *entry)
{
    if (entry->undoes > 0) {
        move_top(ledger->done, ledger->undone);
    } else if (entry->redoes > 0) {
        move_top(ledger->undone, ledger->done);
    } else {
        /* What was done since cannot be passed over: an act kept ends undoing before it. */
        g_array_set_size(ledger->undone, 0);
        if (entry->kept) {
            g_array_set_size(ledger->done, 0);
            return;
        }
        Done done = { entry->seq, g_strdup(entry->act), json_incref((json_t *)entry->changes) };
        g_array_append_val(ledger->done, done);
    }
}

bool
hw_ledger_append(HwLedger *ledger, const char *line, const char *digest, GError **error)
{
    int64_t seq = ledger->revision + 1;
    g_autofree char *where =
        g_strdup_printf("%s: entry %" G_GINT64_FORMAT " of the journal", ledger->label, seq);
    g_auto(HwEntry) entry = { 0 };
    HwDigest chained = hw_entry_digest(&ledger->digest, line);
    if (digest != NULL && strcmp(digest, chained.hex) != 0)
        return refuse(error, ledger, "does not follow from the one before (its digest differs)");
    if (!hw_entry_parse(line, where, &entry, error))
        return false;
    if (entry.seq != seq)
        return refuse(error, ledger, "bears another number");
    if (!check_reversal(ledger, &entry, error) || !check_changes(ledger, &entry, error))
        return false;
    apply_changes(ledger, entry.changes);
    keep_for_undo(ledger, &entry);
    ledger->revision = seq;
    ledger->digest = chained;
    return true;
}

/* ---- making a line ---- */

static char *
dup_line(const HwLedger *ledger, HwEntry *entry, const char *at, const char *by)
{
    entry->seq = ledger->revision + 1;
    entry->at = at;
    entry->by = by;
    return hw_entry_dup_line(entry);
}

char *
hw_ledger_dup_act_line(const HwLedger *ledger, const HwAct *act, const char *at, const char *by)
{
    g_autoptr(json_t) changes = json_array();
    for (guint i = 0; i < hw_act_get_n_changes(act); i++) {
        const char *kind, *key;
        json_t *to;
        hw_act_get_change(act, i, &kind, &key, &to);
        const json_t *from = hw_ledger_get_fact(ledger, kind, key);
        if (!same_value(from, to))
            json_array_append_new(changes, change_new(kind, key, from, to));
    }
    if (json_array_size(changes) == 0)
        return NULL;
    HwEntry entry = { .act = hw_act_get_name(act), .kept = hw_act_is_kept(act), .changes = changes };
    return dup_line(ledger, &entry, at, by);
}

static bool
nothing_left(GError **error, const char *what)
{
    g_set_error(error, HW_CASE_ERROR, HW_CASE_ERROR_ACT, "There is nothing left to %s.", what);
    return false;
}

char *
hw_ledger_dup_undo_line(const HwLedger *ledger, const char *at, const char *by, GError **error)
{
    const Done *target = top(ledger->done);
    if (target == NULL && !nothing_left(error, "undo"))
        return NULL;
    g_autoptr(json_t) changes = dup_reversed(target->changes);
    HwEntry entry = { .act = "undo", .undoes = target->seq, .changes = changes };
    return dup_line(ledger, &entry, at, by);
}

char *
hw_ledger_dup_redo_line(const HwLedger *ledger, const char *at, const char *by, GError **error)
{
    const Done *target = top(ledger->undone);
    if (target == NULL && !nothing_left(error, "redo"))
        return NULL;
    HwEntry entry = { .act = "redo", .redoes = target->seq, .changes = target->changes };
    return dup_line(ledger, &entry, at, by);
}

const char *
hw_ledger_get_undo_name(const HwLedger *ledger)
{
    const Done *target = top(ledger->done);
    return target != NULL ? target->name : NULL;
}

const char *
hw_ledger_get_redo_name(const HwLedger *ledger)
{
    const Done *target = top(ledger->undone);
    return target != NULL ? target->name : NULL;
}

/* ---- facts ---- */

static gint
compare_facts(gconstpointer pa, gconstpointer pb)
{
    const HwFact *a = pa, *b = pb;
    int by_kind = strcmp(a->kind, b->kind);
    if (by_kind != 0)
        return by_kind;
    bool number_a = g_ascii_isdigit(*a->key), number_b = g_ascii_isdigit(*b->key);
    if (number_a != number_b)
        return number_a ? -1 : 1;
    guint64 value_a = g_ascii_strtoull(a->key, NULL, 10), value_b = g_ascii_strtoull(b->key, NULL, 10);
    if (number_a && value_a != value_b)
        return value_a < value_b ? -1 : 1;
    return strcmp(a->key, b->key);
}

GArray *
hw_ledger_dup_facts(const HwLedger *ledger, const char *kind)
{
    GArray *facts = g_array_new(FALSE, FALSE, sizeof(HwFact));
    GHashTableIter iter;
    gpointer value;
    g_hash_table_iter_init(&iter, ledger->facts);
    while (g_hash_table_iter_next(&iter, NULL, &value)) {
        const Stored *stored = value;
        HwFact fact = { stored->kind, stored->key, stored->value };
        if (kind == NULL || strcmp(kind, stored->kind) == 0)
            g_array_append_val(facts, fact);
    }
    g_array_sort(facts, compare_facts);
    return facts;
}

char *
hw_fact_dup_text(const json_t *value)
{
    char *dumped = json_dumps(value, JSON_COMPACT | JSON_ENCODE_ANY | JSON_REAL_PRECISION(17));
    char *text = g_strdup(dumped);
    free(dumped);
    return text;
}
