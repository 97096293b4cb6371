# SPDX-License-Identifier: GPL-3.0-or-later
"""Recordings that are refused whole: exit status 1, one sentence with file and place, nothing written."""
import json
import os

from halfwheel import call, case, cases, equal, front, main, manifest_of, markers, recording, refused, true


def all_verbs_refuse(folder, place, *words):
    """Every verb that opens a recording, and no trace of the outputs they were to make."""
    markers(folder, [front("1", 10.5), front("2", 20.5)])
    before = sorted(os.listdir(folder))
    refused(call("inspect", place, "--format", "json"), 1, *words)
    refused(call("inspect", place, "-o", folder / "out.txt"), 1, *words)
    refused(call("rank", place, "--format", "csv", "-o", folder / "out.csv"), 1, *words)
    refused(call("picture", place, "--all", "-o", folder / "out.png"), 1, *words)
    equal(sorted(os.listdir(folder)), before, "files afterwards")


WHOLE = json.dumps(manifest_of())


def put(path, value):
    """An edit that sets a value at a path of keys."""
    def edit(manifest):
        spot = manifest
        for key in path[:-1]:
            spot = spot[key]
        spot[path[-1]] = value
    return edit


@cases([
    ("broken JSON", '{"halfwheel_recording": 1,', "line"),
    ("empty", "", "recording.json"),
    ("a repeated key", WHOLE.replace('"camera": "A"', '"camera": "A", "camera": "B"'), "camera"),
    ("a second root", WHOLE + "\n{}", "line 2"),
    ("a NUL byte", WHOLE.replace('"camera": "A"', '"camera": "A\0"'), "NUL"),
    ("an escaped NUL", WHOLE.replace('"camera": "A"', '"camera": "A\\u0000B"'), "recording.json"),
    ("010 for a number", WHOLE.replace('"rows": 8', '"rows": 010'), "line"),
    ("1e999 for a rate", WHOLE.replace('"rate_hz": 1000', '"rate_hz": 1e999'), "line"),
    ("an infinite rate", WHOLE.replace('"rate_hz": 1000', '"rate_hz": Infinity'), "line"),
    ("100,000 levels", "[" * 100000, "levels"),
    ("100,000 levels inside", WHOLE[:-1] + ', "scene": ' + '{"a":' * 100000 + "1" + "}" * 100000 + "}", "levels"),
    ("a list at the root", "[1]", "recording.json"),
    ("not UTF-8", WHOLE.replace("Made", "M\\xe4de").encode().replace(b"\\xe4", b"\xe4"), "line"),
    ("a comment", "// made by hand\n" + WHOLE, "line 1"),
    ("more than 16 MiB", WHOLE + " " * (16 << 20), "recording.json"),
])
def a_manifest_that_is_not_strict_json_is_refused(folder, text, word):
    all_verbs_refuse(folder, recording(folder, text=text), "recording.json", word)


@cases([
    ("version 99", ["halfwheel_recording"], 99, "99"),
    ("version as text", ["halfwheel_recording"], "1", "halfwheel_recording"),
    ("rate 0", ["scan", "rate_hz"], 0, "rate_hz"),
    ("a negative rate", ["scan", "rate_hz"], -1000, "rate_hz"),
    ("a rate of 10^12", ["scan", "rate_hz"], 10**12, "rate_hz"),
    ("a rate as text", ["scan", "rate_hz"], "1000", "rate_hz"),
    ("no rate", ["scan", "rate_hz"], None, "rate_hz"),
    ("a negative exposure", ["scan", "exposure_us"], -1, "exposure_us"),
    ("an unknown stamp", ["scan", "stamp"], "front", "stamp"),
    ("an unknown transfer", ["scan", "transfer"], "log", "transfer"),
    ("epoch yesterday", ["epoch"], "yesterday", "epoch"),
    ("epoch without offset", ["epoch"], "2027-06-13T16:02:11", "epoch"),
    ("epoch with a second 60 that never was", ["epoch"], "2027-06-13T16:02:60Z", "epoch"),
    ("no epoch", ["epoch"], None, "epoch"),
    ("an unknown travel", ["travel"], "up", "travel"),
    ("no blocks", ["blocks"], [], "blocks"),
    ("blocks that are no list", ["blocks"], {}, "blocks"),
    ("a stamp that is no whole number", ["blocks", 1, "first_ns"], 0.5, "first_ns"),
    ("a stamp beyond 2^53", ["blocks", 3, "last_ns"], 2**53, "last_ns"),
    ("negative columns", ["blocks", 1, "columns"], -4, "columns"),
    ("a digest that is none", ["blocks", 1, "sha256"], "abc", "sha256"),
])
def a_manifest_value_out_of_range_is_refused(folder, path, value, word):
    all_verbs_refuse(folder, recording(folder, edit=put(path, value)), "recording.json", word)


@case
def end_stamps_without_an_exposure_are_refused(folder):
    def edit(manifest):
        manifest["scan"] = {"rate_hz": 1000, "stamp": "end"}
    all_verbs_refuse(folder, recording(folder, edit=edit), "recording.json", "exposure_us")


@cases([
    ("upwards", "../outside.png"),
    ("through a folder and upwards", "sub/../../outside.png"),
    ("absolute", "/etc/passwd"),
    ("with a percent sign", "block%2F.png"),
    ("with a backslash", "..\\outside.png"),
    ("with a control character", "block\n1.png"),
    ("with an empty part", "sub//block.png"),
    ("of a folder itself", "."),
    ("without any letter", ""),
])
def a_block_name_that_could_lead_outside_is_refused(folder, name):
    (folder / "outside.png").write_bytes(b"secret")
    all_verbs_refuse(folder, recording(folder, edit=put(["blocks", 1, "file"], name)), "recording.json", "blocks[1]")


@case
def a_block_named_twice_is_refused(folder):
    all_verbs_refuse(folder, recording(folder, edit=put(["blocks", 1, "file"], "block-00000.png")),
                     "recording.json", "block-00000.png")


@case
def block_names_equal_but_for_case_are_refused(folder):
    all_verbs_refuse(folder, recording(folder, edit=put(["blocks", 1, "file"], "BLOCK-00000.png")),
                     "recording.json", "BLOCK-00000.png")


@case
def blocks_that_overlap_are_refused(folder):
    def edit(manifest):
        manifest["blocks"][2]["first_ns"] -= 10_000_000
    all_verbs_refuse(folder, recording(folder, edit=edit), "recording.json", "blocks[2]")


@case
def a_block_that_ends_before_it_starts_is_refused(folder):
    def edit(manifest):
        block = manifest["blocks"][1]
        block["first_ns"], block["last_ns"] = block["last_ns"], block["first_ns"]
    all_verbs_refuse(folder, recording(folder, edit=edit), "recording.json", "blocks[1]")


@case
def blocks_out_of_time_order_are_refused(folder):
    def edit(manifest):
        manifest["blocks"][1], manifest["blocks"][2] = manifest["blocks"][2], manifest["blocks"][1]
    all_verbs_refuse(folder, recording(folder, edit=edit), "recording.json", "blocks[2]")


@case
def a_block_that_is_a_link_is_refused(folder):
    place = recording(folder)
    (folder / "outside.png").write_bytes((place / "block-00001.png").read_bytes())
    (place / "block-00001.png").unlink()
    (place / "block-00001.png").symlink_to("../outside.png")
    all_verbs_refuse(folder, place, "block-00001.png", "link")


@case
def a_block_below_a_linked_folder_is_refused(folder):
    place = recording(folder, edit=put(["blocks", 1, "file"], "sub/block-00001.png"))
    (folder / "elsewhere").mkdir()
    (place / "block-00001.png").rename(folder / "elsewhere" / "block-00001.png")
    (place / "sub").symlink_to("../elsewhere")
    all_verbs_refuse(folder, place, "sub/block-00001.png", "link")


@case
def a_fifo_in_a_blocks_place_is_refused_and_not_waited_for(folder):
    place = recording(folder)
    (place / "block-00001.png").unlink()
    os.mkfifo(place / "block-00001.png")
    all_verbs_refuse(folder, place, "block-00001.png")


@case
def a_fifo_in_the_manifests_place_is_refused_and_not_waited_for(folder):
    place = recording(folder)
    (place / "recording.json").unlink()
    os.mkfifo(place / "recording.json")
    all_verbs_refuse(folder, place, "recording.json")


@case
def a_folder_without_a_manifest_is_refused(folder):
    place = recording(folder)
    (place / "recording.json").unlink()
    all_verbs_refuse(folder, place, "recording.json")


@case
def a_recording_that_is_not_there_is_refused(folder):
    all_verbs_refuse(folder, folder / "nowhere", "nowhere")


@case
def a_recording_of_which_no_block_can_be_read_is_refused(folder):
    place = recording(folder)
    for i in range(4):
        (place / f"block-{i:05d}.png").write_bytes(b"<!DOCTYPE html><title>404</title>")
    refused(call("inspect", place), 1, str(place))


@case
def a_recording_all_of_whose_blocks_are_missing_is_refused(folder):
    place = recording(folder)
    for i in range(4):
        (place / f"block-{i:05d}.png").unlink()
    all_verbs_refuse(folder, place, str(place))


@case
def unknown_keys_are_ignored(folder):
    place = recording(folder, edit=put(["weather"], {"rain": True}))
    result = call("inspect", place, "--format", "json")
    equal(result.status, 0, result.err)
    true(result.json["problems"] == [], result.text)


if __name__ == "__main__":
    main()
