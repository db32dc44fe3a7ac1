"""Grading of films as a process: every output and every option."""
import csv
import hashlib
import io
import json
import math
import os
import re
import signal
import stat
import subprocess
import time

from whole_program import PROGRAM, SOURCE, Folder, holds, main, run, test

NUMBER = (int, float)
# Members that every film has, and their types; None: may be null.
FILM = {
    "file": str, "sha256": str, "points": int, "range_nm": list, "semiconducting_fraction": dict, "bands": list, "groups": dict,
    "tails": list, "tail_share_at_s22": (*NUMBER, type(None)), "absorption_coefficient": list, "absorbance": list,
    "diameter_nm": dict, "budget": list, "flags": list, "verdict": str, "reading": str, "light_path": str, "recipe": dict,
}


# Where outputs are at stake and not numbers, one tail and one band a group do.
QUICK = '{"tails": ["power"], "max_bands": {"S11": 1, "S22": 1, "M11": 1, "S33": 0, "S44": 0, "M22": 0}}'


def grade_json(*arguments, status=0):
    return json.loads(run("grade", *arguments, "--json", "-", status=status).stdout)


def members(thing, **types):
    for name, kind in types.items():
        assert name in thing, f"{name} is missing in {thing}"
        assert isinstance(thing[name], kind) and not (kind is not bool and isinstance(thing[name], bool)), (name, thing[name])


def read_film(path):
    """Wavelengths and absorbances of a file that the program wrote."""
    points = []
    with open(path, encoding="utf-8") as file:
        for line in file:
            try:
                points.append(tuple(float(part) for part in line.split(",")))
            except ValueError:
                continue
    return sorted(points)


def interpolate(points, x):
    for (x0, y0), (x1, y1) in zip(points, points[1:]):
        if x0 <= x <= x1:
            return y0 + (y1 - y0) * (x - x0) / (x1 - x0)
    raise AssertionError(x)


@test
def test_json_has_the_members_stated():
    with Folder() as folder:
        film = folder.film()
        outcome = grade_json(film, "--limit", "0.5")
        assert outcome["bandtally"] == run("--version").stdout.split()[1]
        assert outcome["failed"] == []
        assert len(outcome["films"]) == 1
        graded = outcome["films"][0]
        maybe = (*NUMBER, type(None))
        for name, kind in FILM.items():
            members(graded, **{name: kind})
        assert graded["file"] == film
        with open(film, "rb") as file:
            assert graded["sha256"] == hashlib.sha256(file.read()).hexdigest()
        assert graded["points"] == len(read_film(film))
        assert abs(graded["range_nm"][0] - 300) < 1e-6 and abs(graded["range_nm"][1] - 2500) < 1e-6, graded["range_nm"]
        members(graded["semiconducting_fraction"], value=maybe, u=maybe, low=maybe, high=maybe, level=NUMBER, bound=str)
        assert graded["semiconducting_fraction"]["bound"] in ("two-sided", "lower")
        for band in graded["bands"]:
            members(band, group=str, centre_ev=NUMBER, centre_nm=NUMBER, fwhm_ev=NUMBER, area=NUMBER, area_u=NUMBER)
            assert abs(band["centre_ev"] * band["centre_nm"] - 1239.841984) < 1e-3  # SI Brochure, 9th edition
        assert {"S11", "S22", "M11"} <= {band["group"] for band in graded["bands"]}
        for group in ("S11", "S22", "M11", "S33"):
            members(graded["groups"][group], area=maybe, area_u=maybe, centre_ev=maybe)
        for tail in graded["tails"]:
            members(tail, name=str, weight=NUMBER)
        assert sorted(tail["name"] for tail in graded["tails"]) == ["exponential", "plasmon", "power"]
        assert abs(sum(tail["weight"] for tail in graded["tails"]) - 1) < 1e-9
        for reading in graded["absorption_coefficient"]:
            members(reading, wavelength_nm=NUMBER, per_cm=maybe, u_per_cm=maybe)
        assert [reading["wavelength_nm"] for reading in graded["absorption_coefficient"]] == [550, 650, 980, 1550]
        members(graded["diameter_nm"], mean=maybe, spread=maybe)
        for line in graded["budget"]:
            members(line, source=str, u=NUMBER)
        assert graded["budget"], "no budget"
        for flag in graded["flags"]:
            members(flag, code=str, text=str)
        assert graded["verdict"] in ("accepted", "refused", "undecided")


@test
def test_absorption_coefficient_is_that_of_the_file():
    """Beer-Lambert: alpha = ln(10) A / t, worked here from the file itself."""
    with Folder() as folder:
        film = folder.film("film.csv", "--noise", "0")
        points = read_film(film)
        graded = grade_json(film, "--thickness-nm", "80", "--thickness-u-nm", "2", "--wavelengths-nm", "552,980.5,1552")["films"][0]
        for reading, absorbance in zip(graded["absorption_coefficient"], graded["absorbance"]):
            alpha = math.log(10) * interpolate(points, reading["wavelength_nm"]) / 80e-7
            assert abs(reading["per_cm"] / alpha - 1) < 2e-3, (reading, alpha)
            assert abs(math.log(10) * absorbance["value"] / 80e-7 / reading["per_cm"] - 1) < 1e-9
            assert reading["u_per_cm"] >= 0.999 * reading["per_cm"] * 2 / 80  # the thickness's part alone


@test
def test_fraction_of_a_known_film_is_in_its_interval():
    """A film of the forward model with its faults off: two thirds must be inside a 99 % interval."""
    with Folder() as folder:
        film = folder.film("film.csv", "--fraction", "0.667", "--seed", "3")
        fraction = grade_json(film, "--level", "0.99", "--strength-ratio", "1", "--strength-ratio-u", "0.2")["films"][0][
            "semiconducting_fraction"]
        assert fraction["bound"] == "two-sided" and fraction["low"] <= 0.667 <= fraction["high"], fraction
        assert fraction["level"] == 0.99


@test
def test_strength_ratio_moves_the_fraction_as_the_formula_says():
    """f = (A/k) / (A/k + M): for the same areas, f/(1-f) goes as 1/k."""
    with Folder() as folder:
        film = folder.film("film.csv", "--fraction", "0.667")
        odds = []
        for ratio in ("1", "2"):
            value = grade_json(film, "--strength-ratio", ratio, "--strength-ratio-u", "0")["films"][0]["semiconducting_fraction"]["value"]
            odds.append(value / (1 - value))
        assert abs(odds[0] / odds[1] / 2 - 1) < 0.02, odds


@test
def test_uncertain_strength_ratio_widens_the_interval():
    with Folder() as folder:
        film = folder.film("film.csv", "--fraction", "0.667")
        u = [grade_json(film, "--strength-ratio-u", u)["films"][0]["semiconducting_fraction"]["u"] for u in ("0", "0.4")]
        assert u[1] > u[0] * 1.2, u


@test
def test_verdicts():
    with Folder() as folder:
        film = folder.film("film.csv", "--fraction", "0.667")
        verdict = {limit: grade_json(film, "--limit", limit)["films"][0]["verdict"] for limit in ("0.2", "0.98")}
        assert verdict == {"0.2": "accepted", "0.98": "refused"}, verdict
        fraction = grade_json(film)["films"][0]
        assert fraction["verdict"] == "not judged"
        value = fraction["semiconducting_fraction"]["value"]
        assert grade_json(film, "--limit", f"{value:.6f}")["films"][0]["verdict"] == "undecided"


@test
def test_diameter_window_is_taken_or_proposed():
    with Folder() as folder:
        film = folder.film("film.csv", "--diameter-nm", "1.4")
        graded = grade_json(film)["films"][0]
        assert graded["diameter_window_nm"]["proposed"] is True
        assert abs(graded["diameter_window_nm"]["mean"] - 1.4) < 0.1, graded["diameter_window_nm"]
        graded = grade_json(film, "--diameter-nm", "1.35", "--diameter-spread-nm", "0.12")["films"][0]
        assert graded["diameter_window_nm"] == {"mean": 1.35, "spread": 0.12, "proposed": False}


@test
def test_blank_is_taken_off():
    """A film measured through a substrate of A = 0.2 and a little, with the substrate as its blank, is the film alone."""
    with Folder() as folder:
        film = folder.film("film.csv", "--noise", "0")
        points = read_film(film)
        through = folder.write("through.csv", "wavelength_nm,absorbance\n" + "".join(f"{x},{y + 0.2 + 1e-5 * x!r}\n" for x, y in points))
        blank = folder.write("blank.csv", "wavelength_nm,absorbance\n" + "".join(f"{x},{0.2 + 1e-5 * x!r}\n" for x, _ in points))
        graded = grade_json(through, "--blank", blank, "--thickness-nm", "100")["films"][0]
        alone = grade_json(film)["films"][0]
        for a, b in zip(graded["absorbance"], alone["absorbance"]):
            assert abs(a["value"] - b["value"]) < 1e-6, (a, b)
        assert "no-blank" not in [flag["code"] for flag in graded["flags"]]


@test
def test_light_path_is_taken():
    """A slab's transmittance T = (1-R)^2 e^-x / (1 - R^2 e^-2x) must give back its own depth x by the light path "reflection"."""
    with Folder() as folder:
        points = read_film(folder.film("film.csv", "--noise", "0"))
        reflectance = 0.04
        slab = []
        for x, y in points:
            e = 10 ** -y
            slab.append((x, -math.log10((1 - reflectance) ** 2 * e / (1 - reflectance ** 2 * e * e))))
        path = folder.write("slab.csv", "wavelength_nm,absorbance\n" + "".join(f"{x},{y!r}\n" for x, y in slab))
        graded = grade_json(path, "--light-path", "reflection", "--reflectance", str(reflectance), "--wavelengths-nm",
                            "552,980,1552")["films"][0]
        assert graded["recipe"]["light_path"] == "reflection" and graded["recipe"]["reflectance"] == reflectance
        for reading in graded["absorbance"]:
            assert abs(reading["value"] - interpolate(points, reading["wavelength_nm"])) < 1e-6, reading
        thin = grade_json(path, "--light-path", "thin-film", "--substrate-index", "1.46", "--thickness-nm", "30")["films"][0]
        assert thin["recipe"]["light_path"] == "thin film" and thin["light_path"] != graded["light_path"]
        named = grade_json(path, "--light-path", "thin-film", "--substrate", "sapphire", "--thickness-nm", "30")["films"][0]
        holds(named["light_path"], "sapphire")


def write_table(folder, name, header, points, value):
    """A file with one more column made of wavelength and absorbance."""
    return folder.write(name, header + "\n" + "".join(f"{x!r},{value(x, a)!r}\n" for x, a in points))


@test
def test_measured_reflectance_is_taken_off():
    # A slab whose inside takes up what the forecast film does, between faces that reflect 8 %: both bounces summed by hand.
    face = 0.08
    with Folder() as folder:
        film = folder.film("film.csv")
        points = read_film(film)

        def inside(a):
            return 10 ** -a

        def transmittance(a):
            return (1 - face) ** 2 * inside(a) / (1 - (face * inside(a)) ** 2)

        slab = write_table(folder, "slab.csv", "wavelength nm,%T", points, lambda x, a: 100 * transmittance(a))
        mirror = write_table(folder, "mirror.csv", "wavelength nm,%R", points, lambda x, a: 100 * face * (1 + transmittance(a) * inside(a)))
        recipe = folder.write("recipe.json", QUICK)
        made = grade_json(slab, "--recipe", recipe, "--reflectance-file", mirror, "--thickness-nm", "100", "--wavelengths-nm",
                          "548,652,980")["films"][0]
        holds(made["light_path"], "measured reflectance")
        for reading in made["absorbance"]:
            expected = interpolate(points, reading["wavelength_nm"])
            assert abs(reading["value"] - expected) < 1e-6, (reading, expected)
        # A reflectance is no film, and a file without one is no reflectance.
        holds(run("grade", mirror, status=1).stderr, "reflectance")


@test
def test_thickness_readings_and_accuracy_make_the_budget():
    with Folder() as folder:
        film = folder.film("film.csv")
        recipe = folder.write("recipe.json", QUICK)
        made = grade_json(film, "--recipe", recipe, "--thickness-readings-nm", "96,100,104,100", "--photometric-u", "0.002",
                          "--wavelength-u-nm", "0.5")["films"][0]
        # s = sqrt (32 / 3), u = s / 2
        assert abs(made["thickness_nm"] - 100) < 1e-9 and abs(made["thickness_u_nm"] - math.sqrt(32 / 3) / 2) < 1e-9, made["thickness_u_nm"]
        assert made["thickness_readings_nm"] == [96, 100, 104, 100]
        holds(made["absorption_coefficient_meaning"], "base e")
        for reading, absorbance in zip(made["absorption_coefficient"], made["absorbance"]):
            parts = reading["parts_per_cm"]
            per_absorbance = math.log(10) / 100e-7
            assert abs(parts["photometric"] - per_absorbance * 0.002) < 1e-6 * parts["photometric"]
            assert abs(parts["thickness"] / reading["per_cm"] - made["thickness_u_nm"] / 100) < 1e-9
            assert parts["blank"] == 0 and parts["reflectance"] == 0
            assert abs(reading["u_per_cm"] ** 2 - sum(part ** 2 for part in parts.values())) < 1e-6 * reading["u_per_cm"] ** 2
            # Student's t of 3 degrees of freedom: wider than two standard uncertainties.
            assert reading["low_per_cm"] < reading["per_cm"] - 2 * reading["u_per_cm"] < reading["per_cm"] < reading["high_per_cm"]
            assert absorbance["u"] >= 0.002


@test
def test_thin_film_is_judged_as_a_conductor():
    with Folder() as folder:
        film = folder.film("film.csv", "--step-nm", "2")
        recipe = folder.write("recipe.json", QUICK)
        made = grade_json(film, "--recipe", recipe, "--light-path", "thin-film", "--substrate", "fused silica", "--sheet-resistance-ohm", "400",
                          "--sheet-resistance-u-ohm", "8", "--thickness-nm", "20")["films"][0]
        conductor = made["transparent_conductor"]
        index = 1.459911  # Malitson 1965 at 550 nm
        transmittance = 10 ** -interpolate(read_film(film), 550)
        assert abs(conductor["transmittance"] - transmittance) < 1e-6, (conductor, transmittance)
        conductance = (1 + index) / 376.730313412 * (transmittance ** -0.5 - 1)
        assert abs(conductor["dc_to_optical"] * 400 * conductance - 1) < 1e-4, conductor
        assert abs(conductor["haacke_siemens"] - transmittance ** 10 / 400) < 1e-9
        assert conductor["dc_to_optical_u"] > conductor["dc_to_optical"] * 8 / 400
        sheet = next(reading for reading in made["sheet_conductance"] if reading["wavelength_nm"] == 550)
        assert abs(sheet["siemens"] / conductance - 1) < 1e-4
        assert abs(sheet["universal"] - sheet["siemens"] / 6.085337e-5) < 1e-9 * sheet["universal"]


@test
def test_without_a_thickness_there_is_a_fraction_but_no_alpha():
    with Folder() as folder:
        points = read_film(folder.film())
        bare = folder.write("bare.csv", "wavelength_nm,absorbance\n" + "".join(f"{x},{y!r}\n" for x, y in points))
        graded = grade_json(bare)["films"][0]
        assert graded["semiconducting_fraction"]["value"] is not None
        assert all(reading["per_cm"] is None for reading in graded["absorption_coefficient"])
        assert any("thickness" in flag["code"] or "thickness" in flag["text"].lower() for flag in graded["flags"]), graded["flags"]


@test
def test_units_stated_by_the_user_win():
    with Folder() as folder:
        points = read_film(folder.film("film.csv", "--noise", "0"))
        odd = folder.write("odd.csv", "".join(f"{x / 1000!r} {100 * 10 ** -y!r}\n" for x, y in points))
        stated = grade_json(odd, "--x-unit", "um", "--y-unit", "transmittance%", "--thickness-nm", "100")["films"][0]
        assert abs(stated["range_nm"][1] - 2500) < 1e-6
        expected = interpolate(points, 980)
        value = [reading["value"] for reading in stated["absorbance"] if reading["wavelength_nm"] == 980][0]
        assert abs(value - expected) < 1e-4, (value, expected)


@test
def test_recipe_is_used_and_options_override_it():
    with Folder() as folder:
        film = folder.film()
        whole = grade_json(film)["films"][0]["recipe"]
        whole["limit"] = 0.25
        whole["level"] = 0.9
        recipe = folder.write("recipe.json", json.dumps(whole))
        graded = grade_json(film, "--recipe", recipe)["films"][0]
        assert graded["semiconducting_fraction"]["level"] == 0.9 and graded["decision"]["limit"] == 0.25
        graded = grade_json(film, "--recipe", recipe, "--level", "0.95")["films"][0]
        assert graded["semiconducting_fraction"]["level"] == 0.95 and graded["decision"]["limit"] == 0.25


@test
def test_recipe_in_the_outcome_reproduces_the_outcome():
    with Folder() as folder:
        film = folder.film()
        first = grade_json(film, "--limit", "0.5", "--wavelengths-nm", "700")["films"][0]
        recipe = folder.write("recipe.json", json.dumps(first["recipe"]))
        again = grade_json(film, "--recipe", recipe)["films"][0]
        assert again["semiconducting_fraction"] == first["semiconducting_fraction"]
        assert again["bands"] == first["bands"]


@test
def test_recipe_of_the_readme_is_a_recipe():
    with open(os.path.join(SOURCE, "README.md"), encoding="utf-8") as file:
        text = re.search(r'^    \{\n      "name".*?^    \}$', file.read(), re.S | re.M).group()
    with Folder() as folder:
        used = grade_json(folder.film(), "--recipe", folder.write("recipe.json", text))["films"][0]["recipe"]
        for name, value in json.loads(text).items():
            assert used[name] == value or name == "held", (name, used[name], value)
        assert len(used["held"]) == 1, used["held"]


@test
def test_csv_is_one_record_a_film():
    with Folder() as folder:
        films = [folder.film(f"film, no. {i}.csv", "--seed", str(i)) for i in (1, 2)]
        text = run("grade", *films, "--csv", "-", "--limit", "0.5", "--wavelengths-nm", "550,1550", status=0, binary=True).stdout
        assert text.count(b"\r\n") == 3 and b"\n" not in text.replace(b"\r\n", b"")
        records = list(csv.DictReader(io.StringIO(text.decode(), newline="")))
        outcome = grade_json(*films, "--limit", "0.5", "--wavelengths-nm", "550,1550")["films"]
        for record, film in zip(records, outcome, strict=True):
            assert None not in record and None not in record.values()
            assert record["file"] == film["file"] and record["sha256"] == film["sha256"] and record["verdict"] == film["verdict"]
            assert float(record["fraction"]) == film["semiconducting_fraction"]["value"]
            assert float(record["S22_area"]) == film["groups"]["S22"]["area"]
            assert float(record["alpha_1550nm_per_cm"]) == film["absorption_coefficient"][1]["per_cm"]
            assert record["flags"].split() == [flag["code"] for flag in film["flags"]]


@test
def test_table_is_the_default():
    with Folder() as folder:
        films = [folder.film(f"film-{i}.csv", "--seed", str(i)) for i in (1, 2)]
        text = run("grade", *films, status=0).stdout
        holds(text, "film-1.csv", "film-2.csv", "Semiconducting", "95 % interval", "Verdict", "1/cm at 1550 nm")
        fraction = grade_json(films[1])["films"][0]["semiconducting_fraction"]
        holds(text, f"{fraction['value'] * 100:.1f} ± {fraction['u'] * 100:.1f} %",
              f"{fraction['low'] * 100:.1f} to {fraction['high'] * 100:.1f} %")
        single = run("grade", films[0], status=0).stdout
        holds(single, "film-1.csv", "S22", "M11", "Tail", "uncertainty comes from", "1550", "Verdict")


@test
def test_outcome_does_not_depend_on_jobs():
    with Folder() as folder:
        films = [folder.film(f"film-{i}.csv", "--seed", str(i), "--fraction", f"0.{i}5") for i in range(1, 7)]
        folder.write("bad.csv", "nothing to see\n")
        films.insert(3, folder("bad.csv"))
        one, many = (run("grade", *films, "--json", "-", "--jobs", jobs, status=1) for jobs in ("1", "4"))
        assert one.stdout == many.stdout
        assert one.stderr == many.stderr
        assert [film["file"] for film in json.loads(one.stdout)["films"]] == [film for film in films if "bad" not in film]


@test
def test_one_bad_file_does_not_stop_the_others():
    with Folder() as folder:
        good = [folder.film("a.csv"), folder.film("b.csv", "--seed", "2")]
        bad = [folder.write("empty.csv", ""), folder("vanished.csv")]
        result = run("grade", good[0], *bad, good[1], "--json", folder("out.json"), "--csv", folder("out.csv"), status=1)
        lines = result.stderr.splitlines()
        assert len(lines) == 2 and "empty.csv" in lines[0] and "vanished.csv" in lines[1], result.stderr
        holds(result.stdout, "a.csv", "b.csv")
        with open(folder("out.json"), encoding="utf-8") as file:
            outcome = json.load(file)
        assert [film["file"] for film in outcome["films"]] == good
        assert [failure["file"] for failure in outcome["failed"]] == bad
        assert all(failure["reason"] for failure in outcome["failed"])


@test
def test_interrupt_keeps_what_is_done():
    with Folder() as folder:
        film = folder.film("film.csv", "--step-nm", "1")
        films = [folder(f"film-{i}.csv") for i in range(80)]
        for path in films:
            os.link(film, path)
        process = subprocess.Popen([PROGRAM, "grade", *films, "--jobs", "1", "--json", folder("out.json")], stdout=subprocess.PIPE,
                                   stderr=subprocess.PIPE, text=True)
        time.sleep(1)
        process.send_signal(signal.SIGINT)
        _, errors = process.communicate(timeout=60)
        assert process.returncode == 1, process.returncode
        with open(folder("out.json"), encoding="utf-8") as file:
            outcome = json.load(file)
        assert outcome["failed"] and len(outcome["films"]) + len(outcome["failed"]) == 80
        holds(errors, f"Interrupted; {len(outcome['failed'])} file")


@test
def test_report_is_a_pdf_that_names_the_film():
    with Folder() as folder:
        films = [folder.film(f"film-{i}.csv", "--seed", str(i)) for i in (1, 2)]
        for paper, size in (("a4", "595"), ("letter", "612")):
            run("grade", *films, "--report", folder("report.pdf"), "--paper", paper, status=0)
            info = subprocess.run(["pdfinfo", folder("report.pdf")], capture_output=True, text=True, check=True).stdout
            holds(info, f"Page size:       {size}")
            text = subprocess.run(["pdftotext", "-layout", folder("report.pdf"), "-"], capture_output=True, text=True, check=True).stdout
            with open(films[0], "rb") as file:
                digest = hashlib.sha256(file.read()).hexdigest()
            holds(text.replace("\n", " "), "film-1.csv", "film-2.csv")
            holds("".join(text.split()), digest)
        piped = run("grade", films[0], "--report", "-", status=0, binary=True).stdout
        assert piped.startswith(b"%PDF-") and piped.rstrip().endswith(b"%%EOF")


@test
def test_places_that_cannot_be_written_lose_nothing():
    with Folder() as folder:
        film = folder.film()
        quick = ("--recipe", folder.write("quick.json", QUICK))
        for place in (folder("no/such/folder/out"), os.path.join(film, "out"), folder.path):
            for option in ("--report", "--json", "--csv"):
                result = run("grade", film, *quick, option, place, status=1)
                holds(result.stderr, place, "cannot be written")
                holds(result.stdout, "film.csv", "Verdict")
        result = run("grade", film, *quick, "--report", folder("no/x.pdf"), "--json", folder("out.json"), status=1)
        assert os.path.exists(folder("out.json"))


@test
def test_full_disk_is_told_and_keeps_what_was_there():
    with Folder() as folder:
        film = folder.film()
        quick = ("--recipe", folder.write("quick.json", QUICK))
        result = run("grade", film, *quick, "--json", "/dev/full", status=1)
        holds(result.stderr, "/dev/full", "cannot be written")
        holds(result.stdout, "Verdict")
        assert stat.S_ISCHR(os.stat("/dev/full").st_mode)
        with open("/dev/full", "w", encoding="utf-8") as full:
            done = subprocess.run([PROGRAM, "grade", film, *quick], stdout=full, stderr=subprocess.PIPE, text=True, check=False)
        assert done.returncode == 1 and "standard output" in done.stderr, done


@test
def test_link_is_followed_not_replaced():
    with Folder() as folder:
        film = folder.film()
        quick = ("--recipe", folder.write("quick.json", QUICK))
        folder.write("real.json", "old")
        os.symlink(folder("real.json"), folder("link.json"))
        run("grade", film, *quick, "--json", folder("link.json"), status=0)
        assert os.path.islink(folder("link.json"))
        with open(folder("real.json"), encoding="utf-8") as file:
            assert json.load(file)["films"]


@test
def test_names_of_any_bytes():
    with Folder() as folder:
        film = folder.film("Schicht größer 1,4 \"nm\".csv")
        assert grade_json(film)["films"][0]["file"] == film
        odd = os.fsencode(folder.path) + b"/\xff\xfe.csv"
        os.rename(os.fsencode(film), odd)
        done = subprocess.run([os.fsencode(PROGRAM), b"grade", odd, b"--json", b"-"], capture_output=True, check=True)
        assert len(json.loads(done.stdout)["films"]) == 1


@test
def test_another_locale_changes_no_file():
    with Folder() as folder:
        film = folder.film()
        subprocess.run(["localedef", "-i", "de_DE", "-f", "UTF-8", folder("de_DE.UTF-8")], check=True, capture_output=True)
        german = {"LOCPATH": folder.path, "LC_ALL": "de_DE.UTF-8"}
        for option in ("--json", "--csv"):
            plain = run("grade", film, option, "-", "--limit", "0.5", status=0).stdout
            translated = run("grade", film, option, "-", "--limit", "0.5", status=0, environment=german).stdout
            if option == "--csv":
                assert plain == translated
            else:
                a, b = (json.loads(text)["films"][0] for text in (plain, translated))
                for name in ("semiconducting_fraction", "bands", "groups", "tails", "absorption_coefficient", "verdict", "budget"):
                    assert a[name] == b[name], name
        again = run("forecast", "--step-nm", "4", "--thickness-nm", "100", "--thickness-u-nm", "3", status=0, environment=german).stdout
        with open(film, encoding="utf-8") as file:
            assert file.read() == again


main()
