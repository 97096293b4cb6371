/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/strip/strip_fixture.h"

#include "tests/strip/pictures.h"

#include <string.h>

#define USUAL_HEAD "\"scan\":{\"rate_hz\":1000,\"stamp\":\"middle\",\"transfer\":\"linear\"},"

StripFixture *
strip_fixture_new(void)
{
    StripFixture *fixture = g_new0(StripFixture, 1);
    fixture->folder = folder_new();
    fixture->blocks = g_string_new(NULL);
    fixture->cache = hw_block_cache_new((size_t)16 << 20);
    return fixture;
}

void
strip_fixture_free(StripFixture *fixture)
{
    hw_recording_unref(fixture->recording);
    hw_block_cache_unref(fixture->cache);
    folder_remove(fixture->folder); /* frees the path */
    g_string_free(fixture->blocks, TRUE);
    g_free(fixture);
}

void
strip_fixture_add(StripFixture *fixture, const char *name, const GByteArray *file, const char *keys)
{
    if (file != NULL)
        folder_write(fixture->folder, name, file->data, file->len);
    g_string_append_printf(fixture->blocks, "%s{\"file\":\"%s\",%s}", fixture->blocks->len > 0 ? "," : "",
                           name, keys);
}

HwStrip *
strip_fixture_open(StripFixture *fixture, GError **error)
{
    g_autofree char *manifest = g_strdup_printf(
        "{\"halfwheel_recording\":1,\"epoch\":\"2027-06-13T16:00:00+02:00\",%s\"blocks\":[%s]}",
        fixture->head != NULL ? fixture->head : USUAL_HEAD, fixture->blocks->str);
    folder_write(fixture->folder, HW_RECORDING_MANIFEST, manifest, strlen(manifest));
    g_clear_pointer(&fixture->recording, hw_recording_unref);
    g_autoptr(GError) failure = NULL;
    fixture->recording = hw_recording_open(fixture->folder, &failure);
    g_assert_no_error(failure);
    return hw_strip_new(fixture->recording, fixture->cache, error);
}

HwStrip *
strip_fixture_open_good(StripFixture *fixture)
{
    g_autoptr(GError) error = NULL;
    HwStrip *strip = strip_fixture_open(fixture, &error);
    g_assert_no_error(error);
    return strip;
}
