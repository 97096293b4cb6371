# SPDX-License-Identifier: GPL-3.0-or-later
"""cut: a bare image into a recording that holds the same samples, and the README's walk from picture to list."""
import json
import os
import struct
import subprocess
import zlib

from halfwheel import (EPOCH, PERIOD_NS, call, case, cases, chunk, done, equal, front, grey, grey_png, jpeg, main,
                       markers, png_of_rows, read_png, refused, sha256, true)

WIDTH, HEIGHT = 2500, 6


def cut(image, folder, *options, rate="1000"):
    return call("cut", image, "--rate", rate, "--epoch", EPOCH, "-o", folder, *options)


def manifest(place):
    return json.loads((place / "recording.json").read_bytes())


def blocks(place):
    """(manifest's entry, parsed PNG) of every block, digests checked by hand."""
    parsed = []
    for block in manifest(place)["blocks"]:
        data = (place / block["file"]).read_bytes()
        equal(block["sha256"], sha256(data), "digest in the manifest")
        parsed.append((block, read_png(data)))
    return parsed


def unpacked(row, bits, n):
    """Samples of less than 8 bits, a number each."""
    whole = int.from_bytes(row, "big") >> (8 * len(row) - n * bits)
    return [(whole >> (bits * (n - 1 - i))) & ((1 << bits) - 1) for i in range(n)]


@case
def a_png_becomes_blocks_with_the_same_columns(folder):
    (folder / "finish.png").write_bytes(grey_png(0, WIDTH, HEIGHT))
    done(cut(folder / "finish.png", folder / "finish", "--travel", "left", "--title", "Club sprint"))
    place = folder / "finish"
    written = manifest(place)
    equal((written["halfwheel_recording"], written["title"], written["epoch"], written["travel"]),
          (1, "Club sprint", EPOCH, "left"), "manifest")
    equal(written["scan"]["rate_hz"], 1000, "rate")
    equal(written["scan"]["stamp"], "middle", "stamp")
    at = 0
    for block, (width, height, bits, kind, rows, _) in blocks(place):
        true(width <= 4096, "width of a block")
        equal((width, height, bits, kind), (block["columns"], HEIGHT, 8, 0), "shape")
        equal(block["first_ns"], at * PERIOD_NS, "stamp of its first column")
        for y in range(HEIGHT):
            equal(rows[y], bytes(grey(at + x, y) for x in range(width)), f"row {y} of {block['file']}")
        at += width
    equal(at, WIDTH, "columns altogether")
    equal(call("inspect", place).status, 0, "inspect")


@case
def later_left_makes_the_images_right_end_the_first_block(folder):
    (folder / "finish.png").write_bytes(grey_png(0, WIDTH, HEIGHT))
    done(cut(folder / "finish.png", folder / "finish", "--later", "left"))
    equal(manifest(folder / "finish")["later"], "left", "later")
    end = WIDTH
    for block, (width, _, _, _, rows, _) in blocks(folder / "finish"):
        equal(rows[0], bytes(grey(end - width + x, 0) for x in range(width)), block["file"])
        end -= width
    equal(end, 0, "columns altogether")


@case
def the_image_and_its_recording_give_the_same_list(folder):
    (folder / "finish.png").write_bytes(grey_png(0, WIDTH, HEIGHT))
    rows = [front("1", 3.25), front("2", 1024), front("3", 1500.75), front("4", 2499.5)]
    for later in ("left", "right"):
        name = f"finish-{later}"
        scan = ("--stamp", "start", "--exposure-us", "123.456", "--later", later)
        done(cut(folder / "finish.png", folder / name, *scan, rate="2997.0029"))
        markers(folder, rows, name=f"{name}.markers.csv")
        whole = done(call("rank", folder / name, "--format", "json")).json["list"]
        markers(folder, rows, name="finish.png.markers.csv")
        bare = done(call("rank", folder / "finish.png", "--rate", "2997.0029", "--epoch", EPOCH, *scan,
                         "--format", "json")).json["list"]
        equal([row["bib"] for row in whole], ["1", "2", "3", "4"], "order")
        for a, b in zip(whole, bare):
            true(abs(a["time_ns"] - b["time_ns"]) <= 1, f"times {a['time_ns']} and {b['time_ns']}")
        # Column c stands at (c - 0.5) periods after the first stamp, plus half the exposure.
        wanted = round((3.25 - 0.5) / 2997.0029 * 1e9 + 123456 / 2)
        true(abs(whole[0]["time_ns"] - wanted) <= 1, f"{whole[0]['time_ns']} for {wanted}")


@cases([
    ("1 bit", 1, 0), ("2 bits", 2, 0), ("4 bits", 4, 0), ("16 bits", 16, 0), ("RGB", 8, 2), ("RGB of 16 bits", 16, 2),
    ("grey and alpha", 8, 4), ("RGBA", 8, 6), ("RGBA of 16 bits", 16, 6),
])
def samples_stay_as_they_are(folder, bits, kind):
    channels = {0: 1, 2: 3, 4: 2, 6: 4}[kind]
    row_bytes = (WIDTH * channels * bits + 7) // 8
    rows = [bytes((x * 31 + y * 7 + x // 256) % 256 for x in range(row_bytes)) for y in range(HEIGHT)]
    (folder / "finish.png").write_bytes(png_of_rows(WIDTH, HEIGHT, bits, kind, rows))
    done(cut(folder / "finish.png", folder / "finish"))
    at = 0
    for _, (width, _, got_bits, got_kind, got, _) in blocks(folder / "finish"):
        equal((got_bits, got_kind), (bits, kind), "depth and colour type")
        for y in range(HEIGHT):
            if bits < 8:
                equal(unpacked(got[y], bits, width), unpacked(rows[y], bits, WIDTH)[at:at + width], f"row {y}")
            else:
                step = channels * bits // 8
                equal(got[y], rows[y][at * step:(at + width) * step], f"row {y}")
        at += width
    equal(at, WIDTH, "columns")


@case
def a_palette_gives_the_same_colours(folder):
    palette = bytes((i * 5) % 256 for i in range(16 * 3))
    rows = [bytes((x * 3 + y) % 256 for x in range(WIDTH // 2)) for y in range(HEIGHT)]
    extra = chunk(b"PLTE", palette) + chunk(b"tRNS", bytes([0, 128, 255]))
    (folder / "finish.png").write_bytes(png_of_rows(WIDTH, HEIGHT, 4, 3, rows, extra=extra))
    done(cut(folder / "finish.png", folder / "finish"))
    at = 0
    for _, (width, _, bits, kind, got, chunks) in blocks(folder / "finish"):
        equal((bits, kind, chunks[b"PLTE"], chunks[b"tRNS"]), (4, 3, palette, bytes([0, 128, 255])), "palette")
        for y in range(HEIGHT):
            equal(unpacked(got[y], 4, width), unpacked(rows[y], 4, WIDTH)[at:at + width], f"row {y}")
        at += width


def interlaced_png(width, height):
    """Adam7, as the PNG specification lays the passes out (section 8.2)."""
    passes = [(0, 0, 8, 8), (4, 0, 8, 8), (0, 4, 4, 8), (2, 0, 4, 4), (0, 2, 2, 4), (1, 0, 2, 2), (0, 1, 1, 2)]
    raw = b""
    for x0, y0, dx, dy in passes:
        for y in range(y0, height, dy):
            raw += b"\0" + bytes(grey(x, y) for x in range(x0, width, dx)) if x0 < width else b""
    head = struct.pack(">IIBBBBB", width, height, 8, 0, 0, 0, 1)
    return b"\x89PNG\r\n\x1a\n" + chunk(b"IHDR", head) + chunk(b"IDAT", zlib.compress(raw)) + chunk(b"IEND", b"")


@case
def an_interlaced_png_is_cut_too(folder):
    (folder / "finish.png").write_bytes(interlaced_png(1500, HEIGHT))
    done(cut(folder / "finish.png", folder / "finish"))
    at = 0
    for _, (width, _, _, _, rows, _) in blocks(folder / "finish"):
        for y in range(HEIGHT):
            equal(rows[y], bytes(grey(at + x, y) for x in range(width)), f"row {y}")
        at += width
    equal(at, 1500, "columns")


@case
def a_jpeg_is_kept_byte_for_byte(folder):
    data = jpeg(1600, 16, 3, lambda x, y, i: (x * 13 + y * 7 + i * 40) % 256)
    (folder / "finish.jpg").write_bytes(data)
    done(cut(folder / "finish.jpg", folder / "finish"))
    entries = manifest(folder / "finish")["blocks"]
    equal([(block["file"], block["columns"]) for block in entries], [("block-00000.jpg", 1600)], "blocks")
    equal((folder / "finish" / "block-00000.jpg").read_bytes(), data, "bytes")
    equal(entries[0]["sha256"], sha256(data), "digest")


@case
def a_jpeg_too_large_for_a_block_becomes_png_blocks(folder):
    # 16,384 × 8,200 pixels are just over 2^27. Flat blocks of 8 × 8 have known samples.
    width, height = 16384, 8200
    data = jpeg(width, height, 1, lambda x, y, _: (x * 3 + (y // 64)) % 256)
    (folder / "finish.jpg").write_bytes(data)
    done(cut(folder / "finish.jpg", folder / "finish"))
    at = 0
    for block in manifest(folder / "finish")["blocks"]:
        written = (folder / "finish" / block["file"]).read_bytes()
        equal(block["sha256"], sha256(written), "digest")
        equal(struct.unpack(">II", written[16:24]), (block["columns"], height), "shape")
        true(block["columns"] * height <= 1 << 27, "within the limit of a block")
        at += block["columns"]
    equal(at, width, "columns")
    first = manifest(folder / "finish")["blocks"][1]
    narrow = first["columns"]
    # Of the second block the first rows, unpacked by hand (filter by filter).
    _, _, _, _, rows, _ = read_first_rows((folder / "finish" / first["file"]).read_bytes(), 70)
    for y in (0, 1, 63, 64, 69):
        equal(rows[y], bytes((((narrow + x) // 8) * 3 + (y // 8) // 64) % 256 for x in range(narrow)), f"row {y}")


def read_first_rows(data, n):
    """A PNG cut after n rows and closed again, so that the rest need not be unfiltered."""
    width, height, bits, kind = struct.unpack(">IIBB", data[16:26])
    body, at = b"", 8
    while at < len(data):
        size, name = struct.unpack(">I4s", data[at:at + 8])
        if name == b"IDAT":
            body += data[at + 8:at + 8 + size]
        at += 12 + size
    raw = zlib.decompressobj().decompress(body, n * (width + 1))
    true(height >= n and bits == 8 and kind == 0, "shape")
    head = struct.pack(">IIBBBBB", width, n, 8, 0, 0, 0, 0)
    return read_png(b"\x89PNG\r\n\x1a\n" + chunk(b"IHDR", head) + chunk(b"IDAT", zlib.compress(raw, 1)) +
                    chunk(b"IEND", b""))


@case
def an_image_wider_than_a_million_columns_is_cut(folder):
    width = 1_100_000  # beyond what libpng reads unless told, and more blocks than are written at a time
    (folder / "finish.png").write_bytes(grey_png(0, width, 1))
    done(cut(folder / "finish.png", folder / "finish", rate="20000"))
    seen = done(call("inspect", folder / "finish", "--format", "json")).json
    equal(seen["columns"], width, "columns")
    equal(seen["duration_ns"], width * 50_000, "duration")
    equal(seen["voids"], [], "voids")
    at = 0
    for block, (n, _, _, _, rows, _) in blocks(folder / "finish"):
        equal(rows[0], bytes(grey(at + x, 0) for x in range(n)), block["file"])
        at += n


# --- refused, and nothing at the folder's place ------------------------------------------------------------

@cases([
    ("an HTML page", b"<!DOCTYPE html><title>404</title>"),
    ("nothing", b""),
    ("a PNG cut short", grey_png(0, WIDTH, HEIGHT)[:-400]),
    ("a JPEG cut short", jpeg(1600, 64, 1, lambda x, y, _: (x * 53 + y * 29) % 256)[:-900]),
    ("a CMYK JPEG", jpeg(64, 8, 4)),
    ("a PNG with a changed byte", grey_png(0, WIDTH, HEIGHT)[:200] + b"\x55" + grey_png(0, WIDTH, HEIGHT)[201:]),
])
def an_image_that_is(folder, data):
    (folder / "finish.png").write_bytes(data)
    refused(cut(folder / "finish.png", folder / "finish"), 1, "finish.png")
    equal(sorted(os.listdir(folder)), ["finish.png"], "files afterwards")


@case
def a_recording_that_is_there_is_kept_without_force(folder):
    (folder / "finish.png").write_bytes(grey_png(0, WIDTH, HEIGHT))
    done(cut(folder / "finish.png", folder / "finish"))
    before = (folder / "finish" / "recording.json").read_bytes()
    refused(cut(folder / "finish.png", folder / "finish", "--title", "Other"), 1, "finish", "--force")
    equal((folder / "finish" / "recording.json").read_bytes(), before, "kept")
    done(cut(folder / "finish.png", folder / "finish", "--title", "Other", "--force"))
    equal(manifest(folder / "finish")["title"], "Other", "replaced")
    equal(sorted(os.listdir(folder)), ["finish", "finish.png"], "files afterwards")


@case
def a_folder_that_is_no_recording_is_never_replaced(folder):
    (folder / "finish.png").write_bytes(grey_png(0, WIDTH, HEIGHT))
    (folder / "home").mkdir()
    (folder / "home" / "letter.txt").write_text("mine")
    refused(cut(folder / "finish.png", folder / "home", "--force"), 1, "home", "recording.json")
    equal((folder / "home" / "letter.txt").read_text(), "mine", "kept")


@cases([
    ("no rate", ["--epoch", EPOCH], "--rate"),
    ("no epoch", ["--rate", "1000"], "--epoch"),
    ("rate 0", ["--rate", "0", "--epoch", EPOCH], "--rate"),
    ("a negative rate", ["--rate", "-5", "--epoch", EPOCH], "--rate"),
    ("a rate of 10^12", ["--rate", "1000000000000", "--epoch", EPOCH], "--rate"),
    ("ten decimals", ["--rate", "1000.0000000001", "--epoch", EPOCH], "--rate"),
    ("an infinite rate", ["--rate", "inf", "--epoch", EPOCH], "--rate"),
    ("epoch yesterday", ["--rate", "1000", "--epoch", "yesterday"], "--epoch"),
    ("epoch without offset", ["--rate", "1000", "--epoch", "2027-06-13T16:02:11"], "offset"),
    ("start stamps without an exposure", ["--rate", "1000", "--epoch", EPOCH, "--stamp", "start"], "--exposure-us"),
    ("an unknown side", ["--rate", "1000", "--epoch", EPOCH, "--later", "up"], "--later"),
    ("an unknown transfer", ["--rate", "1000", "--epoch", EPOCH, "--transfer", "log"], "--transfer"),
])
def a_call_with(folder, options, word):
    (folder / "finish.png").write_bytes(grey_png(0, 64, 4))
    refused(call("cut", folder / "finish.png", "-o", folder / "finish", *options), 2, word)
    refused(call("inspect", folder / "finish.png", *options), 2, word)
    equal(sorted(os.listdir(folder)), ["finish.png"], "files afterwards")


@case
def cut_needs_a_folder_to_make(folder):
    (folder / "finish.png").write_bytes(grey_png(0, 64, 4))
    for options in ([], ["-o", "-"], ["-o", ""]):
        refused(call("cut", folder / "finish.png", "--rate", "1000", "--epoch", EPOCH, *options), 2, "-o")


@case
def a_recording_takes_no_options_of_a_bare_image(folder):
    (folder / "finish.png").write_bytes(grey_png(0, 64, 4))
    done(cut(folder / "finish.png", folder / "finish"))
    refused(call("inspect", folder / "finish", "--rate", "2000"), 2, "--rate", "finish")


@case
def from_picture_to_list_as_the_readme_walks(folder):
    # Column by column grey, with three dark riders in it.
    riders = {"12": 1043, "47": 1051, "3": 1102}
    rows = [bytes(20 if x in riders.values() else 200 for x in range(WIDTH)) for _ in range(HEIGHT)]
    (folder / "finish.png").write_bytes(png_of_rows(WIDTH, HEIGHT, 8, 0, rows))
    done(call("cut", "finish.png", "--rate", "2000", "--epoch", "2027-06-13T16:02:11+02:00", "--travel", "left",
              "-o", "finish", cwd=folder))
    done(call("inspect", "finish", cwd=folder))
    (folder / "finish.markers.csv").write_text("bib,column\n12,1043.5\n47,1051.0\n3,1102.5\n")
    listed = done(call("rank", "finish", "--rules", "road-1s", "--start", "2027-06-13T14:50:00+02:00", cwd=folder)).text
    lines = [line.split() for line in listed.splitlines()]
    equal([line[:2] for line in lines if len(line) > 1 and line[0] in "123" and line[1] in riders],
          [["1", "12"], ["2", "47"], ["3", "3"]], listed)
    # Column 1043.5 is the middle of the exposure 1043 / 2000 s after the epoch; 1:12:11 since the start.
    true("1:12:11" in listed, listed)
    true("3.750" in listed, f"47 is 7.5 columns of 0.5 ms behind 12: {listed}")
    done(call("picture", "finish", "--rules", "road-1s", "-o", "finish.pdf", cwd=folder))
    printed = subprocess.run(["pdftotext", "-layout", folder / "finish.pdf", "-"], capture_output=True,
                             check=True).stdout.decode()
    for word in ("12", "47", "3", "provisional"):
        true(word in printed, f"“{word}” on the picture")


if __name__ == "__main__":
    main()
