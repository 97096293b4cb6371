/* SPDX-License-Identifier: GPL-3.0-or-later */
/* An output appears whole or not at all, and what stood at its place is only ever replaced on demand. The
 * file systems that know no flags for renaming are played by this program's own renameat2 and link. */
#include "core/base/output.h"

#include "core/base/base_error.h"

#include <errno.h>
#include <fcntl.h>
#include <glib/gstdio.h>
#include <signal.h>
#include <stdio.h>
#include <string.h>
#include <sys/resource.h>
#include <sys/stat.h>
#include <sys/syscall.h>
#include <sys/wait.h>
#include <unistd.h>

static bool plain_file_system;
static bool no_second_names;

/* Stands before libc's: refuses flags as NFS and FUSE do, where that is played. */
int
renameat2(int from_fd, const char *from, int to_fd, const char *to, unsigned flags)
{
    if (plain_file_system && flags != 0) {
        errno = EINVAL;
        return -1;
    }
    return (int)syscall(SYS_renameat2, from_fd, from, to_fd, to, flags);
}

int
link(const char *from, const char *to)
{
    if (no_second_names) {
        errno = EPERM;
        return -1;
    }
    return (int)syscall(SYS_linkat, AT_FDCWD, from, AT_FDCWD, to, 0);
}

typedef struct {
    char *folder;
    char *path;
} Place;

static void
set_up(Place *place, gconstpointer unused)
{
    (void)unused;
    place->folder = g_dir_make_tmp("halfwheel-XXXXXX", NULL);
    place->path = g_build_filename(place->folder, "list.csv", NULL);
    plain_file_system = no_second_names = false;
}

static void
tear_down(Place *place, gconstpointer unused)
{
    (void)unused;
    plain_file_system = no_second_names = false;
    const char *const command[] = { "rm", "-rf", "--", place->folder, NULL };
    g_assert_true(
        g_spawn_sync(NULL, (char **)command, NULL, G_SPAWN_SEARCH_PATH, NULL, NULL, NULL, NULL, NULL, NULL));
    g_free(place->folder);
    g_free(place->path);
}

static guint
count_entries(const char *folder)
{
    g_autoptr(GDir) dir = g_dir_open(folder, 0, NULL);
    guint n = 0;
    while (g_dir_read_name(dir) != NULL)
        n++;
    return n;
}

static void
assert_holds(const char *path, const char *expected)
{
    g_autofree char *text = NULL;
    g_autoptr(GError) error = NULL;
    g_file_get_contents(path, &text, NULL, &error);
    g_assert_no_error(error);
    g_assert_cmpstr(text, ==, expected);
}

static void
a_file_appears_at_the_commit_and_whole(Place *place, gconstpointer unused)
{
    (void)unused;
    g_autoptr(GError) error = NULL;
    g_autoptr(HwOutput) output = hw_output_open(place->path, false, &error);
    g_assert_no_error(error);
    g_assert_true(hw_output_write(output, "half", 4, &error));
    g_assert_true(hw_output_write(output, " wheel", 6, &error));
    g_assert_false(g_file_test(place->path, G_FILE_TEST_EXISTS));
    g_assert_true(hw_output_commit(output, &error));
    assert_holds(place->path, "half wheel");
    g_assert_cmpuint(count_entries(place->folder), ==, 1);
    struct stat about;
    mode_t mask = umask(0);
    umask(mask);
    g_assert_cmpint(stat(place->path, &about), ==, 0);
    g_assert_cmpint(about.st_mode & 0777, ==, 0666 & ~mask);
}

static void
what_was_not_committed_leaves_nothing(Place *place, gconstpointer unused)
{
    (void)unused;
    HwOutput *output = hw_output_open(place->path, false, NULL);
    g_assert_true(hw_output_write(output, "half", 4, NULL));
    hw_output_free(output);
    g_assert_cmpuint(count_entries(place->folder), ==, 0);
    g_assert_true(hw_output_write_file(place->path, false, "old", 3, NULL));
    output = hw_output_open(place->path, true, NULL);
    g_assert_true(hw_output_write(output, "new", 3, NULL));
    hw_output_free(output);
    assert_holds(place->path, "old");
    g_assert_cmpuint(count_entries(place->folder), ==, 1);
}

static void
an_existing_file_is_refused_without_force(Place *place, gconstpointer unused)
{
    (void)unused;
    g_autoptr(GError) error = NULL;
    g_assert_true(hw_output_write_file(place->path, false, "old", 3, NULL));
    g_assert_false(hw_output_write_file(place->path, false, "new", 3, &error));
    g_assert_error(error, HW_BASE_ERROR, HW_BASE_ERROR_EXISTS);
    g_assert_nonnull(strstr(error->message, place->path));
    assert_holds(place->path, "old");
    g_assert_true(hw_output_write_file(place->path, true, "new", 3, NULL));
    assert_holds(place->path, "new");
    /* A link is a file that is there, even where it leads nowhere. */
    g_autofree char *dangling = g_build_filename(place->folder, "dangling", NULL);
    g_assert_cmpint(symlink("nowhere", dangling), ==, 0);
    g_assert_false(hw_output_write_file(dangling, false, "new", 3, NULL));
    g_assert_cmpuint(count_entries(place->folder), ==, 2);
}

/* Another program's file that came between the open and the commit, on each kind of file system. */
static void
a_file_that_comes_between_is_kept(Place *place, gconstpointer unused)
{
    (void)unused;
    for (int kind = 0; kind < 3; kind++) {
        plain_file_system = kind > 0;
        no_second_names = kind > 1;
        g_autoptr(GError) error = NULL;
        HwOutput *output = hw_output_open(place->path, false, NULL);
        g_assert_true(hw_output_write(output, "ours", 4, NULL));
        g_assert_true(g_file_set_contents(place->path, "theirs", -1, NULL));
        g_assert_false(hw_output_commit(output, &error));
        g_assert_error(error, HW_BASE_ERROR, HW_BASE_ERROR_EXISTS);
        hw_output_free(output);
        assert_holds(place->path, "theirs");
        g_assert_cmpuint(count_entries(place->folder), ==, 1);
        g_unlink(place->path);
        g_assert_true(hw_output_write_file(place->path, false, "ours", 4, NULL));
        assert_holds(place->path, "ours");
        g_assert_cmpuint(count_entries(place->folder), ==, 1);
        g_unlink(place->path);
    }
}

static void
a_place_that_cannot_be_is_named(Place *place, gconstpointer unused)
{
    (void)unused;
    g_autofree char *nowhere = g_build_filename(place->folder, "absent", "list.csv", NULL);
    g_autoptr(GError) absent = NULL, folder = NULL;
    g_assert_null(hw_output_open(nowhere, false, &absent));
    g_assert_error(absent, HW_BASE_ERROR, HW_BASE_ERROR_IO);
    g_assert_nonnull(strstr(absent->message, nowhere));
    g_assert_null(hw_output_open(place->folder, true, &folder));
    g_assert_error(folder, HW_BASE_ERROR, HW_BASE_ERROR_EXISTS);
    g_assert_cmpuint(count_entries(place->folder), ==, 0);
}

static void
a_full_device_is_an_error_and_stays_a_device(Place *place, gconstpointer unused)
{
    (void)unused;
    g_autoptr(GError) error = NULL;
    g_autofree char *link_name = g_build_filename(place->folder, "full", NULL);
    g_assert_cmpint(symlink("/dev/full", link_name), ==, 0);
    const char *names[] = { "/dev/full", link_name };
    for (guint i = 0; i < 2; i++) {
        g_autoptr(GError) full = NULL;
        struct stat about;
        g_assert_false(hw_output_write_file(names[i], true, "x", 1, &full));
        g_assert_error(full, HW_BASE_ERROR, HW_BASE_ERROR_IO);
        g_assert_nonnull(strstr(full->message, names[i]));
        g_assert_nonnull(strstr(full->message, "make room"));
        g_assert_cmpint(stat("/dev/full", &about), ==, 0);
        g_assert_true(S_ISCHR(about.st_mode));
    }
    g_assert_true(hw_output_write_file("/dev/null", true, "x", 1, &error));
    struct stat about;
    g_assert_cmpint(lstat("/dev/null", &about), ==, 0);
    g_assert_true(S_ISCHR(about.st_mode));
}

static void
a_disk_that_fills_leaves_nothing(Place *place, gconstpointer unused)
{
    (void)unused;
    /* In a child, because the limit on a file's size is the process's. */
    pid_t child = fork();
    if (child == 0) {
        signal(SIGXFSZ, SIG_IGN);
        static char bytes[1 << 16];
        g_autoptr(HwOutput) output = hw_output_open(place->path, false, NULL);
        struct rlimit limit = { 100000, 100000 };
        setrlimit(RLIMIT_FSIZE, &limit);
        bool first = hw_output_write(output, bytes, sizeof bytes, NULL);
        bool second = hw_output_write(output, bytes, sizeof bytes, NULL);
        g_clear_pointer(&output, hw_output_free);
        _exit(first && !second ? 0 : 1);
    }
    int status = -1;
    g_assert_cmpint(waitpid(child, &status, 0), ==, child);
    g_assert_cmpint(status, ==, 0);
    g_assert_cmpuint(count_entries(place->folder), ==, 0);
}

static void
a_kill_in_between_leaves_nothing_at_the_place(Place *place, gconstpointer unused)
{
    (void)unused;
    g_assert_true(hw_output_write_file(place->path, false, "old", 3, NULL));
    g_autofree char *folder_path = g_build_filename(place->folder, "recording", NULL);
    pid_t child = fork();
    if (child == 0) {
        HwOutput *output = hw_output_open(place->path, true, NULL);
        HwOutputFolder *folder = hw_output_folder_open(folder_path, "recording.json", false, NULL);
        if (output == NULL || folder == NULL || !hw_output_write(output, "new", 3, NULL))
            _exit(1);
        raise(SIGKILL);
    }
    int status = 0;
    g_assert_cmpint(waitpid(child, &status, 0), ==, child);
    g_assert_true(WIFSIGNALED(status) && WTERMSIG(status) == SIGKILL);
    assert_holds(place->path, "old");
    g_assert_false(g_file_test(folder_path, G_FILE_TEST_EXISTS));
}

static void
standard_output_is_kept_back_until_the_commit(Place *place, gconstpointer unused)
{
    (void)unused;
    int fd = open(place->path, O_RDWR | O_CREAT, 0600);
    fflush(stdout);
    int saved = dup(STDOUT_FILENO);
    dup2(fd, STDOUT_FILENO);
    HwOutput *output = hw_output_open("-", false, NULL);
    bool written = hw_output_write(output, "half wheel", 10, NULL);
    off_t before = lseek(fd, 0, SEEK_END);
    bool committed = hw_output_commit(output, NULL);
    dup2(saved, STDOUT_FILENO);
    hw_output_free(output);
    g_assert_true(written && committed);
    g_assert_cmpint(before, ==, 0);
    assert_holds(place->path, "half wheel");
    close(saved);
    close(fd);
}

/* A folder at the place with a file in it. */
static void
make_folder(const char *path, const char *file, const char *text)
{
    g_assert_cmpint(g_mkdir(path, 0700), ==, 0);
    if (file != NULL) {
        g_autofree char *name = g_build_filename(path, file, NULL);
        g_assert_true(g_file_set_contents(name, text, -1, NULL));
    }
}

static HwOutputFolder *
begin(const char *path, bool force, GError **error)
{
    HwOutputFolder *folder = hw_output_folder_open(path, "recording.json", force, error);
    if (folder != NULL) {
        g_autofree char *name = g_build_filename(hw_output_folder_get_path(folder), "recording.json", NULL);
        g_assert_true(g_file_set_contents(name, "new", -1, NULL));
    }
    return folder;
}

static void
a_folder_appears_at_the_commit(Place *place, gconstpointer unused)
{
    (void)unused;
    for (int kind = 0; kind < 2; kind++) {
        plain_file_system = kind == 1;
        g_autofree char *with_slash = g_strdup_printf("%s/recording%d//", place->folder, kind);
        g_autofree char *manifest = g_strconcat(with_slash, "recording.json", NULL);
        g_autoptr(HwOutputFolder) folder = begin(with_slash, false, NULL);
        g_assert_false(g_file_test(with_slash, G_FILE_TEST_EXISTS));
        g_assert_true(hw_output_folder_commit(folder, NULL));
        assert_holds(manifest, "new");
        g_assert_cmpuint(count_entries(place->folder), ==, (guint)kind + 1);
        g_assert_null(begin(with_slash, false, NULL));
    }
    g_autoptr(HwOutputFolder) dropped = begin(place->path, false, NULL);
    g_clear_pointer(&dropped, hw_output_folder_free);
    g_assert_cmpuint(count_entries(place->folder), ==, 2);
}

static void
force_exchanges_a_folder_of_its_kind(Place *place, gconstpointer unused)
{
    (void)unused;
    g_autofree char *outside = g_build_filename(place->folder, "outside", NULL);
    g_autofree char *kept = g_build_filename(outside, "kept", NULL);
    g_autofree char *inner = g_build_filename(place->path, "link", NULL);
    g_autofree char *manifest = g_build_filename(place->path, "recording.json", NULL);
    make_folder(outside, "kept", "kept");
    make_folder(place->path, "recording.json", "old");
    g_assert_cmpint(symlink(outside, inner), ==, 0);
    g_autoptr(HwOutputFolder) folder = begin(place->path, true, NULL);
    assert_holds(manifest, "old");
    g_assert_true(hw_output_folder_commit(folder, NULL));
    assert_holds(manifest, "new");
    assert_holds(kept, "kept"); /* a link in the old folder was not followed */
    g_assert_cmpuint(count_entries(place->path), ==, 1);
    g_assert_cmpuint(count_entries(place->folder), ==, 2);
    g_autofree char *empty = g_build_filename(place->folder, "empty", NULL);
    make_folder(empty, NULL, NULL);
    g_autoptr(HwOutputFolder) second = begin(empty, true, NULL);
    g_assert_true(hw_output_folder_commit(second, NULL));
    g_assert_cmpuint(count_entries(empty), ==, 1);
}

static void
a_foreign_folder_is_never_replaced(Place *place, gconstpointer unused)
{
    (void)unused;
    g_autofree char *letters = g_build_filename(place->path, "letters", NULL);
    g_autofree char *file = g_build_filename(place->folder, "file", NULL);
    g_autoptr(GError) there = NULL, is_file = NULL;
    make_folder(place->path, "letters", "dear");
    g_assert_null(begin(place->path, true, &there));
    g_assert_error(there, HW_BASE_ERROR, HW_BASE_ERROR_EXISTS);
    assert_holds(letters, "dear");
    g_assert_true(g_file_set_contents(file, "text", -1, NULL));
    g_assert_null(begin(file, true, &is_file));
    assert_holds(file, "text");
    g_assert_cmpuint(count_entries(place->folder), ==, 2);

    /* One that comes between. */
    for (int forced = 0; forced < 2; forced++) {
        for (int kind = 0; kind < 2; kind++) {
            plain_file_system = kind == 1;
            g_autoptr(GError) error = NULL;
            g_autofree char *late = g_build_filename(place->folder, "late", NULL);
            g_autofree char *late_letters = g_build_filename(late, "letters", NULL);
            HwOutputFolder *folder = begin(late, forced == 1, NULL);
            make_folder(late, "letters", "dear");
            g_assert_false(hw_output_folder_commit(folder, &error));
            g_assert_error(error, HW_BASE_ERROR, HW_BASE_ERROR_EXISTS);
            hw_output_folder_free(folder);
            assert_holds(late_letters, "dear");
            g_assert_cmpuint(count_entries(place->folder), ==, 3);
            g_unlink(late_letters);
            g_rmdir(late);
        }
    }
}

static void
where_folders_cannot_be_exchanged_the_old_one_stays(Place *place, gconstpointer unused)
{
    (void)unused;
    g_autoptr(GError) error = NULL;
    g_autofree char *manifest = g_build_filename(place->path, "recording.json", NULL);
    make_folder(place->path, "recording.json", "old");
    plain_file_system = true;
    HwOutputFolder *folder = begin(place->path, true, NULL);
    g_assert_false(hw_output_folder_commit(folder, &error));
    g_assert_error(error, HW_BASE_ERROR, HW_BASE_ERROR_IO);
    g_assert_nonnull(strstr(error->message, "exchange"));
    hw_output_folder_free(folder);
    assert_holds(manifest, "old");
    g_assert_cmpuint(count_entries(place->folder), ==, 1);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
#define CASE(rule) g_test_add("/base/output/" #rule, Place, NULL, set_up, rule, tear_down)
    CASE(a_file_appears_at_the_commit_and_whole);
    CASE(what_was_not_committed_leaves_nothing);
    CASE(an_existing_file_is_refused_without_force);
    CASE(a_file_that_comes_between_is_kept);
    CASE(a_place_that_cannot_be_is_named);
    CASE(a_full_device_is_an_error_and_stays_a_device);
    CASE(a_disk_that_fills_leaves_nothing);
    CASE(a_kill_in_between_leaves_nothing_at_the_place);
    CASE(standard_output_is_kept_back_until_the_commit);
    CASE(a_folder_appears_at_the_commit);
    CASE(force_exchanges_a_folder_of_its_kind);
    CASE(a_foreign_folder_is_never_replaced);
    CASE(where_folders_cannot_be_exchanged_the_old_one_stays);
#undef CASE
    return g_test_run();
}
