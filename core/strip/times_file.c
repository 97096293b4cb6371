/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/strip/times_file.h"

#include "core/base/csv.h"
#include "core/base/digest.h"
#include "core/base/input.h"
#include "core/base/limits.h"
#include "core/base/number.h"
#include "core/strip/strip_error.h"

#include <string.h>
#include <unistd.h>

/* A sentence of the floor below as the reason of a void: without its final stop. */
static void
set_reason(GError **error, const char *sentence)
{
    g_autofree char *reason = g_strdup(sentence);
    gsize length = strlen(reason);
    if (length > 0 && reason[length - 1] == '.')
        reason[length - 1] = '\0';
    g_set_error_literal(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED, reason);
}

static int64_t *
stamps_of(const HwCsvTable *table, const char *file, GError **error)
{
    guint place = hw_csv_table_find(table, "ns");
    if (place == G_MAXUINT || table->rows->len == 0) {
        g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED, "%s has no stamps under the header “ns”",
                    file);
        return NULL;
    }
    g_autofree int64_t *stamps_ns = g_new(int64_t, table->rows->len);
    for (guint i = 0; i < table->rows->len; i++) {
        const HwCsvRow *row = table->rows->pdata[i];
        if (!hw_number_parse_int64(row->fields[place], -HW_MAX_JSON_INTEGER, HW_MAX_JSON_INTEGER,
                                   &stamps_ns[i])) {
            g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED,
                        "%s, line %u: the stamp is not a whole number of ns below 2^53", file, row->line);
            return NULL;
        }
    }
    return g_steal_pointer(&stamps_ns);
}

int64_t *
hw_times_file_read(const HwRecording *recording, const HwBlock *block, int64_t *n_stamps, GError **error)
{
    const char *file = block->times_file;
    g_return_val_if_fail(file != NULL, NULL);
    int fd = hw_recording_open_file(recording, file, error);
    if (fd < 0)
        return NULL;
    g_autoptr(GError) cause = NULL;
    size_t size = 0;
    g_autofree char *text = hw_input_read_fd(fd, file, HW_MAX_TABLE_BYTES, &size, &cause);
    close(fd);
    if (text == NULL) {
        set_reason(error, cause->message);
        return NULL;
    }
    if (block->times_sha256 != NULL) {
        HwDigest digest = hw_digest_bytes(text, size);
        if (!hw_digest_equal_hex(&digest, block->times_sha256)) {
            g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED,
                        "%s has been altered (its SHA-256 differs)", file);
            return NULL;
        }
    }
    g_autoptr(HwCsvTable) table = hw_csv_table_parse(text, size, file, &cause);
    if (table == NULL) {
        set_reason(error, cause->message);
        return NULL;
    }
    int64_t *stamps_ns = stamps_of(table, file, error);
    if (stamps_ns != NULL)
        *n_stamps = table->rows->len;
    return stamps_ns;
}
