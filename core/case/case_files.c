/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/case/case_files.h"

#include "core/base/base_error.h"
#include "core/base/input.h"
#include "core/base/limits.h"
#include "core/case/case.h"
#include "core/case/case_error.h"
#include "core/case/case_finish.h"
#include "core/case/document.h"
#include "core/case/marker_fact.h"
#include "core/case/recording_fact.h"

#include <glib/gstdio.h>
#include <string.h>

/* ---- the act ---- */

static bool
add_document(HwAct *act, const char *key, const char *path, const char *map, size_t max_bytes, GError **error)
{
    size_t size;
    g_autofree char *data = hw_input_read(path, max_bytes, &size, error);
    if (data != NULL)
        hw_act_set(act, "document", key, hw_document_to_fact(path, map, data, size));
    return data != NULL;
}

static bool
add_documents(HwAct *act, const HwCaseFiles *files, GError **error)
{
    const HwFinishInput *input = files->input;
    if (input->rules != NULL)
        hw_act_set(act, "document", "rules",
                   hw_document_to_fact(files->rules, NULL, input->rules->json, strlen(input->rules->json)));
    return (input->start_list == NULL || add_document(act, "start_list", input->start_list->path, files->map,
                                                      HW_MAX_TABLE_BYTES, error)) &&
           (input->race == NULL ||
            add_document(act, "race", input->race->path, NULL, HW_MAX_MANIFEST_BYTES, error)) &&
           (input->calibration == NULL ||
            add_document(act, "calibration", files->calibration, NULL, HW_MAX_MANIFEST_BYTES, error));
}

static void
add_settings(HwAct *act, const HwFinishInput *input)
{
    hw_act_set(act, "setting", "derivation", json_integer(HW_DERIVATION_VERSION));
    if (input->passage != NULL)
        hw_act_set(act, "setting", "passage", json_string(input->passage));
    if (input->gun != NULL) {
        g_autofree char *gun = hw_instant_dup_text(input->gun, 9);
        hw_act_set(act, "setting", "gun", json_string(gun));
    }
}

static bool
add_markers(HwAct *act, const HwFinishInput *input, GError **error)
{
    const GPtrArray *markers = input->markers->markers;
    for (guint i = 0; i < markers->len; i++) {
        json_t *fact = hw_marker_to_fact(g_ptr_array_index(markers, i), input->strip,
                                         input->markers->names_recording, error);
        if (fact == NULL)
            return false;
        g_autofree char *key = g_strdup_printf("%u", i + 1);
        hw_act_set(act, "marker", key, fact);
    }
    return true;
}

static HwAct *
make_act(const HwCaseFiles *files, GCancellable *cancellable, GError **error)
{
    const HwRecording *recording = hw_strip_get_recording(files->input->strip);
    g_autoptr(HwAct) act = hw_act_new("make_case");
    hw_act_keep(act);
    json_t *evidence = hw_recording_to_fact(recording, cancellable, error);
    if (evidence == NULL)
        return NULL;
    hw_act_set(act, "recording", hw_recording_get_short_identity(recording), evidence);
    add_settings(act, files->input);
    return add_documents(act, files, error) && add_markers(act, files->input, error) ? g_steal_pointer(&act)
                                                                                     : NULL;
}

/* ---- the file ---- */

/* The case must give the list it was made from: a file that changed between the two readings shows here. */
static bool
check_list(const HwCase *held, const HwCaseFiles *files, GCancellable *cancellable, GError **error)
{
    g_autoptr(HwCaseFinish) finish = hw_case_finish_read(held, cancellable, error);
    g_autoptr(HwFinishList) list = finish != NULL ? hw_case_finish_derive(finish, cancellable, error) : NULL;
    if (list == NULL)
        return false;
    g_autofree char *given = hw_finish_list_dup_json(list);
    g_autofree char *wanted = hw_finish_list_dup_json(files->list);
    if (strcmp(given, wanted) == 0)
        return true;
    g_set_error(error, HW_CASE_ERROR, HW_CASE_ERROR_IO,
                "A file changed while the case was made of it, and nothing was kept; make the case again.");
    return false;
}

/* Refuses what stands in the way. With force *existing becomes the case that is to be replaced, held until it
 * is, so that no desk goes on writing what is no longer there. */
static bool
hold_existing(const char *path, bool force, HwCase **existing, GError **error)
{
    if (!g_file_test(path, G_FILE_TEST_EXISTS) && !g_file_test(path, G_FILE_TEST_IS_SYMLINK))
        return true;
    if (!force) {
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_EXISTS,
                    "%s is there already; name another, or add --force.", path);
        return false;
    }
    if (!g_file_test(path, G_FILE_TEST_IS_REGULAR) || g_file_test(path, G_FILE_TEST_IS_SYMLINK)) {
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_UNSAFE,
                    "%s is no plain file, and only a case is replaced by a case; name another.", path);
        return false;
    }
    *existing = hw_case_open(path, HW_CASE_WRITE, error);
    return *existing != NULL;
}

bool
hw_case_from_files(const char *path, const HwCaseFiles *files, bool force, GCancellable *cancellable,
                   GError **error)
{
    g_autoptr(HwCase) existing = NULL;
    g_autoptr(HwAct) act = NULL;
    if (!hold_existing(path, force, &existing, error) || (act = make_act(files, cancellable, error)) == NULL)
        return false;
    /* Beside its place, where its recording is looked for from too. */
    g_autofree char *beside = g_strdup_printf("%s.%08x.new", path, g_random_int());
    HwCase *made = hw_case_create(beside, false, error);
    bool done = made != NULL && hw_case_do(made, act, error) && check_list(made, files, cancellable, error) &&
                hw_case_copy(made, path, existing != NULL, error);
    hw_case_close(made);
    g_unlink(beside);
    return done;
}
