/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/base/digest.h"

#include "core/base/base_error.h"

#include <errno.h>
#include <openssl/evp.h>
#include <string.h>
#include <unistd.h>

/* The context is OpenSSL's own type behind our name: nothing else is kept. */
static EVP_MD_CTX *
context(HwDigestSum *sum)
{
    return (EVP_MD_CTX *)(void *)sum;
}

HwDigestSum *
hw_digest_sum_new(void)
{
    EVP_MD_CTX *made = EVP_MD_CTX_new();
    if (made == NULL || EVP_DigestInit_ex(made, EVP_sha256(), NULL) != 1)
        g_error("SHA-256 is not available in libcrypto");
    return (HwDigestSum *)(void *)made;
}

void
hw_digest_sum_add(HwDigestSum *sum, const void *data, size_t size)
{
    if (EVP_DigestUpdate(context(sum), data, size) != 1)
        g_error("SHA-256 failed in libcrypto");
}

HwDigest
hw_digest_sum_finish(HwDigestSum *sum)
{
    unsigned char raw[HW_DIGEST_HEX / 2];
    HwDigest digest;
    if (EVP_DigestFinal_ex(context(sum), raw, NULL) != 1)
        g_error("SHA-256 failed in libcrypto");
    for (size_t i = 0; i < sizeof raw; i++)
        g_snprintf(digest.hex + 2 * i, 3, "%02x", raw[i]);
    hw_digest_sum_free(sum);
    return digest;
}

void
hw_digest_sum_free(HwDigestSum *sum)
{
    if (sum != NULL)
        EVP_MD_CTX_free(context(sum));
}

HwDigest
hw_digest_bytes(const void *data, size_t size)
{
    HwDigestSum *sum = hw_digest_sum_new();
    hw_digest_sum_add(sum, data, size);
    return hw_digest_sum_finish(sum);
}

bool
hw_digest_fd(int fd, const char *label, HwDigest *digest, GError **error)
{
    enum { PIECE = 1 << 16 };
    g_autoptr(HwDigestSum) sum = hw_digest_sum_new();
    g_autofree unsigned char *piece = g_malloc(PIECE);
    for (;;) {
        ssize_t got = read(fd, piece, PIECE);
        if (got < 0 && errno == EINTR)
            continue;
        if (got < 0) {
            g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_IO, "%s cannot be read: %s.", label,
                        g_strerror(errno));
            return false;
        }
        if (got == 0)
            break;
        hw_digest_sum_add(sum, piece, (size_t)got);
    }
    *digest = hw_digest_sum_finish(g_steal_pointer(&sum));
    return true;
}

bool
hw_digest_is_hex(const char *text)
{
    size_t n = 0;
    while (g_ascii_isxdigit(text[n]))
        n++;
    return n == HW_DIGEST_HEX && text[n] == '\0';
}

bool
hw_digest_equal_hex(const HwDigest *digest, const char *hex)
{
    return g_ascii_strcasecmp(digest->hex, hex) == 0;
}
