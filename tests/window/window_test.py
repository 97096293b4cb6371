# SPDX-License-Identifier: GPL-3.0-or-later
"""The window's rules, each met from outside. True orders and times come from the simulator's truth files, which
share no code with the program."""

import csv
import os
import re
import subprocess
import time

from desk import COMMAND_LINE, SAMPLES, Atspi, Desk, Folder, screenshot, wait_for, write_recording
from tap import check, check_equal, run

SPRINT = os.path.join(SAMPLES, "aldermoor-sprint")


def truth_order():
    with open(SPRINT + ".truth.csv", newline="") as lines:
        rows = sorted(csv.DictReader(lines), key=lambda row: int(row["order"]))
    return [row["bib"] for row in rows]


def names_of_riders():
    with open(SPRINT + ".startlist.csv", newline="") as lines:
        return {row["bib"]: row["name"] for row in csv.DictReader(lines)}


def ranked(rows):
    """Place, number and name of the spoken rows that have a place."""
    found = []
    for row in rows:
        match = re.match(r"(\d+)=?, number ([^,]+), (.*?), ", row)
        if match:
            found.append((int(match.group(1)), match.group(2), match.group(3)))
    return found


def markers_on_disk(path):
    with open(path, newline="") as lines:
        return list(csv.DictReader(lines))


def desk_with_picture(folder, **shape):
    return Desk(write_recording(folder, "made", **shape))


def wait_markers(desk, count):
    ending = ", %d marker%s" % (count, "" if count == 1 else "s")
    wait_for("%d markers" % count, lambda: desk.description().endswith(ending))


def line_time(desk):
    return re.search(r"reading line at (\S+),", desk.description()).group(1)


def the_sample_opens_from_the_start_page_with_its_riders_named_and_ranked():
    with Desk() as desk:
        wait_for("the start page to say what to do", lambda: desk.says("Judge a finish"))
        desk.press_button("Try the sample finish")
        wait_for("the list", lambda: len(ranked(desk.rows())) == 30)
        names = names_of_riders()
        order = truth_order()
        got = ranked(desk.rows())
        check_equal([bib for _, bib, _ in got], order, "the order across the line")
        check_equal([name for _, _, name in got], [names[bib] for bib in order], "the names")
        check_equal([place for place, _, _ in got], list(range(1, 31)), "the places")
        check(desk.description().endswith(", 30 markers"), "the picture says how many markers it has")
        check(desk.says("Provisional"), "the list is called provisional")


def an_exported_list_is_what_the_command_line_prints():
    with Folder() as folder, Desk(SPRINT, "--rules", "road-1s") as desk:
        wait_for("the list", lambda: len(ranked(desk.rows())) == 30)
        for kind in "json", "csv":
            out = os.path.join(folder, "list." + kind)
            desk.act("export-list", out)
            wait_for("the export", lambda: os.path.exists(out))
            wanted = subprocess.run([COMMAND_LINE, "rank", SPRINT, "--rules", "road-1s", "--format", kind],
                                    capture_output=True, check=True).stdout
            with open(out, "rb") as got:
                check_equal(got.read(), wanted, "the list as " + kind)


def a_marker_is_placed_named_moved_and_deleted_by_keys_alone():
    with Folder() as folder, desk_with_picture(folder) as desk:
        desk.focus_picture()
        desk.keys("Home", "shift+Right", "Insert")
        wait_markers(desk, 1)
        wait_for("an unnamed row", lambda: any("number ?1, not yet named" in row for row in desk.rows()))
        desk.keys("1", "7", "Return")
        wait_for("the name", lambda: any(", number 17, " in row for row in desk.rows()))
        desk.keys("F2", "1", "8", "Return")
        wait_for("the new name", lambda: any(", number 18, " in row for row in desk.rows()))
        before = line_time(desk)
        desk.keys("shift+Right", "Right")
        wait_for("the line to move", lambda: line_time(desk) != before)
        desk.keys("m")
        desk.act("save-markers")
        path = os.path.join(folder, "made.markers.csv")
        wait_for("the file", lambda: os.path.exists(path))
        # 10 columns to Insert, 11 more to M.
        check_equal([(row["bib"], float(row["column"])) for row in markers_on_disk(path)], [("18", 21.0)],
                    "what was saved")
        desk.keys("Delete")
        wait_markers(desk, 0)
        wait_for("the way back", lambda: desk.says("Marker 18 deleted"))


def every_act_on_markers_can_be_undone_and_done_again():
    with Folder() as folder, desk_with_picture(folder) as desk:
        desk.focus_picture()
        desk.keys("Home", "shift+Right", "Insert")
        wait_markers(desk, 1)
        desk.keys("5", "Return")
        wait_for("the name", lambda: any(", number 5, " in row for row in desk.rows()))
        desk.keys("Delete")
        wait_markers(desk, 0)
        desk.keys("ctrl+z")
        wait_for("the marker again", lambda: any(", number 5, " in row for row in desk.rows()))
        desk.keys("ctrl+z")
        wait_for("it unnamed", lambda: any(", number ?1, " in row for row in desk.rows()))
        desk.keys("ctrl+z")
        wait_markers(desk, 0)
        desk.keys("ctrl+shift+z", "ctrl+shift+z")
        wait_for("the name again", lambda: any(", number 5, " in row for row in desk.rows()))
        desk.keys("ctrl+y")
        wait_markers(desk, 0)


def the_undo_offered_after_a_deletion_goes_with_the_next_act():
    with Folder() as folder, desk_with_picture(folder) as desk:
        desk.focus_picture()
        desk.keys("Home", "5", "Return")
        wait_markers(desk, 1)
        desk.keys("Delete")
        wait_markers(desk, 0)
        wait_for("the offer", lambda: desk.says("Marker 5 deleted"))
        desk.keys("shift+Right", "Insert")
        wait_markers(desk, 1)
        gone_by = time.monotonic() + 4
        while desk.says("Marker 5 deleted"):
            check(time.monotonic() < gone_by, "the offer goes long before its 8 seconds are over")
            time.sleep(0.03)


def a_list_without_a_start_list_counts_who_is_ranked():
    with Folder() as folder, desk_with_picture(folder) as desk:
        desk.focus_picture()
        desk.keys("Home", "5", "Return")
        wait_for("one", lambda: desk.says("1 ranked · no start list, so nobody can be missed"))
        desk.keys(*["shift+Right"] * 10, "6", "Return")
        wait_for("two", lambda: desk.says("2 ranked · no start list, so nobody can be missed"))


def a_rear_tyre_is_marked_with_r_and_called_so():
    with Folder() as folder, desk_with_picture(folder) as desk:
        desk.focus_picture()
        desk.keys("Home", "5", "Return", *["shift+Right"] * 8, "Insert")
        wait_markers(desk, 2)
        desk.keys("r")
        wait_for("the word", lambda: desk.says("rear tyre"))
        desk.keys("5", "Return")
        wait_for("the name", lambda: desk.says("5 · rear tyre"))
        desk.act("save-markers")
        path = os.path.join(folder, "made.markers.csv")
        wait_for("the file", lambda: os.path.exists(path))
        check_equal([(row["bib"], row["edge"]) for row in markers_on_disk(path)], [("5", "front"), ("5", "rear")],
                    "what was saved")


def the_keys_of_a_marker_work_on_its_row_too():
    with Folder() as folder, desk_with_picture(folder) as desk:
        desk.focus_picture()
        desk.keys("Home", "5", "Return", *["shift+Right"] * 8, "6", "Return")
        wait_markers(desk, 2)
        at_six = line_time(desk)
        desk.click_row(", number 5,")
        wait_for("the line at the marker", lambda: line_time(desk) != at_six)
        desk.keys("F2", "8", "Return")
        wait_for("the new name", lambda: any(", number 8, " in row for row in desk.rows()))
        desk.click_row(", number 6,")
        wait_for("the line at the other", lambda: line_time(desk) == at_six)
        desk.keys("9")
        wait_for("the question", lambda: desk.says("Marker 6 stands here. Enter twice renames it to 9."))
        desk.keys("Escape")
        desk.click_row(", number 8,")
        wait_for("the line to move", lambda: line_time(desk) != at_six)
        desk.keys("Delete")
        wait_markers(desk, 1)
        wait_for("the way back", lambda: desk.says("Marker 8 deleted"))


def a_doubtful_number_is_asked_about_and_taken_with_the_second_enter():
    with Folder() as folder:
        path = write_recording(folder, "made")
        with open(path + ".startlist.csv", "w") as out:
            out.write("bib,name\n1,Ada Test\n2,Ben Test\n")
        with Desk(path) as desk:
            desk.focus_picture()
            desk.keys("Home", "9", "Return")
            wait_for("the doubt", lambda: desk.says("No rider has number 9 in the start list."))
            wait_for("the question", lambda: desk.says("Enter once more, or Esc."))
            check(desk.description().endswith(", 0 markers"), "nothing is placed before the second Enter")
            desk.keys("Escape")
            wait_for("the picture to have the keys",
                     lambda: desk.picture().get_state_set().contains(Atspi.StateType.FOCUSED))
            check(desk.description().endswith(", 0 markers"), "Esc gives it up")
            desk.keys("9", "Return", "Return")
            wait_markers(desk, 1)
            wait_for("the row", lambda: any(", number 9, not in the start list" in row for row in desk.rows()))
            # A number that stands already, some way off.
            for _ in range(20):
                desk.keys("shift+Right")
            desk.keys("9", "Return")
            wait_for("the doubt", lambda: desk.says("9 already stands at "))
            check(desk.description().endswith(", 1 marker"), "a number is not used twice without asking")
            desk.keys("Return")
            wait_markers(desk, 2)
            wait_for("the conflict", lambda: desk.says("Number 9 stands at 2 markers"))


def a_number_typed_beside_a_named_marker_takes_nobodys_place():
    with Folder() as folder, desk_with_picture(folder) as desk:
        desk.focus_picture()
        desk.keys("Home", "5", "0", "Return")
        wait_markers(desk, 1)
        desk.keys("5", "1", "Return")
        wait_for("the question", lambda: desk.says("Marker 50 stands here. Enter twice renames it to 51."))
        desk.keys("Escape")
        desk.keys("Right", "Right", "5", "1", "Return", "Return")
        wait_markers(desk, 2)
        wait_for("both riders", lambda: [bib for bib in ("50", "51")
                                         if any(", number %s" % bib in row for row in desk.rows())] == ["50", "51"])


def a_number_worn_in_two_categories_must_say_which():
    with Folder() as folder:
        path = write_recording(folder, "made")
        with open(path + ".startlist.csv", "w") as out:
            out.write("bib,name,category\n4,Ada Test,Women\n4,Ben Test,Veterans\n")
        with Desk(path) as desk:
            desk.focus_picture()
            desk.keys("Home", "4", "Return", "Return")
            wait_for("the refusal", lambda: desk.says("Number 4 is worn in several categories"))
            check(desk.description().endswith(", 0 markers"), "nothing is placed for either")
            desk.keys("space", "w", "Return")
            wait_markers(desk, 1)
            wait_for("the rider", lambda: any("number 4, Ada Test" in row for row in desk.rows()))
            check(not any(re.match(r"\d", row) and "Ben Test" in row for row in desk.rows()), "the other has no place")
            desk.act("save-markers")
            saved = path + ".markers.csv"
            wait_for("the file", lambda: os.path.exists(saved))
            check_equal(markers_on_disk(saved)[0]["category"], "Women", "the category kept")


def a_passage_is_chosen_where_markers_belong_to_several():
    with Folder() as folder:
        path = write_recording(folder, "made")
        with open(path + ".markers.csv", "w") as out:
            out.write("bib,column,row,edge,passage\n1,100,50,front,lap 1\n2,120,50,front,lap 1\n2,700,50,front,lap 2\n")
        with Desk(path) as desk:
            wait_for("the sentence", lambda: desk.says("The list cannot be made: see below why."))
            desk.act("passage", "lap 1")
            wait_for("lap 1", lambda: [row[:11] for row in desk.rows()] == ["1, number 1", "2, number 2"])
            desk.act("passage", "lap 2")
            wait_for("lap 2", lambda: [row[:11] for row in desk.rows()] == ["1, number 2"])
            # A new marker belongs to the passage that is judged.
            desk.focus_picture()
            desk.act("goto-time", "16:02:11.300")
            wait_for("the line", lambda: line_time(desk).startswith("16:02:11.300"))
            desk.keys("1", "Return")
            wait_markers(desk, 4)
            desk.act("save-markers")
            wait_for("the file", lambda: len(markers_on_disk(path + ".markers.csv")) == 4)
            check_equal(markers_on_disk(path + ".markers.csv")[3]["passage"], "lap 2", "its passage")


def the_picture_is_exported():
    with Folder() as folder, Desk(SPRINT) as desk:
        out = os.path.join(folder, "finish.png")
        desk.act("export-picture", out)
        wait_for("the file", lambda: os.path.exists(out))
        with open(out, "rb") as png:
            head = png.read(24)
        check_equal(head[:8], b"\x89PNG\r\n\x1a\n", "a PNG")
        # One pixel a column: wider than the columns between the first and the last rider.
        with open(SPRINT + ".truth.csv", newline="") as lines:
            columns = [float(row["front_column"]) for row in csv.DictReader(lines)]
        check(int.from_bytes(head[16:20], "big") > max(columns) - min(columns), "nothing is cut off")


def a_number_names_the_marker_in_view_and_never_one_that_is_not():
    with Folder() as folder, desk_with_picture(folder) as desk:
        desk.focus_picture()
        desk.keys("Home", "Insert")
        wait_markers(desk, 1)
        desk.act("zoom-1-1")
        for _ in range(3):
            desk.act("zoom-in")
        desk.keys("Next", "Next", "Next", "4")
        wait_for("the refusal", lambda: desk.says("The reading line is out of view"))
        desk.keys("Return")
        wait_for("it to stay unnamed", lambda: any(", number ?1, " in row for row in desk.rows()))
        check(not any(", number 4, " in row for row in desk.rows()), "nothing out of view is named")


def a_marker_placed_in_a_shrunken_view_is_to_be_read_again():
    with Folder() as folder, desk_with_picture(folder, columns=4000, rows=40) as desk:
        desk.focus_picture()
        desk.keys("Home", "Insert")
        wait_for("the state", lambda: any(", to re-read" in row for row in desk.rows()))
        desk.act("zoom-1-1")
        desk.keys("Right", "m")
        wait_for("the state to change", lambda: desk.rows() and not any(", to re-read" in r for r in desk.rows()))


def saving_writes_only_what_is_new_and_then_the_recording_is_named():
    with Folder() as folder:
        path = write_recording(folder, "made")
        saved = path + ".markers.csv"
        with open(saved, "w") as out:
            out.write("bib,column,row,edge\n1,100,50,front\n")
        with Desk(path) as desk:
            wait_for("the note", lambda: desk.says("The markers do not say which recording they were made on"))
            desk.act("save-markers")
            wait_for("the file", lambda: markers_on_disk(saved)[0].get("recording"))
            wait_for("the note to go",
                     lambda: not desk.says("The markers do not say which recording they were made on"))
            stamp = os.stat(saved).st_mtime_ns
            desk.act("save-markers")
            wait_for("the remark", lambda: desk.says("Nothing to save."))
            check_equal(os.stat(saved).st_mtime_ns, stamp, "the time at which the file was written")


def riders_outside_the_start_list_part_no_category():
    with Folder() as folder:
        path = write_recording(folder, "made")
        with open(path + ".startlist.csv", "w") as out:
            out.write("bib,name,category\n1,Ada Test,Elite\n2,Ben Test,Elite\n")
        with open(path + ".markers.csv", "w") as out:
            out.write("bib,column,row,edge\n8,60,50,front\n1,100,50,front\n9,300,50,front\n2,600,50,front\n")
        with Desk(path) as desk:
            wait_for("the riders", lambda: len(desk.rows()) >= 4)
            wait_for("the heading", lambda: desk.says("Elite"))
            check_equal(desk.texts().count("Elite"), 1, "headings")


def saving_asks_before_it_replaces_markers_that_were_never_read():
    with Folder() as folder, desk_with_picture(folder) as desk:
        path = os.path.join(folder, "made.markers.csv")
        desk.focus_picture()
        desk.keys("Home", "Insert")
        wait_markers(desk, 1)
        with open(path, "w") as out:
            out.write("bib,column\n77,3\n")
        desk.act("save-markers")
        wait_for("the question", lambda: desk.says("Replace other markers?"))
        with open(path) as kept:
            check_equal(kept.read(), "bib,column\n77,3\n", "the other markers")
        desk.press_button("Cancel")
        wait_for("the question to go", lambda: not desk.says("Replace other markers?"))
        desk.act("save-markers")
        desk.press_button("Replace")
        wait_for("the file", lambda: [row["bib"] for row in markers_on_disk(path)] == ["?1"])


def closing_with_unsaved_markers_asks():
    with Folder() as folder, desk_with_picture(folder) as desk:
        desk.focus_picture()
        desk.keys("Home", "Insert")
        wait_markers(desk, 1)
        desk.act("close")
        wait_for("the question", lambda: desk.says("Save the markers?"))
        desk.press_button("Cancel")
        wait_for("the question to go", lambda: not desk.says("Save the markers?"))
        check(not desk.ended(), "Cancel keeps the window")
        desk.act("close")
        desk.press_button("Save")
        wait_for("the end", desk.ended)
        check_equal(desk.process.returncode, 0, "how it ended")
        check_equal(len(markers_on_disk(os.path.join(folder, "made.markers.csv"))), 1, "markers saved")


def what_cannot_be_opened_says_why_and_what_is_open_stays():
    with Folder() as folder:
        broken = os.path.join(folder, "broken")
        os.mkdir(broken)
        with open(os.path.join(broken, "recording.json"), "w") as out:
            out.write('{"halfwheel_recording": 99}')
        with Desk(broken) as desk:
            wait_for("the page", lambda: desk.says("This could not be opened"))
            wait_for("the sentence", lambda: desk.says("recording.json"))
            desk.act("open-path", write_recording(folder, "made"))
            desk.focus_picture()
            desk.keys("Home", "Insert")
            wait_markers(desk, 1)
            desk.act("save-markers")
            wait_for("the file", lambda: os.path.exists(os.path.join(folder, "made.markers.csv")))
            desk.act("open-path", broken)
            wait_for("the sentence", lambda: desk.says("recording.json"))
            wait_markers(desk, 1)


def nothing_is_cut_off_in_the_smallest_window():
    # 1920 x 1080 at twice the size are 960 x 540; the desktop's own bars take some of it.
    width, height = 940, 520
    with Desk(SPRINT, "--rules", "road-1s") as desk:
        wait_for("the list", lambda: len(ranked(desk.rows())) == 30)
        subprocess.run(["xdotool", "windowsize", desk.window_id(), str(width), str(height)], check=True)

        def picture_is_narrow():
            return desk.picture_box()[2] < 650

        wait_for("the size", picture_is_narrow)
        desk.act("goto-time", "16:02:12.966")
        wait_for("the line", lambda: line_time(desk).startswith("16:02:12.966"))
        desk.focus_picture()
        desk.keys("9", "9", "9")
        wait_for("a long sentence", lambda: desk.says("No rider has number 999 in the start list."))
        found = 0
        for item in desk.everything():
            if item.get_role() != Atspi.Role.LABEL or not item.get_name():
                continue
            box = item.get_component_iface().get_extents(Atspi.CoordType.WINDOW)
            check(box.x >= 0 and box.x + box.width <= width,
                  "%r reaches from %d to %d" % (item.get_name(), box.x, box.x + box.width))
            if item.get_name().startswith(("No rider has", "The regulations")):
                check(box.y + box.height <= height, "%r ends at %d" % (item.get_name(), box.y + box.height))
                found += 1
        check_equal(found, 2, "the sentences at the foot")


def an_incomplete_recording_says_so():
    with Desk(os.path.join(SAMPLES, "damaged")) as desk:
        wait_for("the words", lambda: desk.says("Incomplete recording."))


def the_picture_is_never_mirrored():
    # Red crosses first, blue last, green stands on the ground side below: nothing in it is symmetric.
    def rgb(column, row):
        if row >= 80:
            return (20, 160, 20)
        return (200, 30, 30) if column < 600 else (30, 30, 200)

    for travel in "left", "right":
        for later in "left", "right":
            with Folder() as folder, desk_with_picture(folder, travel=travel, later=later, rgb=rgb) as desk:
                x, y, width, height = desk.picture_box()
                top = y + 66
                seen = []

                def drawn():
                    _, _, pixel = screenshot()
                    middle = top + (height - 66) * 0.4
                    low = top + (height - 66) * 0.9
                    seen[:] = [pixel(x + width * 0.2, middle), pixel(x + width * 0.8, middle),
                               pixel(x + width * 0.2, low)]
                    return (20, 160, 20) in seen

                wait_for("the picture to be drawn the right way up", drawn)
                # Riders face the side on which what crossed first stands: left where they ride to the left.
                first, last = (200, 30, 30), (30, 30, 200)
                wanted = [first, last] if travel == "left" else [last, first]
                check_equal(seen[:2], wanted, "left and right of the screen, travel %s, later %s" % (travel, later))


def arrows_move_the_line_as_seen_on_screen():
    for travel, sign in ("left", 1), ("right", -1):
        with Folder() as folder, desk_with_picture(folder, travel=travel) as desk:
            desk.focus_picture()
            desk.act("goto-time", "16:02:11.500")
            wait_for("the line", lambda: line_time(desk).startswith("16:02:11.500"))
            desk.keys("shift+Right")
            wanted = "16:02:11.%d" % (500 + 10 * sign)
            wait_for("ten columns to the right of the screen, travel " + travel,
                     lambda: line_time(desk).startswith(wanted))


def everything_on_screen_has_a_name_a_person_would_use():
    with Desk(SPRINT) as desk:
        wait_for("the list", lambda: len(desk.rows()) >= 30)
        ours = (Atspi.Role.PUSH_BUTTON, Atspi.Role.TOGGLE_BUTTON, Atspi.Role.TEXT, Atspi.Role.ENTRY, Atspi.Role.IMAGE,
                Atspi.Role.LIST, Atspi.Role.LIST_ITEM, Atspi.Role.LABEL)
        seen, nameless = 0, []
        for item in desk.everything():
            name = item.get_name() or ""
            if item.get_role() not in ours:
                continue
            seen += 1
            if not name or name.startswith(("Gtk", "Adw", "Hw", "_")):
                nameless.append((item.get_role_name(), name, item.get_parent().get_name()))
        check(seen > 100, "controls were found")
        check_equal(nameless, [], "controls without a name")


def a_click_brings_the_line_and_a_drag_of_the_flag_moves_the_marker():
    with Folder() as folder, desk_with_picture(folder) as desk:
        x, y, width, height = desk.picture_box()
        desk.click(x + width * 0.25, y + 66 + (height - 66) * 0.5)
        desk.keys("Insert")
        wait_markers(desk, 1)
        first = line_time(desk)
        desk.click(x + width * 0.75, y + 66 + (height - 66) * 0.5)
        wait_for("the line to come", lambda: line_time(desk) > first)
        # The bib in the rail is a handle; its left end stands on the stem.
        subprocess.run(["xdotool", "mousemove", str(int(x + width * 0.25 + 4)), str(int(y + 8)), "mousedown", "1",
                        "mousemove_relative", "--sync", "30", "0", "mousemove_relative", "--sync", "30", "0",
                        "mouseup", "1"], check=True)
        wait_for("the marker to have moved", lambda: line_time(desk) < "16:02:11.700")
        desk.act("save-markers")
        path = os.path.join(folder, "made.markers.csv")
        wait_for("the file", lambda: os.path.exists(path))
        column = float(markers_on_disk(path)[0]["column"])
        seconds = float(first.rsplit(":", 1)[1]) - 11.0
        per_px = 1200.0 / width
        check(abs(column - (seconds * 1000 + 60 * per_px)) < 3 * per_px,
              "dragged by 60 pixels: from %.1f to %.1f" % (seconds * 1000, column))


def the_wheel_zooms_about_the_pointer():
    with Folder() as folder, desk_with_picture(folder) as desk:
        x, y, width, height = desk.picture_box()
        px, py = int(x + width * 0.3), int(y + 66 + (height - 66) * 0.5)
        desk.click(px, py)
        wait_for("the line", lambda: line_time(desk) > "16:02:11.100")
        before = line_time(desk)
        subprocess.run(["xdotool", "click", "--repeat", "6", "4"], check=True)
        # The line stays under the pointer, so that a click there moves it by less than a pixel's worth.
        time_before = float(before.rsplit(":", 1)[1])
        desk.click(px, py)
        desk.keys("Insert")
        wait_markers(desk, 1)
        after = float(line_time(desk).rsplit(":", 1)[1])
        check(abs(after - time_before) * 1000 <= 2 * 1200.0 / width,
              "the column under the pointer stayed: %s, then %s" % (time_before, after))


run([
    the_sample_opens_from_the_start_page_with_its_riders_named_and_ranked,
    an_exported_list_is_what_the_command_line_prints,
    a_marker_is_placed_named_moved_and_deleted_by_keys_alone,
    every_act_on_markers_can_be_undone_and_done_again,
    the_undo_offered_after_a_deletion_goes_with_the_next_act,
    a_list_without_a_start_list_counts_who_is_ranked,
    a_rear_tyre_is_marked_with_r_and_called_so,
    the_keys_of_a_marker_work_on_its_row_too,
    a_doubtful_number_is_asked_about_and_taken_with_the_second_enter,
    a_number_typed_beside_a_named_marker_takes_nobodys_place,
    a_number_worn_in_two_categories_must_say_which,
    a_passage_is_chosen_where_markers_belong_to_several,
    the_picture_is_exported,
    a_number_names_the_marker_in_view_and_never_one_that_is_not,
    a_marker_placed_in_a_shrunken_view_is_to_be_read_again,
    saving_writes_only_what_is_new_and_then_the_recording_is_named,
    riders_outside_the_start_list_part_no_category,
    saving_asks_before_it_replaces_markers_that_were_never_read,
    closing_with_unsaved_markers_asks,
    what_cannot_be_opened_says_why_and_what_is_open_stays,
    nothing_is_cut_off_in_the_smallest_window,
    an_incomplete_recording_says_so,
    the_picture_is_never_mirrored,
    arrows_move_the_line_as_seen_on_screen,
    everything_on_screen_has_a_name_a_person_would_use,
    a_click_brings_the_line_and_a_drag_of_the_flag_moves_the_marker,
    the_wheel_zooms_about_the_pointer,
])
