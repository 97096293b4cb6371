# SPDX-License-Identifier: GPL-3.0-or-later
"""rank: the finish list, what it refuses, and what it tells as a problem."""
import csv
import json
import re

from halfwheel import (PERIOD_NS, call, case, cases, done, equal, front, identity, main, markers, recording,
                       refused, table, true)

KEYS = ["rank", "bib", "name", "team", "category", "status", "time_ns", "time", "gap_ns", "gap", "gap_prev_ns",
        "distance_prev_m", "u_gap_prev_ns", "p_order_wrong", "separated", "group"]
START = "2027-06-13T14:50:00+02:00"  # 1:12:11 before the epoch
BEFORE_NS = (72 * 60 + 11) * 1_000_000_000


def rank(place, *options):
    return done(call("rank", place, "--format", "json", *options)).json


def instant_ns(column):
    """Of a column position on a recording made here: stamps are the middle of the exposure."""
    return round((column - 0.5) * PERIOD_NS)


def told(listed, *words):
    return any(all(word in problem for word in words) for problem in listed["problems"])


@case
def riders_stand_in_the_order_of_their_front_tyres(folder):
    place = recording(folder)
    markers(folder, [front("7", 200.25), front("12", 20.5), front("3", 130)])
    listed = rank(place)
    equal(listed["halfwheel"], "rank/1", "halfwheel")
    equal([(row["rank"], row["bib"]) for row in listed["list"]], [(1, "12"), (2, "3"), (3, "7")], "order")
    equal([row["time_ns"] for row in listed["list"]], [instant_ns(c) for c in (20.5, 130, 200.25)], "times")
    equal([row["gap_ns"] for row in listed["list"]], [0, 109_500_000, 179_750_000], "gaps")


@case
def every_key_is_always_there(folder):
    place = recording(folder)
    markers(folder, [front("7", 200.25), front("?1", 20.5)])
    table(folder / "rec.startlist.csv", ["bib", "name"], [["7", "Ada Grell"], ["8", "Bo Lund"]])
    for options in ([], ["--rules", "road-1s"], ["--rules", "track-sprint"]):
        listed = rank(place, *options)
        for key in ("halfwheel", "rules", "list", "problems"):
            true(key in listed, key)
        for row in listed["list"]:
            for key in KEYS:
                true(key in row, f"{key} of {row}")
            true(isinstance(row["bib"], str), "bib is text")


@case
def without_rules_the_list_says_that_it_is_the_measured_order(folder):
    place = recording(folder)
    markers(folder, [front("7", 200.25)])
    listed = rank(place)
    equal(listed["rules"], None, "rules")
    true(told(listed, "No rule set"), f"{listed['problems']}")
    true("no rule set" in done(call("rank", place)).text.lower(), "in the text too")


@case
def without_a_start_time_and_gap_are_null_and_a_problem_says_so(folder):
    place = recording(folder)
    markers(folder, [front("7", 200.25), front("8", 210)])
    listed = rank(place, "--rules", "road-1s")
    equal([(row["time"], row["gap"]) for row in listed["list"]], [(None, None)] * 2, "time and gap")
    equal(listed["list"][0]["time_ns"], instant_ns(200.25), "time_ns counts from the epoch")
    true(told(listed, "start"), f"{listed['problems']}")


@case
def road_times_are_cut_to_the_second_and_shared_in_a_group(folder):
    # UCI 2.3.041 (rounded down), 1.2.107 (one time for a group).
    place = recording(folder)
    markers(folder, [front("7", 200.25), front("8", 210)])
    rows = rank(place, "--rules", "road-1s", "--start", START)["list"]
    equal([row["time_ns"] for row in rows], [BEFORE_NS + instant_ns(c) for c in (200.25, 210)], "measured")
    equal([row["time"] for row in rows], ["1:12:11"] * 2, "official")


@case
def track_times_are_thousandths(folder):
    # UCI 1.2.106, 3.2.015.
    place = recording(folder)
    markers(folder, [front("7", 200.25), front("8", 210)])
    listed = rank(place, "--rules", "track-timed", "--start", "2027-06-13T16:02:00+02:00")
    # 11 s from the start to the epoch, and 0.19975 s and 0.2095 s more.
    true(re.fullmatch(r"0:11\.(199|200)", listed["list"][0]["time"]), f"{listed['list'][0]['time']}")
    true(re.fullmatch(r"0:11\.(209|210)", listed["list"][1]["time"]), f"{listed['list'][1]['time']}")


@case
def a_bib_not_in_the_start_list_is_a_problem(folder):
    place = recording(folder)
    markers(folder, [front("7", 20.5), front("99", 30.5)])
    table(folder / "rec.startlist.csv", ["bib", "name"], [["7", "Ada Grell"]])
    listed = rank(place)
    true(told(listed, "99"), f"{listed['problems']}")


@case
def a_starter_without_a_marker_is_not_seen_and_no_dnf(folder):
    place = recording(folder)
    markers(folder, [front("7", 20.5)])
    table(folder / "rec.startlist.csv", ["bib", "name", "status"],
          [["7", "Ada Grell", ""], ["8", "Bo Lund", ""], ["9", "Ci Marr", "DNF"]])
    rows = {row["bib"]: row for row in rank(place)["list"]}
    equal({bib: row["status"] for bib, row in rows.items()}, {"7": "ok", "8": "not_seen", "9": "DNF"}, "status")
    equal((rows["8"]["rank"], rows["8"]["time_ns"]), (None, None), "no place and no time")


@case
def a_finisher_a_lap_short_is_a_problem(folder):
    place = recording(folder)
    markers(folder, [("7", 10.5, "lap 1"), ("8", 20.5, "lap 1"), ("7", 100.5, "finish"), ("8", 110.5, "finish"),
                     ("9", 120.5, "finish")], header=("bib", "column", "passage"))
    table(folder / "rec.startlist.csv", ["bib"], [["7"], ["8"], ["9"]])
    listed = rank(place, "--passage", "finish")
    true(told(listed, "9", "lap"), f"{listed['problems']}")


@case
def a_rear_wheel_that_decides_is_asked_for(folder):
    # 1.2 s from front to front: whether rear to front is 1 s depends on the bicycle's length (UCI 1.2.107).
    place = recording(folder, blocks=24)
    markers(folder, [front("7", 100), front("8", 1150)])
    listed = rank(place, "--rules", "road-1s", "--start", START)
    true(told(listed, "Rear wheel needed", "7", "8"), f"{listed['problems']}")
    equal(listed["list"][1]["time"], None, "the time stays open")
    # With the rear wheel at 160 the gap is 0.99 s: one group. At 149 it is 1.001 s: a new time.
    markers(folder, [front("7", 100), ("7", 160, 4, "rear"), front("8", 1150)])
    equal([row["group"] for row in rank(place, "--rules", "road-1s", "--start", START)["list"]], [1, 1], "0.990 s")
    markers(folder, [front("7", 100), ("7", 149, 4, "rear"), front("8", 1150)])
    equal([row["group"] for row in rank(place, "--rules", "road-1s", "--start", START)["list"]], [1, 2], "1.001 s")


@case
def categories_are_ranked_apart(folder):
    place = recording(folder)
    markers(folder, [front("7", 10.5), front("8", 20.5), front("9", 30.5)])
    table(folder / "rec.startlist.csv", ["bib", "category"], [["7", "Men"], ["8", "Women"], ["9", "Women"]])
    equal([(row["category"], row["rank"], row["bib"]) for row in rank(place)["list"]],
          [("Men", 1, "7"), ("Women", 1, "8"), ("Women", 2, "9")], "places")


@case
def the_csv_reads_back_as_the_json_says(folder):
    place = recording(folder)
    markers(folder, [front("7", 20.5), front("8", 30.5)])
    names = {"7": "Grell, Ada “the wheel\"", "8": "Bo\nLund"}
    table(folder / "rec.startlist.csv", ["bib", "name"], names.items())
    done(call("rank", place, "--start", START, "--rules", "road-1s", "--format", "csv", "-o", folder / "list.csv"))
    with open(folder / "list.csv", newline="", encoding="utf-8") as file:
        rows = list(csv.DictReader(file))
    wanted = rank(place, "--start", START, "--rules", "road-1s")["list"]
    equal(len(rows), len(wanted), "rows")
    for row, want in zip(rows, wanted):
        for key in KEYS:
            got, value = row[key], want[key]
            if isinstance(value, float):
                true(abs(float(got) - value) <= 1e-14 * abs(value), f"{key}: {got} and {value}")
            else:
                equal(got, "" if value is None else str(value), key)
    equal([row["name"] for row in rows], list(names.values()), "names")


@case
def what_was_understood_of_a_start_list_is_said(folder):
    place = recording(folder)
    markers(folder, [front("7", 20.5)])
    (folder / "rec.startlist.csv").write_bytes("Dossard;Nom;Équipe\r\n7;Ève Grêlé;Vélo Nord\r\n".encode("cp1252"))
    text = done(call("rank", place)).text
    for word in ("semicolon", "windows-1252", "Dossard", "Équipe", "rec.startlist.csv", "found beside"):
        true(word in text, f"“{word}” in the text")
    equal(rank(place)["list"][0]["name"], "Ève Grêlé", "name")


@case
def headers_can_be_mapped_by_hand(folder):
    place = recording(folder)
    markers(folder, [front("7", 20.5)])
    table(folder / "list.csv", ["Plate", "Who"], [["7", "Ada Grell"]])
    listed = rank(place, "--startlist", folder / "list.csv", "--map", "bib=Plate,name=Who")
    equal(listed["list"][0]["name"], "Ada Grell", "name")
    refused(call("rank", place, "--startlist", folder / "list.csv", "--map", "bib=Number"), 1, "list.csv", "Number")
    refused(call("rank", place, "--map", "bib=Plate"), 2, "--map")


@case
def files_beside_the_recording_give_way_to_those_named(folder):
    place = recording(folder)
    markers(folder, [front("7", 20.5)])
    markers(folder, [front("8", 20.5)], name="other.csv")
    equal([row["bib"] for row in rank(place, "--markers", folder / "other.csv")["list"]], ["8"], "named")
    equal([row["bib"] for row in rank(place)["list"]], ["7"], "beside")
    equal([row["bib"] for row in rank(f"{place}/recording.json")["list"]], ["7"], "beside, by its manifest")
    equal([row["bib"] for row in rank(f"{place}/")["list"]], ["7"], "beside, with a slash")


@case
def a_start_of_the_race_file_counts(folder):
    place = recording(folder)
    markers(folder, [front("7", 20.5)])
    (folder / "rec.race.json").write_text(json.dumps(
        {"halfwheel_race": 1, "event": "Test", "starts": [{"category": "*", "instant": START}]}))
    equal(rank(place)["list"][0]["time_ns"], BEFORE_NS + instant_ns(20.5), "time_ns")


# --- refused: exit status 1, the file and the place in it, no list ------------------------------------------

def refused_list(folder, place, *words, options=()):
    output = folder / "list.out"
    refused(call("rank", place, "-o", output, *options), 1, *words)
    true(not output.exists(), "no list was written")


@case
def markers_of_another_recording_are_refused(folder):
    place = recording(folder)
    mine = identity(place)
    header = ("bib", "column", "recording")
    markers(folder, [("1", 10.5, mine)], header=header)
    rank(place)
    other = "0" * 16
    markers(folder, [("1", 10.5, mine), ("2", 20.5, other)], header=header)
    refused_list(folder, place, "rec.markers.csv", "line 3", other, mine)


@cases([
    ("off the strip", "256.5"), ("before the strip", "-0.25"), ("NaN", "nan"), ("infinite", "inf"),
    ("out of all bounds", "1e300"), ("hexadecimal", "0x10"), ("with a comma", "10,5"), ("a word", "ten"),
    ("empty", ""),
])
def a_marker_column_that_is_none_is_refused(folder, column):
    place = recording(folder)
    markers(folder, [front("1", 10.5), front("2", column)])
    refused_list(folder, place, "rec.markers.csv", "line 3", "column")


@case
def a_marker_in_a_pause_is_refused(folder):
    def edit(manifest):
        for block in manifest["blocks"][2:]:
            block["first_ns"] += 500 * PERIOD_NS
            block["last_ns"] += 500 * PERIOD_NS
    place = recording(folder, edit=edit)
    header = ("bib", "column", "time_ns")
    markers(folder, [("1", 128.5, instant_ns(128.5) + 500 * PERIOD_NS)], header=header)
    rank(place)
    markers(folder, [("1", 128.5, instant_ns(128.5) + 200 * PERIOD_NS)], header=header)
    refused_list(folder, place, "rec.markers.csv", "line 2")


@case
def a_marker_whose_time_and_column_disagree_is_refused(folder):
    place = recording(folder)
    header = ("bib", "column", "time_ns")
    markers(folder, [("1", 10.5, instant_ns(10.9))], header=header)
    rank(place)
    markers(folder, [("1", 10.5, instant_ns(11.1))], header=header)
    refused_list(folder, place, "rec.markers.csv", "line 2")


@case
def two_riders_on_one_bib_are_refused(folder):
    place = recording(folder)
    markers(folder, [front("1", 10.5), front("2", 20.5), front("1", 30.5)])
    refused_list(folder, place, "rec.markers.csv", "bib 1", "2", "4")


@case
def a_repeated_bib_in_a_category_is_refused(folder):
    place = recording(folder)
    markers(folder, [front("1", 10.5)])
    header = ["bib", "name", "category"]
    table(folder / "rec.startlist.csv", header, [["1", "Ada", "Men"], ["1", "Bea", "Women"], ["2", "Cy", "Men"]])
    refused_list(folder, place, "more than one category")
    table(folder / "rec.startlist.csv", header, [["1", "Ada", "Men"], ["2", "Cy", "Men"], ["1", "Bo", "Men"]])
    refused_list(folder, place, "rec.startlist.csv", "line 4", "bib 1")


def edited_rules(folder, **changes):
    rules = json.loads(call("rules", "road-1s", "--format", "json").out)
    rules.update(changes)
    (folder / "club.json").write_text(json.dumps(rules))
    return folder / "club.json"


@cases([
    ("an unknown rounding", {"rounding": "nearest"}, "rounding"),
    ("a precision of 0", {"precision_ns": 0}, "precision_ns"),
    ("an unknown edge", {"order_edge": "hub"}, "order_edge"),
    ("a misspelt key", {"roundding": "down"}, "roundding"),
    ("another version", {"halfwheel_rules": 2}, "halfwheel_rules"),
])
def a_rule_set_with(folder, changes, word):
    place = recording(folder)
    markers(folder, [front("1", 10.5)])
    path = edited_rules(folder, **changes)
    refused_list(folder, place, "club.json", word, options=("--rules", path))
    refused(call("rules", path), 1, "club.json", word)


@case
def a_rule_set_of_ones_own_is_followed(folder):
    place = recording(folder)
    markers(folder, [front("1", 200.25)])
    path = edited_rules(folder, id="club", rounding="up")
    equal(rank(place, "--rules", path, "--start", START)["list"][0]["time"], "1:12:12", "rounded up")


@case
def a_rule_set_that_is_not_there_is_refused(folder):
    place = recording(folder)
    markers(folder, [front("1", 10.5)])
    refused_list(folder, place, "road-9s", options=("--rules", "road-9s"))


def calibration(folder, **changes):
    kept = {"halfwheel_calibration": 1, "camera": "A", "recording": "", "made": "2027-06-13T09:00:00+02:00",
            "by": "Timing crew", "nominal_rate_hz": 1000, "exposure_us": 200, "rate_hz": 1000.037,
            "u_rate_hz": 0.004}
    kept.update(changes)
    (folder / "rec.calibration.json").write_text(json.dumps(kept))


@cases([
    ("camera", {"camera": "B"}, "camera"),
    ("rate", {"nominal_rate_hz": 2000}, "2000"),
    ("exposure", {"exposure_us": 250}, "exposure"),
])
def a_calibration_of_another(folder, changes, word):
    place = recording(folder)
    markers(folder, [front("1", 10.5)])
    calibration(folder)
    true("1000.037" in done(call("rank", place)).text, "one that fits is told")
    calibration(folder, **changes)
    refused_list(folder, place, "rec.calibration.json", word)


@case
def a_race_file_of_another_kind_is_refused(folder):
    place = recording(folder)
    markers(folder, [front("1", 10.5)])
    (folder / "rec.race.json").write_text('{"halfwheel_race": 2}')
    refused_list(folder, place, "rec.race.json", "halfwheel_race")


@case
def several_passages_and_none_named_are_refused(folder):
    place = recording(folder)
    markers(folder, [("7", 10.5, "lap 1"), ("7", 100.5, "finish")], header=("bib", "column", "passage"))
    refused_list(folder, place, "rec.markers.csv", "lap 1", "finish", "name the one")
    equal(rank(place, "--passage", "lap 1")["list"][0]["time_ns"], instant_ns(10.5), "the one named")


@case
def no_markers_at_all_is_a_wrong_call(folder):
    refused(call("rank", recording(folder)), 2, "--markers", "rec.markers.csv")


@case
def a_start_that_is_no_instant_is_a_wrong_call(folder):
    place = recording(folder)
    markers(folder, [front("1", 10.5)])
    refused(call("rank", place, "--start", "14:50"), 2, "--start", "14:50")
    refused(call("rank", place, "--start", "2027-06-13T14:50:00"), 2, "--start", "offset")


@case
def the_same_input_gives_the_same_bytes(folder):
    place = recording(folder)
    markers(folder, [front(str(i), 10.5 + 3 * i) for i in range(40)])
    for form in ("text", "json", "csv"):
        first = done(call("rank", place, "--format", form, "--rules", "road-1s")).out
        equal(done(call("rank", place, "--format", form, "--rules", "road-1s")).out, first, form)
        true(first, "not empty")


if __name__ == "__main__":
    main()
