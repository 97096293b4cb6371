# SPDX-License-Identifier: GPL-3.0-or-later
"""Damaged recordings open: a void with its reason, the rest read. inspect ends with 3, other verbs with 0 and a
problem; a marker in the void is refused."""
import struct
import zlib

from halfwheel import (PERIOD_NS, call, case, cases, chunk, close, done, equal, front, jpeg, main, markers,
                       peak_memory_bytes, png_of_rows, recording, refused, sha256, true)


def gigabyte_of_zeros():
    """A zlib stream (RFC 1950) that unfolds to 2^30 zeros: one packed MiB, closed by a full flush, 1024 times."""
    packer = zlib.compressobj(9, zlib.DEFLATED, -15)
    mebibyte = packer.compress(bytes(1 << 20)) + packer.flush(zlib.Z_FULL_FLUSH)
    # The checksum of n zeros: the sum stays 1, the sum of sums is n.
    checksum = ((1 << 30) % 65521) << 16 | 1
    return b"\x78\xda" + mebibyte * 1024 + b"\x03\x00" + struct.pack(">I", checksum)


def bomb():
    """A head of 64 × 8 and samples that unfold to a gigabyte."""
    head = struct.pack(">IIBBBBB", 64, 8, 8, 0, 0, 0, 0)
    return (b"\x89PNG\r\n\x1a\n" + chunk(b"IHDR", head) + chunk(b"IDAT", gigabyte_of_zeros()) + chunk(b"IEND", b""))


def huge_head(width, height):
    head = struct.pack(">IIBBBBB", width, height, 8, 0, 0, 0, 0)
    return (b"\x89PNG\r\n\x1a\n" + chunk(b"IHDR", head) + chunk(b"IDAT", zlib.compress(bytes(1000))) +
            chunk(b"IEND", b""))


def profile_bomb():
    """A colour profile that unfolds to a gigabyte, in front of honest samples."""
    return png_of_rows(64, 8, 8, 0, [bytes(64)] * 8, extra=chunk(b"iCCP", b"x\0\0" + gigabyte_of_zeros()))


def check_void(folder, place, reason, after=128, length=64):
    """Block 2 of 4 (64 columns each) is lost: inspect says so, rank works around it and refuses to use it."""
    result = call("inspect", place, "--format", "json")
    equal(result.status, 3, f"inspect ({result.err})")
    equal(result.err, "", "standard error")
    seen = result.json
    equal(seen["columns"], 256, "columns, damaged ones included")
    equal(seen["rows"], 8, "rows")
    equal(len(seen["voids"]), 1, f"voids {seen['voids']}")
    void = seen["voids"][0]
    equal(void["after_column"], after, "after_column")
    close(void["duration_ns"], length * PERIOD_NS, 1, "duration of the void")
    true("block-00002" in void["reason"], f"the file in the reason: {void['reason']}")
    true(reason.lower() in void["reason"].lower(), f"“{reason}” in the reason: {void['reason']}")
    true(any("block-00002" in problem for problem in seen["problems"]), f"a problem names it: {seen['problems']}")

    markers(folder, [front("1", 10.5), front("2", 250.5)])
    ranked = done(call("rank", place, "--format", "json")).json
    equal([row["bib"] for row in ranked["list"]], ["1", "2"], "order beside the damage")
    equal(ranked["list"][1]["gap_ns"], 240 * PERIOD_NS, "time across the void, which is never closed up")
    true(ranked["problems"], "rank tells a problem")
    done(call("picture", place, "-o", folder / "whole.png"))

    markers(folder, [front("1", 10.5), front("2", 150.5)])
    refused(call("rank", place, "-o", folder / "list.txt"), 1, "rec.markers.csv", "150.5")
    true(not (folder / "list.txt").exists(), "no list was written")
    return seen


@case
def a_block_that_is_missing(folder):
    place = recording(folder)
    (place / "block-00002.png").unlink()
    seen = check_void(folder, place, "missing")
    equal(seen["digest"], None, "digest while a file is missing")


@cases([
    ("an HTML page", b"<!DOCTYPE html><title>404 not found</title>" * 20, ""),
    ("an empty file", b"", ""),
    ("a picture of another height", png_of_rows(64, 9, 8, 0, [bytes(64)] * 9), "9"),
    ("a picture of another count of columns", png_of_rows(63, 8, 8, 0, [bytes(63)] * 8), "63"),
    ("a head of 2^31 - 1 columns", huge_head(2**31 - 1, 8), ""),
    ("a head of 2^31 - 1 rows", huge_head(64, 2**31 - 1), ""),
    ("a head of 0 columns", huge_head(0, 8), ""),
    ("a CMYK picture", jpeg(64, 8, 4), "CMYK"),
])
def a_block_that_is(folder, data, reason):
    place = recording(folder, sign=False)
    (place / "block-00002.png").write_bytes(data)
    check_void(folder, place, reason)


@case
def a_block_whose_digest_does_not_match(folder):
    place = recording(folder)
    path = place / "block-00002.png"
    path.write_bytes(png_of_rows(64, 8, 8, 0, [bytes(64)] * 8))  # whole in itself: only the digest can tell
    check_void(folder, place, "")


@case
def a_block_with_one_byte_changed(folder):
    place = recording(folder, sign=False)
    path = place / "block-00002.png"
    data = bytearray(path.read_bytes())
    data[len(data) // 2] ^= 0x10
    path.write_bytes(data)
    check_void(folder, place, "")


@case
def a_png_block_cut_at_any_length_is_a_void(folder):
    place = recording(folder, sign=False, rows=32)
    path = place / "block-00002.png"
    noise = [bytes((x * x * 7 + y * y * 13 + x * y * 5 + (x * 1103515245 + y * 12345) // 65536) % 256
                   for x in range(64)) for y in range(32)]
    whole = png_of_rows(64, 32, 8, 0, noise, level=0)
    path.write_bytes(whole)
    true(len(whole) > 1024, f"long enough to cut: {len(whole)}")
    for length in list(range(0, len(whole), 256)) + [len(whole) - 13, len(whole) - 1]:
        path.write_bytes(whole[:length])
        seen = call("inspect", place, "--format", "json")
        equal(seen.status, 3, f"cut at {length} ({seen.err})")
        equal([void["after_column"] for void in seen.json["voids"]], [128], f"cut at {length}")
        equal(seen.json["columns"], 256, f"cut at {length}")


@case
def a_jpeg_block_cut_at_any_length_is_a_void(folder):
    # libjpeg decodes such files “successfully”, with no more than a warning.
    whole = jpeg(1024, 64, 1, lambda x, y, _: (x * 53 + y * 29) % 256)
    true(len(whole) > 1024, f"long enough to cut: {len(whole)}")

    def edit(manifest):
        for block in manifest["blocks"]:
            block["file"] = block["file"].replace("png", "jpg")
    place = recording(folder, edit=edit, sign=False, columns=1024, rows=64)
    for i in range(4):
        (place / f"block-{i:05d}.jpg").write_bytes(whole)
    equal(call("inspect", place).status, 0, "whole")
    for length in list(range(0, len(whole), 256)) + [len(whole) - 2]:
        (place / "block-00001.jpg").write_bytes(whole[:length])
        seen = call("inspect", place, "--format", "json")
        equal(seen.status, 3, f"cut at {length} of {len(whole)} ({seen.err})")
        equal([void["after_column"] for void in seen.json["voids"]], [1024], f"cut at {length}")


@case
def a_last_block_that_is_missing_without_columns_ends_the_strip(folder):
    def edit(manifest):
        for block in manifest["blocks"]:
            del block["columns"], block["last_ns"]
    place = recording(folder, edit=edit)
    (place / "block-00003.png").unlink()
    seen = call("inspect", place, "--format", "json")
    equal(seen.status, 3, seen.err)
    equal(seen.json["columns"], 192, "columns before it")
    true(any("block-00003.png" in problem for problem in seen.json["problems"]), f"{seen.json['problems']}")


@case
def a_missing_block_without_columns_reaches_to_the_next(folder):
    def edit(manifest):
        for block in manifest["blocks"]:
            del block["columns"], block["last_ns"]
    place = recording(folder, edit=edit)
    (place / "block-00002.png").unlink()
    seen = call("inspect", place, "--format", "json")
    equal(seen.status, 3, seen.err)
    equal([(void["after_column"], void["duration_ns"]) for void in seen.json["voids"]],
          [(128, 64 * PERIOD_NS)], "void")
    equal(seen.json["columns"], 256, "columns, so that those behind it keep their numbers")
    equal(seen.json["duration_ns"], 256 * PERIOD_NS, "nothing is closed up")


@cases([("of samples", bomb), ("of a colour profile", profile_bomb)])
def a_decompression_bomb_takes_little_memory(folder, make):
    place = recording(folder, sign=False)
    (place / "block-00002.png").write_bytes(make())
    seen = call("inspect", place, "--format", "json")
    true(seen.status in (0, 3), f"it opens: {seen.status} {seen.err}")
    equal(seen.json["columns"], 256, "columns")
    used = peak_memory_bytes("inspect", place)
    true(used < 400 << 20, f"{used >> 20} MiB at most")


@case
def damage_away_from_the_markers_is_told_as_not_checked(folder):
    place = recording(folder)
    (place / "block-00002.png").write_bytes(png_of_rows(64, 8, 8, 0, [bytes(64)] * 8))
    markers(folder, [front("1", 10.5), front("2", 20.5)])
    ranked = done(call("rank", place, "--format", "json")).json
    equal([row["gap_ns"] for row in ranked["list"]], [0, 10 * PERIOD_NS], "unaffected")
    true(any("3 of 4" in problem and "not checked" in problem for problem in ranked["problems"]),
         f"three blocks were not checked: {ranked['problems']}")


@case
def a_suspected_drop_is_false(folder):
    # Block 1 says that its 64 columns took the time of 66.
    def edit(manifest):
        manifest["blocks"][1]["last_ns"] += 2 * PERIOD_NS
        for block in manifest["blocks"][2:]:
            block["first_ns"] += 2 * PERIOD_NS
            block["last_ns"] += 2 * PERIOD_NS
    seen = call("inspect", recording(folder, edit=edit), "--format", "json")
    equal(seen.status, 3, seen.err)
    true(any("block-00001.png" in problem for problem in seen.json["problems"]), f"{seen.json['problems']}")


@case
def a_pause_between_blocks_is_told_but_not_false(folder):
    def edit(manifest):
        for block in manifest["blocks"][2:]:
            block["first_ns"] += 500 * PERIOD_NS
            block["last_ns"] += 500 * PERIOD_NS
    seen = call("inspect", recording(folder, edit=edit), "--format", "json")
    equal(seen.status, 0, seen.err)
    equal([(void["after_column"], void["duration_ns"]) for void in seen.json["voids"]],
          [(128, 500 * PERIOD_NS)], "voids")
    equal(seen.json["duration_ns"], 756 * PERIOD_NS, "duration, the pause included")
    equal(seen.json["columns"], 256, "columns")


def with_times(folder, stamps):
    """A recording of one block with a stamp for each of its 64 columns."""
    text = "ns\n" + "".join(f"{stamp}\n" for stamp in stamps)

    def edit(manifest):
        block = manifest["blocks"][0]
        del block["first_ns"], block["last_ns"]
        block["times"] = "times.csv"
        block["times_sha256"] = sha256(text.encode())
    place = recording(folder, edit=edit, blocks=1)
    (place / "times.csv").write_text(text)
    return place


@case
def scans_dropped_inside_a_block_are_false(folder):
    stamps = [i * PERIOD_NS + (3 * PERIOD_NS if i >= 40 else 0) for i in range(64)]
    place = with_times(folder, stamps)
    seen = call("inspect", place, "--format", "json")
    equal(seen.status, 3, seen.err)
    equal([(void["after_column"], void["duration_ns"]) for void in seen.json["voids"]], [(40, 3 * PERIOD_NS)],
          "voids")


@case
def a_step_backwards_is_false_and_no_gap_crosses_it(folder):
    stamps = [i * PERIOD_NS - (5 * PERIOD_NS if i >= 40 else 0) for i in range(64)]
    place = with_times(folder, stamps)
    equal(call("inspect", place, "--format", "json").status, 3, "inspect")
    markers(folder, [front("1", 10.5), front("2", 60.5)])
    ranked = done(call("rank", place, "--format", "json")).json
    by_bib = {row["bib"]: row for row in ranked["list"]}
    equal(by_bib["2"]["gap_prev_ns"], None, "gap across the step")
    true(ranked["problems"], "a problem is told")


@case
def a_recording_still_being_written_says_so(folder):
    def edit(manifest):
        manifest["complete"] = False
    seen = call("inspect", recording(folder, edit=edit), "--format", "json").json
    true(any("being written" in problem for problem in seen["problems"]), f"{seen['problems']}")


@case
def colour_claims_are_ignored_and_told_but_not_false(folder):
    place = recording(folder, sign=False)
    rows = [bytes(64)] * 8
    (place / "block-00002.png").write_bytes(
        png_of_rows(64, 8, 8, 0, rows, extra=chunk(b"gAMA", struct.pack(">I", 45455))))
    seen = call("inspect", place, "--format", "json")
    equal(seen.status, 0, seen.err)
    true(any("gAMA" in problem for problem in seen.json["problems"]), f"{seen.json['problems']}")


@case
def quick_decodes_nothing_and_says_so(folder):
    place = recording(folder, sign=False)
    path = place / "block-00002.png"
    path.write_bytes(path.read_bytes()[:-20])
    seen = call("inspect", place, "--quick", "--format", "json")
    equal(seen.status, 0, "the damage is not looked for")
    true(any("--quick" in problem for problem in seen.json["problems"]), f"{seen.json['problems']}")
    equal(call("inspect", place).status, 3, "without --quick it is found")


@case
def quick_still_finds_a_missing_file(folder):
    place = recording(folder)
    (place / "block-00002.png").unlink()
    equal(call("inspect", place, "--quick").status, 3, "exit status")


if __name__ == "__main__":
    main()
