# SPDX-License-Identifier: GPL-3.0-or-later
"""How a call ends: exit status, where output goes, and what happens to it when the disk or the reader fails."""
import json
import os
import signal
import subprocess
import time
from pathlib import Path

from halfwheel import (EPOCH, PERIOD_NS, PROGRAM, call, case, cases, digest_by_hand, done, equal, front, grey_png,
                       main, markers, png_of_rows, recording, refused, true)

VERBS = ["inspect", "cut", "rules", "rank", "picture"]


@case
def help_lists_the_verbs(folder):
    text = done(call("--help")).text
    for word in VERBS + ["Exit status", "Example", "--force"]:
        true(word in text, word)
    equal(done(call("-h")).text, text, "-h")


@cases([(verb, verb) for verb in VERBS])
def help_of_a_verb_reads_like_a_manual_page(folder, verb):
    text = done(call(verb, "--help")).text
    for word in ("Usage:", f"halfwheel-cli {verb}", "Options:", "Exit status:", "Example:", "--help"):
        true(word in text, f"“{word}” in {text}")
    for line in text.splitlines():
        true(len(line) <= 132, f"too long a line: {line}")


@case
def version_is_told(folder):
    true(done(call("--version")).text.startswith("halfwheel-cli "), "version")


@cases([
    ("no verb", [], "--help"),
    ("an unknown verb", ["judge"], "judge"),
    ("an unknown option", ["inspect", "--fast"], "--fast"),
    ("no recording", ["inspect"], "RECORDING"),
    ("two recordings", ["inspect", "one", "two"], "two"),
    ("an unknown format", ["rules", "--format", "xml"], "xml"),
    ("csv of what is no table", ["rules", "--format", "csv"], "csv"),
    ("an option without its value", ["rank", "rec", "--markers"], "--markers"),
])
def a_wrong_call_ends_with_2(folder, arguments, word):
    refused(call(*arguments, cwd=folder), 2, word)


@case
def the_digest_is_that_of_what_sha256sum_prints(folder):
    place = recording(folder)
    seen = done(call("inspect", place, "--format", "json")).json
    equal(seen["digest"], digest_by_hand(place), "digest")
    true(digest_by_hand(place) in done(call("inspect", place)).text, "in the text too")


@case
def inspect_has_all_its_keys_in_order(folder):
    seen = done(call("inspect", recording(folder), "--format", "json")).json
    equal(list(seen), ["halfwheel", "columns", "rows", "duration_ns", "rate_hz", "voids", "digest", "problems"], "keys")
    equal((seen["halfwheel"], seen["columns"], seen["rows"], seen["rate_hz"]), ("inspect/1", 256, 8, 1000), "values")
    equal((seen["duration_ns"], seen["voids"], seen["problems"]), (256 * PERIOD_NS, [], []), "values")


@case
def a_bare_image_is_inspected_and_has_no_digest(folder):
    (folder / "finish.png").write_bytes(grey_png(0, 100, 5))
    seen = done(call("inspect", folder / "finish.png", "--rate", "2000", "--epoch", EPOCH, "--format", "json")).json
    equal((seen["columns"], seen["rows"], seen["digest"]), (100, 5, None), "values")


@case
def a_recording_opens_by_any_of_its_names(folder):
    place = recording(folder)
    first = done(call("inspect", place, "--format", "json")).out
    equal(done(call("inspect", f"{place}/", "--format", "json")).out, first, "with a slash")
    equal(done(call("inspect", place / "recording.json", "--format", "json")).out, first, "its manifest")
    equal(done(call("inspect", ".", "--format", "json", cwd=place)).out, first, "from inside")


@case
def a_name_that_is_not_utf8_is_opened(folder):
    place = os.fsencode(recording(folder)).replace(b"rec", b"r\xe9c")
    os.rename(folder / "rec", place)
    done(call("inspect", place))
    os.rename(place, os.fsencode(folder / "rec"))
    refused(call("inspect", place), 1, "r�c")


@case
def a_line_feed_in_a_name_stays_in_one_line_of_error(folder):
    refused(call("inspect", folder / "two\nlines"), 1, "two\\x0alines")


@case
def rules_are_listed_and_each_is_said_in_words(folder):
    listed = done(call("rules", "--format", "json")).json
    equal(listed["halfwheel"], "rules/1", "halfwheel")
    ids = [rules["id"] for rules in listed["rules"]]
    equal(sorted(ids), sorted(["road-1s", "road-3s", "itt-10th", "itt-100th", "ttt-10th", "ttt-100th", "track-timed",
                               "track-sprint", "track-bunch", "track-elimination", "bmx", "cross-country",
                               "cyclo-cross", "downhill"]), "ids")
    text = done(call("rules")).text
    for rules in listed["rules"]:
        true(all(rules[key] for key in ("title", "article", "edition")), f"{rules}")
        true(rules["id"] in text and rules["title"] in text, rules["id"])
        words = done(call("rules", rules["id"])).text
        true(rules["edition"] in words and rules["article"] in words, words)


@case
def a_rule_set_is_printed_byte_for_byte(folder):
    printed = done(call("rules", "road-3s", "--format", "json")).out
    equal(json.loads(printed)["id"], "road-3s", "id")
    (folder / "mine.json").write_bytes(printed + b"\n \n")
    equal(done(call("rules", folder / "mine.json", "--format", "json")).out, printed + b"\n \n", "a file of one's own")


def outputs(folder):
    """Calls that make an output, without it."""
    place = recording(folder)
    markers(folder, [front("1", 10.5), front("2", 20.5)])
    return {
        "inspect": ["inspect", place], "rules": ["rules", "road-1s"], "rank": ["rank", place],
        "picture": ["picture", place],
    }


@case
def an_output_that_is_there_is_refused_without_force(folder):
    for verb, words in outputs(folder).items():
        output = folder / f"{verb}.png"
        output.write_bytes(b"mine")
        refused(call(*words, "-o", output), 1, output.name, "--force")
        equal(output.read_bytes(), b"mine", "kept")
        done(call(*words, "-o", output, "--force"))
        true(output.read_bytes() != b"mine", "replaced")
        equal([name for name in os.listdir(folder) if name.startswith(f"{verb}.png.")], [], "nothing left beside it")


@case
def evidence_is_never_written_to(folder):
    calls = outputs(folder)
    place = folder / "rec"
    before = {path.name: path.read_bytes() for path in place.iterdir()}
    for verb in ("inspect", "rank", "picture"):
        for name in ("recording.json", "block-00001.png", "new.png"):
            if verb == "picture" and name == "recording.json":
                continue  # no name of a picture
            refused(call(*calls[verb], "--force", "-o", place / name), 1, name, "never changed")
    refused(call("cut", place / "block-00000.png", "--rate", "1000", "--epoch", EPOCH, "--force", "-o", place), 1,
            "block-00000.png", "lost")
    image = folder / "finish.png"
    image.write_bytes(grey_png(0, 64, 4))
    refused(call("inspect", image, "--rate", "1000", "--epoch", EPOCH, "--force", "-o", image), 1, "never changed")
    equal(image.read_bytes(), grey_png(0, 64, 4), "the image")
    equal({path.name: path.read_bytes() for path in place.iterdir()}, before, "the recording")


@case
def an_output_in_a_folder_that_is_not_there_is_refused(folder):
    for words in outputs(folder).values():
        refused(call(*words, "-o", folder / "nowhere" / "out.png"), 1, "nowhere/out.png")


@case
def a_minus_is_standard_output(folder):
    calls = outputs(folder)
    equal(done(call(*calls["rank"], "-o", "-")).out, done(call(*calls["rank"])).out, "rank")
    equal(done(call(*calls["picture"], "-o", "-")).out[:8], b"\x89PNG\r\n\x1a\n", "picture")


def to_descriptor(words, **where):
    finished = subprocess.run([PROGRAM] + [os.fspath(word) for word in words], stdin=subprocess.DEVNULL,
                              stderr=subprocess.PIPE, check=False, **where)
    return finished.returncode, finished.stderr.decode()


def all_printing_calls(folder):
    calls = list(outputs(folder).values())
    calls[-1] = calls[-1] + ["-o", "-"]
    return calls + [["--help"], ["rank", "--help"], ["--version"], ["rules"]]


@case
def a_full_disk_is_told(folder):
    for words in all_printing_calls(folder):
        with open("/dev/full", "wb") as full:
            status, said = to_descriptor(words, stdout=full)
        equal(status, 1, f"{words} {said}")
        equal(len(said.splitlines()), 1, said)
        true("No space left" in said, said)


@case
def a_closed_pipe_is_told_and_kills_nothing(folder):
    for words in all_printing_calls(folder):
        reader, writer = os.pipe()
        os.close(reader)
        status, said = to_descriptor(words, stdout=writer)
        os.close(writer)
        equal(status, 1, f"{words} {said}")
        equal(len(said.splitlines()), 1, said)
        true("Broken pipe" in said, said)


@case
def a_closed_standard_output_is_told_and_no_file_gets_the_result(folder):
    place = recording(folder)
    before = {path: path.read_bytes() for path in place.iterdir()}
    script = 'exec "$0" "$@" >&-'
    finished = subprocess.run(["sh", "-c", script, PROGRAM, "inspect", place], stderr=subprocess.PIPE, check=False)
    equal(finished.returncode, 1, finished.stderr.decode())
    equal({path: path.read_bytes() for path in place.iterdir()}, before, "the recording")


@case
def a_device_or_pipe_is_written_to_and_never_replaced(folder):
    place = recording(folder)
    os.mkfifo(folder / "pipe")
    reader = os.open(folder / "pipe", os.O_RDONLY | os.O_NONBLOCK)
    done(call("inspect", place, "--format", "json", "-o", folder / "pipe", "--force"))
    equal(json.loads(os.read(reader, 65536))["columns"], 256, "what came through")
    os.close(reader)
    true((folder / "pipe").is_fifo(), "still there")
    refused(call("inspect", place, "-o", "/dev/full", "--force"), 1, "/dev/full", "No space left")
    true(Path("/dev/full").is_char_device(), "still there")


@case
def nothing_is_said_on_standard_error_where_it_is_no_terminal(folder):
    equal(done(call("inspect", recording(folder))).err, "", "standard error")


@case
def progress_is_shown_on_a_terminal_and_wiped(folder):
    place = recording(folder, blocks=40)
    ours, theirs = os.openpty()
    environment = dict(os.environ, TERM="xterm")
    finished = subprocess.run([PROGRAM, "inspect", place], stdin=subprocess.DEVNULL, stdout=subprocess.PIPE,
                              stderr=theirs, env=environment, check=False)
    os.close(theirs)
    shown = os.read(ours, 65536).decode()
    os.close(ours)
    equal(finished.returncode, 0, shown)
    true("%" in shown, repr(shown))
    true(shown.endswith("\r\x1b[K"), repr(shown))


@case
def a_stop_leaves_nothing_behind(folder):
    # Random samples take a while to cut; whether the stop comes before or after the end, all or nothing is there.
    rows = [os.urandom(6000) for _ in range(1500)]
    (folder / "finish.png").write_bytes(png_of_rows(6000, 1500, 8, 0, rows, level=0))
    running = subprocess.Popen([PROGRAM, "cut", folder / "finish.png", "--rate", "1000", "--epoch", EPOCH, "-o",
                                folder / "finish"], stderr=subprocess.PIPE)
    deadline = time.monotonic() + 60
    while running.poll() is None and len(os.listdir(folder)) < 2 and time.monotonic() < deadline:
        time.sleep(0.005)
    running.send_signal(signal.SIGTERM)
    said = running.communicate()[1].decode()
    if running.returncode == 0:
        equal(sorted(os.listdir(folder)), ["finish", "finish.png"], "all is there")
        done(call("inspect", folder / "finish"))
    else:
        equal(running.returncode, 1, said)
        true("Stopped" in said, said)
        equal(sorted(os.listdir(folder)), ["finish.png"], "nothing is there")


if __name__ == "__main__":
    main()
