/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "ui/composer.h"

#include <glib/gi18n.h>

/* A picture with holes is shown only where the whole one keeps the eye waiting this long. */
#define PATIENCE_MS 80
/* While the whole one is being made, what has been decoded so far is shown this often. */
#define PEEK_MS 300

struct HwComposer {
    GThreadPool *pool; /* one thread makes pictures, another looks at what there is meanwhile */
    HwComposedFunc func;
    gpointer user_data;
    gint generation; /* atomic: of the newest request */
    GCancellable *cancellable;
    HwComposed *held; /* with holes, waiting for its moment */
    guint held_source;
    guint peek_source;
    HwStrip *strip; /* of the newest request, for further looks */
    HwAxis *axis;
    HwViewMap map;
    gint refs; /* atomic: the owner's, and one for each answer under way */
    gint is_closed;
};

typedef struct {
    HwComposer *composer;
    gint generation;
    HwStrip *strip;
    HwAxis *axis;
    HwViewMap map;
    GCancellable *cancellable;
    bool only_cached;
} Request;

typedef struct {
    HwComposer *composer;
    gint generation;
    HwComposed *composed;
} Answer;

void
hw_composed_free(HwComposed *composed)
{
    if (!composed)
        return;
    g_clear_object(&composed->texture);
    g_clear_pointer(&composed->strip, hw_strip_unref);
    g_clear_pointer(&composed->axis, hw_axis_unref);
    g_clear_pointer(&composed->refreshed, hw_strip_unref);
    g_free(composed->failure);
    g_free(composed);
}

static void
composer_unref(HwComposer *composer)
{
    if (g_atomic_int_dec_and_test(&composer->refs))
        g_free(composer);
}

static void
request_free(Request *request)
{
    hw_strip_unref(request->strip);
    hw_axis_unref(request->axis);
    g_object_unref(request->cancellable);
    composer_unref(request->composer);
    g_free(request);
}

static void
drop_held(HwComposer *composer)
{
    g_clear_handle_id(&composer->held_source, g_source_remove);
    g_clear_pointer(&composer->held, hw_composed_free);
}

static void
stop_peeking(HwComposer *composer)
{
    g_clear_handle_id(&composer->peek_source, g_source_remove);
    g_clear_pointer(&composer->strip, hw_strip_unref);
    g_clear_pointer(&composer->axis, hw_axis_unref);
}

static void push(HwComposer *composer, bool only_cached);

static gboolean
peek_cb(gpointer data)
{
    push(data, true);
    return G_SOURCE_CONTINUE;
}

static gboolean
show_held_cb(gpointer data)
{
    HwComposer *composer = data;

    composer->held_source = 0;
    if (!composer->peek_source)
        composer->peek_source = g_timeout_add(PEEK_MS, peek_cb, composer);
    composer->func(g_steal_pointer(&composer->held), composer->user_data);
    return G_SOURCE_REMOVE;
}

static gboolean
answer_cb(gpointer data)
{
    Answer *answer = data;
    HwComposer *composer = answer->composer;

    if (g_atomic_int_get(&composer->is_closed) ||
        answer->generation != g_atomic_int_get(&composer->generation)) {
        hw_composed_free(answer->composed);
    } else if (answer->composed->is_whole || answer->composed->failure) {
        drop_held(composer);
        stop_peeking(composer);
        composer->func(answer->composed, composer->user_data);
    } else {
        drop_held(composer);
        composer->held = answer->composed;
        composer->held_source = g_timeout_add(PATIENCE_MS, show_held_cb, composer);
    }
    composer_unref(composer);
    g_free(answer);
    return G_SOURCE_REMOVE;
}

static void
send_answer(const Request *request, HwComposed *composed)
{
    Answer *answer = g_new0(Answer, 1);

    answer->composer = request->composer;
    answer->generation = request->generation;
    answer->composed = composed;
    g_atomic_int_inc(&request->composer->refs);
    g_main_context_invoke_full(NULL, G_PRIORITY_DEFAULT, answer_cb, answer, NULL);
}

static HwComposed *
composed_new(const Request *request, uint32_t *pixels, bool is_whole)
{
    HwComposed *composed = g_new0(HwComposed, 1);
    HwStrip *refreshed;
    gsize stride = (gsize)request->map.width_px * sizeof *pixels;
    g_autoptr(GBytes) bytes = g_bytes_new_take(pixels, stride * (gsize)request->map.height_px);

    composed->map = request->map;
    composed->strip = hw_strip_ref(request->strip);
    composed->axis = hw_axis_ref(request->axis);
    composed->is_whole = is_whole;
    composed->texture = gdk_memory_texture_new(request->map.width_px, request->map.height_px,
                                               GDK_MEMORY_DEFAULT, bytes, stride);
    refreshed = hw_strip_refreshed(request->strip, NULL);
    if (refreshed == request->strip)
        hw_strip_unref(refreshed);
    else
        composed->refreshed = refreshed;
    return composed;
}

static void
send_failure(const Request *request, const char *sentence)
{
    HwComposed *composed = g_new0(HwComposed, 1);

    composed->failure = g_strdup(sentence);
    send_answer(request, composed);
}

/* False where this request needs no more work. */
static bool
compose_cached(const Request *request, const HwTone *tone)
{
    uint32_t *pixels = g_try_malloc_n((gsize)request->map.width_px * (gsize)request->map.height_px, 4);
    bool holes = false;

    if (!pixels) {
        send_failure(request, _("There is not enough memory for the picture: close other programs."));
        return false;
    }
    if (!hw_compose_cached(request->strip, request->axis, &request->map, tone, pixels, request->map.width_px,
                           &holes, NULL)) {
        g_free(pixels);
        return true;
    }
    send_answer(request, composed_new(request, pixels, !holes));
    return holes;
}

static void
compose_whole(const Request *request, const HwTone *tone)
{
    uint32_t *pixels = g_try_malloc_n((gsize)request->map.width_px * (gsize)request->map.height_px, 4);
    g_autoptr(GError) error = NULL;

    if (!pixels) {
        send_failure(request, _("There is not enough memory for the picture: close other programs."));
        return;
    }
    if (!hw_compose(request->strip, request->axis, &request->map, tone, pixels, request->map.width_px,
                    request->cancellable, &error)) {
        g_free(pixels);
        if (!g_error_matches(error, G_IO_ERROR, G_IO_ERROR_CANCELLED))
            send_failure(request, error->message);
        return;
    }
    send_answer(request, composed_new(request, pixels, true));
}

static void
work(gpointer data, gpointer user_data)
{
    Request *request = data;
    HwTone tone = HW_TONE_AS_STORED;

    (void)user_data;
    if (request->generation == g_atomic_int_get(&request->composer->generation) &&
        compose_cached(request, &tone) && !request->only_cached)
        compose_whole(request, &tone);
    request_free(request);
}

HwComposer *
hw_composer_new(HwComposedFunc func, gpointer user_data)
{
    HwComposer *composer = g_new0(HwComposer, 1);

    composer->func = func;
    composer->user_data = user_data;
    composer->refs = 1;
    composer->pool = g_thread_pool_new(work, NULL, 2, FALSE, NULL);
    return composer;
}

void
hw_composer_free(HwComposer *composer)
{
    if (!composer)
        return;
    g_atomic_int_set(&composer->is_closed, 1);
    hw_composer_cancel(composer);
    g_thread_pool_free(composer->pool, FALSE, TRUE);
    composer_unref(composer);
}

void
hw_composer_cancel(HwComposer *composer)
{
    g_atomic_int_inc(&composer->generation);
    if (composer->cancellable)
        g_cancellable_cancel(composer->cancellable);
    g_clear_object(&composer->cancellable);
    drop_held(composer);
    stop_peeking(composer);
}

static void
push(HwComposer *composer, bool only_cached)
{
    Request *request = g_new0(Request, 1);

    request->composer = composer;
    request->generation = g_atomic_int_get(&composer->generation);
    request->strip = hw_strip_ref(composer->strip);
    request->axis = hw_axis_ref(composer->axis);
    request->map = composer->map;
    request->cancellable = g_object_ref(composer->cancellable);
    request->only_cached = only_cached;
    g_atomic_int_inc(&composer->refs);
    g_thread_pool_push(composer->pool, request, NULL);
}

void
hw_composer_request(HwComposer *composer, HwStrip *strip, HwAxis *axis, const HwViewMap *map)
{
    hw_composer_cancel(composer);
    if (map->width_px <= 0 || map->height_px <= 0)
        return;
    composer->cancellable = g_cancellable_new();
    composer->strip = hw_strip_ref(strip);
    composer->axis = hw_axis_ref(axis);
    composer->map = *map;
    push(composer, false);
}
