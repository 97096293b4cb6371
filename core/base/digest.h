/* SPDX-License-Identifier: GPL-3.0-or-later */
/* SHA-256 as lower-case hex: what `sha256sum` prints. */
#pragma once

#include <glib.h>
#include <stdbool.h>
#include <stddef.h>

#define HW_DIGEST_HEX 64

typedef struct {
    char hex[HW_DIGEST_HEX + 1];
} HwDigest;

typedef struct HwDigestSum HwDigestSum;

HwDigest hw_digest_bytes(const void *data, size_t size);

/* A digest in the making. Take it with hw_digest_sum_finish, which frees it, or drop it with
 * hw_digest_sum_free. */
HwDigestSum *hw_digest_sum_new(void);
void hw_digest_sum_add(HwDigestSum *sum, const void *data, size_t size);
HwDigest hw_digest_sum_finish(HwDigestSum *sum);
void hw_digest_sum_free(HwDigestSum *sum);

/* The rest of an open file, read in pieces. `label` names it in errors; the descriptor stays the caller's. */
bool hw_digest_fd(int fd, const char *label, HwDigest *digest, GError **error);

/* 64 hex digits of either case. */
bool hw_digest_is_hex(const char *text);

bool hw_digest_equal_hex(const HwDigest *digest, const char *hex);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwDigestSum, hw_digest_sum_free)
