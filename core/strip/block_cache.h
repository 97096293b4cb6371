/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The one cache of decoded blocks, limited in bytes. Its lock guards the table only: decoding happens outside
 * it, and two requests for a block share one decode. Failures are kept too, so that a damaged block is found
 * once. pthread, so that the thread sanitizer can see it. Reference-counted, usable from any thread. */
#pragma once

#include "core/strip/raster.h"

#include <gio/gio.h>
#include <glib.h>
#include <stddef.h>

typedef struct HwBlockCache HwBlockCache;

/* Makes the raster of a key. Called without the lock, at most once at a time for a key. */
typedef HwRaster *(*HwBlockMaker)(gpointer user_data, GError **error);

HwBlockCache *hw_block_cache_new(size_t limit_bytes);
HwBlockCache *hw_block_cache_ref(HwBlockCache *cache);
void hw_block_cache_unref(HwBlockCache *cache);

/* The raster of a key, made if it is not there (new reference). Errors of the maker are kept and given again,
 * except those of the domain G_IO_ERROR (cancelled, no memory): whoever waited for such a maker tries for
 * itself. Least recently used rasters leave when the limit is passed; one larger than the limit is given but
 * not kept. */
HwRaster *hw_block_cache_get(HwBlockCache *cache, const char *key, HwBlockMaker make, gpointer user_data,
                             GError **error);

/* As above, but only what is there already: NULL without an error where it is not. */
HwRaster *hw_block_cache_peek(HwBlockCache *cache, const char *key);

size_t hw_block_cache_get_bytes(HwBlockCache *cache);
/* How often a maker was called since the cache was made. */
guint hw_block_cache_get_n_made(HwBlockCache *cache);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwBlockCache, hw_block_cache_unref)
