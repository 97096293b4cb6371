/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/strip/strip_parts.h"

#include "core/base/limits.h"
#include "core/base/wide.h"
#include "core/strip/image_info.h"
#include "core/strip/strip_error.h"
#include "core/strip/times_file.h"

#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

static void
table_unref(HwStripTable *table)
{
    if (table == NULL || !g_atomic_int_dec_and_test(&table->refs))
        return;
    for (guint i = 0; i < table->n_blocks; i++) {
        g_free(table->blocks[i].times_ns);
        g_free(table->blocks[i].key);
        g_free(table->blocks[i].damage);
    }
    g_free(table->blocks);
    g_hash_table_unref(table->found);
    pthread_mutex_destroy(&table->lock);
    hw_block_cache_unref(table->cache);
    hw_recording_unref(table->recording);
    g_free(table);
}

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwStripTable, table_unref)

void
hw_strip_table_note_damage(HwStripTable *table, guint block, const char *reason)
{
    pthread_mutex_lock(&table->lock);
    if (!g_hash_table_contains(table->found, GUINT_TO_POINTER(block)))
        g_hash_table_insert(table->found, GUINT_TO_POINTER(block), g_strdup(reason));
    pthread_mutex_unlock(&table->lock);
}

/* A sentence as a clause: without its final stop. Takes the error. */
static char *
reason_from(GError *error)
{
    char *reason = g_strdup(error->message);
    size_t n = strlen(reason);
    if (n > 0 && reason[n - 1] == '.')
        reason[n - 1] = '\0';
    g_error_free(error);
    return reason;
}

/* How many columns the stamps imply of a block whose picture does not tell: from its first stamp to its last,
 * or, stamped by rate, to where the next block (NULL: none) starts. 0 where they cannot tell. */
static int64_t
count_by_stamps(const HwBlock *about, const HwBlock *next, int64_t rate_nhz)
{
    bool even = about->stamps == HW_STAMPS_EVEN;
    bool reaches = about->stamps == HW_STAMPS_RATE && next != NULL && next->stamps != HW_STAMPS_TIMES;
    if (!even && !reaches)
        return 0;
    int64_t end_ns = even ? about->last_ns : next->first_ns;
    int64_t n;
    if (end_ns <= about->first_ns ||
        !hw_muldiv_half_even(end_ns - about->first_ns, rate_nhz, HW_NS_PER_S * HW_NS_PER_S, &n))
        return 0;
    return n < HW_MAX_COLUMNS ? n + (even ? 1 : 0) : 0;
}

/* Opens a block's file: its cache key, and its head where that is wanted. */
static bool
look_at_file(const HwRecording *recording, const HwBlock *about, bool want_head, HwStripBlock *block,
             HwImageInfo *head, GError **error)
{
    int fd = hw_recording_open_file(recording, about->file, error);
    if (fd < 0)
        return false;
    struct stat status;
    bool ok = fstat(fd, &status) == 0;
    if (!ok)
        g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED, "%s cannot be read", about->file);
    else
        block->key = g_strdup_printf("%s\n%s\n%jd\n%jd.%09ld\n%s", hw_recording_get_path(recording),
                                     about->file, (intmax_t)status.st_size, (intmax_t)status.st_mtim.tv_sec,
                                     status.st_mtim.tv_nsec, about->sha256 != NULL ? about->sha256 : "");
    if (ok && want_head)
        ok = hw_image_info_read(fd, about->file, head, error);
    close(fd);
    return ok;
}

/* The first complaint about a block stays. */
static void
set_damage(HwStripBlock *block, char *reason)
{
    if (block->damage == NULL)
        block->damage = reason;
    else
        g_free(reason);
}

char *
hw_strip_dup_count_reason(const char *file, int64_t found, int64_t wanted)
{
    return g_strdup_printf("%s has %" G_GINT64_FORMAT " columns where %" G_GINT64_FORMAT " are due", file,
                           found, wanted);
}

char *
hw_strip_dup_rows_reason(const char *file, int64_t found, int64_t wanted)
{
    return g_strdup_printf("%s is %" G_GINT64_FORMAT " rows high where the recording has %" G_GINT64_FORMAT,
                           file, found, wanted);
}

/* Stamps of a block that has a file of them. */
static void
read_times(HwStripTable *table, const HwBlock *about, HwStripBlock *block)
{
    GError *error = NULL;
    int64_t n = 0;
    g_autofree int64_t *times_ns = hw_times_file_read(table->recording, about, &n, &error);
    if (times_ns == NULL) {
        set_damage(block, reason_from(error));
        return;
    }
    if (about->columns > 0 && n != about->columns) {
        set_damage(block, g_strdup_printf("%s has %" G_GINT64_FORMAT " stamps where %" G_GINT64_FORMAT
                                          " columns are due",
                                          about->times_file, n, about->columns));
        return;
    }
    block->n_cols = n;
    block->times_ns = g_steal_pointer(&times_ns);
}

/* Settles one block. Heads are read where the manifest gives no columns, and until one gave the rows. */
static void
settle_block(HwStripTable *table, guint index, int64_t *n_rows, bool *any_head)
{
    const HwBlock *about = hw_recording_get_block(table->recording, index);
    const HwBlock *next =
        index + 1 < table->n_blocks ? hw_recording_get_block(table->recording, index + 1) : NULL;
    HwStripBlock *block = &table->blocks[index];
    bool want_head = about->columns == 0 || !*any_head;
    HwImageInfo head = { HW_IMAGE_OTHER, 0, 0 };
    GError *error = NULL;
    if (!look_at_file(table->recording, about, want_head, block, &head, &error))
        set_damage(block, reason_from(error));
    bool has_head = head.kind != HW_IMAGE_OTHER;

    block->n_cols = about->columns;
    if (about->stamps == HW_STAMPS_TIMES)
        read_times(table, about, block);
    if (block->n_cols == 0 && has_head)
        block->n_cols = head.width;
    if (block->n_cols == 0)
        block->n_cols = count_by_stamps(about, next, hw_recording_get_scan(table->recording)->rate_nhz);
    if (!has_head)
        return;
    if (*n_rows == 0)
        *n_rows = head.height;
    if (head.width != block->n_cols)
        set_damage(block, hw_strip_dup_count_reason(about->file, head.width, block->n_cols));
    if (head.height != *n_rows)
        set_damage(block, hw_strip_dup_rows_reason(about->file, head.height, *n_rows));
    if (block->damage == NULL)
        *any_head = true;
}

static HwStripTable *
table_new(HwRecording *recording, HwBlockCache *cache, GError **error)
{
    g_autoptr(HwStripTable) table = g_new0(HwStripTable, 1);
    table->refs = 1;
    table->recording = hw_recording_ref(recording);
    table->cache = hw_block_cache_ref(cache);
    table->n_blocks = hw_recording_get_n_blocks(recording);
    table->blocks = g_new0(HwStripBlock, table->n_blocks);
    table->found = g_hash_table_new_full(NULL, NULL, NULL, g_free);
    pthread_mutex_init(&table->lock, NULL);

    int64_t n_rows = hw_recording_get_rows(recording);
    int64_t n_cols = 0;
    bool any_head = false;
    for (guint i = 0; i < table->n_blocks; i++) {
        settle_block(table, i, &n_rows, &any_head);
        table->blocks[i].first_col = n_cols;
        n_cols += table->blocks[i].n_cols;
        if (n_cols > HW_MAX_COLUMNS) {
            g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_MANIFEST,
                        "%s: blocks[%u]: the blocks up to here have more than %" G_GINT64_FORMAT
                        " columns; check the times and columns given.",
                        hw_recording_get_path(recording), i, HW_MAX_COLUMNS);
            return NULL;
        }
    }
    if (n_rows > HW_MAX_BLOCK_PIXELS)
        n_rows = HW_MAX_BLOCK_PIXELS; /* no block is as high: each will say so */
    table->n_rows = (int)n_rows;
    return g_steal_pointer(&table);
}

static bool
check_some_readable(HwStrip *strip, GError **error)
{
    HwStripTable *table = strip->table;
    if (strip->n_damaged < table->n_blocks)
        return true;
    const char *path = hw_recording_get_path(table->recording);
    if (table->n_blocks == 0)
        g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_EMPTY,
                    "%s has no blocks; choose another recording.", path);
    else
        g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_EMPTY,
                    "No block of %s can be read (%s); copy the recording again from where it was made.", path,
                    strip->damage[0]);
    return false;
}

/* A strip that knows what is known now. */
static HwStrip *
strip_from_table(HwStripTable *table, GError **error)
{
    g_autoptr(HwStrip) strip = g_new0(HwStrip, 1);
    strip->refs = 1;
    g_atomic_int_inc(&table->refs);
    strip->table = table;
    strip->damage = g_new0(char *, table->n_blocks);
    pthread_mutex_lock(&table->lock);
    strip->n_found = g_hash_table_size(table->found);
    for (guint i = 0; i < table->n_blocks; i++) {
        const char *reason = table->blocks[i].damage;
        if (reason == NULL && strip->n_found > 0)
            reason = g_hash_table_lookup(table->found, GUINT_TO_POINTER(i));
        strip->damage[i] = g_strdup(reason);
        strip->n_damaged += reason != NULL;
    }
    pthread_mutex_unlock(&table->lock);
    if (!check_some_readable(strip, error))
        return NULL;

    g_autofree HwTimedBlock *timed = g_new0(HwTimedBlock, table->n_blocks);
    for (guint i = 0; i < table->n_blocks; i++) {
        const HwBlock *about = hw_recording_get_block(table->recording, i);
        timed[i] = (HwTimedBlock){
            .stamps = about->stamps,
            .n_columns = table->blocks[i].n_cols,
            .first_ns = about->first_ns,
            .last_ns = about->last_ns,
            .times_ns = table->blocks[i].times_ns,
            .file = about->file,
            .damage = strip->damage[i],
        };
    }
    strip->base = hw_time_base_new(hw_recording_get_scan(table->recording), timed, table->n_blocks, error);
    return strip->base != NULL ? g_steal_pointer(&strip) : NULL;
}

HwStrip *
hw_strip_new(HwRecording *recording, HwBlockCache *cache, GError **error)
{
    g_autoptr(HwStripTable) table = table_new(recording, cache, error);
    return table != NULL ? strip_from_table(table, error) : NULL;
}

HwStrip *
hw_strip_ref(HwStrip *strip)
{
    g_atomic_int_inc(&strip->refs);
    return strip;
}

void
hw_strip_unref(HwStrip *strip)
{
    if (strip == NULL || !g_atomic_int_dec_and_test(&strip->refs))
        return;
    for (guint i = 0; strip->damage != NULL && i < strip->table->n_blocks; i++)
        g_free(strip->damage[i]);
    g_free(strip->damage);
    hw_time_base_unref(strip->base);
    table_unref(strip->table);
    g_free(strip);
}

HwStrip *
hw_strip_refreshed(HwStrip *strip, GError **error)
{
    pthread_mutex_lock(&strip->table->lock);
    bool same = g_hash_table_size(strip->table->found) == strip->n_found;
    pthread_mutex_unlock(&strip->table->lock);
    return same ? hw_strip_ref(strip) : strip_from_table(strip->table, error);
}

HwRecording *
hw_strip_get_recording(HwStrip *strip)
{
    return strip->table->recording;
}

const HwTimeBase *
hw_strip_get_time_base(HwStrip *strip)
{
    return strip->base;
}

int64_t
hw_strip_get_n_columns(HwStrip *strip)
{
    const HwStripBlock *last = &strip->table->blocks[strip->table->n_blocks - 1];
    return last->first_col + last->n_cols;
}

int
hw_strip_get_n_rows(HwStrip *strip)
{
    return strip->table->n_rows;
}

guint
hw_strip_get_n_blocks(HwStrip *strip)
{
    return strip->table->n_blocks;
}

void
hw_strip_get_block_columns(HwStrip *strip, guint block, int64_t *first_col, int64_t *n_cols)
{
    g_return_if_fail(block < strip->table->n_blocks);
    *first_col = strip->table->blocks[block].first_col;
    *n_cols = strip->table->blocks[block].n_cols;
}

bool
hw_strip_locate(HwStrip *strip, double column, guint *block, double *column_in_block)
{
    if (!(column >= 0.0 && column < (double)hw_strip_get_n_columns(strip)))
        return false;
    /* The last block that begins at or before the column; among blocks without columns, the one that has it.
     */
    guint low = 0;
    guint high = strip->table->n_blocks;
    while (high - low > 1) {
        guint middle = low + (high - low) / 2;
        if ((double)strip->table->blocks[middle].first_col <= column)
            low = middle;
        else
            high = middle;
    }
    *block = low;
    *column_in_block = column - (double)strip->table->blocks[low].first_col;
    return true;
}

const char *
hw_strip_get_damage(HwStrip *strip, guint block)
{
    g_return_val_if_fail(block < strip->table->n_blocks, NULL);
    return strip->damage[block];
}

char *
hw_strip_dup_found_damage(HwStrip *strip, guint block)
{
    HwStripTable *table = strip->table;
    g_return_val_if_fail(block < table->n_blocks, NULL);
    if (table->blocks[block].damage != NULL)
        return g_strdup(table->blocks[block].damage);
    pthread_mutex_lock(&table->lock);
    char *reason = g_strdup(g_hash_table_lookup(table->found, GUINT_TO_POINTER(block)));
    pthread_mutex_unlock(&table->lock);
    return reason;
}

guint
hw_strip_get_n_decoded(HwStrip *strip)
{
    pthread_mutex_lock(&strip->table->lock);
    guint n_decoded = strip->table->n_decoded;
    pthread_mutex_unlock(&strip->table->lock);
    return n_decoded;
}

bool
hw_strip_is_whole(HwStrip *strip)
{
    return strip->n_damaged == 0 && hw_recording_is_complete(strip->table->recording);
}
