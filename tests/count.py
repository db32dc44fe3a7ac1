"""Counts what a run of the tests passed and failed. Argument: the build folder.

Reads meson's log of every test program, prints the failing ones with their output, and closes with "N passed, N failed". A line
"ok" passed, a line "not ok" failed; a program that crashed, ran out of time, ran fewer tests than it planned or none at all has
failed once more.
"""
import json
import os
import re
import subprocess
import sys

LINE = re.compile(r"^(not )?ok\b([^#]*)(#\s*(\w+).*)?$")
PLAN = re.compile(r"^1\.\.(\d+)")


def count(program):
    """Returns passed, failed, skipped and the reasons why the program as a whole failed."""
    passed = failed = skipped = 0
    planned = None
    for line in program.get("stdout", "").splitlines():
        plan = PLAN.match(line)
        if plan:
            planned = int(plan.group(1))
        match = LINE.match(line)
        if not match:
            continue
        directive = (match.group(4) or "").upper()
        if directive == "SKIP" and not match.group(1):
            skipped += 1
        elif match.group(1):
            failed += 1
        else:
            passed += 1
    ran = passed + failed + skipped
    reasons = []
    if planned is None:
        reasons.append("it stated no plan")
    elif planned != ran:
        reasons.append(f"it planned {planned} tests and ran {ran}")
    if ran == 0:
        reasons.append("it ran no test")
    if program["returncode"] < 0:
        reasons.append(f"it was ended by signal {-program['returncode']}")
    if program["result"] == "TIMEOUT":
        reasons.append("it ran out of time")
    if not reasons and not failed and program["result"] not in ("OK", "SKIP"):
        reasons.append(f"it ended with status {program['returncode']} ({program['result']})")
    return passed, failed, skipped, reasons


def expected_programs(build):
    """Names of the tests that the build knows: one that left no record has failed."""
    output = subprocess.run(["meson", "introspect", "--tests", build], capture_output=True, text=True, check=True).stdout
    return [test["name"] for test in json.loads(output)]


def main():
    build = sys.argv[1]
    with open(os.path.join(build, "meson-logs", "testlog.json"), encoding="utf-8") as log:
        programs = [json.loads(line) for line in log if line.strip()]
    passed = failed = skipped = 0
    for program in programs:
        result = count(program)
        passed += result[0]
        failed += result[1] + bool(result[3])
        skipped += result[2]
        print(f"{program['name']}: {result[0]} passed, {result[1]} failed, {program['duration']:.1f} s")
        if result[1] or result[3]:
            for text in (program.get("stdout", ""), program.get("stderr", "")):
                print("\n".join("    " + line for line in text.splitlines()[-200:]))
            for reason in result[3]:
                print(f"    {program['name']} failed: {reason}.")
    seen = [program["name"].split(" / ")[-1].split(":")[-1] for program in programs]
    for name in expected_programs(build):
        if name not in seen:
            failed += 1
            print(f"{name} failed: it left no record.")
    if skipped:
        print(f"{skipped} skipped")
    print(f"{passed} passed, {failed} failed")
    return 1 if failed or not passed else 0


sys.exit(main())
