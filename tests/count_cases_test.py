#!/usr/bin/env python3
# SPDX-License-Identifier: GPL-3.0-or-later
"""The count that tests/run ends with: fakes that fail, crash and fall silent, run by meson, must all be counted.
TAP."""
import os
import subprocess
import sys
import tempfile

HERE = os.path.dirname(os.path.abspath(__file__))
# Each fake: its name, its script, how many of its cases passed and failed.
FAKES = [
    ("passes", 'echo "1..2"; echo "ok 1 - a"; echo "ok 2 - b"', 2, 0),
    ("plan_last", 'echo "# note"; echo "ok 1 /a"; echo "1..1"', 1, 0),
    ("one_case_fails", 'echo "1..3"; echo "ok 1 - a"; echo "not ok 2 - b"; echo "ok 3 - c"; exit 1', 2, 1),
    ("fails_but_exits_0", 'echo "1..1"; echo "not ok 1 - a"', 0, 1),
    ("crashes", 'echo "1..3"; echo "ok 1 - a"; kill -SEGV $$', 1, 1),
    ("bails_out", 'echo "ok 1 /a"; echo "not ok 2 /b - wrong"; echo "Bail out! wrong"; kill -ABRT $$', 1, 2),
    ("crashes_at_the_end", 'echo "1..1"; echo "ok 1 - a"; kill -SEGV $$', 1, 1),
    ("exits_1_after_all", 'echo "1..1"; echo "ok 1 - a"; exit 1', 1, 1),
    ("too_few", 'echo "1..3"; echo "ok 1 - a"; echo "ok 2 - b"', 2, 1),
    ("too_many", 'echo "1..1"; echo "ok 1 - a"; echo "ok 2 - b"', 2, 1),
    ("no_plan", 'echo "ok 1 - a"', 1, 1),
    ("no_tap", 'echo "all is well"', 0, 1),
    ("silent", "exit 0", 0, 1),
    ("skips_one", 'echo "1..2"; echo "ok 1 - a"; echo "ok 2 - b # SKIP no display"', 1, 1),
    ("skips_all", 'echo "1..0 # SKIP no display"', 0, 1),
    ("to_do", 'echo "1..1"; echo "not ok 1 - a # TODO later"', 0, 1),
    ("never_starts", None, 0, 1),
]


def call(*command):
    return subprocess.run(command, capture_output=True, text=True, check=False)


def run_fakes(folder, fakes):
    """The output and state of the count over a meson project of these fakes."""
    source, build = os.path.join(folder, "source"), os.path.join(folder, "build")
    os.makedirs(source)
    lines = ["project('fakes')"]
    for name, script, _, _ in fakes:
        path = os.path.join(source, name + ".sh")
        with open(path, "w", encoding="utf-8") as file:
            file.write("#!/nowhere/to/be/found\n" if script is None else f"#!/bin/sh\n{script}\n")
        os.chmod(path, 0o755)
        program = "find_program('sh')" if script is not None else f"files('{name}.sh')"
        arguments = f", args: [files('{name}.sh')]" if script is not None else ""
        lines.append(f"test('{name}', {program}{arguments}, protocol: 'tap', suite: 'fake')")
    with open(os.path.join(source, "meson.build"), "w", encoding="utf-8") as file:
        file.write("\n".join(lines) + "\n")
    setup = call("meson", "setup", build, source)
    if setup.returncode != 0:
        return setup.stdout + setup.stderr, 99
    expected = os.path.join(folder, "expected")
    with open(expected, "w", encoding="utf-8") as file:
        file.write("".join(f"together {name}\n" for name, _, _, _ in fakes))
    call("meson", "test", "-C", build, "--no-rebuild", "--logbase", "together")
    counted = call(os.path.join(HERE, "count-cases"), "--expect", expected,
                   os.path.join(build, "meson-logs", "together.json"))
    return counted.stdout + counted.stderr, counted.returncode


def main():
    cases = []
    with tempfile.TemporaryDirectory() as folder:
        text, state = run_fakes(os.path.join(folder, "all"), FAKES)
        wanted = f"{sum(f[2] for f in FAKES)} passed, {sum(f[3] for f in FAKES)} failed"
        last = text.splitlines()[-1] if text else ""
        cases.append((f"all_fakes_together: {last!r} is {wanted!r}", last == wanted and state == 1))
        for name, _, _, failed in FAKES:
            shown = f"{name}: " in text or f"{name} was not run" in text
            cases.append((f"{name}_is_{'shown' if failed else 'not_shown'}", shown == (failed > 0)))
        text, state = run_fakes(os.path.join(folder, "good"), FAKES[:2])
        cases.append(("all_passing_exits_0", text.splitlines()[-1:] == ["3 passed, 0 failed"] and state == 0))
        nothing = call(os.path.join(HERE, "count-cases"))
        cases.append(("nothing_run_is_no_success", nothing.returncode == 1))
        absent = call(os.path.join(HERE, "count-cases"), os.path.join(folder, "absent.json"))
        cases.append(("a_log_that_is_not_there_is_no_success", absent.returncode == 1))
    print(f"1..{len(cases)}")
    for number, (name, good) in enumerate(cases, 1):
        print(f"{'ok' if good else 'not ok'} {number} - {name}")
    if not all(good for _, good in cases):
        print("".join(f"# {line}\n" for line in text.splitlines()))
    return 0 if all(good for _, good in cases) else 1


if __name__ == "__main__":
    sys.exit(main())
