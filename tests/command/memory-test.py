"""Memory in proportion: at most 64 times the file's size and the program's own, for big files, odd ones and malicious ones; and the limits."""
import itertools
import math
import os
import subprocess
import threading

from whole_program import PROGRAM, Folder, holds, main, test

MB = 1 << 20
OWN = 40 * MB  # what the program takes for any file, libraries included

LABELS = ("##TITLE= film\n##JCAMP-DX= 4.24\n##XUNITS= NANOMETERS\n##YUNITS= ABSORBANCE\n##FIRSTX= 300\n##LASTX= 2300\n##XFACTOR= 1\n"
          "##YFACTOR= 0.001\n##NPOINTS= {}\n##XYDATA= (X++(Y..Y))\n")


def inspect(path, folder):
    """Exit status, both outputs, and the most memory there was in bytes, of this one process."""
    with open(folder("output"), "wb") as output, open(folder("errors"), "wb") as errors:
        child = subprocess.Popen([PROGRAM, "inspect", path], stdin=subprocess.DEVNULL, stdout=output, stderr=errors)
        _, status, usage = os.wait4(child.pid, 0)
        child.returncode = os.waitstatus_to_exitcode(status)
    with open(folder("output"), encoding="utf-8") as output, open(folder("errors"), encoding="utf-8") as errors:
        return child.returncode, output.read(MB), errors.read(MB), usage.ru_maxrss * 1024


def write(path, *parts):
    """Pieces of text or bytes, each perhaps with a count; never all of it in memory, which the child would inherit as its own."""
    with open(path, "wb") as file:
        for part in itertools.chain.from_iterable([part] if isinstance(part, (str, bytes, tuple)) else part for part in parts):
            piece, count = part if isinstance(part, tuple) else (part, 1)
            piece = piece if isinstance(piece, bytes) else piece.encode()
            at_once = max(1, MB // len(piece))
            for start in range(0, count, at_once):
                file.write(piece * min(at_once, count - start))


def check(folder, times=64):
    path = folder("film.txt")
    size = os.path.getsize(path)
    status, output, errors, peak = inspect(path, folder)
    print(f"# {size / MB:.1f} MB, {peak / MB:.0f} MB of memory, {max(peak - OWN, 0) / size:.1f} times beyond the program's own; status {status}", flush=True)
    assert peak < times * size + OWN, (size, peak)
    assert status in (0, 1) and (status == 0 or "film.txt: " in errors), errors
    return status, output, errors


@test
def test_big_table():
    """An ordinary table is held to far less than the limit."""
    with Folder() as folder:
        with open(folder("film.txt"), "w", encoding="ascii") as file:
            file.write("nm,A\n")
            for i in range(1000000):
                file.write(f"{300 + i / 500:.3f},{0.4 + 0.2 * math.sin(i * 2e-5) + 1e-3 * math.sin(7919 * i):.13f}\n")
        status, output, _ = check(folder, times=8)
        assert status == 0
        holds(output, "1000000 read, 1000000 used")


@test
def test_odd_text():
    odd = {"one line": (b"300.5,0.4,", MB), "commas": (b",", 10 * MB), "tabs": (b"\t", 10 * MB), "blanks": (b" ", 10 * MB), "quotes": (b'"', 10 * MB),
           "open quotes": (b'"a\n', 3 * MB), "empty lines": (b"\n", 10 * MB), "two numbers a line": (b"3,1\n", 2 * MB), "zeros": (b"\0", 10 * MB),
           "no characters": (b"\xff", 5 * MB), "digits": (b"1", 5 * MB), "comments": (b"#\n", 3 * MB), "notes": (b"a=b\n", 2 * MB),
           "pairs of a line": (b"1 2 3 4\n\n", MB), "tables": (b"nm,A\n" + b"".join(b"%d,%d\n" % (300 + i, i) for i in range(8)) + b"\n", MB // 20)}
    with Folder() as folder:
        for name, part in odd.items():
            print("#", name)
            write(folder("film.txt"), part)
            check(folder)


@test
def test_wide_table():
    with Folder() as folder:
        columns = 400
        write(folder("film.txt"), "nm" + ",A" * columns + "\n", *[f"{300 + i}" + ",1,2" * (columns // 2) + "\n" for i in range(500)])
        check(folder)
        write(folder("film.txt"), "nm" + ",A" * columns + "\n", *[f"{300 + i}" + f",{i % 7}" * columns + "\n" for i in range(500)])
        status, output, _ = check(folder)
        assert status == 0 and output.count("500 read") == columns


@test
def test_jcamp():
    with Folder() as folder:
        n = 3000000
        for name, parts in {"one line": (LABELS.format(n) + "300", ("AB", n // 2)), "lines": (LABELS.format(n), ("300" + "AB" * 38 + "\n", n // 76)),
                            "counts": (LABELS.format(n), ("300A1J1U\n", n // 5)), "labels": ("##TITLE=x\n", ((f"##L{i}=v\n", 1) for i in range(400000))),
                            "blocks": ((LABELS.format(8) + "300 1 2 3 4 5 6 7 8\n##END=\n", 20000),)}.items():
            print("#", name)
            write(folder("film.txt"), *parts, "\n##END=\n")
            status, output, errors = check(folder)
            if name == "blocks":
                holds(errors, "more than 10000 spectra")
            elif name != "labels":
                assert status == 0 and "JCAMP-DX 4.24" in output, errors


@test
def test_counts_of_repetitions():
    """A few bytes that ask for much."""
    with Folder() as folder:
        for n, table, said in ((1000000, "300A1S999999999999", ("line 11", "10 million at most", "export")),
                               (99999, "300A1J0T99990", ("line 11", "10 million at most")),
                               (10 ** 12, "300 1 2 3 4 5 6 7 8 9", ("line 11", "NPOINTS", "1e+12 points", "10 million")),
                               (9999999, "300" + "A1J1Z9" * 20, ())):
            write(folder("film.txt"), LABELS.format(n), table, "\n##END=\n")
            status, _, errors = check(folder)
            assert (status == 1) == bool(said), errors
            holds(errors, *said)


@test
def test_more_points_than_are_read():
    with Folder() as folder:
        write(folder("film.txt"), "nm,A\n", ("300,1\n", 10000001))
        status, _, errors = check(folder)
        assert status == 1
        holds(errors, "film.txt", "10 million points", "split it")
        write(folder("film.txt"), LABELS.format(10000000), "300", ("AB", 5000001), "\n##END=\n")
        status, _, errors = check(folder)
        assert status == 1
        holds(errors, "film.txt", "line 11", "10 million")


@test
def test_larger_than_is_read():
    """It is not even opened; a pipe is read to the limit and no further."""
    with Folder() as folder:
        with open(folder("film.txt"), "wb") as file:
            file.truncate(3 << 30)
        status, _, errors, peak = inspect(folder("film.txt"), folder)
        assert status == 1 and peak < OWN, peak
        holds(errors, "film.txt", "200 MB", "export")
        os.mkfifo(folder("endless.txt"))

        def feed():
            block = b"300,1\n" * 10000
            try:
                with open(folder("endless.txt"), "wb", buffering=0) as pipe:
                    while True:
                        pipe.write(block)
            except BrokenPipeError:
                pass
        feeder = threading.Thread(target=feed, daemon=True)
        feeder.start()
        status, _, errors, peak = inspect(folder("endless.txt"), folder)
        feeder.join(10)
        assert status == 1 and not feeder.is_alive() and peak < 600 * MB, peak
        holds(errors, "endless.txt", "200 MB")


main()
