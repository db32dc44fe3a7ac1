"""Files that are no spectrum, messy ones, and films that lack something: a sentence each, and nothing crashes."""
import json
import math
import os
import random

from whole_program import Folder, holds, main, run, test

HEADER = "wavelength_nm,absorbance\n"


def curve(wavelength_nm):
    """Some curve with bands, for files whose form is at stake and not their content."""
    energy_ev = 1239.842 / wavelength_nm
    bands = ((0.62, 0.12, 0.10), (1.2, 0.2, 0.08), (1.75, 0.2, 0.05))
    return 0.1 + 0.05 * energy_ev + sum(h * math.exp(-4 * math.log(2) * ((energy_ev - c) / w) ** 2) for c, w, h in bands)


def noisy(low=400, high=2400, step=4, seed=1):
    generator = random.Random(seed)
    return [(x, curve(x) + generator.gauss(0, 5e-4)) for x in range(low, high + 1, step)]


def rows(points, separator=","):
    return "".join(f"{x}{separator}{y!r}\n" for x, y in points)


# Name, content, and what the sentence must name beside the file.
REFUSED = [
    ("empty.csv", "", ["empty"]),
    ("blank-lines.csv", "\n\n  \n", []),
    ("binary.csv", bytes(range(256)) * 40, []),
    ("picture.png", b"\x89PNG\r\n\x1a\n" + bytes(2000), []),
    ("one-column.csv", "".join(f"{x}\n" for x in range(300, 900)), ["column"]),
    ("three-points.csv", HEADER + "500,0.1\n600,0.2\n700,0.3\n", ["3", "points"]),
    ("all-missing.csv", HEADER + "".join(f"{x},nan\n" for x in range(400, 900)), []),
    ("constant-x.csv", HEADER + "".join(f"500,0.{i}\n" for i in range(100, 150)), []),
    ("words.txt", "There is no table in here.\nNot at all.\n", []),
    ("header-only.csv", HEADER, []),
    ("negative-x.csv", HEADER + rows((-x, y) for x, y in noisy()), []),
]


def grade(path, *options, status=0):
    return json.loads(run("grade", path, *options, "--json", "-", status=status).stdout)["films"]


def codes(film):
    return [flag["code"] for flag in film["flags"]]


@test
def test_what_is_no_spectrum_is_refused_by_a_sentence():
    with Folder() as folder:
        for name, content, parts in REFUSED:
            path = folder.write(name, content)
            for command in ("grade", "inspect"):
                result = run(command, path, status=1)
                sentences = result.stderr.strip().splitlines()
                assert len(sentences) == 1, (name, command, result.stderr)
                holds(sentences[0], name, *parts)
                assert sentences[0].endswith("."), sentences[0]
                assert result.stdout == "", (name, result.stdout)


@test
def test_folder_vanished_file_and_unreadable_place():
    with Folder() as folder:
        os.mkdir(folder("films"))
        film = folder.film()
        for path, parts in ((folder("films"), []), (folder("vanished.csv"), []), (os.path.join(film, "below.csv"), [])):
            result = run("grade", path, status=1)
            assert len(result.stderr.strip().splitlines()) == 1
            holds(result.stderr, path, *parts)


@test
def test_constant_reading_is_refused():
    with Folder() as folder:
        path = folder.write("constant.csv", HEADER + "".join(f"{x},0.25\n" for x in range(400, 2400, 4)))
        holds(run("grade", path, status=1).stderr, "constant.csv", "same value")


@test
def test_negative_absorbance_is_graded_and_flagged():
    with Folder() as folder:
        film = grade(folder.write("negative.csv", HEADER + rows((x, y - 0.3) for x, y in noisy())))[0]
        assert "negative-absorbance" in codes(film) and film["semiconducting_fraction"]["value"] is not None, film


@test
def test_units_that_cannot_be_are_named():
    with Folder() as folder:
        path = folder.write("film.csv", "wavelength_nm,absorbance\n" + rows(noisy()))
        result = run("grade", path, "--x-unit", "eV", status=1)
        holds(result.stderr, "film.csv", "eV")


@test
def test_duplicate_and_unordered_points_do_not_matter():
    with Folder() as folder:
        points = noisy()
        shuffled = points[:]
        random.Random(5).shuffle(shuffled)
        doubled = [point for point in points for _ in (0, 1)]
        plain = grade(folder.write("plain.csv", HEADER + rows(points)))[0]
        for name, messy in (("shuffled.csv", shuffled), ("backwards.csv", points[::-1]), ("doubled.csv", doubled)):
            film = grade(folder.write(name, HEADER + rows(messy)))[0]
            assert film["points"] == plain["points"]
            a, b = film["semiconducting_fraction"], plain["semiconducting_fraction"]
            assert a["bound"] == b["bound"] and abs(a["value"] - b["value"]) < 1e-6, (name, a, b)


@test
def test_dialects_read_the_same():
    with Folder() as folder:
        points = noisy()
        comma = {x: repr(y).replace(".", ",") for x, y in points}
        dialects = {
            "semicolon.csv": "Wellenlänge (nm);Absorbance\r\n" + "".join(f"{x};{comma[x]}\r\n" for x, _ in points),
            "tab.txt": "\ufeffnm\tA\n" + rows(points, "\t"),
            "spaces.dat": rows(points, "   "),
            "preamble.csv": "Instrument; invented\nOperator: nobody\n\n" + HEADER + rows(points),
            "energy.csv": "energy (eV),absorbance\n" + "".join(f"{1239.8419843320026 / x!r},{y!r}\n" for x, y in points),
            "wavenumber.csv": "wavenumber (1/cm),absorbance\n" + "".join(f"{1e7 / x!r},{y!r}\n" for x, y in points),
            "micrometre.csv": "wavelength (um),absorbance\n" + "".join(f"{x / 1000!r},{y!r}\n" for x, y in points),
            "transmittance.csv": "wavelength (nm),T\n" + "".join(f"{x},{10 ** -y!r}\n" for x, y in points),
            "percent.csv": "wavelength (nm),%T\n" + "".join(f"{x},{100 * 10 ** -y!r}\n" for x, y in points),
        }
        plain = grade(folder.write("plain.csv", HEADER + rows(points)))[0]
        for name, content in dialects.items():
            film = grade(folder.write(name, content))[0]
            assert film["points"] == plain["points"], name
            for a, b in zip(film["absorbance"], plain["absorbance"], strict=True):
                assert abs(a["value"] - b["value"]) < 1e-9, (name, a, b)


@test
def test_no_s22_in_range_gives_no_fraction_but_a_flag():
    with Folder() as folder:
        path = folder.write("short.csv", HEADER + rows(noisy(400, 750, 1)))
        film = grade(path, "--diameter-nm", "1.4", "--diameter-spread-nm", "0.1")[0]
        assert film["semiconducting_fraction"]["value"] is None and film["semiconducting_fraction"]["bound"] is None
        assert any("S22" in flag["text"] for flag in film["flags"]), film["flags"]
        assert film["groups"]["S22"]["area"] is None
        assert film["verdict"] == "not judged"
        assert "wavelength-not-measured" in codes(film)
        missing = [reading["wavelength_nm"] for reading in film["absorbance"] if reading["value"] is None]
        assert missing == [980, 1550], film["absorbance"]


@test
def test_faults_of_the_instrument_are_flagged():
    with Folder() as folder:
        step = folder.film("step.csv", "--step-at-nm", "860", "--step-size", "0.02")
        assert "detector-step" in codes(grade(step)[0]), grade(step)[0]["flags"]
        ceiling = folder.film("ceiling.csv", "--step-nm", "1", "--thickness-nm", "600", "--ceiling", "2.5")
        assert "saturated" in codes(grade(ceiling)[0]), grade(ceiling)[0]["flags"]


def mutilate(content, generator):
    """Cuts, repeats and overwrites parts of a file."""
    content = bytearray(content[:generator.randrange(200, len(content))] if generator.random() < 0.7 else content)
    for _ in range(generator.choice((1, 3, 30, 300))):
        at = generator.randrange(len(content) + 1)
        match generator.randrange(4):
            case 0:
                content[at:at + 1] = bytes([generator.randrange(256)])
            case 1:
                del content[at:at + generator.randrange(20)]
            case 2:
                content[at:at] = generator.choice((b"\n", b",", b";", b"e999", b"-", b"nan", b"\0", b"\t", b"#", b"1e-308", b'"', b"\xff"))
            case 3:
                start = generator.randrange(len(content) + 1)
                content[at:at] = content[start:start + generator.randrange(50)]
    return bytes(content)


@test
def test_mutilated_files_never_crash():
    with Folder() as folder:
        generator = random.Random(11)
        text = (HEADER + rows(noisy())).encode()
        paths = [folder.write(f"{i}.csv", mutilate(text, generator)) for i in range(300)]
        result = run("inspect", *paths)
        assert result.returncode in (0, 1), result.returncode
        assert "CRITICAL" not in result.stderr and "WARNING" not in result.stderr, result.stderr
        told = [path for path in paths if f"{path}\n" in result.stdout or path in result.stderr]
        assert told == paths, set(paths) - set(told)
        graded = run("grade", *paths[:60], "--json", "-")
        assert graded.returncode in (0, 1) and "CRITICAL" not in graded.stderr, graded.stderr
        outcome = json.loads(graded.stdout)
        named = {film["file"] for film in outcome["films"]} | {failure["file"] for failure in outcome["failed"]}
        assert named == set(paths[:60])


@test
def test_recipe_that_makes_no_sense_is_named():
    with Folder() as folder:
        film = folder.film()
        for content, part in (("{", "recipe.json"), ("[]", "recipe.json"), ('{"level": 7}', "level"), ('{"limit": "much"}', "limit")):
            result = run("grade", film, "--recipe", folder.write("recipe.json", content), status=2)
            holds(result.stderr, part)


main()
