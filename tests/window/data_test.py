# SPDX-License-Identifier: GPL-3.0-or-later
"""What the desktop reads of the program, and that the keys it lists are the keys it has."""

import os
import re
import subprocess
import sys
import tempfile
import xml.etree.ElementTree as tree

sys.path.insert(0, os.path.dirname(__file__))
from tap import check, check_equal, run  # noqa: E402

ROOT = os.path.normpath(os.path.join(os.path.dirname(os.path.abspath(__file__)), "..", ".."))
DATA = os.path.join(ROOT, "app", "data")
UI = os.path.join(ROOT, "ui")
APP_ID = "org.halfwheel.Halfwheel"


def read(*parts):
    with open(os.path.join(*parts), encoding="utf-8") as text:
        return text.read()


def passes(*command):
    answer = subprocess.run(command, capture_output=True, text=True, check=False)
    check(answer.returncode == 0, " ".join(command[:2]) + ": " + answer.stdout + answer.stderr)


def the_desktop_file_is_valid():
    passes("desktop-file-validate", os.path.join(DATA, APP_ID + ".desktop"))


def the_description_for_software_catalogues_is_valid():
    passes("appstreamcli", "validate", "--no-net", os.path.join(DATA, APP_ID + ".metainfo.xml"))


def the_file_type_is_the_one_the_desktop_file_opens():
    types = tree.parse(os.path.join(DATA, APP_ID + ".mime.xml")).getroot()
    names = [item.get("type") for item in types]
    listed = re.search(r"^MimeType=(.*);$", read(DATA, APP_ID + ".desktop"), re.M).group(1).split(";")
    check_equal(listed, names, "file types")


def every_key_in_the_shortcuts_window_is_bound():
    overlay = tree.parse(os.path.join(UI, "resources", "gtk", "help-overlay.ui")).getroot()
    listed = [item.text for item in overlay.iter("property") if item.get("name") == "accelerator"]
    accels = {re.sub("<control>", "<ctrl>", key.lower())
              for key in re.findall(r'"((?:<Control>|<Shift>)+\w+|F\d+)"', read(UI, "application.c"))}
    bare = set(re.findall(r"GDK_KEY_(\w+)", read(UI, "picture_view_input.c")))
    missing = []
    for key in " ".join(listed).split():
        plain = re.sub(r"<\w+>", "", key)
        # F10 is the toolkit's own for the primary menu; digits are typed, not bound.
        if key in ("F10", "0...9") or key.lower() in accels or plain in bare:
            continue
        missing.append(key)
    check(len(listed) > 20, "the window lists keys at all")
    check_equal(missing, [], "keys listed but not bound")


def every_bound_key_is_in_the_shortcuts_window():
    overlay = read(UI, "resources", "gtk", "help-overlay.ui").lower()
    accels = re.findall(r'"((?:<Control>|<Shift>)+\w+|F\d+)"', read(UI, "application.c"))
    # Other ways to type the same sign.
    same = {"<control>equal", "<control>kp_add", "<control>kp_subtract", "<control>kp_0", "<control>kp_1"}
    missing = [key for key in accels if key.lower() not in same and
               key.lower().replace("<control>", "&lt;ctrl&gt;").replace("<shift>", "&lt;shift&gt;") not in overlay]
    check_equal(missing, [], "keys bound but not listed")


def every_text_has_its_french():
    with open(os.path.join(ROOT, "app", "po", "POTFILES"), encoding="utf-8") as lines:
        sources = [line.strip() for line in lines if line.strip() and not line.startswith("#")]
    marked = [name for name in os.listdir(UI) if name.endswith(".c") and re.search(r"\b(?:_|N_|ngettext)\(\"", read(UI, name))]
    check_equal(sorted("ui/" + name for name in marked), sorted(name for name in sources if name.endswith(".c")),
                "sources with texts, and those listed in POTFILES")
    with tempfile.TemporaryDirectory() as folder:
        texts = os.path.join(folder, "all.pot")
        subprocess.run(["xgettext", "--from-code=UTF-8", "-k_", "-kN_", "-kngettext:1,2", "-o", texts, *sources],
                       cwd=ROOT, check=True, capture_output=True)
        passes("msgcmp", os.path.join(ROOT, "app", "po", "fr.po"), texts)
        passes("msgfmt", "-c", "-o", os.path.join(folder, "fr.mo"), os.path.join(ROOT, "app", "po", "fr.po"))


run([
    the_desktop_file_is_valid,
    the_description_for_software_catalogues_is_valid,
    the_file_type_is_the_one_the_desktop_file_opens,
    every_key_in_the_shortcuts_window_is_bound,
    every_bound_key_is_in_the_shortcuts_window,
    every_text_has_its_french,
])
