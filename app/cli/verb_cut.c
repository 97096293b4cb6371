/* SPDX-License-Identifier: GPL-3.0-or-later */
/* cut: a bare image into a recording. */
#include "app/cli/image_source.h"
#include "app/cli/options.h"
#include "app/cli/png_slice.h"
#include "app/cli/progress.h"
#include "core/base/base_error.h"
#include "core/base/limits.h"
#include "core/base/output.h"
#include "core/base/wide.h"
#include "core/strip/image_info.h"
#include "core/strip/manifest.h"
#include "core/strip/strip.h"

#include <errno.h>
#include <fcntl.h>
#include <string.h>
#include <unistd.h>

/* A block is as wide as a camera's usual ones, wider where the image is so long that there would be many. */
#define NARROW_COLUMNS 1024
#define WIDE_COLUMNS 4096
#define MANY_BLOCKS 256
/* Blocks written side by side in one pass over the image; each has a compressor of its own. */
#define OPEN_BLOCKS 256
#define CACHE_BYTES ((size_t)16 << 20)
#define COPY_BYTES ((size_t)1 << 20)

static const char about[] = "Makes a recording out of a bare line-scan image: a folder with recording.json "
                            "and blocks, each with its\n"
                            "digest. A JPEG is kept as it is, byte for byte, or, where it is too large for "
                            "one block, becomes PNG blocks;\n"
                            "it is never compressed with loss again. A PNG becomes PNG blocks with the same "
                            "samples, 16 bits, palette\n"
                            "and alpha included. What was written is read back before it appears.";

static const char more[] =
    "The first column's stamp is the epoch, the others follow by the scan rate. Without --travel the judge "
    "is\n"
    "asked on the picture which way the riders move.\n"
    "\n"
    "Files:\n"
    "  FOLDER/recording.json, FOLDER/block-00000.png and so on, earliest first. An existing folder is "
    "replaced\n"
    "  only with --force, and only where it is a recording.\n"
    "\n"
    "Exit status:\n"
    "  0  done\n"
    "  1  the image was refused, or the folder could not be written; nothing is at its place\n"
    "  2  the call was wrong\n"
    "\n"
    "Example:\n"
    "  halfwheel-cli cut finish.png --rate 2000 --epoch 2027-06-13T16:02:11+02:00 --travel left -o finish\n";

typedef struct {
    const char *image;
    const HwImageScan *scan;
    const char *folder; /* that is being filled */
    GArray *blocks;     /* HwBlock */
    GPtrArray *texts;   /* char*, that the blocks borrow */
    GCancellable *cancellable;
} HwCut;

static void
cut_clear(HwCut *cut)
{
    g_clear_pointer(&cut->blocks, g_array_unref);
    g_clear_pointer(&cut->texts, g_ptr_array_unref);
}

G_DEFINE_AUTO_CLEANUP_CLEAR_FUNC(HwCut, cut_clear)

static const char *
keep(HwCut *cut, char *text)
{
    g_ptr_array_add(cut->texts, text);
    return text;
}

/* Nominal stamp of a column, ns; false beyond what a manifest can say. */
static bool
stamp_of(const HwCut *cut, int64_t column, int64_t *ns, GError **error)
{
    int64_t stamp;
    /* 10^9 ns × 10^9 over the rate in 10^-9 Hz. */
    if (hw_muldiv_half_even(column, HW_NS_PER_S * HW_NS_PER_S, cut->scan->rate_nhz, &stamp) &&
        stamp <= HW_MAX_JSON_INTEGER) {
        *ns = stamp;
        return true;
    }
    g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_RANGE,
                "%s would last more than 104 days at this scan rate; check --rate.", cut->image);
    return false;
}

static void
add_block(HwCut *cut, const char *file, int64_t columns, int64_t first_ns, const HwDigest *digest)
{
    const HwBlock block = {
        .file = file,
        .columns = columns,
        .stamps = HW_STAMPS_RATE,
        .first_ns = first_ns,
        .sha256 = keep(cut, g_strdup(digest->hex)),
    };
    g_array_append_val(cut->blocks, block);
}

/* Copies the image to the one block, taking its digest on the way. */
static bool
copy_bytes(int from, HwOutput *to, HwDigestSum *sum, const char *label, GCancellable *cancellable,
           GError **error)
{
    g_autofree uint8_t *piece = g_malloc(COPY_BYTES);
    for (;;) {
        ssize_t got = read(from, piece, COPY_BYTES);
        if (got < 0 && errno == EINTR)
            continue;
        if (got < 0) {
            g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_IO, "%s cannot be read: %s.", label,
                        g_strerror(errno));
            return false;
        }
        if (got == 0)
            return true;
        if (g_cancellable_set_error_if_cancelled(cancellable, error))
            return false;
        hw_digest_sum_add(sum, piece, (size_t)got);
        if (!hw_output_write(to, piece, (size_t)got, error))
            return false;
    }
}

static bool
keep_jpeg(HwCut *cut, int fd, int64_t width, GError **error)
{
    const char *file = "block-00000.jpg";
    g_autofree char *path = g_build_filename(cut->folder, file, NULL);
    g_autoptr(HwOutput) output = hw_output_open(path, false, error);
    g_autoptr(HwDigestSum) sum = hw_digest_sum_new();
    if (output == NULL || lseek(fd, 0, SEEK_SET) != 0 ||
        !copy_bytes(fd, output, sum, cut->image, cut->cancellable, error) || !hw_output_commit(output, error))
        return false;
    HwDigest digest = hw_digest_sum_finish(g_steal_pointer(&sum));
    add_block(cut, file, width, 0, &digest);
    return true;
}

/* Rows of the source into a group of slices, from the top to the end. */
static bool
pour(HwCut *cut, HwImageSource *source, GPtrArray *slices, HwTerminalProgress *progress, double from,
     double to, GError **error)
{
    const HwImageShape *shape = hw_image_source_get_shape(source);
    g_autofree uint8_t *row = g_try_malloc_n((gsize)shape->width, shape->pixel_bytes);
    if (row == NULL) {
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_RANGE, "A row of %s does not fit into memory.",
                    cut->image);
        return false;
    }
    for (int64_t y = 0; y < shape->height; y++) {
        if (g_cancellable_set_error_if_cancelled(cut->cancellable, error) ||
            !hw_image_source_read_row(source, row, error))
            return false;
        for (guint i = 0; i < slices->len; i++) {
            if (!hw_png_slice_write_row(slices->pdata[i], row, error))
                return false;
        }
        hw_terminal_progress_report(from + (to - from) * (double)y / (double)shape->height, progress);
    }
    return hw_image_source_finish(source, error);
}

/* Blocks [first, end) of n_columns columns each, counted in time. */
static bool
cut_group(HwCut *cut, int64_t n_columns, int64_t first, int64_t end, int64_t n_blocks,
          HwTerminalProgress *progress, GError **error)
{
    g_autoptr(HwImageSource) source = hw_image_source_open(cut->image, error);
    if (source == NULL)
        return false;
    int64_t width = hw_image_source_get_shape(source)->width;
    g_autoptr(GPtrArray) slices = g_ptr_array_new_with_free_func((GDestroyNotify)hw_png_slice_free);
    for (int64_t i = first; i < end; i++) {
        int64_t start = i * n_columns;
        int64_t n = MIN(n_columns, width - start);
        /* Where later columns lie to the left, the earliest block is the image's right end. */
        int64_t at = cut->scan->later == HW_SIDE_LEFT ? width - start - n : start;
        g_autofree char *file = g_strdup_printf("block-%05" G_GINT64_FORMAT ".png", i);
        g_autofree char *path = g_build_filename(cut->folder, file, NULL);
        HwPngSlice *slice = hw_png_slice_new(path, source, at, n, error);
        if (slice == NULL)
            return false;
        g_ptr_array_add(slices, slice);
    }
    if (!pour(cut, source, slices, progress, (double)first / (double)n_blocks, (double)end / (double)n_blocks,
              error))
        return false;
    for (int64_t i = first; i < end; i++) {
        HwDigest digest;
        int64_t first_ns;
        if (!hw_png_slice_finish(slices->pdata[i - first], &digest, error) ||
            !stamp_of(cut, i * n_columns, &first_ns, error))
            return false;
        add_block(cut, keep(cut, g_strdup_printf("block-%05" G_GINT64_FORMAT ".png", i)),
                  MIN(n_columns, width - i * n_columns), first_ns, &digest);
    }
    return true;
}

static bool
cut_blocks(HwCut *cut, int64_t width, int64_t height, GError **error)
{
    int64_t n_columns = CLAMP((width + MANY_BLOCKS - 1) / MANY_BLOCKS, NARROW_COLUMNS, WIDE_COLUMNS);
    n_columns = MIN(n_columns, HW_MAX_BLOCK_PIXELS / MAX(height, 1));
    if (n_columns == 0) {
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_RANGE,
                    "%s is %" G_GINT64_FORMAT
                    " rows high, more than a block may be; check that it is a strip.",
                    cut->image, height);
        return false;
    }
    int64_t last_ns;
    if (!stamp_of(cut, width, &last_ns, error))
        return false;
    g_auto(HwTerminalProgress) progress = hw_terminal_progress("Cutting");
    int64_t n_blocks = (width + n_columns - 1) / n_columns;
    for (int64_t first = 0; first < n_blocks; first += OPEN_BLOCKS) {
        if (!cut_group(cut, n_columns, first, MIN(first + OPEN_BLOCKS, n_blocks), n_blocks, &progress, error))
            return false;
    }
    return true;
}

static bool
make_blocks(HwCut *cut, GError **error)
{
    g_autoptr(HwImageSource) source = hw_image_source_open(cut->image, error);
    if (source == NULL)
        return false;
    HwImageShape shape = *hw_image_source_get_shape(source);
    g_clear_pointer(&source, hw_image_source_free);

    int fd = open(cut->image, O_RDONLY | O_CLOEXEC);
    uint8_t head[8] = { 0 };
    bool jpeg = fd >= 0 && pread(fd, head, sizeof head, 0) == (ssize_t)sizeof head &&
                hw_image_kind(head, sizeof head) == HW_IMAGE_JPEG;
    bool fits = shape.height <= HW_MAX_BLOCK_PIXELS / shape.width;
    bool done = jpeg && fits ? keep_jpeg(cut, fd, shape.width, error)
                             : cut_blocks(cut, shape.width, shape.height, error);
    if (fd >= 0)
        close(fd);
    return done;
}

static bool
write_manifest(HwCut *cut, const char *title, const char *camera, GError **error)
{
    const HwImageScan *scan = cut->scan;
    HwScan written = {
        .rate_nhz = scan->rate_nhz,
        .rate_hz = (double)scan->rate_nhz / 1e9,
        .exposure_fs = scan->exposure_fs,
        .exposure_known = scan->exposure_known,
        .stamp = scan->stamp,
        .transfer = scan->transfer,
    };
    g_autofree char *text =
        hw_manifest_dup_text(title, scan->epoch_text, camera, scan->travel, scan->later, &written,
                             (const HwBlock *)(void *)cut->blocks->data, cut->blocks->len);
    g_autofree char *path = g_build_filename(cut->folder, HW_RECORDING_MANIFEST, NULL);
    return hw_output_write_file(path, false, text, strlen(text), error);
}

/* Reads back what was written, as anyone will who opens it later. */
static bool
read_back(HwCut *cut, GError **error)
{
    g_autoptr(HwRecording) recording = hw_recording_open(cut->folder, error);
    if (recording == NULL)
        return false;
    g_autoptr(HwBlockCache) cache = hw_block_cache_new(CACHE_BYTES);
    g_autoptr(HwStrip) strip = hw_strip_new(recording, cache, error);
    if (strip == NULL)
        return false;
    g_auto(HwTerminalProgress) progress = hw_terminal_progress("Reading back");
    guint n_blocks = hw_strip_get_n_blocks(strip);
    for (guint i = 0; i < n_blocks; i++) {
        hw_terminal_progress_report((double)i / n_blocks, &progress);
        guint notes;
        g_autoptr(GError) fault = NULL;
        if (hw_strip_check_block(strip, i, &notes, cut->cancellable, &fault))
            continue;
        if (g_error_matches(fault, G_IO_ERROR, G_IO_ERROR_CANCELLED))
            g_propagate_error(error, g_steal_pointer(&fault));
        else
            g_set_error(error, fault->domain, fault->code,
                        "%s cannot be made a recording: read back, %s; fetch it again from the camera.",
                        cut->image, fault->message);
        return false;
    }
    return true;
}

static bool
make_recording(HwCut *cut, const char *title, const char *camera, const char *path, bool force,
               GError **error)
{
    if (hw_cli_lies_in(cut->image, path)) {
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_UNSAFE,
                    "%s lies inside %s and would be lost with it; name another folder.", cut->image, path);
        return false;
    }
    g_autoptr(HwOutputFolder) folder = hw_output_folder_open(path, HW_RECORDING_MANIFEST, force, error);
    if (folder == NULL)
        return false;
    cut->folder = hw_output_folder_get_path(folder);
    return make_blocks(cut, error) && write_manifest(cut, title, camera, error) && read_back(cut, error) &&
           hw_output_folder_commit(folder, error);
}

typedef struct {
    HwScanOptions scan;
    HwResultOptions result;
    char *title;
    char *camera;
} HwCutOptions;

static void
cut_options_clear(HwCutOptions *options)
{
    hw_scan_options_clear(&options->scan);
    hw_result_options_clear(&options->result);
    g_clear_pointer(&options->title, g_free);
    g_clear_pointer(&options->camera, g_free);
}

G_DEFINE_AUTO_CLEANUP_CLEAR_FUNC(HwCutOptions, cut_options_clear)

static bool
run(HwCall *call, HwExit *status, GError **error)
{
    (void)status;
    g_auto(HwCutOptions) options = { 0 };
    const GOptionEntry scan_entries[] = { HW_SCAN_ENTRIES(options.scan), { NULL } };
    const GOptionEntry entries[] = {
        { "title", 0, 0, G_OPTION_ARG_FILENAME, &options.title, "What the recording is called", "TEXT" },
        { "camera", 0, 0, G_OPTION_ARG_FILENAME, &options.camera, "Name of the camera (A unless said)",
          "NAME" },
        { "output", 'o', 0, G_OPTION_ARG_FILENAME, &options.result.output, "Folder to make (needed)",
          "FOLDER" },
        { "force", 0, 0, G_OPTION_ARG_NONE, &options.result.force, "Replace a recording that is there",
          NULL },
        { NULL },
    };
    const HwOptionTable tables[] = { { "How it was scanned:", scan_entries }, { "Options:", entries } };
    HwParse parsed = hw_cli_parse(call, &hw_verb_cut, about, tables, G_N_ELEMENTS(tables), more, 1, 1, error);
    if (parsed != HW_PARSE_GO)
        return parsed == HW_PARSE_HELP;
    if (options.result.output == NULL || *options.result.output == '\0' ||
        strcmp(options.result.output, "-") == 0) {
        g_set_error_literal(error, HW_CLI_ERROR, HW_CLI_ERROR_CALL,
                            "cut needs a folder to make; name it with -o.");
        return false;
    }
    HwImageScan scan;
    if (!hw_cli_text("--title", options.title, error) || !hw_cli_text("--camera", options.camera, error) ||
        !hw_scan_options_read(&options.scan, call->argv[1], &scan, error))
        return false;
    g_auto(HwCut) cut = {
        .image = call->argv[1],
        .scan = &scan,
        .blocks = g_array_new(FALSE, TRUE, sizeof(HwBlock)),
        .texts = g_ptr_array_new_with_free_func(g_free),
        .cancellable = call->cancellable,
    };
    return make_recording(&cut, options.title, options.camera != NULL ? options.camera : "A",
                          options.result.output, options.result.force, error);
}

const HwVerb hw_verb_cut = {
    "cut",
    "IMAGE",
    "Make a recording out of a bare image",
    run,
};
