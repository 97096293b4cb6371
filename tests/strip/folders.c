/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "folders.h"

#include <gio/gio.h>
#include <string.h>
#include <sys/stat.h>

TestFolder *
test_folder_new(void)
{
    g_autoptr(GError) error = NULL;
    TestFolder *folder = g_new0(TestFolder, 1);
    folder->path = g_dir_make_tmp("halfwheel-strip-XXXXXX", &error);
    g_assert_no_error(error);
    return folder;
}

void
test_folder_free(TestFolder *folder)
{
    const char *const call[] = { "rm", "-rf", "--", folder->path, NULL };
    g_autofree char *output = test_output_of("/", call);
    g_free(folder->path);
    g_free(folder);
}

void
test_folder_write(TestFolder *folder, const char *name, const char *text)
{
    g_autoptr(GError) error = NULL;
    g_autofree char *path = g_build_filename(folder->path, name, NULL);
    g_autofree char *parent = g_path_get_dirname(path);
    g_assert_cmpint(g_mkdir_with_parents(parent, 0755), ==, 0);
    g_file_set_contents(path, text, (gssize)strlen(text), &error);
    g_assert_no_error(error);
}

void
test_folder_write_manifest(TestFolder *folder, const char *scan, const char *blocks)
{
    g_autofree char *text =
        g_strdup_printf("{\"halfwheel_recording\": 1, \"epoch\": \"2027-06-13T16:02:11+02:00\","
                        " \"scan\": %s, \"blocks\": %s}\n",
                        scan, blocks);
    test_folder_write(folder, "recording.json", text);
    test_folder_write(folder, "b0.png", "zero");
    test_folder_write(folder, "b1.png", "one");
    test_folder_write(folder, "b2.png", "two");
}

char *
test_output_of(const char *folder, const char *const *call)
{
    g_autoptr(GError) error = NULL;
    g_autoptr(GSubprocessLauncher) launcher = g_subprocess_launcher_new(G_SUBPROCESS_FLAGS_STDOUT_PIPE);
    g_subprocess_launcher_set_cwd(launcher, folder);
    g_subprocess_launcher_setenv(launcher, "LC_ALL", "C", TRUE);
    g_autoptr(GSubprocess) program = g_subprocess_launcher_spawnv(launcher, call, &error);
    g_assert_no_error(error);
    char *output = NULL;
    g_subprocess_communicate_utf8(program, NULL, NULL, &output, NULL, &error);
    g_assert_no_error(error);
    g_assert_true(g_subprocess_get_successful(program));
    return output;
}
