/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "samples/sim/recorder.h"

#include "samples/sim/image_file.h"

#include <glib/gstdio.h>
#include <jansson.h>
#include <math.h>
#include <openssl/evp.h>
#include <string.h>

struct SimRecorder {
    const SimScenario *scenario;
    SimCamera *camera;
    char *folder;
    GArray *blocks; /* SimBlock */
    GArray *scans;  /* int64_t: the true scan in each column */
    uint16_t *samples;
    int pending; /* columns in samples */
    char identity[17];
};

static char *
digest_hex(const void *data, gsize size)
{
    unsigned char sum[EVP_MAX_MD_SIZE];
    unsigned n = 0;
    EVP_Digest(data, size, sum, &n, EVP_sha256(), NULL);
    GString *s = g_string_new(NULL);
    for (unsigned i = 0; i < n; i++)
        g_string_append_printf(s, "%02x", sum[i]);
    return g_string_free(s, FALSE);
}

static char *
file_digest(const char *path, GError **error)
{
    g_autofree char *data = NULL;
    gsize size = 0;
    if (!g_file_get_contents(path, &data, &size, error))
        return NULL;
    return digest_hex(data, size);
}

static gboolean
write_times(SimRecorder *r, SimBlock *b, GError **error)
{
    GString *text = g_string_new("ns\n");
    for (int i = 0; i < b->columns; i++)
        g_string_append_printf(
            text, "%" G_GINT64_FORMAT "\n",
            (gint64)sim_camera_stamp(r->camera, g_array_index(r->scans, int64_t, b->first_column + i)));
    g_autofree char *body = g_string_free(text, FALSE);
    b->times_file = g_strdup_printf("times-%05u.csv", r->blocks->len);
    b->times_sha256 = digest_hex(body, strlen(body));
    g_autofree char *path = g_build_filename(r->folder, b->times_file, NULL);
    return g_file_set_contents(path, body, -1, error);
}

static gboolean
close_block(SimRecorder *r, GError **error)
{
    const SimScenario *s = r->scenario;
    if (r->pending == 0)
        return TRUE;
    int64_t first = r->scans->len - r->pending;
    SimBlock b = { .first_column = first, .columns = r->pending };
    b.first_ns = sim_camera_stamp(r->camera, g_array_index(r->scans, int64_t, first));
    b.last_ns = sim_camera_stamp(r->camera, g_array_index(r->scans, int64_t, r->scans->len - 1));
    b.file = g_strdup_printf("block-%05u.%s", r->blocks->len, s->format == SIM_FORMAT_PNG ? "png" : "jpg");
    SimImage image = {
        r->pending, s->rows, sim_camera_channels(r->camera), s->bits, r->samples, s->later_left
    };
    g_autofree char *path = g_build_filename(r->folder, b.file, NULL);
    gboolean ok = s->format == SIM_FORMAT_PNG ? sim_image_write_png(&image, path, error)
                                              : sim_image_write_jpeg(&image, s->quality, path, error);
    b.sha256 = ok ? file_digest(path, error) : NULL;
    ok = b.sha256 != NULL && (!s->stamps_listed || write_times(r, &b, error));
    g_array_append_val(r->blocks, b);
    r->pending = 0;
    return ok;
}

/* Whether a scan is lost, and whether the camera knows. */
static gboolean
dropped(const SimRecorder *r, int64_t scan, gboolean *hidden)
{
    for (guint i = 0; i < r->scenario->drops->len; i++) {
        const SimDrop *d = &g_array_index(r->scenario->drops, SimDrop, i);
        int64_t from = llrint(d->at_s * r->scenario->rate_hz);
        if (scan >= from && scan < from + d->scans) {
            *hidden = d->hidden;
            return TRUE;
        }
    }
    return FALSE;
}

static gboolean
film(SimRecorder *r, double from_s, double to_s, GError **error)
{
    const SimScenario *s = r->scenario;
    int64_t from = llrint(from_s * s->rate_hz), to = llrint(to_s * s->rate_hz);
    gsize size = (gsize)s->rows * (gsize)sim_camera_channels(r->camera);
    g_autofree float *light = g_new(float, size);
    for (int64_t scan = from; scan < to; scan++) {
        gboolean hidden = FALSE;
        if (dropped(r, scan, &hidden)) {
            /* Even stamps can't show a gap: where the camera knows of it, the block ends there. */
            if (!hidden && !s->stamps_listed && !close_block(r, error))
                return FALSE;
            continue;
        }
        sim_camera_expose(r->camera, scan, light);
        sim_camera_read(r->camera, scan, light, r->samples + size * (gsize)r->pending);
        g_array_append_val(r->scans, scan);
        if (++r->pending == s->block_columns && !close_block(r, error))
            return FALSE;
    }
    return close_block(r, error);
}

static int
by_number(gconstpointer a, gconstpointer b)
{
    double x = *(const double *)a, y = *(const double *)b;
    return x < y ? -1 : x > y;
}

static gboolean
film_around(SimRecorder *r, GError **error)
{
    const GArray *c = sim_camera_get_crossings(r->camera);
    g_autoptr(GArray) at = g_array_new(FALSE, FALSE, sizeof(double));
    for (guint i = 0; i < c->len; i++)
        g_array_append_val(at, g_array_index(c, SimCrossing, i).at_s);
    g_array_sort(at, by_number);
    double around = r->scenario->around_s;
    for (guint i = 0; i < at->len;) {
        double from = g_array_index(at, double, i) - around, to = from + 2 * around;
        for (i++; i < at->len && g_array_index(at, double, i) - around <= to; i++)
            to = g_array_index(at, double, i) + around;
        if (!film(r, fmax(from, 0), to, error))
            return FALSE;
    }
    return TRUE;
}

static gboolean
do_damage(SimRecorder *r, GError **error)
{
    for (guint i = 0; i < r->scenario->damages->len; i++) {
        const SimDamage *d = &g_array_index(r->scenario->damages, SimDamage, i);
        if (d->block >= (int)r->blocks->len) {
            g_set_error(error, sim_error_quark(), 1, "There is no block %d to damage; the recording has %u.",
                        d->block, r->blocks->len);
            return FALSE;
        }
        SimBlock *b = &g_array_index(r->blocks, SimBlock, d->block);
        g_autofree char *path = g_build_filename(r->folder, b->file, NULL);
        g_autofree char *data = NULL;
        gsize size = 0;
        b->damaged = TRUE;
        if (d->kind == SIM_DAMAGE_MISSING) {
            g_unlink(path);
            continue;
        }
        if (!g_file_get_contents(path, &data, &size, error))
            return FALSE;
        if (d->kind == SIM_DAMAGE_CUT)
            size = size * 2 / 5;
        else
            /* Bytes of the picture itself, such that no marker of the file format arises. */
            for (gsize j = size * 3 / 5; j < size * 3 / 5 + 16; j++)
                data[j] = (char)(data[j] ^ 0x11) == (char)0xff ? data[j] : (char)(data[j] ^ 0x11);
        if (!g_file_set_contents(path, data, (gssize)size, error))
            return FALSE;
    }
    return TRUE;
}

static json_t *
block_json(const SimBlock *b)
{
    json_t *j = json_pack("{s:s, s:i}", "file", b->file, "columns", b->columns);
    if (b->times_file == NULL)
        json_object_set_new(j, "first_ns", json_integer(b->first_ns));
    if (b->times_file != NULL) {
        json_object_set_new(j, "times", json_string(b->times_file));
        json_object_set_new(j, "times_sha256", json_string(b->times_sha256));
    } else if (b->columns > 1)
        json_object_set_new(j, "last_ns", json_integer(b->last_ns));
    json_object_set_new(j, "sha256", json_string(b->sha256));
    return j;
}

/* A number as the scenario wrote it, whole where it is whole. */
static json_t *
plain_number(double v)
{
    return v == floor(v) ? json_integer((json_int_t)v) : json_real(v);
}

static gboolean
write_manifest(SimRecorder *r, GError **error)
{
    static const char *const STAMPS[] = { "start", "middle", "end" };
    const SimScenario *s = r->scenario;
    json_t *blocks = json_array();
    for (guint i = 0; i < r->blocks->len; i++)
        json_array_append_new(blocks, block_json(&g_array_index(r->blocks, SimBlock, i)));
    json_t *scan = json_pack("{s:o, s:o, s:s, s:s, s:o}", "rate_hz", plain_number(s->rate_hz), "exposure_us",
                             plain_number(s->exposure_us), "stamp", STAMPS[s->stamp], "transfer", s->transfer,
                             "slit_mm", plain_number(s->slit_mm));
    json_t *root = json_pack("{s:i, s:s, s:s, s:s, s:s, s:s, s:o, s:i, s:o}", "halfwheel_recording", 1,
                             "title", s->title, "epoch", s->epoch, "camera", s->camera, "travel",
                             s->travel_right ? "right" : "left", "later", s->later_left ? "left" : "right",
                             "scan", scan, "rows", s->rows, "blocks", blocks);
    g_autofree char *path = g_build_filename(r->folder, "recording.json", NULL);
    char *text = json_dumps(root, JSON_INDENT(2) | JSON_REAL_PRECISION(12));
    json_decref(root);
    g_autofree char *line = g_strconcat(text, "\n", NULL);
    free(text);
    return g_file_set_contents(path, line, -1, error);
}

static void
find_identity(SimRecorder *r)
{
    const SimBlock *b = &g_array_index(r->blocks, SimBlock, 0);
    /* A block with listed stamps has no first_ns: nothing stands in its place. */
    g_autofree char *stamp =
        b->times_file != NULL ? g_strdup("") : g_strdup_printf("%" G_GINT64_FORMAT, (gint64)b->first_ns);
    g_autofree char *text =
        g_strdup_printf("%s\n%s\n%s\n%s\n", r->scenario->epoch, r->scenario->camera, b->file, stamp);
    g_autofree char *hex = digest_hex(text, strlen(text));
    g_strlcpy(r->identity, hex, sizeof r->identity);
}

SimRecorder *
sim_recorder_run(const SimScenario *s, SimCamera *camera, const char *folder, GError **error)
{
    SimRecorder *r = g_new0(SimRecorder, 1);
    r->scenario = s;
    r->camera = camera;
    r->folder = g_strdup(folder);
    r->blocks = g_array_new(FALSE, FALSE, sizeof(SimBlock));
    r->scans = g_array_new(FALSE, FALSE, sizeof(int64_t));
    r->samples = g_new(uint16_t, (gsize)s->rows * 3 * (gsize)s->block_columns);
    gboolean ok = TRUE;
    if (s->windows->len == 0)
        ok = film_around(r, error);
    for (guint i = 0; ok && i + 1 < s->windows->len; i += 2)
        ok = film(r, g_array_index(s->windows, double, i), g_array_index(s->windows, double, i + 1), error);
    if (ok && r->blocks->len == 0) {
        g_set_error(error, sim_error_quark(), 1, "The scenario records nothing; give it record or riders.");
        ok = FALSE;
    }
    ok = ok && do_damage(r, error) && write_manifest(r, error);
    if (!ok) {
        sim_recorder_free(r);
        return NULL;
    }
    find_identity(r);
    return r;
}

void
sim_recorder_free(SimRecorder *r)
{
    if (r == NULL)
        return;
    for (guint i = 0; i < r->blocks->len; i++) {
        SimBlock *b = &g_array_index(r->blocks, SimBlock, i);
        g_free(b->file);
        g_free(b->sha256);
        g_free(b->times_file);
        g_free(b->times_sha256);
    }
    g_array_unref(r->blocks);
    g_array_unref(r->scans);
    g_free(r->samples);
    g_free(r->folder);
    g_free(r);
}

const GArray *
sim_recorder_get_blocks(const SimRecorder *r)
{
    return r->blocks;
}

int64_t
sim_recorder_columns(const SimRecorder *r)
{
    return r->scans->len;
}

const char *
sim_recorder_get_identity(const SimRecorder *r)
{
    return r->identity;
}

gboolean
sim_recorder_column(const SimRecorder *r, double true_s, double *column)
{
    guint low = 0, high = r->scans->len;
    while (high - low > 1) {
        guint mid = (low + high) / 2;
        if (sim_camera_middle(r->camera, g_array_index(r->scans, int64_t, mid)) <= true_s)
            low = mid;
        else
            high = mid;
    }
    /* Each kept scan stands for half a period on either side of its middle. */
    for (guint i = low; i <= low + 1 && i < r->scans->len; i++) {
        int64_t scan = g_array_index(r->scans, int64_t, i);
        double at = sim_camera_middle(r->camera, scan), period = sim_camera_middle(r->camera, scan + 1) - at;
        double part = (true_s - at) / period;
        if (fabs(part) <= .5) {
            *column = i + .5 + part;
            return TRUE;
        }
    }
    return FALSE;
}

/* The middle of a column's exposure by the files. */
static double
stamped_middle(const SimRecorder *r, int64_t column)
{
    const SimScenario *s = r->scenario;
    double to_middle = s->stamp == SIM_STAMP_START ? .5 : s->stamp == SIM_STAMP_MIDDLE ? 0 : -.5;
    for (guint i = 0; i < r->blocks->len; i++) {
        const SimBlock *b = &g_array_index(r->blocks, SimBlock, i);
        int64_t n = column - b->first_column;
        if (n < 0 || n >= b->columns)
            continue;
        double stamp = b->times_file != NULL
                           ? (double)sim_camera_stamp(r->camera, g_array_index(r->scans, int64_t, column))
                       : b->columns > 1 ? (double)b->first_ns + (double)(b->last_ns - b->first_ns) *
                                                                    (double)n / (b->columns - 1)
                                        : (double)b->first_ns;
        return stamp + to_middle * s->exposure_us * 1e3;
    }
    return NAN;
}

double
sim_recorder_stamped(const SimRecorder *r, double column)
{
    double period = 1e9 / r->scenario->rate_hz;
    int64_t low = (int64_t)floor(column - .5);
    low = CLAMP(low, 0, (int64_t)r->scans->len - 1);
    double part = column - .5 - (double)low, at = stamped_middle(r, low), next = stamped_middle(r, low + 1);
    if (isnan(next) || next - at > 1.5 * period || column < .5)
        return part <= .5 || isnan(next) ? at + part * period : next + (part - 1) * period;
    return at + part * (next - at);
}

gboolean
sim_recorder_readable(const SimRecorder *r, double from, double to)
{
    for (guint i = 0; i < r->blocks->len; i++) {
        const SimBlock *b = &g_array_index(r->blocks, SimBlock, i);
        if (b->damaged && to >= (double)b->first_column && from <= (double)(b->first_column + b->columns))
            return FALSE;
    }
    return from >= 0 && to <= (double)r->scans->len;
}
