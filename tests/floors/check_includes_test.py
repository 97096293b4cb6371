#!/usr/bin/env python3
# SPDX-License-Identifier: GPL-3.0-or-later
"""The checker of includes must find each violation, made up here, and nothing in a clean house. TAP."""
import os
import subprocess
import sys
import tempfile

CHECKER = os.path.join(os.path.dirname(os.path.abspath(__file__)), "check-includes")
SPDX = "/* SPDX-License-Identifier: GPL-3.0-or-later */\n"
CLEAN = {
    "core/base/number.h": SPDX,
    "core/base/number.c": SPDX + '#include "core/base/number.h"\n',
    "core/strip/strip.c": SPDX + '/* not #include "ui/session.h" */\n#include "core/base/number.h"\n'
                                 'const char *words = "pthread_create";\n',
    "core/case/writer.c": SPDX + "#include <sqlite3.h>\nvoid *start = pthread_create;\n",
    "core/sheet/ruler.c": SPDX + "#include <cairo.h>\n",
    "ui/session.c": SPDX + '#include <gtk/gtk.h>\n#include "core/sheet/ruler.h"\nG_DEFINE_TYPE(A, a, 0)\n',
    "app/main.c": SPDX + '#include "ui/session.h"\n',
}
# What is added to which file, and the rule it breaks.
VIOLATIONS = [
    ("a lower floor includes a higher one", "core/base/number.c", '#include "core/strip/strip.h"\n',
     "no_file_includes_one_to_its_right"),
    ("the same with odd spacing", "core/strip/strip.c", '  #  include   "core/ruling/rules.h"\n',
     "no_file_includes_one_to_its_right"),
    ("the same in angle brackets", "core/strip/strip.c", "#include <core/measure/gap.h>\n",
     "no_file_includes_one_to_its_right"),
    ("core includes the window", "core/sheet/ruler.c", '#include "ui/session.h"\n',
     "no_file_includes_one_to_its_right"),
    ("the window includes a program", "ui/session.c", '#include "app/main.h"\n',
     "no_file_includes_one_to_its_right"),
    ("the program includes a test", "app/main.c", '#include "tests/cli/fake.h"\n',
     "no_file_includes_one_to_its_right"),
    ("an include that hides its floor", "core/strip/strip.c", '#include "rules.h"\n',
     "includes_are_from_the_root"),
    ("core includes GTK", "core/sheet/ruler.c", "#include <gtk/gtk.h>\n", "core_includes_no_gtk"),
    ("strip includes Cairo", "core/strip/strip.c", "#include <cairo.h>\n",
     "only_sheet_ui_and_app_include_cairo_or_pango"),
    ("sheet includes SQLite", "core/sheet/ruler.c", "#include <sqlite3.h>\n",
     "only_case_and_archive_include_sqlite"),
    ("core defines a GObject", "core/strip/strip.c", "G_DEFINE_TYPE(HwStrip, hw_strip, G_TYPE_OBJECT)\n",
     "core_defines_no_gobject"),
    ("core declares a GObject", "core/strip/strip.c", "G_DECLARE_FINAL_TYPE(HwStrip, hw_strip, HW, S, GObject)\n",
     "core_defines_no_gobject"),
    ("core waits on the main loop", "core/case/writer.c", "int f(void) { return g_idle_add(0, 0); }\n",
     "core_touches_no_main_context"),
    ("strip starts a thread", "core/strip/strip.c", "int f(void) { return pthread_create(0, 0, 0, 0); }\n",
     "core_starts_no_thread_outside_case"),
    ("strip writes a number as the locale does", "core/strip/strip.c",
     'char *f(double x) { return g_strdup_printf("%.3f ms", x); }\n', "core_writes_no_number_by_the_locale"),
    ("a floor nobody knows", "core/cellar/wine.c", SPDX, "every_file_stands_on_a_floor"),
    ("a file without a licence", "core/base/free.c", "int x;\n", "every_file_names_its_licence"),
]


def run(files):
    """Exit state and the set of rules found broken."""
    with tempfile.TemporaryDirectory() as root:
        for path, text in files.items():
            os.makedirs(os.path.dirname(os.path.join(root, path)), exist_ok=True)
            with open(os.path.join(root, path), "w", encoding="utf-8") as file:
                file.write(text)
        done = subprocess.run([sys.executable, CHECKER, root], capture_output=True, text=True, check=False)
    broken = {line.split(" - ")[1] for line in done.stdout.splitlines() if line.startswith("not ok")}
    return done.returncode, broken


def main():
    cases = [("a_clean_house_passes", run(CLEAN) == (0, set()))]
    cases.append(("an_empty_folder_fails", run({}) == (1, {"there_are_sources_to_check"})))
    for what, path, text, rule in VIOLATIONS:
        cases.append((what.replace(" ", "_"), run({**CLEAN, path: CLEAN.get(path, "") + text}) == (1, {rule})))
    print(f"1..{len(cases)}")
    for number, (name, passed) in enumerate(cases, 1):
        print(f"{'ok' if passed else 'not ok'} {number} - {name}")
    return 0 if all(passed for _, passed in cases) else 1


if __name__ == "__main__":
    sys.exit(main())
