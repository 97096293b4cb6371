/* SPDX-License-Identifier: GPL-3.0-or-later */
/* One scenario into a recording and what stands beside it. */
#pragma once

#include <glib.h>

/*
 * From the scenario NAME.txt at path: output/NAME/ and output/NAME.markers.csv, .startlist.csv, .race.json,
 * .truth.csv. What exists is refused unless force. Errors are one sentence.
 */
gboolean sim_produce(const char *path, const char *output, gboolean force, GError **error);
