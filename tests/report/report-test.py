"""The report as a document: what stands in the PDF is what the tally says, on both papers and in every language."""
import json
import os
import re
import subprocess
import sys
import tempfile

from tap import main

PROGRAM, SOURCE = sys.argv[1], sys.argv[2]
EPOCH = "1000000000"  # 2001-09-09 01:46:40 UTC
FOLDER = tempfile.TemporaryDirectory(prefix="bandtally-")
HARBOUR = os.path.join(SOURCE, "data", "demo", "harbour-07-1.csv")
SHORT = os.path.join(SOURCE, "data", "demo", "terrace-12-3.csv")


def in_folder(name):
    return os.path.join(FOLDER.name, name)


def grade(name, *arguments, **environment):
    """Grades, writes the report and gives back its path and the film's JSON."""
    path, table = in_folder(name + ".pdf"), in_folder(name + ".json")
    done = subprocess.run([PROGRAM, "grade", *arguments, "--report", path, "--json", table], capture_output=True, text=True,
                          timeout=300, env={**os.environ, "SOURCE_DATE_EPOCH": EPOCH, **environment})
    assert done.returncode == 0, done.stderr
    with open(table, encoding="utf-8") as file:
        return path, json.load(file)["films"]


def text_of(path, *options):
    return subprocess.run(["pdftotext", *options, path, "-"], capture_output=True, text=True, check=True, timeout=60).stdout


def words_of(path):
    return re.sub(r"\s+", " ", text_of(path))


def info_of(path):
    lines = subprocess.run(["pdfinfo", path], capture_output=True, text=True, check=True, timeout=60,
                           env={**os.environ, "TZ": "UTC"}).stdout.splitlines()
    return {key.strip(): value.strip() for key, value in (line.split(":", 1) for line in lines if ":" in line)}


def has(text, *parts):
    for part in parts:
        assert part in text, f"{part!r} is not in the report:\n{text}"


def same(shown, value, u):
    """Whether "2.48(11)" is this value with this uncertainty: to half a unit of its last place, and to two digits of u."""
    number, bracket = re.fullmatch(r"(-?[\d.]+)\((\d+)\)", shown).groups()
    places = len(number.partition(".")[2])
    assert abs(float(number) - value) <= 5.1 * u / 90, (shown, value, u)
    assert abs(float(bracket) / 10 ** places / u - 1) < 0.06, (shown, value, u)


def row_of(text, name, columns):
    """The cells after a name in the only row that starts with it and has so many of them."""
    row = re.compile(rf"\s*{re.escape(name)}(\s+-?\d[\d.]*\(\d+\)){{{columns}}}")
    rows = [line.split()[1:1 + columns] for line in text.splitlines() if row.match(line)]
    assert len(rows) == 1, (name, rows, text)
    return rows[0]


def test_the_numbers_are_those_of_the_json():
    path, films = grade("numbers", HARBOUR, "--limit", "0.6")
    film, text, layout = films[0], words_of(path), text_of(path, "-layout")
    fraction = film["semiconducting_fraction"]
    has(text, f"{100 * fraction['value']:.1f} % semiconducting, {100 * fraction['low']:.1f} to {100 * fraction['high']:.1f} %",
        f"({100 * fraction['level']:.0f} % confidence)", film["sha256"], str(film["points"]) + " points", film["verdict"])
    for line in film["budget"]:
        if line["u"] >= 5e-5:
            has(text, f"{100 * line['u']:.2f}")
    assert [model["name"] for model in film["models"]] == ["groups", "ensemble"]
    for model in film["models"]:
        has(text, f"{model['weight']:.3f}", ", ".join(f"{tail['weight']:.2f}" for tail in model["tails"]))
    for name, group in film["groups"].items():
        centre, _, fwhm, area = row_of(layout, name, 4)
        same(centre, group["centre_ev"], group["centre_u_ev"])
        same(fwhm, 1000 * group["fwhm_ev"], 1000 * group["fwhm_u_ev"])
        same(area, group["area"], group["area_u"])
    for alpha, absorbance in zip(film["absorption_coefficient"], film["absorbance"], strict=True):
        cells = row_of(layout, f"{alpha['wavelength_nm']:g}", 3)
        same(cells[0], alpha["per_cm"], alpha["u_per_cm"])
        same(cells[1], absorbance["value"], absorbance["u"])
    for flag in film["flags"]:
        has(text, re.sub(r"\s+", " ", flag["text"]))


def test_everything_that_is_signed_for_is_there():
    path, _ = grade("whole", HARBOUR, "--limit", "0.6")
    has(words_of(path), "Harbour 07-1", "lot Harbour 07", "harbour-07-1.csv", "Invented data", "2001-09-09 01:46 UTC",
        "Bandtally", "55.0(30) nm", "fused silica", "JCGM 106:2012", "Strength ratio", "Name", "Date", "Signature",
        "page 1 of 2", "page 2 of 2",
        "Follow your laboratory's rules for nanomaterials, solvents and ultraviolet lamps.",
        "A tally is a measurement aid, not a certificate.", "Mean absorption coefficient from 600 to 1100 nm")


def test_papers():
    for paper, size in (("a4", (595.276, 841.89)), ("letter", (612, 792))):
        path, _ = grade(paper, HARBOUR, "--paper", paper)
        info = info_of(path)
        width, height = map(float, re.match(r"([\d.]+) x ([\d.]+)", info["Page size"]).groups())
        assert abs(width - size[0]) < 0.1 and abs(height - size[1]) < 0.1, info
        assert info["Pages"] == "2", info


def test_what_the_file_says_of_itself():
    path, _ = grade("about", HARBOUR)
    info = info_of(path)
    assert info["Title"].startswith("Harbour 07-1"), info
    assert info["Creator"].startswith("Bandtally "), info
    assert "Sep  9 01:46:40 2001" in info["CreationDate"], info


def test_the_same_twice():
    with open(grade("once", HARBOUR)[0], "rb") as once, open(grade("twice", HARBOUR, TZ="Asia/Tokyo")[0], "rb") as twice:
        assert once.read() == twice.read()


def test_a_film_without_an_answer():
    path, films = grade("short", SHORT, "--limit", "0.6", "--wavelengths-nm", "550,2000", "--diameter-nm", "3")
    assert films[0]["semiconducting_fraction"]["bound"] is None, films[0]["semiconducting_fraction"]
    text = words_of(path)
    for flag in films[0]["flags"]:
        has(text, re.sub(r"\s+", " ", flag["text"]))
    assert not re.search(r"\bnan\b|\binf\b", text, re.I), text


def test_many_films():
    path, films = grade("many", HARBOUR, SHORT)
    pages = text_of(path).split("\f")[:-1]
    assert len(pages) == int(info_of(path)["Pages"]) == 4, len(pages)
    for number, page in enumerate(pages):
        has(re.sub(r"\s+", " ", page), f"page {number % 2 + 1} of 2, sheet {number + 1} of 4",
            "Harbour 07-1" if number < 2 else "Terrace 12-3")


def test_german():
    for paper in ("a4", "letter"):
        path, films = grade("german-" + paper, HARBOUR, "--limit", "0.6", "--paper", paper, LANGUAGE="de", LC_ALL="C.UTF-8")
        text = words_of(path)
        assert info_of(path)["Pages"] == "2"
        has(text, "Unterschrift", "Seite 1 von", "Rezept", "halbleitend")
        assert not re.search(r"Signature|semiconducting|page \d|Recipe", text), text
        # Longer words must not break the numbers under them.
        for alpha in films[0]["absorption_coefficient"]:
            same(row_of(text_of(path, "-layout"), f"{alpha['wavelength_nm']:g}", 3)[0], alpha["per_cm"], alpha["u_per_cm"])


def test_ink_stays_off_the_edges():
    for paper in ("a4", "letter"):
        path, _ = grade("edges-" + paper, HARBOUR, SHORT, "--limit", "0.6", "--paper", paper)
        root = in_folder("page-" + paper)
        subprocess.run(["pdftoppm", "-r", "36", "-gray", path, root], check=True, timeout=120)
        for name in sorted(os.listdir(FOLDER.name)):
            if name.startswith("page-" + paper):
                with open(in_folder(name), "rb") as file:
                    magic, width, height, _, pixels = re.match(rb"(P5)\s+(\d+)\s+(\d+)\s+(\d+)\s(.*)",
                                                                file.read(), re.S).groups()
                width, height = int(width), int(height)
                rows = [pixels[y * width:(y + 1) * width] for y in range(height)]
                dark = [(x, y) for y, row in enumerate(rows) for x, value in enumerate(row) if value < 250]
                assert len(dark) > 500, name
                # 20 pixels of 1/36 in are 40 pt; the margins are 40 pt above and 48 pt at the sides.
                assert min(x for x, _ in dark) >= 22 and max(x for x, _ in dark) < width - 22, name
                assert min(y for _, y in dark) >= 18 and max(y for _, y in dark) < height - 16, name


if __name__ == "__main__":
    main(globals())
