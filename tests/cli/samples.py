# SPDX-License-Identifier: GPL-3.0-or-later
"""The samples' true order and times. The simulator shares no code with the program; what it knows of each rider
(NAME.truth.csv) is what rank must say of the true markers."""
import csv
import json
import os
from pathlib import Path

from halfwheel import call, case, cases, done, equal, main, true

FOLDERS = [Path(path) for path in os.environ["HALFWHEEL_SAMPLES"].split(os.pathsep)]
CHECKED_IN = ["aldermoor-sprint", "duel", "damaged"]
MADE = ["time-trial", "track-sprint", "lamp", "laps", "skewed"]
# Their recordings are wrong on purpose (a rate 37 ppm off, a slit out of the line's plane). What a list can say is
# what the camera saw and stamped: front_stamped_ns.
WRONG_ON_PURPOSE = ["lamp", "skewed"]
WITHIN_NS = 1000


def beside(name, suffix):
    for folder in FOLDERS:
        path = folder / (name + suffix)
        if path.exists():
            return path
    raise AssertionError(f"{name}{suffix} is in none of {FOLDERS}")


def rows(path):
    with open(path, newline="", encoding="utf-8") as file:
        return list(csv.DictReader(file))


def instant_ns(text):
    """RFC 3339 to ns since 1970, without leap seconds: none lies between the instants of a sample."""
    day, _, clock = text.partition("T")
    year, month, date = map(int, day.split("-"))
    sign = max(clock.rfind("+"), clock.rfind("-"))
    clock, offset = clock[:sign], clock[sign:]
    hours, minutes, seconds = clock.split(":")
    whole, _, fraction = seconds.partition(".")
    # Days since 1970 by counting leap years (Gregorian calendar).
    days = sum(366 if y % 4 == 0 and (y % 100 != 0 or y % 400 == 0) else 365 for y in range(1970, year))
    lengths = [31, 29 if year % 4 == 0 else 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31]
    days += sum(lengths[:month - 1]) + date - 1
    east = (int(offset[1:3]) * 60 + int(offset[4:6])) * (1 if offset[0] == "+" else -1)
    total = ((days * 24 + int(hours)) * 60 + int(minutes) - east) * 60 + int(whole)
    return total * 10**9 + int((fraction + "0" * 9)[:9])


def start_of(rider, race):
    """The gate's start where it is from slightly early (1 s, our reading) to 5 s late, else the scheduled one
    (UCI 2.4.013); else the category's, or everybody's."""
    if rider["start"]:
        scheduled = instant_ns(rider["start"])
        if rider["start_actual"]:
            gate = instant_ns(rider["start_actual"])
            if -10**9 <= gate - scheduled <= 5 * 10**9:
                return gate
        return scheduled
    waves = {wave["category"]: instant_ns(wave["instant"]) for wave in race["starts"]}
    return waves.get(rider["category"], waves.get("*"))


def expected(name):
    """passage: category: [(bib, ns since the start or, where none is known, the epoch)], in true order."""
    race = json.loads(beside(name, ".race.json").read_bytes())
    epoch = instant_ns(json.loads((beside(name, "") / "recording.json").read_bytes())["epoch"])
    riders = rows(beside(name, ".startlist.csv"))
    marked = {(m["bib"], m["passage"], m["column"]): m.get("category")
              for m in rows(beside(name, ".markers.csv")) if m["edge"] == "front"}
    lists = {}
    key = "front_stamped_ns" if name in WRONG_ON_PURPOSE else "front_ns"
    for truth in sorted(rows(beside(name, ".truth.csv")), key=lambda row: int(row[key])):
        place = (truth["bib"], truth["passage"], truth["front_column"])
        if place not in marked:
            continue  # hidden by damage
        rider = next((r for r in riders if r["bib"] == truth["bib"] and marked[place] in (None, r["category"])), None)
        start = start_of(rider, race) if rider else None
        time_ns = int(truth[key]) + (epoch - start if start is not None else 0)
        category = rider["category"] if rider else ""
        lists.setdefault(truth["passage"], {}).setdefault(category, []).append((truth["bib"], time_ns))
    return lists


@cases([(name, name) for name in CHECKED_IN + MADE])
def rank_gives_the_true_order_and_times_of(folder, name):
    lists = expected(name)
    true(lists, "something is expected")
    for passage, categories in lists.items():
        listed = done(call("rank", beside(name, ""), "--passage", passage, "--format", "json")).json["list"]
        for category, wanted in categories.items():
            crossed = [row for row in listed if row["time_ns"] is not None and (row["category"] or "") == category]
            equal([row["bib"] for row in crossed], [bib for bib, _ in wanted], f"{passage}, {category}")
            for row, (bib, time_ns) in zip(crossed, wanted):
                true(abs(row["time_ns"] - time_ns) <= WITHIN_NS,
                     f"{passage}, bib {bib}: {row['time_ns']} ns, truly {time_ns} ns")
            for row, (_, time_ns) in zip(crossed[1:], wanted[1:]):
                if row["gap_ns"] is not None:
                    true(abs(row["gap_ns"] - (time_ns - wanted[0][1])) <= 2 * WITHIN_NS or name == "time-trial",
                         f"{passage}, gap of bib {row['bib']}")


@cases([(name, name) for name in CHECKED_IN + MADE])
def inspect_says_whether_to_believe(folder, name):
    seen = call("inspect", beside(name, ""), "--format", "json")
    equal(seen.status, 3 if name in ("damaged", "lamp") else 0, f"{seen.text}")


@case
def the_damaged_blocks_are_told_one_by_one(folder):
    seen = call("inspect", beside("damaged", ""), "--format", "json").json
    reasons = [void["reason"] for void in seen["voids"]]
    equal(len(reasons), 3, f"a cut, a missing and an altered block: {reasons}")
    equal(seen["digest"], None, "digest while a block is missing")


@case
def the_winner_by_two_columns_is_told_apart_only_as_far_as_the_alignment_is_known(folder):
    rows_of = done(call("rank", beside("aldermoor-sprint", ""), "--rules", "road-1s", "--format", "json")).json["list"]
    equal([row["bib"] for row in rows_of[:2]], ["2", "33"], "first and second")
    equal(rows_of[1]["gap_prev_ns"], 1_000_000, "two columns at 2000 Hz")
    equal(rows_of[1]["separated"], "not established", "the plane was never measured")
    true(rows_of[1]["p_order_wrong"] < 0.01, "the readings alone would do")


@case
def a_slit_out_of_plane_swaps_two_riders_and_the_list_does_not_claim_otherwise(folder):
    true_order = [row["bib"] for row in rows(beside("skewed", ".truth.csv"))]
    listed = done(call("rank", beside("skewed", ""), "--format", "json")).json["list"]
    seen = [row["bib"] for row in listed if row["time_ns"] is not None]
    true(seen != true_order, "the sample swaps two")
    for row in listed[1:]:
        before = seen[seen.index(row["bib"]) - 1]
        if true_order.index(before) > true_order.index(row["bib"]):
            equal(row["separated"], "not established", f"{before} before {row['bib']}")


@case
def individual_starts_rank_by_time_and_not_by_crossing(folder):
    wanted = sorted((entry for categories in expected("time-trial").values()
                     for entries in categories.values() for entry in entries), key=lambda entry: entry[1])
    listed = done(call("rank", beside("time-trial", ""), "--rules", "itt-100th", "--format", "json")).json["list"]
    equal([row["bib"] for row in listed if row["rank"]], [bib for bib, _ in wanted], "order by time")


if __name__ == "__main__":
    main()
