# SPDX-License-Identifier: GPL-3.0-or-later
"""Cases as functions named after the rule they hold the program to; results as TAP."""

import sys


class Failure(Exception):
    pass


def check(condition, message):
    if not condition:
        raise Failure(message)


def check_equal(got, wanted, what):
    if got != wanted:
        raise Failure("%s: got %r, wanted %r" % (what, got, wanted))


def run(cases):
    """Runs every function (or those named as arguments) and prints TAP."""
    wanted = sys.argv[1:]
    cases = [case for case in cases if not wanted or case.__name__ in wanted]
    failed = 0
    print("1..%d" % len(cases), flush=True)
    for number, case in enumerate(cases, 1):
        try:
            case()
            print("ok %d %s" % (number, case.__name__), flush=True)
        except Exception as error:  # a case that breaks in any way has failed
            failed += 1
            print("not ok %d %s" % (number, case.__name__))
            print("# %s: %s" % (type(error).__name__, str(error).replace("\n", "\n# ")), flush=True)
    sys.exit(1 if failed else 0)
