/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A name from a manifest never leads outside the recording, whatever it looks like and whatever stands there.
 */
#include "core/base/safe_path.h"

#include "core/base/base_error.h"

#include <fcntl.h>
#include <glib/gstdio.h>
#include <string.h>
#include <sys/socket.h>
#include <sys/un.h>
#include <unistd.h>

typedef struct {
    char *folder;
    int fd;
} Place;

static char *
below(const Place *place, const char *name)
{
    return g_build_filename(place->folder, name, NULL);
}

static void
put(const Place *place, const char *name, const char *text)
{
    g_autofree char *path = below(place, name);
    g_assert_true(g_file_set_contents(path, text, -1, NULL));
}

static void
set_up(Place *place, gconstpointer unused)
{
    (void)unused;
    g_autofree char *parent = g_dir_make_tmp("halfwheel-XXXXXX", NULL);
    place->folder = g_build_filename(parent, "recording", NULL);
    g_autofree char *sub = below(place, "sub"), *deep = below(place, "sub/deep");
    g_mkdir(place->folder, 0700);
    g_mkdir(sub, 0700);
    g_mkdir(deep, 0700);
    put(place, "block.png", "1");
    put(place, "sub/deep/block.png", "22");
    put(place, "../secret", "333");
    place->fd = open(place->folder, O_RDONLY | O_DIRECTORY);
    g_assert_cmpint(place->fd, >=, 0);
}

static void
tear_down(Place *place, gconstpointer unused)
{
    (void)unused;
    g_autofree char *parent = g_path_get_dirname(place->folder);
    const char *const command[] = { "rm", "-rf", "--", parent, NULL };
    close(place->fd);
    g_assert_true(
        g_spawn_sync(NULL, (char **)command, NULL, G_SPAWN_SEARCH_PATH, NULL, NULL, NULL, NULL, NULL, NULL));
    g_free(place->folder);
}

static void
names_are_relative_plain_and_utf8(void)
{
    static const char *const good[] = { "a",
                                        "block-00000.jpg",
                                        "sub/deep/block.png",
                                        "...",
                                        "..a",
                                        "a..",
                                        ".hidden",
                                        "Zo\xc3\xab 7.png",
                                        "a b",
                                        "-",
                                        "~",
                                        "~/a",
                                        "C:a",
                                        "a;b|c&d$e`f'g\"h" };
    static const char *const bad[] = {
        "",
        "/",
        "/etc/passwd",
        "a/",
        "a//b",
        ".",
        "..",
        "./a",
        "a/.",
        "a/./b",
        "../a",
        "a/..",
        "a/../b",
        "%41",
        "50% off.png",
        "a\\b",
        "..\\a",
        "a\nb",
        "a\tb",
        "a\x1b[2Jb",
        "a\x7f",
        "a\xc2\x85z",
        "a\xff",
        "\xc0\xae\xc0\xae/a",
        "\xed\xa0\x80",
    };
    for (guint i = 0; i < G_N_ELEMENTS(good); i++)
        g_assert_true(hw_safe_path_check(good[i], "r.json", NULL));
    for (guint i = 0; i < G_N_ELEMENTS(bad); i++) {
        g_autoptr(GError) error = NULL;
        if (hw_safe_path_check(bad[i], "r.json: blocks[3]", &error))
            g_error("name %u was taken", i);
        g_assert_error(error, HW_BASE_ERROR, HW_BASE_ERROR_UNSAFE);
        g_assert_true(g_str_has_prefix(error->message, "r.json: blocks[3]: "));
        /* The sentence itself is clean, one line of UTF-8. */
        g_assert_true(g_utf8_validate(error->message, -1, NULL));
        for (const char *p = error->message; *p != '\0'; p = g_utf8_next_char(p))
            g_assert_false(g_unichar_iscntrl(g_utf8_get_char(p)));
    }
    g_autofree char *longest = g_strnfill(4095, 'a'), *longer = g_strnfill(4096, 'a');
    g_assert_true(hw_safe_path_check(longest, "r", NULL));
    g_assert_false(hw_safe_path_check(longer, "r", NULL));
    g_autoptr(GError) error = NULL;
    g_assert_false(hw_safe_path_check("Zo\xc3\xab/../x", "r", &error));
    g_assert_nonnull(strstr(error->message, "Zo\xc3\xab"));
}

static void
names_that_differ_in_case_only_fold_alike(void)
{
    static const char *const pairs[][2] = {
        { "Block.PNG", "block.png" },
        { "\xc3\x89tape.png", "\xc3\xa9tape.png" }, /* É, é */
        { "\xc3\xa9.png", "e\xcc\x81.png" },        /* composed and not */
        { "STRASSE", "stra\xc3\x9f"
                     "e" },
        { "\xe2\x84\xaa.png", "k.png" }, /* the kelvin sign */
    };
    for (guint i = 0; i < G_N_ELEMENTS(pairs); i++) {
        g_autofree char *a = hw_safe_path_dup_folded(pairs[i][0]), *b = hw_safe_path_dup_folded(pairs[i][1]);
        g_assert_cmpstr(a, ==, b);
    }
    g_autofree char *a = hw_safe_path_dup_folded("block-1.png"), *b = hw_safe_path_dup_folded("block-2.png");
    g_assert_cmpstr(a, !=, b);
}

static void
a_regular_file_opens_and_is_told_of(Place *place, gconstpointer unused)
{
    (void)unused;
    static const struct {
        const char *name;
        goffset size;
    } cases[] = { { "block.png", 1 }, { "sub/deep/block.png", 2 } };
    for (guint i = 0; i < G_N_ELEMENTS(cases); i++) {
        g_autoptr(GError) error = NULL;
        struct stat about;
        int fd = hw_safe_path_open(place->fd, cases[i].name, "r", &error);
        g_assert_no_error(error);
        g_assert_cmpint(lseek(fd, 0, SEEK_END), ==, cases[i].size);
        g_assert_cmpint(fcntl(fd, F_GETFD) & FD_CLOEXEC, ==, FD_CLOEXEC);
        close(fd);
        g_assert_true(hw_safe_path_stat(place->fd, cases[i].name, "r", &about, &error));
        g_assert_cmpint(about.st_size, ==, cases[i].size);
    }
}

static void
assert_shut(const Place *place, const char *name, int code)
{
    g_autoptr(GError) opening = NULL, looking = NULL;
    struct stat about;
    int fd = hw_safe_path_open(place->fd, name, "r.json", &opening);
    if (fd >= 0)
        g_error("%s opened", name);
    g_assert_error(opening, HW_BASE_ERROR, code);
    g_assert_false(hw_safe_path_stat(place->fd, name, "r.json", &about, &looking));
    g_assert_error(looking, HW_BASE_ERROR, code);
    g_assert_true(g_str_has_prefix(opening->message, "r.json: "));
    g_assert_nonnull(strstr(opening->message, name));
    g_assert_nonnull(strstr(looking->message, name));
    /* Nor does it where nobody asks why. */
    g_assert_cmpint(hw_safe_path_open(place->fd, name, "r", NULL), ==, -1);
    g_assert_false(hw_safe_path_stat(place->fd, name, "r", &about, NULL));
}

static void
link_to(const Place *place, const char *name, const char *target)
{
    g_autofree char *path = below(place, name);
    g_assert_cmpint(symlink(target, path), ==, 0);
}

static void
a_link_at_any_component_is_refused(Place *place, gconstpointer unused)
{
    (void)unused;
    g_autofree char *absolute = below(place, "block.png");
    link_to(place, "inside", "block.png");
    link_to(place, "outside", "../secret");
    link_to(place, "absolute", absolute);
    link_to(place, "broken", "nothing");
    link_to(place, "loop", "loop");
    link_to(place, "linked-sub", "sub");
    link_to(place, "up", "..");
    link_to(place, "sub/linked-deep", "deep");
    link_to(place, "sub/deep/linked", "block.png");
    static const char *const names[] = { "inside",         "outside",
                                         "absolute",       "broken",
                                         "loop",           "linked-sub/deep/block.png",
                                         "up/secret",      "sub/linked-deep/block.png",
                                         "sub/deep/linked" };
    for (guint i = 0; i < G_N_ELEMENTS(names); i++)
        assert_shut(place, names[i], HW_BASE_ERROR_UNSAFE);
}

static void
only_regular_files_open(Place *place, gconstpointer unused)
{
    (void)unused;
    g_autofree char *fifo = below(place, "fifo"), *back = g_get_current_dir();
    g_assert_cmpint(mkfifo(fifo, 0600), ==, 0);
    /* A socket's address is short: made from inside the folder. */
    int plug = socket(AF_UNIX, SOCK_STREAM, 0);
    struct sockaddr_un address = { .sun_family = AF_UNIX, .sun_path = "socket" };
    g_assert_cmpint(fchdir(place->fd), ==, 0);
    g_assert_cmpint(bind(plug, (struct sockaddr *)&address, sizeof address), ==, 0);
    g_assert_cmpint(g_chdir(back), ==, 0);
    assert_shut(place, "fifo", HW_BASE_ERROR_UNSAFE);
    assert_shut(place, "socket", HW_BASE_ERROR_UNSAFE);
    assert_shut(place, "sub", HW_BASE_ERROR_UNSAFE);
    assert_shut(place, "sub/deep", HW_BASE_ERROR_UNSAFE);
    assert_shut(place, "block.png/x", HW_BASE_ERROR_UNSAFE);
    close(plug);
}

static void
a_missing_file_is_called_missing(Place *place, gconstpointer unused)
{
    (void)unused;
    assert_shut(place, "absent.png", HW_BASE_ERROR_NOT_FOUND);
    assert_shut(place, "absent/block.png", HW_BASE_ERROR_NOT_FOUND);
    assert_shut(place, "sub/absent.png", HW_BASE_ERROR_NOT_FOUND);
}

static guint
count_open(void)
{
    guint n = 0;
    for (int fd = 0; fd < 1024; fd++)
        n += fcntl(fd, F_GETFD) >= 0;
    return n;
}

static void
no_descriptor_is_left_open(Place *place, gconstpointer unused)
{
    (void)unused;
    link_to(place, "up", "..");
    static const char *const names[] = { "block.png",  "sub/deep/block.png", "up/secret",
                                         "absent/x/y", "sub/deep",           "sub/absent" };
    guint before = count_open();
    for (int round = 0; round < 20; round++) {
        for (guint i = 0; i < G_N_ELEMENTS(names); i++) {
            struct stat about;
            int fd = hw_safe_path_open(place->fd, names[i], "r", NULL);
            if (fd >= 0)
                close(fd);
            hw_safe_path_stat(place->fd, names[i], "r", &about, NULL);
        }
    }
    g_assert_cmpuint(count_open(), ==, before);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
#define CASE(rule) g_test_add("/base/safe_path/" #rule, Place, NULL, set_up, rule, tear_down)
    g_test_add_func("/base/safe_path/names_are_relative_plain_and_utf8", names_are_relative_plain_and_utf8);
    g_test_add_func("/base/safe_path/names_that_differ_in_case_only_fold_alike",
                    names_that_differ_in_case_only_fold_alike);
    CASE(a_regular_file_opens_and_is_told_of);
    CASE(a_link_at_any_component_is_refused);
    CASE(only_regular_files_open);
    CASE(a_missing_file_is_called_missing);
    CASE(no_descriptor_is_left_open);
#undef CASE
    return g_test_run();
}
