/* SPDX-License-Identifier: GPL-3.0-or-later */
/* One writer a case: a lock on a file beside it, held as long as the case is open for writing. It ends with
 * the process, however that ends. */
#pragma once

#include <glib.h>

typedef struct HwDeskLock HwDeskLock;

/* NULL with HW_CASE_ERROR_READ_ONLY: another desk holds it, or no file can be made there. */
HwDeskLock *hw_desk_lock_take(const char *case_path, GError **error);
void hw_desk_lock_release(HwDeskLock *lock);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwDeskLock, hw_desk_lock_release)
