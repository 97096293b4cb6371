/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Options that several verbs share: what a bare image has to be told, and where results go. */
#pragma once

#include "app/cli/cli.h"
#include "core/strip/recording.h"

#include <glib.h>
#include <stdbool.h>

/* As written on the command line; NULL where not given. */
typedef struct {
    char *rate;
    char *epoch;
    char *exposure_us;
    char *stamp;
    char *later;
    char *travel;
    char *transfer;
} HwScanOptions;

#define HW_SCAN_ENTRIES(options)                                                                             \
    { "rate",                                                                                                \
      0,                                                                                                     \
      0,                                                                                                     \
      G_OPTION_ARG_FILENAME,                                                                                 \
      &(options).rate,                                                                                       \
      "Scan rate, columns per second, at most 9 decimals",                                                   \
      "HZ" },                                                                                                \
        { "epoch",                                                                                           \
          0,                                                                                                 \
          0,                                                                                                 \
          G_OPTION_ARG_FILENAME,                                                                             \
          &(options).epoch,                                                                                  \
          "Instant of the first column's stamp (RFC 3339, with offset)",                                     \
          "INSTANT" },                                                                                       \
        { "exposure-us",                                                                                     \
          0,                                                                                                 \
          0,                                                                                                 \
          G_OPTION_ARG_FILENAME,                                                                             \
          &(options).exposure_us,                                                                            \
          "Exposure of a column; needed unless stamps are middle",                                           \
          "MICROSECONDS" },                                                                                  \
        { "stamp",                                                                                           \
          0,                                                                                                 \
          0,                                                                                                 \
          G_OPTION_ARG_FILENAME,                                                                             \
          &(options).stamp,                                                                                  \
          "Part of the exposure a stamp tells: start, middle (unless said), end",                            \
          "PART" },                                                                                          \
        { "later",                                                                                           \
          0,                                                                                                 \
          0,                                                                                                 \
          G_OPTION_ARG_FILENAME,                                                                             \
          &(options).later,                                                                                  \
          "Side of the image with its later columns: left, right (unless said)",                             \
          "SIDE" },                                                                                          \
        { "travel",                                                                                          \
          0,                                                                                                 \
          0,                                                                                                 \
          G_OPTION_ARG_FILENAME,                                                                             \
          &(options).travel,                                                                                 \
          "Way the riders move as the camera sees them: left, right",                                        \
          "SIDE" },                                                                                          \
    {                                                                                                        \
        "transfer", 0, 0, G_OPTION_ARG_FILENAME, &(options).transfer,                                        \
            "How light was coded: linear, srgb, gamma:G", "CODING"                                           \
    }

void hw_scan_options_clear(HwScanOptions *options);

/* The first option of these that was given ("--rate"), or NULL. */
const char *hw_scan_options_get_first(const HwScanOptions *options);

/* The options as values. scan->epoch_text is borrowed from `options`. Errors are of HW_CLI_ERROR. */
bool hw_scan_options_read(const HwScanOptions *options, const char *image, HwImageScan *scan, GError **error);

/* A recording, or a bare image with the options it needs; options given with a recording that says these
 * things itself are a wrong call. NULL with an error. */
HwRecording *hw_cli_open_recording(const char *path, const HwScanOptions *options, GError **error);

/* Refuses an output inside a recording, or at a bare image's own place: evidence is never changed, even with
 * --force. `output` may be NULL or "-". */
bool hw_cli_check_output(const char *output, const HwRecording *recording, GError **error);

/* True where `path` is `folder` itself or lies below it, links followed. */
bool hw_cli_lies_in(const char *path, const char *folder);

typedef enum { HW_FORMAT_TEXT, HW_FORMAT_JSON, HW_FORMAT_CSV } HwFormat;

/* Where and how results are written. */
typedef struct {
    char *format;
    char *output;
    gboolean force;
} HwResultOptions;

#define HW_OUTPUT_ENTRIES(options, what)                                                                     \
    { "output", 'o', 0, G_OPTION_ARG_FILENAME, &(options).output, what, "FILE" },                            \
    {                                                                                                        \
        "force", 0, 0, G_OPTION_ARG_NONE, &(options).force, "Replace an output that is there", NULL          \
    }

void hw_result_options_clear(HwResultOptions *options);

/* The format asked for (TEXT where none was); `with_csv`: whether this verb makes tables. */
bool hw_result_options_get_format(const HwResultOptions *options, bool with_csv, HwFormat *format,
                                  GError **error);

/* Writes the result to the file asked for, or to standard output. */
bool hw_result_options_write(const HwResultOptions *options, const char *text, GError **error);

G_DEFINE_AUTO_CLEANUP_CLEAR_FUNC(HwScanOptions, hw_scan_options_clear)
G_DEFINE_AUTO_CLEANUP_CLEAR_FUNC(HwResultOptions, hw_result_options_clear)
