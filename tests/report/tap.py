"""Runs the functions of a module whose names begin with test_, and reports in TAP."""
import sys
import traceback


def main(module):
    tests = [(name, function) for name, function in module.items() if name.startswith("test_")]
    failed = 0
    print(f"1..{len(tests)}", flush=True)
    for number, (name, function) in enumerate(tests, 1):
        title = name.removeprefix("test_").replace("_", " ")
        try:
            function()
            print(f"ok {number} - {title}", flush=True)
        except Exception:  # a test fails by whatever it raises
            failed += 1
            print(f"not ok {number} - {title}")
            print("".join("# " + line + "\n" for line in traceback.format_exc().splitlines()), end="", flush=True)
    sys.exit(1 if failed else 0)
