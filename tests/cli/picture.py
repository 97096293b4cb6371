# SPDX-License-Identifier: GPL-3.0-or-later
"""picture: what must stand on it, and how it is called."""
import os
import struct
import subprocess

from halfwheel import (call, case, cases, digest_by_hand, done, equal, front, main, markers, read_png, recording,
                       refused, table, true)


def finish(folder, **how):
    place = recording(folder, blocks=12, rows=80, **how)
    markers(folder, [front("17", 100.5), front("42", 130.25), front("5", 600)])
    table(folder / "rec.startlist.csv", ["bib", "name"], [["17", "Ada Grell"], ["42", "Bo Lund"], ["5", "Ci Marr"]])
    return place


def text_of(pdf):
    return subprocess.run(["pdftotext", "-layout", pdf, "-"], capture_output=True, check=True).stdout.decode()


def size_of(png):
    return struct.unpack(">II", png.read_bytes()[16:24])


@case
def a_pdf_says_who_by_how_much_and_on_what_it_rests(folder):
    place = finish(folder)
    done(call("picture", place, "--rules", "road-1s", "-o", folder / "finish.pdf"))
    text = text_of(folder / "finish.pdf")
    flat = "".join(text.split())
    for word in ("17", "42", "5", "UCI1.2.100", "01.02.2026", "provisional", digest_by_hand(place)):
        true(word in flat, f"“{word}” in {text}")
    true("±" in text, "a measured gap has its ±")


@case
def a_png_is_written_whole(folder):
    place = finish(folder)
    done(call("picture", place, "-o", folder / "finish.png"))
    width, height, _, kind, _, _ = read_png((folder / "finish.png").read_bytes())
    true(width >= 500 and height > 80, f"{width} × {height}")
    equal(kind, 2, "RGB")


@case
def the_whole_recording_is_as_wide_as_its_columns(folder):
    place = finish(folder)
    done(call("picture", place, "--all", "-o", folder / "all.png"))
    true(size_of(folder / "all.png")[0] >= 12 * 64, "a pixel a column")


@case
def a_stretch_is_named_by_instants_or_durations(folder):
    place = finish(folder)
    done(call("picture", place, "--from", "0.050", "--to", "0.200", "-o", folder / "a.png"))
    done(call("picture", place, "--from", "2027-06-13T16:02:11.05+02:00", "--to", "2027-06-13T14:02:11.2Z", "-o",
              folder / "b.png"))
    equal((folder / "a.png").read_bytes(), (folder / "b.png").read_bytes(), "the same stretch")


@case
def a_pair_stands_side_by_side(folder):
    place = finish(folder)
    done(call("picture", place, "--pair", "17,42", "--rules", "road-1s", "-o", folder / "pair.pdf"))
    text = text_of(folder / "pair.pdf")
    for word in ("17", "42", "±"):
        true(word in text, f"“{word}” in {text}")
    done(call("picture", place, "--pair", "17,42", "-o", folder / "pair.png"))


@case
def without_markers_there_is_a_picture_all_the_same(folder):
    done(call("picture", recording(folder), "-o", folder / "bare.png"))
    true((folder / "bare.png").stat().st_size > 0, "written")


@case
def an_incomplete_recording_says_so_on_the_picture(folder):
    place = finish(folder)
    (place / "block-00004.png").unlink()
    done(call("picture", place, "--all", "-o", folder / "finish.pdf"))
    text = text_of(folder / "finish.pdf")
    true("incomplete" in text.lower(), text)
    true("missing" in text.lower(), text)


@case
def the_same_input_gives_the_same_bytes(folder):
    place = finish(folder)
    for name in ("finish.png", "finish.pdf"):
        done(call("picture", place, "-o", folder / name))
        done(call("picture", place, "-o", folder / f"again-{name}"))
        equal((folder / name).read_bytes(), (folder / f"again-{name}").read_bytes(), name)


@cases([
    ("a rider who has no marker", ["--pair", "17,99"], 1, "99"),
    ("a stretch off the strip", ["--from", "10:00", "--to", "11:00"], 1, ""),
    ("one rider only", ["--pair", "17"], 2, "--pair"),
    ("a rider twice", ["--pair", "17,17"], 2, "--pair"),
    ("three riders", ["--pair", "17,42,5"], 2, "--pair"),
    ("a beginning without an end", ["--from", "1"], 2, "--to"),
    ("an end before its beginning", ["--from", "0.2", "--to", "0.1"], 2, "--from"),
    ("a moment that is none", ["--from", "noon", "--to", "1"], 2, "noon"),
    ("a pair of all", ["--pair", "17,42", "--all"], 2, "--pair"),
])
def a_picture_is_refused_of(folder, options, status, word):
    place = finish(folder)
    refused(call("picture", place, *options, "-o", folder / "out.png"), status, word)
    true(not (folder / "out.png").exists(), "nothing was written")


@case
def a_picture_needs_a_name_that_tells_its_kind(folder):
    place = finish(folder)
    refused(call("picture", place), 2, "-o")
    refused(call("picture", place, "-o", folder / "out.tiff"), 2, ".png")
    equal(sorted(os.listdir(folder)), ["rec", "rec.markers.csv", "rec.startlist.csv"], "files afterwards")


if __name__ == "__main__":
    main()
