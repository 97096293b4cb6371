/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A table of check values in tests/base/data: lines that begin with "#" name its source and are passed over.
 */
#pragma once

#include "core/base/csv.h"

/* The table; a test that cannot read it fails. */
HwCsvTable *check_table_read(const char *name);

/* A field of a row by its header's name. */
const char *check_table_get(const HwCsvTable *table, guint row, const char *column);
