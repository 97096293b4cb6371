# SPDX-License-Identifier: GPL-3.0-or-later
"""make-case and export: a case gives the list that rank gives of the files, and says what changed since."""
import fcntl
import hashlib
import json
import os
import resource
import shutil
import signal
import sqlite3
import subprocess
from pathlib import Path

from halfwheel import (PERIOD_NS, PROGRAM, call, case, cases, done, equal, front, grey_png, identity, main,
                       markers, recording, refused, sha256, table, true)

FOLDERS = [Path(path) for path in os.environ["HALFWHEEL_SAMPLES"].split(os.pathsep)]
START = "2027-06-13T14:50:00+02:00"


def sample(name):
    for folder in FOLDERS:
        if (folder / name / "recording.json").exists():
            return folder / name
    raise AssertionError(f"{name} is in none of {FOLDERS}")


def make(folder, place, *options, name="finish.halfwheel"):
    made = done(call("make-case", place, *options, "-o", folder / name))
    equal(made.out, b"", "standard output")
    return folder / name


def exported(held, form="json"):
    return done(call("export", held, "--format", form)).out


def ranked(place, *options, form="json"):
    return done(call("rank", place, "--format", form, *options)).out


def problems(held):
    return json.loads(exported(held))["problems"]


def everything(folder):
    """Names and bytes of all that lies below a folder."""
    return {path: path.read_bytes() for path in sorted(Path(folder).rglob("*")) if path.is_file()}


def finish(folder, **how):
    """A recording with two riders marked on its second block and one on its third, as the test module makes them."""
    place = recording(folder, **how)
    markers(folder, [front("12", 80.5), front("7", 100.25), front("3", 150.125)])
    return place


# --- the same list -----------------------------------------------------------------------------------------

@cases([
    ("a bunch sprint", "aldermoor-sprint", ["--rules", "road-1s"]),
    ("a bunch sprint without rules", "aldermoor-sprint", []),
    ("a bunch sprint from another start", "aldermoor-sprint", ["--rules", "road-3s", "--start", START]),
    ("a duel", "duel", ["--rules", "track-sprint"]),
    ("a damaged recording", "damaged", ["--rules", "road-1s"]),
    ("a time trial", "time-trial", ["--rules", "itt-100th"]),
    ("one lap of several", "laps", ["--passage", "lap 1"]),
])
def a_case_gives_the_list_of_rank(folder, name, options):
    place = sample(name)
    held = make(folder, place, *options)
    crossed = [row for row in json.loads(exported(held))["list"] if row["time_ns"] is not None]
    true(len(crossed) >= 2, "riders that crossed")
    for form in ("json", "csv"):
        equal(exported(held, form), ranked(place, *options, form=form), form)


@case
def a_case_needs_the_files_no_more(folder):
    place = finish(folder)
    (folder / "rec.startlist.csv").write_bytes("Dossard;Nom\n12;Émile Grell\n7;Bo Lund\n3;\n8;Ada\n".encode("cp1252"))
    (folder / "rec.race.json").write_text(json.dumps({
        "halfwheel_race": 1, "starts": [{"category": "*", "instant": START}],
        "status": [{"bib": "8", "status": "DNF"}]}))
    (folder / "rec.calibration.json").write_text(json.dumps({
        "halfwheel_calibration": 1, "camera": "A", "recording": "", "nominal_rate_hz": 1000, "exposure_us": 200,
        "rate_hz": 1000.01, "u_rate_hz": 0.002}))
    rules = done(call("rules", "road-1s", "--format", "json")).json
    rules["id"] = "ours"
    (folder / "ours.json").write_text(json.dumps(rules))
    options = ["--rules", folder / "ours.json", "--map", "bib=Dossard,name=Nom"]
    listed = ranked(place, *options)
    true("Émile" in json.dumps(json.loads(listed), ensure_ascii=False), "the start list is in it")
    true("calibration" in listed.decode(), "the calibration is in it")
    held = make(folder, place, *options)
    for path in folder.iterdir():
        if path.is_file() and path != held:
            path.unlink()
    equal(exported(held), listed, "the list from the case alone")


@case
def markers_that_name_no_recording_are_still_told(folder):
    place = finish(folder)
    held = make(folder, place)
    true(any("do not say which recording" in problem for problem in problems(held)), "told")
    markers(folder, [("12", 80.5, identity(place))], header=("bib", "column", "recording"))
    named = make(folder, place, name="named.halfwheel")
    true(not any("do not say which recording" in problem for problem in problems(named)), "not told")


@case
def text_tells_revision_and_digest_of_the_journal(folder):
    held = make(folder, finish(folder))
    with sqlite3.connect(f"file:{held}?mode=ro", uri=True) as file:
        rows = file.execute("SELECT seq, line, digest FROM journal ORDER BY seq").fetchall()
    equal(len(rows), 1, "one act")
    # The digest by Python's own: 64 zeros, LF, the line.
    digest = hashlib.sha256(("0" * 64 + "\n" + rows[0][1]).encode()).hexdigest()
    text = done(call("export", held)).text
    true(digest in text, digest)
    true("Revision     1\n" in text, text)
    entry = json.loads(rows[0][1])
    equal(entry["act"], "make_case", "act")
    equal(entry["kept"], True, "undo passes it by")


# --- the recording -----------------------------------------------------------------------------------------

@case
def a_recording_moved_with_its_case_is_found_beside_it(folder):
    place = finish(folder)
    held = make(folder, place)
    before = exported(held)
    (folder / "archive").mkdir()
    shutil.move(place, folder / "archive" / "rec")
    shutil.move(held, folder / "archive" / "finish.halfwheel")
    equal(exported(folder / "archive" / "finish.halfwheel"), before, "the list")
    shutil.move(folder / "archive" / "finish.halfwheel", held)
    refused(call("export", held), 1, "finish.halfwheel", str(place), "beside")


@case
def another_recording_in_its_place_is_refused(folder):
    place = finish(folder)
    held = make(folder, place)
    whole = json.loads((place / "recording.json").read_text())
    whole["camera"] = "B"
    (place / "recording.json").write_text(json.dumps(whole))
    refused(call("export", held), 1, str(place), identity(place))


@case
def another_recording_in_its_place_does_not_hide_the_right_one_beside_the_case(folder):
    place = finish(folder)
    held = make(folder, place)
    before = exported(held)
    (folder / "archive").mkdir()
    shutil.copytree(place, folder / "archive" / "rec")
    shutil.copy(held, folder / "archive" / "finish.halfwheel")
    whole = json.loads((place / "recording.json").read_text())
    whole["camera"] = "B"
    (place / "recording.json").write_text(json.dumps(whole))
    equal(exported(folder / "archive" / "finish.halfwheel"), before, "the list")


@case
def a_changed_block_is_named_with_the_markers_on_it(folder):
    place = finish(folder, sign=False)
    held = make(folder, place)
    (place / "block-00001.png").write_bytes(grey_png(5, 64, 8))
    changed = [problem for problem in problems(held) if "block-00001.png" in problem]
    equal(len(changed), 1, "problems")
    true("was changed" in changed[0] and "12, 7)" in changed[0], changed[0])


@case
def a_changed_block_that_cannot_be_read_is_no_list(folder):
    place = finish(folder)  # its manifest holds the digests, so that other bytes are damage
    held = make(folder, place)
    (place / "block-00001.png").write_bytes(grey_png(5, 64, 8))
    refused(call("export", held, "--format", "json"), 1, "block-00001.png", "12")


@case
def a_lost_block_without_markers_is_named_and_the_list_stands(folder):
    place = finish(folder, sign=False)
    held = make(folder, place)
    before = json.loads(exported(held))
    (place / "block-00003.png").unlink()
    after = json.loads(exported(held))
    equal(after["list"], before["list"], "the list")
    true(any("block-00003.png is missing" in problem for problem in after["problems"]), f"{after['problems']}")


@case
def changed_times_are_named_with_the_markers_on_them(folder):
    def with_times(manifest):
        for i, block in enumerate(manifest["blocks"]):
            del block["last_ns"], block["first_ns"]
            block["times"] = f"times-{i}.csv"
    place = recording(folder, edit=with_times)
    for i in range(4):
        rows = [[(i * 64 + x) * PERIOD_NS] for x in range(64)]
        table(place / f"times-{i}.csv", ["ns"], rows)
    manifest = json.loads((place / "recording.json").read_text())
    for i, block in enumerate(manifest["blocks"]):
        block["times_sha256"] = sha256((place / f"times-{i}.csv").read_bytes())
    del manifest["blocks"][1]["times_sha256"]  # of this one only the case will know
    (place / "recording.json").write_text(json.dumps(manifest))
    markers(folder, [front("12", 80.5)])
    held = make(folder, place)
    table(place / "times-1.csv", ["ns"], [[(64 + x) * PERIOD_NS + 1000] for x in range(64)])
    named = [problem for problem in problems(held) if "times-1.csv was changed" in problem]
    equal(len(named), 1, "problems")
    true("block-00001.png" in named[0] and "12)" in named[0], named[0])


@case
def a_changed_manifest_is_named_and_a_moved_clock_refused(folder):
    place = finish(folder)
    held = make(folder, place)
    manifest = json.loads((place / "recording.json").read_text())
    manifest["title"] = "Called otherwise"
    (place / "recording.json").write_text(json.dumps(manifest))
    true(any("recording.json was changed" in problem for problem in problems(held)), "named")
    for block in manifest["blocks"][1:]:  # 2 ms later: two columns' time
        block["first_ns"] += 2 * PERIOD_NS
        block["last_ns"] += 2 * PERIOD_NS
    (place / "recording.json").write_text(json.dumps(manifest))
    refused(call("export", held), 1, "12", "apart")


# --- what is refused ---------------------------------------------------------------------------------------

def foreign_database(path):
    with sqlite3.connect(path) as file:
        file.execute("CREATE TABLE mine (a)")


@cases([
    ("a letter", lambda path: path.write_text("Dear commissaires, this is a letter and no case at all.")),
    ("another program's database", foreign_database),
    ("nothing", lambda path: None),
    ("a folder", lambda path: path.mkdir()),
    ("an empty file", lambda path: path.write_bytes(b"")),
])
def what_is_no_case_is_not_exported(folder, prepare):
    prepare(folder / "mine.halfwheel")
    before = everything(folder)
    refused(call("export", folder / "mine.halfwheel", "-o", folder / "list.txt"), 1, "mine.halfwheel")
    equal(everything(folder), before, "files")


@cases([
    ("a column in the facts", "UPDATE fact SET value = replace(value, '16.5', '46.5') WHERE kind = 'marker'"),
    ("a column in the journal", "UPDATE journal SET line = replace(line, '16.5', '46.5')"),
    ("a bib left out", "DELETE FROM fact WHERE kind = 'marker' AND key = '1'"),
])
def a_case_altered_by_other_hands_is_no_list(folder, statement):
    held = make(folder, finish(folder))
    before = held.read_bytes()
    with sqlite3.connect(held) as file:
        file.execute(statement)
    true(held.read_bytes() != before, "altered")
    refused(call("export", held), 1, "finish.halfwheel")


@case
def an_existing_file_is_replaced_only_by_force_and_only_if_it_is_a_case(folder):
    place = finish(folder)
    held = make(folder, place)
    before = everything(folder)
    refused(call("make-case", place, "--rules", "road-1s", "-o", held), 1, "finish.halfwheel", "--force")
    refused(call("make-case", place, "-o", folder / "rec.markers.csv", "--force"), 1, "rec.markers.csv")
    os.symlink("finish.halfwheel", folder / "link.halfwheel")
    refused(call("make-case", place, "-o", folder / "link.halfwheel", "--force"), 1, "link.halfwheel")
    equal(sorted(os.listdir(folder)), ["finish.halfwheel", "link.halfwheel", "rec", "rec.markers.csv"], "names")
    (folder / "link.halfwheel").unlink()
    equal(everything(folder), before, "files")
    done(call("make-case", place, "--rules", "road-1s", "-o", held, "--force"))
    equal(json.loads(exported(held))["rules"]["id"], "road-1s", "the new one")
    equal(sorted(os.listdir(folder)), ["finish.halfwheel", "rec", "rec.markers.csv"], "names")


@case
def a_case_that_a_desk_is_writing_is_read_but_not_replaced(folder):
    place = finish(folder)
    held = make(folder, place)
    before = exported(held)
    with open(f"{held}.lock", "w", encoding="ascii") as lock:
        fcntl.flock(lock, fcntl.LOCK_EX)
        equal(exported(held), before, "the list")
        refused(call("make-case", place, "-o", held, "--force"), 1, "finish.halfwheel", "another")
        equal(exported(held), before, "the list afterwards")


@case
def a_case_never_lies_in_the_evidence_and_a_list_never_on_the_case(folder):
    place = finish(folder)
    held = make(folder, place)
    before = everything(folder)
    refused(call("make-case", place, "-o", place / "finish.halfwheel"), 1, "inside")
    for output in (place / "list.txt", place / "recording.json"):
        refused(call("export", held, "-o", output, "--force"), 1, "inside")
    refused(call("export", held, "-o", held, "--force"), 1, "finish.halfwheel")
    equal(everything(folder), before, "files")


@case
def an_existing_list_is_refused(folder):
    held = make(folder, finish(folder))
    (folder / "list.csv").write_text("mine")
    refused(call("export", held, "--format", "csv", "-o", folder / "list.csv"), 1, "list.csv", "--force")
    equal((folder / "list.csv").read_text(), "mine", "the file")
    done(call("export", held, "--format", "csv", "-o", folder / "list.csv", "--force"))
    equal((folder / "list.csv").read_bytes(), exported(held, "csv"), "the list")


@cases([
    ("make-case without -o", ["make-case", "rec"], "-o"),
    ("make-case to standard output", ["make-case", "rec", "-o", "-"], "-o"),
    ("make-case of a bare image", ["make-case", "rec/block-00000.png", "-o", "a.halfwheel"], "cut"),
    ("make-case without markers", ["make-case", "bare", "-o", "a.halfwheel"], "markers"),
    ("make-case of nothing", ["make-case", "-o", "a.halfwheel"], "RECORDING"),
    ("export of nothing", ["export"], "CASE"),
    ("export as xml", ["export", "a.halfwheel", "--format", "xml"], "xml"),
    ("export with markers", ["export", "a.halfwheel", "--markers", "b.csv"], "--markers"),
])
def a_wrong_call_with_a_case_ends_with_2(folder, arguments, word):
    finish(folder)
    recording(folder, name="bare")
    before = everything(folder)
    refused(call(*arguments, cwd=folder), 2, word)
    equal(everything(folder), before, "files")


@cases([
    ("markers off the strip", "bib,column\n7,5000\n", "5000"),
    ("a bib twice", "bib,column\n7,20\n7,30\n", "7"),
    ("no column", "bib\n7\n", "column"),
])
def files_that_give_no_list_make_no_case(folder, text, word):
    place = recording(folder)
    (folder / "rec.markers.csv").write_text(text)
    refused(call("make-case", place, "-o", folder / "finish.halfwheel"), 1, word)
    equal(sorted(os.listdir(folder)), ["rec", "rec.markers.csv"], "names")


# --- the disk ----------------------------------------------------------------------------------------------

@case
def a_full_disk_under_a_list_is_told(folder):
    held = make(folder, finish(folder))
    with open("/dev/full", "wb") as full:
        ended = subprocess.run([PROGRAM, "export", held], stdout=full, stderr=subprocess.PIPE, check=False)
    equal(ended.returncode, 1, ended.stderr.decode())
    true("No space left" in ended.stderr.decode(), ended.stderr.decode())
    refused(call("export", held, "-o", "/dev/full", "--force"), 1, "/dev/full", "No space left")


@case
def a_device_is_no_place_for_a_case(folder):
    place = finish(folder)
    refused(call("make-case", place, "-o", "/dev/full"), 1, "/dev/full", "--force")
    refused(call("make-case", place, "-o", "/dev/full", "--force"), 1, "/dev/full")
    true(Path("/dev/full").is_char_device(), "still there")


def bytes_a_file(most):
    signal.signal(signal.SIGXFSZ, signal.SIG_IGN)  # so that writing fails, as on a full disk
    resource.setrlimit(resource.RLIMIT_FSIZE, (most, most))


@case
def a_disk_that_fills_up_leaves_no_half_a_case(folder):
    held = make(folder, finish(folder))
    before = everything(folder)
    place = sample("aldermoor-sprint")  # its case has 50 kB, an empty one 12
    for room in (0, 4096, 12000, 15000, 30000):
        for output, force in ((folder / "other.halfwheel", []), (held, ["--force"])):
            ended = subprocess.run([PROGRAM, "make-case", place, "-o", output] + force, stderr=subprocess.PIPE,
                                   preexec_fn=lambda most=room: bytes_a_file(most), restore_signals=False,
                                   check=False)
            equal(ended.returncode, 1, ended.stderr.decode())
            equal(len(ended.stderr.decode().splitlines()), 1, ended.stderr.decode())
            equal(everything(folder), before, "files")


@case
def making_and_reading_a_case_leaves_the_evidence_as_it_was(folder):
    place = finish(folder)
    before = everything(place)
    held = make(folder, place, "--start", START, "--rules", "road-1s")
    exported(held)
    equal(everything(place), before, "the recording")
    equal(sorted(os.listdir(folder)), ["finish.halfwheel", "rec", "rec.markers.csv"], "names")


@cases([("make-case", "make-case"), ("export", "export")])
def help_of_a_case_verb_reads_like_a_manual_page(folder, verb):
    text = done(call(verb, "--help")).text
    for word in ("Usage:", f"halfwheel-cli {verb}", "Options:", "Exit status:", "Example:", "--help"):
        true(word in text, f"“{word}” in {text}")
    for line in text.splitlines():
        true(len(line) <= 132, f"too long a line: {line}")
    true(verb in done(call("--help")).text, "among the verbs")


if __name__ == "__main__":
    main()
