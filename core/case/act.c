/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/case/act.h"

#include <string.h>

typedef struct {
    char *kind;
    char *key;
    json_t *value;
} Change;

struct HwAct {
    char *name;
    bool kept;
    GArray *changes;
};

static void
change_clear(gpointer data)
{
    Change *change = data;
    g_free(change->kind);
    g_free(change->key);
    json_decref(change->value);
}

HwAct *
hw_act_new(const char *name)
{
    HwAct *act = g_new0(HwAct, 1);
    act->name = g_strdup(name);
    act->changes = g_array_new(FALSE, TRUE, sizeof(Change));
    g_array_set_clear_func(act->changes, change_clear);
    return act;
}

void
hw_act_free(HwAct *act)
{
    if (act == NULL)
        return;
    g_free(act->name);
    g_array_unref(act->changes);
    g_free(act);
}

void
hw_act_set(HwAct *act, const char *kind, const char *key, json_t *value)
{
    for (guint i = 0; i < act->changes->len; i++) {
        Change *change = &g_array_index(act->changes, Change, i);
        if (strcmp(change->kind, kind) == 0 && strcmp(change->key, key) == 0) {
            json_decref(change->value);
            change->value = value;
            return;
        }
    }
    Change change = { g_strdup(kind), g_strdup(key), value };
    g_array_append_val(act->changes, change);
}

void
hw_act_keep(HwAct *act)
{
    act->kept = true;
}

const char *
hw_act_get_name(const HwAct *act)
{
    return act->name;
}

bool
hw_act_is_kept(const HwAct *act)
{
    return act->kept;
}

guint
hw_act_get_n_changes(const HwAct *act)
{
    return act->changes->len;
}

void
hw_act_get_change(const HwAct *act, guint index, const char **kind, const char **key, json_t **value)
{
    const Change *change = &g_array_index(act->changes, Change, index);
    *kind = change->kind;
    *key = change->key;
    *value = change->value;
}
