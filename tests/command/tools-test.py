"""inspect, energies and forecast as processes."""
import csv
import hashlib
import io
import math
import os
import subprocess

from whole_program import PROGRAM, SOURCE, Folder, holds, main, run, test


def points_of(text):
    points = []
    for line in text.splitlines():
        try:
            points.append(tuple(float(part) for part in line.split(",")))
        except ValueError:
            continue
    return points


@test
def test_inspect_says_what_was_read():
    with Folder() as folder:
        film = folder.film("film.csv", "--noise", "0.001", "--step-at-nm", "860", "--step-size", "0.03")
        text = run("inspect", film, status=0).stdout
        with open(film, "rb") as file:
            digest = hashlib.sha256(file.read()).hexdigest()
        holds(text, "film.csv", "551 read, 551 used", "300.0 to 2500.0 nm", "0.496 to 4.133 eV", "nm, absorbance", "Noise", digest)
        step = [line for line in text.splitlines() if "Steps" in line][0]
        where = float(step.split("at ")[1].split(" nm")[0])
        assert abs(where - 860) <= 4, step
        noise = float([line for line in text.splitlines() if "Noise" in line][0].split()[1])
        assert 0.0007 < noise < 0.0014, noise


@test
def test_inspect_goes_on_after_a_bad_file():
    with Folder() as folder:
        film = folder.film()
        result = run("inspect", folder("vanished.csv"), film, status=1)
        holds(result.stderr, "vanished.csv")
        holds(result.stdout, "film.csv")


@test
def test_inspect_gives_back_the_raw_points():
    with Folder() as folder:
        raw = [(1000.5 - 3.25 * i, 0.1 + 0.001 * i) for i in range(120)]
        for separator in (";", "\t", "  "):
            table = "".join(f"{x!r}{separator}{y!r}\n".replace(".", ",") for x, y in raw)
            film = folder.write("film.txt", f"nm{separator}A\n{table}")
            assert points_of(run("inspect", film, "--points", "-", status=0).stdout) == raw, separator
        run("inspect", film, "--points", folder("points.csv"), status=0)
        with open(folder("points.csv"), encoding="utf-8") as file:
            assert points_of(file.read()) == raw


@test
def test_inspect_writes_jcamp():
    with Folder() as folder:
        raw = [(300 + 2 * i, round(0.3 + 0.2 * math.sin(i / 40), 5)) for i in range(900)]
        film = folder.write("film.csv", "# film = Quay 3\nnm,A\n" + "".join(f"{x},{y!r}\n" for x, y in raw))
        sizes = {}
        for form in ("difdup", "affn"):
            out = folder(form + ".jdx")
            holds(run("inspect", film, "--jcamp", out, "--jcamp-form", form, status=0).stdout, "900 read")
            sizes[form] = os.path.getsize(out)
            assert points_of(run("inspect", out, "--points", "-", status=0).stdout) == raw, form
            holds(run("inspect", out, status=0).stdout, "JCAMP-DX 4.24", "nm, absorbance")
        assert 2 * sizes["difdup"] < sizes["affn"], sizes
        text = run("inspect", film, "--jcamp", "-", status=0, binary=True).stdout
        with open(folder("difdup.jdx"), "rb") as file:
            assert text == file.read()
        assert text.startswith(b"##TITLE= Quay 3\r\n") and text.endswith(b"##END=\r\n") and max(map(len, text.split(b"\r\n"))) <= 80


@test
def test_inspect_writes_all_spectra_of_a_file_as_jcamp():
    with Folder() as folder:
        film = folder.write("two.csv", "nm,Film 1 Abs,Film 2 Abs\n" + "".join(f"{900 + i},{0.1 + i / 1000},{0.9 - i / 1000}\n" for i in range(60)))
        run("inspect", film, "--jcamp", folder("two.jdx"), status=0)
        run("inspect", film, "--jcamp", folder("second.jdx"), "--spectrum", "2", status=0)
        holds(run("inspect", folder("two.jdx"), status=0).stdout, "Film 1 Abs", "Film 2 Abs")
        for number, made in (("1", ("two.jdx", "1")), ("2", ("two.jdx", "2")), ("2", ("second.jdx", "1"))):
            expected = run("inspect", film, "--points", "-", "--spectrum", number, status=0).stdout
            assert run("inspect", folder(made[0]), "--points", "-", "--spectrum", made[1], status=0).stdout == expected, made
        result = run("inspect", folder("second.jdx"), "--spectrum", "2", status=1)
        holds(result.stderr, "second.jdx", "1 spectrum")


@test
def test_inspect_never_overwrites_what_it_reads():
    with Folder() as folder:
        film = folder.film()
        os.link(film, folder("other-name.csv"))
        with open(film, "rb") as file:
            before = file.read()
        for option in ("--points", "--jcamp"):
            holds(run("inspect", film, option, folder("other-name.csv"), status=2).stderr, option, "overwrite")
        with open(film, "rb") as file:
            assert file.read() == before


@test
def test_inspect_takes_one_spectrum_of_several():
    with Folder() as folder:
        film = folder.film()
        result = run("inspect", film, "--spectrum", "7", status=1)
        holds(result.stderr, "film.csv", "7")
        assert run("inspect", film, "--spectrum", "1", status=0).stdout == run("inspect", film, status=0).stdout


@test
def test_energies_of_known_tubes():
    """Measured first and second transitions in suspension, nm: Weisman and Bachilo, Nano Lett. 3, 1235 (2003); from memory."""
    measured = {(6, 5): (975, 566), (7, 5): (1023, 644), (8, 3): (952, 663), (7, 6): (1122, 647), (8, 4): (1113, 587)}
    arguments = [part for n, m in measured for part in ("--tube", f"{n},{m}")]
    records = list(csv.DictReader(io.StringIO(run("energies", *arguments, "--csv", "--nm", status=0).stdout)))
    for record, ((n, m), (first, second)) in zip(records, measured.items(), strict=True):
        assert (int(record["n"]), int(record["m"])) == (n, m)
        assert abs(float(record["S11_nm"]) - first) < 12 and abs(float(record["S22_nm"]) - second) < 12, record
        # d = a_cc sqrt(3 (n^2 + n m + m^2)) / pi with a_cc = 0.144 nm
        assert abs(float(record["diameter_nm"]) - 0.144 * math.sqrt(3 * (n * n + n * m + m * m)) / math.pi) < 1e-6
        assert record["M11_nm"] == "" and record["kind"] in ("mod 1", "mod 2")


@test
def test_energies_of_a_window():
    text = run("energies", "--diameter-nm", "1.4", "--diameter-spread-nm", "0.05", "--csv", status=0).stdout
    records = list(csv.DictReader(io.StringIO(text)))
    diameters = [float(record["diameter_nm"]) for record in records]
    assert len(records) > 10 and diameters == sorted(diameters) and 1.3 <= diameters[0] and diameters[-1] <= 1.5
    metallic = [record for record in records if record["kind"] == "metallic"]
    assert metallic and all(record["M11_ev"] and not record["S11_ev"] for record in metallic)
    assert all((int(record["n"]) - int(record["m"])) % 3 == 0 for record in metallic)
    shifted = list(csv.DictReader(io.StringIO(run("energies", "--tube", "6,5", "--shift-mev", "70", "--csv", status=0).stdout)))
    plain = list(csv.DictReader(io.StringIO(run("energies", "--tube", "6,5", "--csv", status=0).stdout)))
    assert abs(float(plain[0]["S11_ev"]) - float(shifted[0]["S11_ev"]) - 0.07) < 2e-6


@test
def test_energy_sets_differ_and_are_named():
    texts = {name: run("energies", "--tube", "10,5", "--set", name, status=0).stdout for name in ("empirical", "scaling", "tight-binding")}
    assert len(set(texts.values())) == 3
    for text in texts.values():
        holds(text, "(10,5)", "S11", "S22")


@test
def test_forecast_is_the_same_for_the_same_seed():
    first = run("forecast", "--step-nm", "5", "--seed", "4", status=0).stdout
    assert first == run("forecast", "--step-nm", "5", "--seed", "4", status=0).stdout
    assert first != run("forecast", "--step-nm", "5", "--seed", "5", status=0).stdout
    holds(first, "invented")


@test
def test_forecast_takes_every_option():
    """Each option, alone, changes the file."""
    common = ["--step-nm", "5", "--seed", "4"]
    plain = run("forecast", *common, status=0).stdout
    options = {"--film": "X-1", "--lot": "X", "--fraction": "0.9", "--diameter-nm": "1.2", "--diameter-spread-nm": "0.05",
               "--thickness-nm": "150", "--thickness-u-nm": "7", "--tail": "power", "--tail-height": "0.77", "--noise": "0.01",
               "--bleach": "0.5", "--ceiling": "0.1", "--range-nm": "400,2000", "--step-nm": "10", "--shift-mev": "10",
               "--strength-ratio": "1.7", "--scatter": "0.05", "--jitter-mev": "3", "--sideband": "0.2", "--lorentzian": "0.9",
               "--s22-absorbance": "0.5", "--seed": "9"}
    for option, value in options.items():
        assert run("forecast", *common, option, value, status=0).stdout != plain, option
    stepped = run("forecast", *common, "--step-at-nm", "860", "--step-size", "0.5", "--noise", "0", status=0).stdout
    still = run("forecast", *common, "--noise", "0", status=0).stdout
    for (x, y), (_, flat) in zip(points_of(stepped), points_of(still), strict=True):
        assert abs(y - flat - (0.5 if x > 860 else 0)) < 2.1e-5, (x, y, flat)


@test
def test_forecast_range_and_step():
    points = points_of(run("forecast", "--range-nm", "400,1100", "--step-nm", "2", status=0).stdout)
    assert len(points) == 351 and points[0][0] == 400 and points[-1][0] == 1100


@test
def test_demo_lots_are_what_forecast_makes():
    demo = os.path.join(SOURCE, "data", "demo")
    with Folder() as folder:
        subprocess.run([os.path.join(demo, "make-demo"), folder.path], env={**os.environ, "BANDTALLY_CLI": PROGRAM}, check=True)
        made = sorted(os.listdir(folder.path))
        assert made == sorted(name for name in os.listdir(demo) if name.endswith(".csv")) and len(made) == 10
        for name in made:
            with open(folder(name), encoding="utf-8") as new, open(os.path.join(demo, name), encoding="utf-8") as kept:
                new, kept = new.read(), kept.read()
            holds(kept.splitlines()[0], "invented")
            assert [line for line in new.splitlines() if line[0] == "#"] == [line for line in kept.splitlines() if line[0] == "#"]
            for a, b in zip(points_of(new), points_of(kept), strict=True):
                # Another mathematics library may round the last of the five digits otherwise.
                assert a[0] == b[0] and abs(a[1] - b[1]) < 1.1e-5, (name, a, b)


@test
def test_forecast_names_a_place_that_cannot_be_written():
    with Folder() as folder:
        result = run("forecast", "--output", folder("no/such/film.csv"), status=1)
        holds(result.stderr, "no/such/film.csv", "cannot be written")


main()
