/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The program with windows: its command line, its keys, one window for each recording. */
#pragma once

#include <adwaita.h>

#define HW_TYPE_APPLICATION (hw_application_get_type())
G_DECLARE_FINAL_TYPE(HwApplication, hw_application, HW, APPLICATION, AdwApplication)

/* `samples`: the folder of the sample recordings where HALFWHEEL_SAMPLES names none; may not exist. */
HwApplication *hw_application_new(const char *samples);
