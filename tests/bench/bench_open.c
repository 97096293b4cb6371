/* SPDX-License-Identifier: GPL-3.0-or-later */
/* How long a recording of 10,000 blocks takes to open, against what cannot be saved: jansson's reading of its
 * manifest and one look at every file. Rounds alternate. */
#include "core/strip/recording.h"
#include "tests/bench/fixture.h"
#include "tests/bench/spread.h"

#include <fcntl.h>
#include <glib/gstdio.h>
#include <jansson.h>
#include <stdio.h>
#include <string.h>
#include <unistd.h>

enum { BLOCKS = 10000, ROUNDS = 15 };

static double
bare_ns(const char *folder)
{
    int64_t begun = spread_now_ns();
    g_autofree char *path = g_build_filename(folder, "recording.json", NULL);
    g_autofree char *text = NULL;
    gsize size;
    g_file_get_contents(path, &text, &size, NULL);
    json_t *root = json_loadb(text, size, JSON_REJECT_DUPLICATES, NULL);
    int fd = open(folder, O_RDONLY | O_DIRECTORY | O_CLOEXEC);
    size_t index;
    json_t *block;
    json_array_foreach(json_object_get(root, "blocks"), index, block)
    {
        struct stat about;
        if (fstatat(fd, json_string_value(json_object_get(block, "file")), &about, AT_SYMLINK_NOFOLLOW) != 0)
            g_error("a block is gone");
    }
    close(fd);
    json_decref(root);
    return (double)(spread_now_ns() - begun);
}

static double
open_ns(const char *folder)
{
    g_autoptr(GError) error = NULL;
    int64_t begun = spread_now_ns();
    HwRecording *recording = hw_recording_open(folder, &error);
    if (recording == NULL)
        g_error("%s", error->message);
    double took = (double)(spread_now_ns() - begun);
    hw_recording_unref(recording);
    return took;
}

int
main(void)
{
    /* The files' content does not matter here: one byte each. */
    g_autoptr(Fixture) fixture = fixture_new(FIXTURE_JPEG, 1, true);
    g_autofree char *manifest = g_build_filename(fixture->folder, "recording.json", NULL);
    g_autoptr(GString) text = g_string_new(NULL);
    for (guint block = 0; block < BLOCKS; block++) {
        g_autofree char *path = fixture_dup_block_path(fixture, block);
        g_autofree char *name = g_path_get_basename(path);
        g_file_set_contents_full(path, "x", 1, G_FILE_SET_CONTENTS_NONE, 0600, NULL);
        gint64 first_ns = (gint64)block * FIXTURE_COLUMNS * 500000;
        g_string_append_printf(text,
                               "%s{\"file\": \"%s\", \"columns\": %d, \"first_ns\": %" G_GINT64_FORMAT
                               ", \"last_ns\": %" G_GINT64_FORMAT ", \"sha256\": \"%064u\"}",
                               block > 0 ? ",\n" : "", name, FIXTURE_COLUMNS, first_ns,
                               first_ns + (gint64)(FIXTURE_COLUMNS - 1) * 500000, block);
    }
    g_autofree char *head = g_strndup(fixture->manifest, strcspn(fixture->manifest, "[") + 1);
    g_string_prepend(text, head);
    g_string_append(text, "]}\n");
    g_file_set_contents(manifest, text->str, -1, NULL);
    fixture->n_blocks = BLOCKS;

    double ratios[ROUNDS];
    bare_ns(fixture->folder);
    open_ns(fixture->folder);
    for (int round = 0; round < ROUNDS; round++) {
        double bare = bare_ns(fixture->folder);
        ratios[round] = open_ns(fixture->folder) / bare;
    }
    spread_print("Opening 10,000 blocks, time over jansson's reading and a stat each",
                 spread_of(ratios, ROUNDS), false, 1.5);
    return 0;
}
