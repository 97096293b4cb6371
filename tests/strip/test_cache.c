/* SPDX-License-Identifier: GPL-3.0-or-later */
/* One decode a block, a bound on bytes, failures kept. Run it under the thread sanitizer too
 * (meson setup -Db_sanitize=thread, and G_SLICE=always-malloc: GLib's own allocator is not built for it). */
#include "core/strip/block_cache.h"
#include "core/strip/strip_error.h"

#include <pthread.h>
#include <string.h>

/* A maker that counts, and makes 100 × 10 samples all equal to `value`, or fails. */
typedef struct {
    int value;
    int width;
    const GError *failure; /* or NULL */
    gulong pause_us;
    gint n_calls;
} Maker;

static HwRaster *
make(gpointer user_data, GError **error)
{
    Maker *maker = user_data;
    g_atomic_int_inc(&maker->n_calls);
    if (maker->pause_us > 0)
        g_usleep(maker->pause_us);
    if (maker->failure != NULL) {
        if (error != NULL)
            *error = g_error_copy(maker->failure);
        return NULL;
    }
    HwRaster *raster = hw_raster_new(maker->width, 10, 1, 8);
    memset(raster->u8, maker->value, raster->bytes);
    return raster;
}

static void
fetch(HwBlockCache *cache, const char *key, Maker *maker)
{
    g_autoptr(GError) error = NULL;
    g_autoptr(HwRaster) raster = hw_block_cache_get(cache, key, make, maker, &error);
    g_assert_no_error(error);
    g_assert_cmpuint(raster->u8[0], ==, (unsigned)maker->value);
}

static void
test_second_request_makes_nothing(void)
{
    g_autoptr(HwBlockCache) cache = hw_block_cache_new(10000);
    Maker maker = { .value = 7, .width = 100 };
    g_assert_null(hw_block_cache_peek(cache, "a"));
    fetch(cache, "a", &maker);
    fetch(cache, "a", &maker);
    g_assert_cmpint(maker.n_calls, ==, 1);
    g_assert_cmpuint(hw_block_cache_get_n_made(cache), ==, 1);
    g_assert_cmpuint(hw_block_cache_get_bytes(cache), ==, 1000);
    g_autoptr(HwRaster) there = hw_block_cache_peek(cache, "a");
    g_assert_nonnull(there);
}

static void
test_least_recently_used_leaves_at_the_limit(void)
{
    g_autoptr(HwBlockCache) cache = hw_block_cache_new(3000);
    Maker maker = { .value = 7, .width = 100 };
    fetch(cache, "a", &maker);
    fetch(cache, "b", &maker);
    fetch(cache, "c", &maker);
    fetch(cache, "a", &maker);
    fetch(cache, "d", &maker);
    g_assert_cmpuint(hw_block_cache_get_bytes(cache), ==, 3000);
    g_autoptr(HwRaster) a = hw_block_cache_peek(cache, "a");
    g_autoptr(HwRaster) b = hw_block_cache_peek(cache, "b");
    g_assert_nonnull(a);
    g_assert_null(b);
    /* A raster in use outlives its place. */
    Maker big = { .value = 9, .width = 300 };
    fetch(cache, "big", &big);
    g_assert_cmpuint(hw_block_cache_get_bytes(cache), ==, 3000);
    g_assert_cmpuint(a->u8[0], ==, 7);
}

static void
test_larger_than_the_limit_is_given_not_kept(void)
{
    g_autoptr(HwBlockCache) cache = hw_block_cache_new(3000);
    Maker small = { .value = 1, .width = 100 };
    Maker large = { .value = 2, .width = 301 };
    fetch(cache, "small", &small);
    fetch(cache, "large", &large);
    g_assert_null(hw_block_cache_peek(cache, "large"));
    fetch(cache, "large", &large);
    g_assert_cmpint(large.n_calls, ==, 2);
    fetch(cache, "small", &small);
    g_assert_cmpint(small.n_calls, ==, 1);
}

static void
assert_fails(HwBlockCache *cache, Maker *maker, int n_calls)
{
    g_autoptr(GError) error = NULL;
    g_assert_null(hw_block_cache_get(cache, "bad", make, maker, &error));
    g_assert_error(error, maker->failure->domain, maker->failure->code);
    g_assert_cmpstr(error->message, ==, maker->failure->message);
    g_assert_cmpint(maker->n_calls, ==, n_calls);
}

static void
test_failure_is_kept(void)
{
    g_autoptr(HwBlockCache) cache = hw_block_cache_new(3000);
    g_autoptr(GError) failure =
        g_error_new_literal(HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED, "block-00003.png is cut");
    Maker maker = { .failure = failure };
    assert_fails(cache, &maker, 1);
    assert_fails(cache, &maker, 1);
    g_assert_null(hw_block_cache_peek(cache, "bad"));
    g_assert_null(hw_block_cache_get(cache, "bad", make, &maker, NULL));
    g_assert_cmpuint(hw_block_cache_get_bytes(cache), ==, 0);
}

static void
test_cancelled_is_not_kept(void)
{
    g_autoptr(HwBlockCache) cache = hw_block_cache_new(3000);
    g_autoptr(GError) failure = g_error_new_literal(G_IO_ERROR, G_IO_ERROR_CANCELLED, "cancelled");
    Maker maker = { .failure = failure, .value = 3, .width = 100 };
    assert_fails(cache, &maker, 1);
    assert_fails(cache, &maker, 2);
    maker.failure = NULL;
    fetch(cache, "bad", &maker);
}

/* ---- Threads ---- */

enum { N_THREADS = 8, N_KEYS = 12, N_ROUNDS = 400 };

typedef struct {
    HwBlockCache *cache;
    Maker *makers; /* one a key */
    uint32_t seed;
    guint n_good;
} Hammer;

static void *
hammer(void *data)
{
    Hammer *self = data;
    for (int i = 0; i < N_ROUNDS; i++) {
        self->seed = self->seed * 1664525u + 1013904223u;
        int at = (int)(self->seed >> 16) % N_KEYS;
        g_autofree char *key = g_strdup_printf("block %d", at);
        if (i % 7 == 0) {
            g_autoptr(HwRaster) there = hw_block_cache_peek(self->cache, key);
            g_assert_true(there == NULL || there->u8[999] == at);
            continue;
        }
        g_autoptr(HwRaster) raster = hw_block_cache_get(self->cache, key, make, &self->makers[at], NULL);
        g_assert_true((raster == NULL) == (self->makers[at].failure != NULL));
        if (raster != NULL)
            self->n_good += raster->u8[0] == at && raster->u8[999] == at;
        else
            self->n_good++;
    }
    return NULL;
}

/* Room for five of twelve, one of which always fails and one is always cancelled. */
static void
test_eight_threads_share_one_cache(void)
{
    g_autoptr(HwBlockCache) cache = hw_block_cache_new(5000);
    g_autoptr(GError) damaged = g_error_new_literal(HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED, "damaged");
    g_autoptr(GError) cancelled = g_error_new_literal(G_IO_ERROR, G_IO_ERROR_CANCELLED, "cancelled");
    Maker makers[N_KEYS];
    for (int i = 0; i < N_KEYS; i++)
        makers[i] = (Maker){ .value = i,
                             .width = 100,
                             .pause_us = i % 3 == 0 ? 50 : 0,
                             .failure = i == 4   ? damaged
                                        : i == 9 ? cancelled
                                                 : NULL };
    pthread_t threads[N_THREADS];
    Hammer hammers[N_THREADS];
    for (int i = 0; i < N_THREADS; i++) {
        hammers[i] = (Hammer){ .cache = cache, .makers = makers, .seed = (uint32_t)i * 977 + 5 };
        g_assert_cmpint(pthread_create(&threads[i], NULL, hammer, &hammers[i]), ==, 0);
    }
    int n_calls = 0;
    for (int i = 0; i < N_THREADS; i++) {
        pthread_join(threads[i], NULL);
        g_assert_cmpuint(hammers[i].n_good, ==, N_ROUNDS - (N_ROUNDS + 6) / 7);
    }
    for (int i = 0; i < N_KEYS; i++)
        n_calls += makers[i].n_calls;
    g_assert_cmpint(makers[4].n_calls, ==, 1);
    g_assert_cmpuint(hw_block_cache_get_n_made(cache), ==, (guint)n_calls);
    g_assert_cmpuint(hw_block_cache_get_bytes(cache), <=, 5000);
}

typedef struct {
    HwBlockCache *cache;
    Maker *maker;
    pthread_barrier_t *start;
    HwRaster *raster;
} Waiter;

static void *
ask_at_once(void *data)
{
    Waiter *self = data;
    pthread_barrier_wait(self->start);
    self->raster = hw_block_cache_get(self->cache, "one", make, self->maker, NULL);
    return NULL;
}

static void
test_requests_at_once_share_one_making(void)
{
    g_autoptr(HwBlockCache) cache = hw_block_cache_new(10000);
    Maker maker = { .value = 5, .width = 100, .pause_us = 100000 };
    pthread_barrier_t start;
    pthread_barrier_init(&start, NULL, N_THREADS);
    pthread_t threads[N_THREADS];
    Waiter waiters[N_THREADS];
    for (int i = 0; i < N_THREADS; i++) {
        waiters[i] = (Waiter){ cache, &maker, &start, NULL };
        g_assert_cmpint(pthread_create(&threads[i], NULL, ask_at_once, &waiters[i]), ==, 0);
    }
    for (int i = 0; i < N_THREADS; i++)
        pthread_join(threads[i], NULL);
    for (int i = 0; i < N_THREADS; i++) {
        g_assert_true(waiters[i].raster != NULL && waiters[i].raster == waiters[0].raster);
        if (i > 0)
            hw_raster_unref(waiters[i].raster);
    }
    hw_raster_unref(waiters[0].raster);
    pthread_barrier_destroy(&start);
    g_assert_cmpint(maker.n_calls, ==, 1);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
    g_test_add_func("/cache/second_request_makes_nothing", test_second_request_makes_nothing);
    g_test_add_func("/cache/least_recently_used_leaves_at_the_limit",
                    test_least_recently_used_leaves_at_the_limit);
    g_test_add_func("/cache/larger_than_the_limit_is_given_not_kept",
                    test_larger_than_the_limit_is_given_not_kept);
    g_test_add_func("/cache/failure_is_kept", test_failure_is_kept);
    g_test_add_func("/cache/cancelled_is_not_kept", test_cancelled_is_not_kept);
    g_test_add_func("/cache/eight_threads_share_one_cache", test_eight_threads_share_one_cache);
    g_test_add_func("/cache/requests_at_once_share_one_making", test_requests_at_once_share_one_making);
    return g_test_run();
}
