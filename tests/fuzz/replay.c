/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Replays a corpus through a fuzz target: each file as it is, cut after every byte, and with every byte
 * changed in turn. A fault ends the program; TAP, one case a file.
 *
 * usage: replay-TARGET FOLDER */
#include "tests/fuzz/fuzz_target.h"

#include <glib.h>
#include <stdio.h>
#include <string.h>

/* Larger files are bent at this many places only. */
enum { PLACES = 1500 };

/* The bytes in a block of their own length, so that the address sanitizer sees a read beyond the end. */
static void
feed(const uint8_t *data, size_t size)
{
    g_autofree uint8_t *exact = g_malloc(MAX(size, 1));
    memcpy(exact, data, size);
    LLVMFuzzerTestOneInput(exact, size);
}

static void
replay(uint8_t *data, size_t size)
{
    size_t step = size / PLACES + 1;
    feed(data, size);
    for (size_t length = 0; length < size; length += step)
        feed(data, length);
    static const uint8_t masks[] = { 0x01, 0x20, 0x80, 0xff };
    for (size_t at = 0; at < size; at += step) {
        uint8_t mask = masks[at / step % G_N_ELEMENTS(masks)];
        data[at] ^= mask;
        feed(data, size);
        data[at] ^= mask;
    }
}

static int
by_name(gconstpointer a, gconstpointer b)
{
    return strcmp(*(const char *const *)a, *(const char *const *)b);
}

int
main(int argc, char **argv)
{
    g_autoptr(GError) error = NULL;
    g_autoptr(GDir) folder = argc == 2 ? g_dir_open(argv[1], 0, &error) : NULL;
    if (folder == NULL) {
        printf("Bail out! %s\n", error != NULL ? error->message : "usage: replay FOLDER");
        return 1;
    }
    g_autoptr(GPtrArray) names = g_ptr_array_new_with_free_func(g_free);
    for (const char *name = g_dir_read_name(folder); name != NULL; name = g_dir_read_name(folder))
        g_ptr_array_add(names, g_strdup(name));
    g_ptr_array_sort(names, by_name);
    printf("1..%u\n", names->len);
    for (guint i = 0; i < names->len; i++) {
        g_autofree char *path = g_build_filename(argv[1], names->pdata[i], NULL);
        g_autofree char *data = NULL;
        gsize size = 0;
        if (!g_file_get_contents(path, &data, &size, &error)) {
            printf("Bail out! %s\n", error->message);
            return 1;
        }
        replay((uint8_t *)data, size);
        printf("ok %u - %s\n", i + 1, (const char *)names->pdata[i]);
        fflush(stdout);
    }
    return names->len > 0 ? 0 : 1;
}
