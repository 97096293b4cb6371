# SPDX-License-Identifier: GPL-3.0-or-later
"""What the tests of halfwheel-cli share: calling it, TAP, and making recordings.

Pictures are made here with zlib and struct alone, so that nothing the program is tested on was made by it.
"""
import csv
import hashlib
import json
import os
import resource
import shutil
import struct
import subprocess
import sys
import tempfile
import traceback
import zlib
from pathlib import Path

PROGRAM = os.environ.get("HALFWHEEL_CLI", "halfwheel-cli")
EPOCH = "2027-06-13T16:02:11.000000000+02:00"
PERIOD_NS = 1_000_000  # of the recordings made here: 1000 columns a second


# --- calling -----------------------------------------------------------------------------------------------

class Result:
    def __init__(self, done):
        self.status = done.returncode
        self.out = done.stdout
        self.err = done.stderr.decode("utf-8")

    @property
    def text(self):
        return self.out.decode("utf-8")

    @property
    def json(self):
        return json.loads(self.out)


def call(*arguments, cwd=None):
    """Runs the program to its end; what it printed is bytes, what it said on standard error is text."""
    words = [PROGRAM] + [os.fspath(a) if not isinstance(a, bytes) else a for a in arguments]
    return Result(subprocess.run(words, cwd=cwd, stdin=subprocess.DEVNULL, capture_output=True, check=False))


def peak_memory_bytes(*arguments):
    """The largest resident size of one call."""
    child = os.fork()
    if child == 0:
        silence = os.open(os.devnull, os.O_RDWR)
        for descriptor in range(3):
            os.dup2(silence, descriptor)
        os.execvp(PROGRAM, [PROGRAM] + [os.fspath(a) for a in arguments])
    _, _, usage = os.wait4(child, 0)
    return usage.ru_maxrss * 1024


# --- claims ------------------------------------------------------------------------------------------------

def equal(got, wanted, what=""):
    if got != wanted:
        raise AssertionError(f"{what}: got {got!r}, wanted {wanted!r}")


def true(claim, what):
    if not claim:
        raise AssertionError(what)


def close(got, wanted, within, what=""):
    if got is None or abs(got - wanted) > within:
        raise AssertionError(f"{what}: got {got!r}, wanted {wanted!r} within {within}")


def refused(result, status, *words):
    """Failed with this status, one sentence that holds the words, and nothing on standard output."""
    equal(result.status, status, f"exit status ({result.err.strip()})")
    equal(result.out, b"", "standard output")
    lines = result.err.splitlines()
    equal(len(lines), 1, f"lines on standard error {lines}")
    true(lines[0].startswith("halfwheel-cli: "), lines[0])
    true(lines[0].rstrip().endswith("."), f"a whole sentence: {lines[0]}")
    for word in words:
        true(word.lower() in lines[0].lower(), f"“{word}” in: {lines[0]}")


def done(result):
    equal(result.status, 0, f"exit status ({result.err.strip()})")
    equal(result.err, "", "standard error")
    return result


# --- TAP ---------------------------------------------------------------------------------------------------

CASES = []


def case(function):
    """A test, named after the rule it holds the program to; it gets an empty folder of its own."""
    CASES.append((function.__name__, function, ()))
    return function


def cases(table):
    """One test for each row of a table; the row's first entry ends its name."""
    def add(function):
        for row in table:
            CASES.append((f"{function.__name__}: {row[0]}", function, row[1:]))
        return function
    return add


def main():
    print(f"TAP version 13\n1..{len(CASES)}")
    failures = 0
    for number, (name, function, row) in enumerate(CASES, 1):
        folder = Path(tempfile.mkdtemp(prefix="halfwheel-cli-"))
        try:
            function(folder, *row)
            print(f"ok {number} - {name}", flush=True)
        except Exception:  # whatever a test raises is a failed test
            failures += 1
            print(f"not ok {number} - {name}")
            for line in traceback.format_exc().splitlines():
                print(f"# {line}", flush=True)
        finally:
            shutil.rmtree(folder, ignore_errors=True)
    sys.exit(1 if failures else 0)


# --- pictures ----------------------------------------------------------------------------------------------

def chunk(kind, data):
    return struct.pack(">I", len(data)) + kind + data + struct.pack(">I", zlib.crc32(kind + data))


def png_of_rows(width, height, bits, colour_type, rows, extra=b"", level=6):
    """A PNG of packed rows without filters; `extra` are chunks before the samples."""
    head = struct.pack(">IIBBBBB", width, height, bits, colour_type, 0, 0, 0)
    body = zlib.compress(b"".join(b"\0" + row for row in rows), level)
    return (b"\x89PNG\r\n\x1a\n" + chunk(b"IHDR", head) + extra + chunk(b"IDAT", body) + chunk(b"IEND", b""))


def grey(column, row):
    """The picture of the recordings made here: every column differs from its neighbours."""
    return (column * 37 + row * 11) % 251


def grey_png(first, columns, rows):
    return png_of_rows(columns, rows, 8, 0,
                       [bytes(grey(first + x, y) for x in range(columns)) for y in range(rows)])


def read_png(data):
    """(width, height, bits, colour type, unfiltered packed rows, {chunk: data}) of a PNG that is not
    interlaced: a reader of our own, to look at what the program wrote."""
    equal(data[:8], b"\x89PNG\r\n\x1a\n", "signature")
    at, body, chunks = 8, b"", {}
    while at < len(data):
        size, kind = struct.unpack(">I4s", data[at:at + 8])
        payload = data[at + 8:at + 8 + size]
        equal(struct.unpack(">I", data[at + 8 + size:at + 12 + size])[0], zlib.crc32(kind + payload), "CRC")
        if kind == b"IDAT":
            body += payload
        else:
            chunks[kind] = payload
        at += 12 + size
    width, height, bits, colour_type, _, _, interlace = struct.unpack(">IIBBBBB", chunks[b"IHDR"])
    equal(interlace, 0, "interlacing")
    samples = {0: 1, 2: 3, 3: 1, 4: 2, 6: 4}[colour_type]
    pixel_bytes = max(1, samples * bits // 8)
    row_bytes = (width * samples * bits + 7) // 8
    raw = zlib.decompress(body)
    equal(len(raw), (row_bytes + 1) * height, "bytes of samples")
    rows, above = [], bytearray(row_bytes)
    for y in range(height):
        kind = raw[y * (row_bytes + 1)]
        line = bytearray(raw[y * (row_bytes + 1) + 1:(y + 1) * (row_bytes + 1)])
        for i in range(row_bytes):
            a = line[i - pixel_bytes] if i >= pixel_bytes else 0
            b = above[i]
            c = above[i - pixel_bytes] if i >= pixel_bytes else 0
            if kind == 1:
                line[i] = (line[i] + a) & 255
            elif kind == 2:
                line[i] = (line[i] + b) & 255
            elif kind == 3:
                line[i] = (line[i] + (a + b) // 2) & 255
            elif kind == 4:
                p = a + b - c
                pa, pb, pc = abs(p - a), abs(p - b), abs(p - c)
                line[i] = (line[i] + (a if pa <= pb and pa <= pc else b if pb <= pc else c)) & 255
        rows.append(bytes(line))
        above = line
    return width, height, bits, colour_type, rows, chunks


def jpeg(width, height, components=1, level=lambda x, y, component: 128):
    """A baseline JPEG whose 8 × 8 blocks are flat (ITU-T T.81): only DC coefficients, quantised by 8, so that
    the decoded samples are exactly level(block column, block row, component)."""
    def segment(marker, data):
        return struct.pack(">BBH", 0xFF, marker, len(data) + 2) + data
    head = b"\xff\xd8"
    if components == 4:
        head += segment(0xEE, b"Adobe" + struct.pack(">HHHB", 100, 0, 0, 0))
    head += segment(0xDB, b"\0" + bytes([8] + [1] * 63))
    head += segment(0xC0, struct.pack(">BHHB", 8, height, width, components) +
                    b"".join(bytes([i + 1, 0x11, 0]) for i in range(components)))
    head += segment(0xC4, b"\0" + bytes([0, 0, 0, 9] + [0] * 12) + bytes(range(9)))  # DC sizes 0-8, 4 bits each
    head += segment(0xC4, b"\x10" + bytes([1] + [0] * 15) + b"\0")  # AC: end of block, 1 bit
    head += segment(0xDA, bytes([components]) + b"".join(bytes([i + 1, 0]) for i in range(components)) +
                    bytes([0, 63, 0]))
    bits, before = [], [0] * components
    for y in range((height + 7) // 8):
        for x in range((width + 7) // 8):
            for i in range(components):
                value = level(x, y, i) - 128
                step = value - before[i]
                before[i] = value
                size = abs(step).bit_length()
                bits.append(f"{size:04b}")
                if size:
                    bits.append(f"{step if step > 0 else step + (1 << size) - 1:0{size}b}")
                bits.append("0")
    stream = "".join(bits)
    stream += "1" * (-len(stream) % 8)
    data = int(stream, 2).to_bytes(len(stream) // 8, "big") if stream else b""
    return head + data.replace(b"\xff", b"\xff\0") + b"\xff\xd9"


# --- recordings --------------------------------------------------------------------------------------------

def sha256(data):
    return hashlib.sha256(data).hexdigest()


def manifest_of(blocks=4, columns=64, rows=8, **scan):
    """A manifest as design and README describe it: evenly stamped blocks without a void."""
    return {
        "halfwheel_recording": 1,
        "title": "Made for a test",
        "epoch": EPOCH,
        "camera": "A",
        "travel": "left",
        "later": "right",
        "scan": {"rate_hz": 1000, "exposure_us": 200, "stamp": "middle", "transfer": "srgb", **scan},
        "rows": rows,
        "blocks": [{
            "file": f"block-{i:05d}.png",
            "columns": columns,
            "first_ns": i * columns * PERIOD_NS,
            "last_ns": ((i + 1) * columns - 1) * PERIOD_NS,
        } for i in range(blocks)],
    }


def recording(folder, name="rec", edit=None, text=None, sign=True, blocks=4, columns=64, rows=8, **scan):
    """Makes a recording; `edit` changes the manifest before it is written, `text` replaces it."""
    place = Path(folder) / name
    place.mkdir()
    manifest = manifest_of(blocks, columns, rows, **scan)
    for i, block in enumerate(manifest["blocks"]):
        data = grey_png(i * columns, columns, rows)
        (place / block["file"]).write_bytes(data)
        if sign:
            block["sha256"] = sha256(data)
    if edit is not None:
        edit(manifest)
    whole = text if text is not None else json.dumps(manifest)
    (place / "recording.json").write_bytes(whole if isinstance(whole, bytes) else whole.encode())
    return place


def identity(place):
    """The first 16 hex digits that tie markers to a recording: SHA-256 of its epoch, camera, first block's
    name and first stamp, each ended by LF."""
    manifest = json.loads((place / "recording.json").read_bytes())
    first = manifest["blocks"][0]
    lines = [manifest["epoch"], manifest.get("camera", "A"), first["file"], str(first["first_ns"])]
    return sha256("".join(line + "\n" for line in lines).encode())[:16]


def digest_by_hand(place):
    """SHA-256 of what sha256sum prints for recording.json and the files it names, sorted by name."""
    manifest = json.loads((place / "recording.json").read_bytes())
    names = ["recording.json"]
    for block in manifest["blocks"]:
        names += [block[key] for key in ("file", "times") if isinstance(block.get(key), str)]
    names.sort(key=lambda name: name.encode())
    printed = subprocess.run(["sha256sum", "--"] + names, cwd=place, capture_output=True, check=True).stdout
    return sha256(printed)


def table(path, header, rows):
    with open(path, "w", newline="", encoding="utf-8") as file:
        writer = csv.writer(file)
        writer.writerow(header)
        writer.writerows(rows)
    return Path(path)


def markers(folder, rows, header=("bib", "column", "row", "edge"), name="rec.markers.csv"):
    return table(Path(folder) / name, header, rows)


def front(bib, column):
    return (bib, column, 4, "front")
