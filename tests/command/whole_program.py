"""Runs bandtally-cli as a process and reports in TAP. The program's path is the first argument."""
import os
import shutil
import subprocess
import sys
import tempfile
import traceback

PROGRAM = os.path.abspath(sys.argv[1])
SOURCE = os.path.dirname(os.path.dirname(os.path.dirname(os.path.abspath(__file__))))
_tests = []


def test(function):
    """Marks a function as a test; it fails by raising."""
    _tests.append(function)
    return function


def run(*arguments, status=None, cwd=None, environment=None, binary=False, timeout=120):
    """Runs the program; where `status` is given, the exit status must be that."""
    result = subprocess.run([PROGRAM, *map(str, arguments)], capture_output=True, text=not binary, cwd=cwd, timeout=timeout,
                            env={**os.environ, **(environment or {})}, stdin=subprocess.DEVNULL, check=False)
    if status is not None and result.returncode != status:
        raise AssertionError(f"{arguments}: status {result.returncode}, expected {status}\n{result.stdout}\n{result.stderr}")
    return result


def holds(text, *parts):
    """Every part must be in the text, case aside."""
    for part in parts:
        assert part.lower() in text.lower(), f"“{part}” is not in: {text}"


class Folder:
    """A folder of its own that goes away afterwards."""

    def __enter__(self):
        self.path = tempfile.mkdtemp()
        return self

    def __exit__(self, *_):
        shutil.rmtree(self.path)

    def __call__(self, name):
        return os.path.join(self.path, name)

    def write(self, name, content):
        """Writes text or bytes; returns the path."""
        path = self(name)
        with open(path, "wb") as file:
            file.write(content if isinstance(content, bytes) else content.encode("utf-8"))
        return path

    def film(self, name="film.csv", *options):
        """A coarse film, quick to grade."""
        path = self(name)
        run("forecast", "--step-nm", "4", "--thickness-nm", "100", "--thickness-u-nm", "3", *options, "--output", path, status=0)
        return path


def main():
    failed = 0
    print(f"1..{len(_tests)}", flush=True)
    for number, function in enumerate(_tests, 1):
        name = function.__name__.removeprefix("test_").replace("_", " ")
        try:
            function()
            print(f"ok {number} - {name}", flush=True)
        except Exception:  # a test fails by whatever it raises
            failed += 1
            print(f"not ok {number} - {name}")
            print("".join("# " + line + "\n" for line in traceback.format_exc().splitlines()), end="", flush=True)
    sys.exit(1 if failed else 0)
