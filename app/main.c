/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The program with windows. */
#include "ui/application.h"

#include <glib/gi18n.h>
#include <locale.h>

int
main(int argc, char **argv)
{
    g_autoptr(HwApplication) application = NULL;

    setlocale(LC_ALL, "");
    /* Run from where it was built, it speaks as it was built. */
    bindtextdomain(GETTEXT_PACKAGE, g_file_test(HALFWHEEL_BUILT_LOCALES, G_FILE_TEST_IS_DIR)
                                        ? HALFWHEEL_BUILT_LOCALES
                                        : HALFWHEEL_LOCALES);
    bind_textdomain_codeset(GETTEXT_PACKAGE, "UTF-8");
    textdomain(GETTEXT_PACKAGE);
    application = hw_application_new(HALFWHEEL_SAMPLES_PATH);
    return g_application_run(G_APPLICATION(application), argc, argv);
}
