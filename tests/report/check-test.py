"""The check of an instrument as a page and as part of a recipe, on made-up scans whose faults are known."""
import json
import math
import os
import re
import subprocess
import sys
import tempfile

from tap import main

PROGRAM = sys.argv[1]
EPOCH = "1000000000"  # 2001-09-09 01:46:40 UTC
FOLDER = tempfile.TemporaryDirectory(prefix="bandtally-")
# Control positions of holmium oxide in perchloric acid: Ph. Eur. 2.2.25, older edition.
HOLMIUM = (241.15, 287.15, 361.5, 536.3)
# 60 mg/L, nominal values of solutions made from NIST SRM 935a.
DICHROMATE = ((225, 0.70), (235, 0.743), (257, 0.865), (313, 0.290), (350, 0.643), (420, 0.02))


def in_folder(name):
    return os.path.join(FOLDER.name, name)


def write(name, points):
    path = in_folder(name)
    with open(path, "w") as file:
        file.write("wavelength_nm,absorbance\n" + "".join(f"{x:.2f},{y:.5f}\n" for x, y in points))
    return path


def holmium(name, shift):
    return write(name, ((x / 4, 0.1 + sum(0.4 * math.exp(-4 * math.log(2) * ((x / 4 - band - shift) / 3.2) ** 2) for band in HOLMIUM))
                        for x in range(900, 2400)))


def dichromate(name, factor):
    def value(x):
        for (x0, y0), (x1, y1) in zip(DICHROMATE, DICHROMATE[1:]):
            if x0 <= x <= x1:
                return y0 + (y1 - y0) * (1 - math.cos(math.pi * (x - x0) / (x1 - x0))) / 2
    return write(name, ((x / 2, factor * value(x / 2)) for x in range(450, 841)))


def check(*arguments, status=0):
    done = subprocess.run([PROGRAM, "check-instrument", *arguments], capture_output=True, text=True, timeout=60,
                          env={**os.environ, "SOURCE_DATE_EPOCH": EPOCH})
    assert done.returncode == status, (done.returncode, done.stderr)
    return done


def text_of(path):
    return subprocess.run(["pdftotext", "-layout", path, "-"], capture_output=True, text=True, check=True, timeout=60).stdout


def size_of(path):
    text = subprocess.run(["pdfinfo", path], capture_output=True, text=True, check=True, timeout=60).stdout
    assert re.search(r"Pages:\s+1\n", text), text
    return tuple(round(float(number)) for number in re.search(r"Page size:\s+([\d.]+) x ([\d.]+)", text).groups())


def has(text, *parts):
    for part in parts:
        assert part in text, f"{part!r} is not on the page:\n{text}"


def test_one_page_on_both_papers():
    scan = holmium("h.csv", 0.25)
    for paper, size in (("a4", (595, 842)), ("letter", (612, 792))):
        path = in_folder(paper + ".pdf")
        check(scan, "--paper", paper, "--pdf", path)
        assert size_of(path) == size, size_of(path)
        has(text_of(path), "Wavelength check with holmium oxide", "h.csv", "2001-09-09 01:46 UTC", "Every judged value is within",
            "Perchloric acid is corrosive", "Signature", "Ph. Eur. 2.2.25")


def test_lines_say_what_was_found():
    path = in_folder("lines.pdf")
    check(holmium("lines.csv", 0.25), "--pdf", path)
    rows = re.findall(r"(\d+\.\d\d)\s+(\d+\.\d\d)\s+(?:< )?0\.\d+\s+(\+\d\.\d\d)\s+(\d+\.\d\d) to (\d+\.\d\d)\s+✓ within", text_of(path))
    assert [float(row[0]) for row in rows] == list(HOLMIUM), rows
    for published, found, deviation, low, high in rows:
        assert abs(float(found) - float(published) - 0.25) < 0.06, (published, found)
        assert abs(float(found) - float(published) - float(deviation)) < 0.011, (published, found, deviation)


def test_a_fault_is_said_in_words():
    path = in_folder("bad.pdf")
    check(holmium("bad.csv", 1.6), "--pdf", path, status=1)
    text = text_of(path)
    # 536.3 nm has a tolerance of 3 nm, the others of 1 nm.
    assert text.count("✗ OUTSIDE") == 3 and text.count("✓ within") == 1, text
    has(" ".join(text.split()), "have the instrument seen to")


def test_dichromate():
    path = in_folder("d.pdf")
    check(dichromate("d.csv", 1.005), "--standard", "dichromate", "--pdf", path)
    has(text_of(path), "60 mg/L", "SRM 935a", "toxic", "257 nm", "0.869")


def test_the_recipe_carries_what_was_found():
    first, second = in_folder("first.json"), in_folder("second.json")
    check(holmium("r.csv", 0.5), "--write-recipe", first)
    with open(first) as file:
        recipe = json.load(file)
    assert abs(recipe["wavelength_u_nm"] - 0.5) < 0.08 and recipe["photometric_u"] == 0, recipe
    recipe["limit"] = 0.75
    with open(first, "w") as file:
        json.dump(recipe, file)
    check(dichromate("r2.csv", 1.01), "--standard", "dichromate", "--recipe", first, "--write-recipe", second)
    with open(second) as file:
        both = json.load(file)
    # Root mean square of 1 % of the four values.
    expected = 0.01 * math.sqrt(sum(y * y for _, y in DICHROMATE[1:5]) / 4)
    assert abs(both["photometric_u"] - expected) < 2e-4, (both["photometric_u"], expected)
    assert both["wavelength_u_nm"] == recipe["wavelength_u_nm"] and both["limit"] == 0.75, both


def test_wrong_use_is_named():
    scan = holmium("w.csv", 0)
    for arguments, word in ((["--recipe", in_folder("none.json"), "--write-recipe", in_folder("x.json")], "none.json"),
                            (["--recipe", scan], "--write-recipe"), (["--paper", "a3"], "a4 or letter"),
                            (["--pdf", in_folder("no/where.pdf")], "where.pdf")):
        done = check(scan, *arguments, status=2)
        assert word in done.stderr, done.stderr
        assert not os.path.exists(in_folder("x.json"))


if __name__ == "__main__":
    main(globals())
