/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What a case keeps of files is kept exactly, and what is not as it was is refused or named. */
#include "core/case/case_error.h"
#include "core/case/case_files.h"
#include "core/case/case_finish.h"
#include "core/case/document.h"
#include "core/case/marker_fact.h"
#include "core/case/recording_fact.h"

#include <float.h>
#include <glib/gstdio.h>
#include <math.h>
#include <string.h>

/* The fact as it comes back from a journal. */
static json_t *
through_text(json_t *fact)
{
    g_assert_nonnull(fact);
    g_autofree char *text = hw_fact_dup_text(fact);
    json_decref(fact);
    g_autoptr(GError) error = NULL;
    json_t *back = hw_json_parse(text, strlen(text), "fact", &error);
    g_assert_no_error(error);
    return back;
}

/* ---- documents ---- */

static void
documents_are_kept_to_the_byte(void)
{
    static const struct {
        const char *data;
        gsize size;
        const char *kept_as;
    } cases[] = {
        { "bib,name\n7,\xC3\x85sa\n", 16, "text" },
        { "\xEF\xBB\xBF"
          "bib\r\n7\r\n",
          11, "text" },
        { "bib;nom\n7;\xE9milie\n", 17, "base64" }, /* windows-1252 */
        { "\xFF\xFE"
          "b\0i\0b\0\n\0",
          10, "base64" }, /* UTF-16 */
        { "", 0, "text" },
        { "\"\\\t\x01\x7F", 5, "text" },
    };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        g_autoptr(json_t) fact = through_text(
            hw_document_to_fact("list.csv", i == 1 ? "bib=bib" : NULL, cases[i].data, cases[i].size));
        g_assert_nonnull(json_object_get(fact, cases[i].kept_as));
        g_auto(HwDocument) document = { 0 };
        g_autoptr(GError) error = NULL;
        hw_document_from_fact(fact, "The document", &document, &error);
        g_assert_no_error(error);
        g_assert_cmpmem(document.data, document.size, cases[i].data, cases[i].size);
        g_assert_cmpint(document.data[document.size], ==, '\0');
        g_assert_cmpstr(document.name, ==, "list.csv");
        g_assert_cmpstr(document.map, ==, i == 1 ? "bib=bib" : NULL);
        /* The digest is sha256sum's, here by GLib and not by libcrypto. */
        g_autofree char *sum =
            g_compute_checksum_for_data(G_CHECKSUM_SHA256, (const guchar *)cases[i].data, cases[i].size);
        g_assert_cmpstr(json_string_value(json_object_get(fact, "sha256")), ==, sum);
    }
}

static void
a_document_that_is_not_of_its_digest_is_refused(void)
{
    g_autoptr(json_t) fact = hw_document_to_fact("race.json", NULL, "{}", 2);
    json_object_set_new(fact, "text", json_string("{ }"));
    HwDocument document = { 0 };
    g_autoptr(GError) error = NULL;
    g_assert_false(hw_document_from_fact(fact, "X: the document race", &document, &error));
    g_assert_error(error, HW_CASE_ERROR, HW_CASE_ERROR_FALSE);
    g_assert_nonnull(strstr(error->message, "X: the document race"));
    g_assert_null(document.data);
}

/* ---- markers ---- */

static HwStrip *
open_duel(void)
{
    g_autofree char *path = g_test_build_filename(G_TEST_DIST, "..", "samples", "duel", NULL);
    g_autoptr(GError) error = NULL;
    g_autoptr(HwRecording) recording = hw_recording_open(path, &error);
    g_assert_no_error(error);
    g_autoptr(HwBlockCache) cache = hw_block_cache_new((size_t)16 << 20);
    HwStrip *strip = hw_strip_new(recording, cache, &error);
    g_assert_no_error(error);
    return strip;
}

static void
set_text(char **text, const char *value)
{
    g_free(*text);
    *text = g_strdup(value);
}

static HwMarker *
make_marker(HwStrip *strip)
{
    int64_t first_col, n_cols;
    hw_strip_get_block_columns(strip, 1, &first_col, &n_cols);
    HwMarker *marker = hw_marker_new("?1", nextafter((double)first_col + 0.1, INFINITY), 1.0 / 3.0);
    marker->edge = HW_EDGE_REAR;
    marker->state = HW_MARKER_ROUGH;
    marker->basis = HW_BASIS_TRANSPONDER;
    marker->direction = HW_DIRECTION_AGAINST;
    marker->u_lead_ns = 0.1 + 0.2;
    marker->speed_mps = 17.0;
    marker->u_speed_mps = DBL_MIN;
    set_text(&marker->category, "Women");
    set_text(&marker->passage, "lap 7");
    set_text(&marker->camera, "B");
    set_text(&marker->reader, "H. Quillfeather");
    set_text(&marker->name_basis, "number plate");
    set_text(&marker->note, "“half hidden”\n");
    return marker;
}

static void
assert_same(const HwMarker *a, const HwMarker *b)
{
    g_assert_cmpfloat(a->column, ==, b->column);
    g_assert_cmpint(memcmp(&a->row, &b->row, sizeof a->row), ==, 0);
    g_assert_cmpfloat(a->u_lead_ns, ==, b->u_lead_ns);
    g_assert_cmpfloat(a->speed_mps, ==, b->speed_mps);
    g_assert_cmpfloat(a->u_speed_mps, ==, b->u_speed_mps);
    g_assert_cmpint(a->edge, ==, b->edge);
    g_assert_cmpint(a->state, ==, b->state);
    g_assert_cmpint(a->basis, ==, b->basis);
    g_assert_cmpint(a->direction, ==, b->direction);
    g_assert_cmpstr(a->bib, ==, b->bib);
    g_assert_cmpstr(a->category, ==, b->category);
    g_assert_cmpstr(a->passage, ==, b->passage);
    g_assert_cmpstr(a->camera, ==, b->camera);
    g_assert_cmpstr(a->reader, ==, b->reader);
    g_assert_cmpstr(a->name_basis, ==, b->name_basis);
    g_assert_cmpstr(a->note, ==, b->note);
}

static void
markers_are_kept_exactly_on_their_block(void)
{
    g_autoptr(HwStrip) strip = open_duel();
    g_autoptr(HwMarker) marker = make_marker(strip);
    g_autoptr(json_t) fact = through_text(hw_marker_to_fact(marker, strip, true, NULL));
    g_assert_cmpstr(json_string_value(json_object_get(fact, "block")), ==, "block-00001.png");
    bool names_recording = false;
    g_autoptr(GError) error = NULL;
    g_autoptr(HwMarker) back = hw_marker_from_fact(fact, strip, "Marker 1", &names_recording, &error);
    g_assert_no_error(error);
    assert_same(back, marker);
    g_assert_true(names_recording);
    int64_t time_ns;
    g_assert_true(hw_time_base_instant(hw_strip_get_time_base(strip), marker->column, &time_ns));
    g_assert_true(back->has_time);
    g_assert_cmpint(back->time_ns, ==, time_ns);
}

static void
what_a_marker_lacks_stays_unknown(void)
{
    g_autoptr(HwStrip) strip = open_duel();
    g_autoptr(HwMarker) marker = hw_marker_new("7", 3.0, NAN);
    g_autoptr(json_t) fact = through_text(hw_marker_to_fact(marker, strip, false, NULL));
    bool names_recording = true;
    g_autoptr(HwMarker) back = hw_marker_from_fact(fact, strip, "Marker 1", &names_recording, NULL);
    g_assert_nonnull(back);
    g_assert_cmpfloat(back->column, ==, 3.0);
    g_assert_true(isnan(back->row) && isnan(back->u_lead_ns));
    g_assert_true(isnan(back->speed_mps) && isnan(back->u_speed_mps));
    g_assert_false(names_recording);
}

static void
a_marker_whose_place_is_not_there_is_refused(void)
{
    static const struct {
        const char *key;
        const char *json;
        const char *named;
    } cases[] = {
        { "block", "\"block-00009.png\"", "block-00009.png" },
        { "column_in_block", "1000000.5", "1000000.500" },
        { "column_in_block", "-0.5", "column_in_block" },
        { "column_in_block", "\"3\"", "column_in_block" },
        { "recording", "\"0123456789abcdef\"", "0123456789abcdef" },
        { "edge", "\"left\"", "edge" },
        { "time_ns", "0.5", "time_ns" },
        { "bib", "7", "bib" },
        { "note", "null", "note" },
    };
    g_autoptr(HwStrip) strip = open_duel();
    g_autoptr(HwMarker) marker = make_marker(strip);
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        g_autoptr(json_t) fact = hw_marker_to_fact(marker, strip, true, NULL);
        json_object_set_new(fact, cases[i].key, json_loads(cases[i].json, JSON_DECODE_ANY, NULL));
        bool names_recording;
        g_autoptr(GError) error = NULL;
        g_assert_null(hw_marker_from_fact(fact, strip, "Marker 1", &names_recording, &error));
        g_assert_nonnull(error);
        g_assert_nonnull(strstr(error->message, "Marker 1"));
        g_assert_nonnull(strstr(error->message, cases[i].named));
    }
    g_autoptr(HwMarker) off = hw_marker_new("7", 1e9, NAN);
    g_autoptr(GError) error = NULL;
    g_assert_null(hw_marker_to_fact(off, strip, true, &error));
    g_assert_error(error, HW_CASE_ERROR, HW_CASE_ERROR_ACT);
}

/* ---- cases ---- */

/* A case with one setting, and what reading its finish says. */
static char *
dup_refusal(const char *key, json_t *value)
{
    g_autofree char *folder = g_dir_make_tmp("hw-case-XXXXXX", NULL);
    g_autofree char *path = g_build_filename(folder, "finish" HW_CASE_SUFFIX, NULL);
    HwCase *held = hw_case_create(path, false, NULL);
    g_assert_nonnull(held);
    g_autoptr(HwAct) act = hw_act_new("make_case");
    if (strcmp(key, "derivation") != 0)
        hw_act_set(act, "setting", "derivation", json_integer(HW_DERIVATION_VERSION));
    hw_act_set(act, "setting", key, value);
    g_assert_true(hw_case_do(held, act, NULL));
    g_autoptr(GError) error = NULL;
    g_assert_null(hw_case_finish_read(held, NULL, &error));
    g_assert_error(error, HW_CASE_ERROR, HW_CASE_ERROR_FORMAT);
    hw_case_close(held);
    g_unlink(path);
    g_rmdir(folder);
    return g_strdup(error->message);
}

static void
settings_that_are_none_are_refused(void)
{
    g_autofree char *newer = dup_refusal("derivation", json_integer(HW_DERIVATION_VERSION + 1));
    g_assert_nonnull(strstr(newer, "newer"));
    g_autofree char *none = dup_refusal("derivation", NULL);
    g_assert_nonnull(strstr(none, "holds no finish"));
    g_autofree char *gun = dup_refusal("gun", json_string("yesterday"));
    g_assert_nonnull(strstr(gun, "instant"));
    g_autofree char *passage = dup_refusal("passage", json_integer(7));
    g_assert_nonnull(strstr(passage, "passage"));
    g_autofree char *nowhere = dup_refusal("passage", json_string("finish"));
    g_assert_nonnull(strstr(nowhere, "recording"));
}

/* As where a file is exchanged between its two readings: list and input do not go together. */
static void
a_case_that_does_not_give_its_list_is_not_made(void)
{
    g_autofree char *folder = g_dir_make_tmp("hw-case-XXXXXX", NULL);
    g_autofree char *path = g_build_filename(folder, "finish" HW_CASE_SUFFIX, NULL);
    g_autoptr(HwStrip) strip = open_duel();
    g_autoptr(HwMarkers) markers = hw_markers_new();
    g_ptr_array_add(markers->markers, hw_marker_new("7", 310.1, NAN));
    HwFinishInput input = { .strip = strip, .markers = markers };
    g_autoptr(GError) error = NULL;
    g_autoptr(HwFinishList) list = hw_finish_list_derive(&input, NULL, &error);
    g_assert_no_error(error);
    strip = input.strip;
    HwCaseFiles files = { .input = &input, .list = list };
    g_assert_true(hw_case_from_files(path, &files, false, NULL, NULL));
    g_unlink(path);

    ((HwMarker *)g_ptr_array_index(markers->markers, 0))->column += 1.0;
    g_assert_false(hw_case_from_files(path, &files, false, NULL, &error));
    g_assert_error(error, HW_CASE_ERROR, HW_CASE_ERROR_IO);
    g_assert_cmpint(g_rmdir(folder), ==, 0); /* nothing is left in it */
}

static void
unchanged_files_are_not_named(void)
{
    g_autoptr(HwStrip) strip = open_duel();
    HwRecording *recording = hw_strip_get_recording(strip);
    g_autoptr(GError) error = NULL;
    g_autoptr(json_t) fact = through_text(hw_recording_to_fact(recording, NULL, &error));
    g_assert_no_error(error);
    g_autoptr(GArray) same = hw_recording_find_changes(recording, fact, "Case", NULL, &error);
    g_assert_no_error(error);
    g_assert_cmpuint(same->len, ==, 0);

    json_t *block = json_array_get(json_object_get(fact, "blocks"), 1);
    json_object_set_new(block, "sha256", json_null());
    g_autoptr(GArray) turned_up = hw_recording_find_changes(recording, fact, "Case", NULL, &error);
    g_assert_no_error(error);
    g_assert_cmpuint(turned_up->len, ==, 1);
    g_assert_cmpstr(g_array_index(turned_up, HwChangedFile, 0).file, ==, "block-00001.png");
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
    g_test_add_func("/case_finish/documents_are_kept_to_the_byte", documents_are_kept_to_the_byte);
    g_test_add_func("/case_finish/a_document_that_is_not_of_its_digest_is_refused",
                    a_document_that_is_not_of_its_digest_is_refused);
    g_test_add_func("/case_finish/markers_are_kept_exactly_on_their_block",
                    markers_are_kept_exactly_on_their_block);
    g_test_add_func("/case_finish/what_a_marker_lacks_stays_unknown", what_a_marker_lacks_stays_unknown);
    g_test_add_func("/case_finish/a_marker_whose_place_is_not_there_is_refused",
                    a_marker_whose_place_is_not_there_is_refused);
    g_test_add_func("/case_finish/settings_that_are_none_are_refused", settings_that_are_none_are_refused);
    g_test_add_func("/case_finish/a_case_that_does_not_give_its_list_is_not_made",
                    a_case_that_does_not_give_its_list_is_not_made);
    g_test_add_func("/case_finish/unchanged_files_are_not_named", unchanged_files_are_not_named);
    return g_test_run();
}
