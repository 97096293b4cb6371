/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A program killed while acts stream in: every act it confirmed is there afterwards, the chain is whole, and
 * nothing is half done. The child confirms each act on a pipe; the parent kills it at a random moment. */
#include "core/case/case.h"

#include <glib/gstdio.h>
#include <signal.h>
#include <stdlib.h>
#include <sys/wait.h>
#include <unistd.h>

enum { N_KILLS = 500, MAX_DELAY_US = 12000 };

static void
stream_acts(const char *path, int confirm_fd)
{
    HwCase *held = hw_case_open(path, HW_CASE_WRITE, NULL);
    if (held == NULL)
        _exit(1);
    for (int i = 0;; i++) {
        g_autoptr(HwAct) act = hw_act_new("place_marker");
        g_autofree char *key = g_strdup_printf("%d", i % 20);
        hw_act_set(act, "marker", key, json_integer(hw_case_get_revision(held)));
        hw_act_set(act, "twin", key, json_integer(hw_case_get_revision(held)));
        bool done = i % 5 == 4 ? hw_case_undo(held, NULL) : hw_case_do(held, act, NULL);
        if (!done)
            _exit(1);
        int64_t revision = hw_case_get_revision(held);
        if (write(confirm_fd, &revision, sizeof revision) != sizeof revision)
            _exit(1);
    }
}

static int64_t
last_confirmed(int fd)
{
    int64_t revision, last = 0;
    while (read(fd, &revision, sizeof revision) == sizeof revision)
        last = revision;
    return last;
}

static void
what_was_confirmed_is_there_after_a_kill(void)
{
    g_autofree char *folder = g_dir_make_tmp("hw-killed-XXXXXX", NULL);
    g_autofree char *path = g_build_filename(folder, "finish" HW_CASE_SUFFIX, NULL);
    hw_case_close(hw_case_create(path, false, NULL));
    g_autoptr(GRand) random = g_rand_new_with_seed(500);
    int64_t before = 0, in_flight = 0;
    for (int i = 0; i < N_KILLS; i++) {
        int ends[2];
        g_assert_cmpint(pipe(ends), ==, 0);
        pid_t child = fork();
        g_assert_cmpint(child, >=, 0);
        if (child == 0) {
            close(ends[0]);
            stream_acts(path, ends[1]);
        }
        close(ends[1]);
        int64_t confirmed = 0; /* the first act done: it is at work */
        g_assert_cmpint(read(ends[0], &confirmed, sizeof confirmed), ==, sizeof confirmed);
        g_usleep((gulong)g_rand_int_range(random, 0, MAX_DELAY_US));
        kill(child, SIGKILL);
        int status;
        waitpid(child, &status, 0);
        g_assert_true(WIFSIGNALED(status)); /* it never gave up by itself */
        confirmed = MAX(confirmed, last_confirmed(ends[0]));
        close(ends[0]);

        g_autoptr(GError) error = NULL;
        HwCase *held = hw_case_open(path, HW_CASE_WRITE, &error); /* verifies chain and facts */
        g_assert_no_error(error);
        int64_t revision = hw_case_get_revision(held);
        g_assert_cmpint(revision, >=, MAX(confirmed, before));
        in_flight += revision > MAX(confirmed, before);
        g_autoptr(GArray) markers = hw_case_dup_facts(held, "marker");
        g_autoptr(GArray) twins = hw_case_dup_facts(held, "twin");
        g_assert_cmpuint(markers->len, ==, twins->len); /* both changes of an act or none */
        before = revision;
        hw_case_close(held);
    }
    g_test_message("%d kills, %" G_GINT64_FORMAT " entries, %" G_GINT64_FORMAT
                   " kills between commit and word of it",
                   N_KILLS, before, in_flight);
    g_assert_cmpint(before, >, N_KILLS); /* the kills did fall among acts */
    g_unlink(path);
    g_rmdir(folder);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
    g_test_add_func("/case_killed/what_was_confirmed_is_there_after_a_kill",
                    what_was_confirmed_is_there_after_a_kill);
    return g_test_run();
}
