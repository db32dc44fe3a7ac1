"""Help, version, and wrong usage: exit status and what is said."""
from whole_program import Folder, holds, main, run, test

OPTIONS = {
    "grade": ["thickness-nm", "thickness-u-nm", "blank", "diameter-nm", "diameter-spread-nm", "strength-ratio", "strength-ratio-u",
              "limit", "level", "wavelengths-nm", "recipe", "substrate", "light-path", "reflectance", "substrate-index", "x-unit", "y-unit", "json", "csv", "report", "paper", "jobs"],
    "check-instrument": ["standard", "concentration-mg-l", "x-unit", "y-unit", "output", "pdf", "paper", "recipe", "write-recipe"],
    "inspect": ["points", "spectrum", "x-unit", "y-unit"],
    "energies": ["tube", "diameter-nm", "diameter-spread-nm", "set", "shift-mev", "nm", "csv"],
    "forecast": ["film", "lot", "fraction", "diameter-nm", "diameter-spread-nm", "thickness-nm", "thickness-u-nm", "tail",
                 "tail-height", "noise", "step-at-nm", "step-size", "bleach", "ceiling", "range-nm", "step-nm", "shift-mev",
                 "strength-ratio", "scatter", "jitter-mev", "sideband", "lorentzian", "s22-absorbance", "seed", "output"],
}

# What is given, and what the answer must name.
WRONG = [
    (["grade"], ["file"]),
    (["grade", "--no-such-option", "film.csv"], ["--no-such-option"]),
    (["grade", "--limit"], ["--limit"]),
    (["grade", "--limit", "90", "film.csv"], ["--limit", "0 to 1", "90"]),
    (["grade", "--limit", "nan", "film.csv"], ["--limit", "nan"]),
    (["grade", "--limit", "", "film.csv"], ["--limit"]),
    (["grade", "--thickness-nm", "0", "film.csv"], ["--thickness-nm", "above 0"]),
    (["grade", "--thickness-nm", "-5", "film.csv"], ["--thickness-nm", "-5"]),
    (["grade", "--thickness-nm", "1,5", "film.csv"], ["--thickness-nm", "1,5"]),
    (["grade", "--thickness-readings-nm", "118;121", "film.csv"], ["--thickness-readings-nm", "118;121"]),
    (["grade", "--thickness-readings-nm", "118,121", "--thickness-nm", "120", "film.csv"], ["--thickness-readings-nm", "not both"]),
    (["grade", "--sheet-resistance-ohm", "0", "film.csv"], ["--sheet-resistance-ohm", "above 0"]),
    (["grade", "--reflectance-file", "no-such-file.csv", "film.csv"], ["no-such-file.csv"]),
    (["grade", "--detector-changes-nm", "800;1100", "film.csv"], ["--detector-changes-nm", "800;1100"]),
    (["grade", "--detector-correction", "left", "film.csv"], ["--detector-correction", "infrared"]),
    (["grade", "--photometric-u", "-1", "film.csv"], ["--photometric-u"]),
    (["grade", "--wavelength-u-nm", "x", "film.csv"], ["--wavelength-u-nm", "x"]),
    (["grade", "--stray-light", "2", "film.csv"], ["--stray-light"]),
    (["grade", "--thickness-u-nm", "-1", "film.csv"], ["--thickness-u-nm"]),
    (["grade", "--diameter-nm", "14", "film.csv"], ["--diameter-nm", "0.4 to 5"]),
    (["grade", "--diameter-spread-nm", "0.1", "film.csv"], ["--diameter-spread-nm", "--diameter-nm"]),
    (["grade", "--strength-ratio", "0", "film.csv"], ["--strength-ratio"]),
    (["grade", "--strength-ratio-u", "x", "film.csv"], ["--strength-ratio-u", "x"]),
    (["grade", "--level", "1", "film.csv"], ["--level"]),
    (["grade", "--wavelengths-nm", "550;650", "film.csv"], ["--wavelengths-nm", "550;650"]),
    (["grade", "--wavelengths-nm", "550,,650", "film.csv"], ["--wavelengths-nm"]),
    (["grade", "--wavelengths-nm", "0", "film.csv"], ["--wavelengths-nm"]),
    (["grade", "--light-path", "mirror", "film.csv"], ["--light-path", "thin-film"]),
    (["grade", "--reflectance", "1", "film.csv"], ["--reflectance", "0.9"]),
    (["grade", "--substrate-index", "0.5", "film.csv"], ["--substrate-index"]),
    (["grade", "--jobs", "0", "film.csv"], ["--jobs"]),
    (["grade", "--jobs", "1.5", "film.csv"], ["--jobs", "1.5"]),
    (["grade", "--paper", "a3", "film.csv"], ["--paper", "a3"]),
    (["grade", "--x-unit", "furlong", "film.csv"], ["--x-unit", "furlong"]),
    (["grade", "--y-unit", "furlong", "film.csv"], ["--y-unit", "furlong"]),
    (["grade", "--recipe", "no-such-recipe.json", "film.csv"], ["no-such-recipe.json"]),
    (["grade", "--blank", "no-such-blank.csv", "film.csv"], ["no-such-blank.csv"]),
    (["grade", "--json", "-", "--csv", "-", "film.csv"], ["standard output"]),
    (["grade", "--json", "out", "--csv", "out", "film.csv"], ["different files"]),
    (["inspect"], ["file"]),
    (["inspect", "--spectrum", "0", "film.csv"], ["--spectrum"]),
    (["inspect", "--points", "p.csv", "a.csv", "b.csv"], ["--points"]),
    (["inspect", "--points", "a.csv", "a.csv"], ["--points", "overwrite"]),
    (["inspect", "--jcamp", "p.jdx", "a.csv", "b.csv"], ["--jcamp"]),
    (["inspect", "--jcamp", "a.csv", "a.csv"], ["--jcamp", "overwrite"]),
    (["inspect", "--jcamp", "-", "--points", "-", "a.csv"], ["--jcamp", "--points"]),
    (["inspect", "--jcamp", "p.jdx", "--jcamp-form", "squeezed", "a.csv"], ["--jcamp-form", "squeezed", "difdup", "affn"]),
    (["inspect", "--jcamp-form", "affn", "a.csv"], ["--jcamp-form", "--jcamp"]),
    (["energies"], ["--tube", "--diameter-nm"]),
    (["energies", "--tube", "5,6"], ["--tube", "5,6"]),
    (["energies", "--tube", "6"], ["--tube", "6"]),
    (["energies", "--tube", "6,5,4"], ["--tube"]),
    (["energies", "--tube", "0,0"], ["--tube"]),
    (["energies", "--tube", "6,5", "--set", "x"], ["--set", "empirical"]),
    (["energies", "6,5"], ["6,5", "--tube"]),
    (["check-instrument"], ["one file"]),
    (["check-instrument", "--standard", "x", "film.csv"], ["--standard", "holmium"]),
    (["check-instrument", "--concentration-mg-l", "x", "film.csv"], ["--concentration-mg-l"]),
    (["forecast", "--fraction", "1.5"], ["--fraction", "1.5"]),
    (["forecast", "--tail", "x"], ["--tail", "plasmon"]),
    (["forecast", "--range-nm", "2500,300"], ["--range-nm"]),
    (["forecast", "--range-nm", "300"], ["--range-nm"]),
    (["forecast", "--seed", "-1"], ["--seed"]),
    (["forecast", "film.csv"], ["film.csv", "--output"]),
]


@test
def test_version_everywhere():
    expected = run("--version", status=0).stdout
    assert expected.startswith("bandtally-cli ") and expected.split()[1][0].isdigit(), expected
    for command in OPTIONS:
        assert run(command, "--version", status=0).stdout == expected


@test
def test_help_everywhere():
    text = run("--help", status=0).stdout
    holds(text, "Usage", *OPTIONS)
    assert run("-h", status=0).stdout == text
    for command, options in OPTIONS.items():
        text = run(command, "--help", status=0).stdout
        holds(text, f"bandtally-cli {command}", "--help", "--version", *(f"--{option}" for option in options))


@test
def test_nothing_given_shows_the_help_and_fails():
    result = run(status=2)
    assert result.stdout == ""
    holds(result.stderr, "Usage", *OPTIONS)


@test
def test_unknown_command():
    result = run("gradde", "film.csv", status=2)
    holds(result.stderr, "gradde", "--help")


@test
def test_wrong_usage_is_named():
    with Folder() as folder:
        for name in ("film.csv", "a.csv", "b.csv"):
            folder.film(name)
        for arguments, parts in WRONG:
            result = run(*arguments, status=2, cwd=folder.path)
            assert result.stdout == "", (arguments, result.stdout)
            holds(result.stderr, "bandtally-cli: ", *parts)


@test
def test_an_output_never_overwrites_a_film():
    with Folder() as folder:
        film = folder.film()
        with open(film, "rb") as file:
            before = file.read()
        for option in ("--json", "--csv", "--report"):
            result = run("grade", film, option, "./film.csv", status=2, cwd=folder.path)
            holds(result.stderr, "film.csv", "another file")
        with open(film, "rb") as file:
            assert file.read() == before


main()
