/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/strip/block_cache.h"

#include <pthread.h>
#include <stdbool.h>

typedef enum { ENTRY_MAKING, ENTRY_READY, ENTRY_FAILED, ENTRY_DROPPED } EntryState;

/* One key. All fields are guarded by the cache's lock. An entry lives on while someone waits for it, whether
 * or not the table still has it. */
typedef struct {
    char *key;
    EntryState state;
    HwRaster *raster;
    GError *error;
    GList link; /* in the order of use; only rasters that are kept */
    bool linked;
    guint refs;
} Entry;

struct HwBlockCache {
    pthread_mutex_t lock;
    pthread_cond_t made;
    GHashTable *entries; /* key → Entry, which owns the key */
    GQueue use;          /* oldest first */
    size_t limit_bytes;
    size_t bytes;
    guint n_made;
    gint refs;
};

static void
entry_unref(gpointer data)
{
    Entry *entry = data;
    if (--entry->refs > 0)
        return;
    hw_raster_unref(entry->raster);
    g_clear_error(&entry->error);
    g_free(entry->key);
    g_free(entry);
}

HwBlockCache *
hw_block_cache_new(size_t limit_bytes)
{
    HwBlockCache *cache = g_new0(HwBlockCache, 1);
    pthread_mutex_init(&cache->lock, NULL);
    pthread_cond_init(&cache->made, NULL);
    cache->entries = g_hash_table_new_full(g_str_hash, g_str_equal, NULL, entry_unref);
    g_queue_init(&cache->use);
    cache->limit_bytes = limit_bytes;
    cache->refs = 1;
    return cache;
}

HwBlockCache *
hw_block_cache_ref(HwBlockCache *cache)
{
    g_atomic_int_inc(&cache->refs);
    return cache;
}

void
hw_block_cache_unref(HwBlockCache *cache)
{
    if (cache == NULL || !g_atomic_int_dec_and_test(&cache->refs))
        return;
    g_hash_table_unref(cache->entries);
    pthread_cond_destroy(&cache->made);
    pthread_mutex_destroy(&cache->lock);
    g_free(cache);
}

static void
mark_used(HwBlockCache *cache, Entry *entry)
{
    if (!entry->linked)
        return;
    g_queue_unlink(&cache->use, &entry->link);
    g_queue_push_tail_link(&cache->use, &entry->link);
}

/* Takes an entry out of the table. */
static void
drop(HwBlockCache *cache, Entry *entry)
{
    if (entry->linked) {
        g_queue_unlink(&cache->use, &entry->link);
        entry->linked = false;
        cache->bytes -= entry->raster->bytes;
    }
    g_hash_table_remove(cache->entries, entry->key);
}

static void
keep(HwBlockCache *cache, Entry *entry)
{
    size_t bytes = entry->raster->bytes;
    if (bytes > cache->limit_bytes) {
        drop(cache, entry);
        return;
    }
    while (cache->bytes > cache->limit_bytes - bytes)
        drop(cache, g_queue_peek_head(&cache->use));
    entry->link.data = entry;
    g_queue_push_tail_link(&cache->use, &entry->link);
    entry->linked = true;
    cache->bytes += bytes;
}

/* Makes the raster of an entry that this thread put into the table. Called and left with the lock held. */
static void
make_entry(HwBlockCache *cache, Entry *entry, HwBlockMaker make, gpointer user_data)
{
    GError *error = NULL;
    cache->n_made++;
    pthread_mutex_unlock(&cache->lock);
    HwRaster *raster = make(user_data, &error);
    pthread_mutex_lock(&cache->lock);
    entry->raster = raster;
    entry->error = error;
    if (raster != NULL) {
        entry->state = ENTRY_READY;
        keep(cache, entry);
    } else if (error != NULL && error->domain != G_IO_ERROR) {
        entry->state = ENTRY_FAILED;
    } else {
        entry->state = ENTRY_DROPPED;
        drop(cache, entry);
    }
    pthread_cond_broadcast(&cache->made);
}

HwRaster *
hw_block_cache_get(HwBlockCache *cache, const char *key, HwBlockMaker make, gpointer user_data,
                   GError **error)
{
    HwRaster *raster = NULL;
    bool settled = false;
    pthread_mutex_lock(&cache->lock);
    while (!settled) {
        Entry *entry = g_hash_table_lookup(cache->entries, key);
        bool mine = entry == NULL;
        if (mine) {
            entry = g_new0(Entry, 1);
            entry->key = g_strdup(key);
            entry->refs = 1;
            g_hash_table_insert(cache->entries, entry->key, entry);
        }
        entry->refs++;
        if (mine)
            make_entry(cache, entry, make, user_data);
        while (entry->state == ENTRY_MAKING)
            pthread_cond_wait(&cache->made, &cache->lock);
        if (entry->state == ENTRY_READY) {
            mark_used(cache, entry);
            raster = hw_raster_ref(entry->raster);
        } else if (error != NULL && entry->error != NULL && (mine || entry->state == ENTRY_FAILED)) {
            *error = g_error_copy(entry->error);
        }
        settled = mine || entry->state != ENTRY_DROPPED;
        entry_unref(entry);
    }
    pthread_mutex_unlock(&cache->lock);
    return raster;
}

HwRaster *
hw_block_cache_peek(HwBlockCache *cache, const char *key)
{
    HwRaster *raster = NULL;
    pthread_mutex_lock(&cache->lock);
    Entry *entry = g_hash_table_lookup(cache->entries, key);
    if (entry != NULL && entry->state == ENTRY_READY) {
        mark_used(cache, entry);
        raster = hw_raster_ref(entry->raster);
    }
    pthread_mutex_unlock(&cache->lock);
    return raster;
}

size_t
hw_block_cache_get_bytes(HwBlockCache *cache)
{
    pthread_mutex_lock(&cache->lock);
    size_t bytes = cache->bytes;
    pthread_mutex_unlock(&cache->lock);
    return bytes;
}

guint
hw_block_cache_get_n_made(HwBlockCache *cache)
{
    pthread_mutex_lock(&cache->lock);
    guint n_made = cache->n_made;
    pthread_mutex_unlock(&cache->lock);
    return n_made;
}
