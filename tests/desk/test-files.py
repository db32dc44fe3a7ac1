#!/usr/bin/python3
"""The window and the files around it: dialogs, blanks, tables, recipes, places that cannot be read or written; and leaving in the
middle of the work. Arguments: the program, the command line, a folder for shots."""
import json
import os
import subprocess
import sys
import tempfile

sys.path.insert(0, os.path.dirname(os.path.abspath(__file__)))
import desk as d
from desk import choose, menu

program, command, shots = (os.path.abspath(path) for path in sys.argv[1:4])
d.inside_display()
os.makedirs(shots, exist_ok=True)


def forecast(folder, name, *options):
    path = os.path.join(folder, name)
    subprocess.run([command, "forecast", "--output", path, *options], check=True)
    return path


def opens_by_dialog(desk, folder):
    desk.press(desk.wait(role="push button", name="Choose files…"))
    choose(desk, "Open spectra", os.path.join(folder, "a1.csv"))
    desk.settled()
    d.same(len(desk.rows()), 1, "films on the rack")
    desk.focus("Film A1")
    desk.key("ctrl+o")
    choose(desk, "Open spectra", os.path.join(folder, "a2.csv"))
    d.until(lambda: len(desk.rows()) == 2, "the second film")
    desk.settled()
    d.need(desk.find(role="label", name="Film A2"), "the film opened last is on the bench")


def opening_is_undone(desk, folder):
    desk.press(desk.wait(role="push button", name="Undo: Open 1 film"))
    d.until(lambda: len(desk.rows()) == 1, "one film")
    desk.press(desk.wait(role="push button", name="Redo: Open 1 film"))
    d.until(lambda: len(desk.rows()) == 2, "two films")
    desk.settled()


def blank_is_chosen_and_removed(desk, folder):
    desk.press(desk.line("Blank"))
    choose(desk, "Open the blank", os.path.join(folder, "blank.csv"))
    d.until(lambda: desk.value("Blank") == "blank.csv", "the blank in the ledger")
    desk.settled()
    desk.press(desk.wait(role="push button", name="Measure without the blank", shown=False))
    d.until(lambda: desk.value("Blank") == "choose a file…", "no blank")
    desk.settled()


def file_is_shown_as_read(desk, folder):
    menu(desk, "As read…")
    window = desk.wait(role="frame", contains="As read")
    text = d.until(lambda: desk.find(role="text", name="First lines of the file", top=window), "the file's first lines")
    shown = text.queryText().getText(0, -1)
    with open(os.path.join(folder, "a2.csv")) as file:
        lines = file.read().splitlines()
    for number in (1, 5, 60):
        d.need(f"{number:5d}  {lines[number - 1]}\n" in shown, f"line {number} as it is in the file")
    d.need(desk.find(role="label", contains="columns 1 and 2", top=window), "what the file was taken for")
    desk.drawn()
    desk.shot(os.path.join(shots, "as-read.png"))
    desk.key("Escape")
    d.until(lambda: not desk.find(role="frame", contains="As read"), "the window closed")


def tables_are_saved(desk, folder):
    path = os.path.join(folder, "all.json")
    menu(desk, "Save table of all films", "As JSON…")
    choose(desk, "Save the tallies", path)
    d.until(lambda: os.path.exists(path), "the table")
    with open(path) as file:
        films = json.load(file)["films"]
    d.same(len(films), 2, "films in the table")
    d.need(films[0]["semiconducting_fraction"]["value"] is not None, films[0]["semiconducting_fraction"])
    path = os.path.join(folder, "all.csv")
    menu(desk, "Save table of all films", "As CSV…")
    choose(desk, "Save the tallies", path)
    d.until(lambda: os.path.exists(path), "the table")
    with open(path) as file:
        d.same(len(file.read().strip().splitlines()), 3, "a header and two records")


def figure_is_saved(desk, folder):
    for ending, magic in ((".svg", b"<svg"), (".pdf", b"%PDF"), (".png", b"\x89PNG")):
        path = os.path.join(folder, "figure" + ending)
        menu(desk, "Save figure…")
        choose(desk, "Save figure", path)
        d.until(lambda: os.path.exists(path), f"the figure as {ending}")
        with open(path, "rb") as file:
            d.need(magic in file.read(400), f"a file of the kind {ending}")


def reading_is_saved(desk, folder):
    path = os.path.join(folder, "reading.jdx")
    menu(desk, "Save reading as JCAMP-DX…")
    choose(desk, "Save reading", path)
    d.until(lambda: os.path.exists(path), "the reading")
    points = [subprocess.run([command, "inspect", name, "--points", "-"], check=True, capture_output=True).stdout
              for name in (path, os.path.join(folder, "a2.csv"))]
    d.same(points[0], points[1], "points read from what was saved")


def recipe_goes_out_and_in(desk, folder):
    path = os.path.join(folder, "own.recipe.json")
    desk.type_line("Limit, at least", "12.5 %")
    desk.settled()
    menu(desk, "Save recipe…")
    choose(desk, "Save recipe", path)
    d.until(lambda: os.path.exists(path), "the recipe")
    with open(path) as file:
        d.same(json.load(file)["limit"], 0.125, "the limit in the recipe")
    desk.press(desk.wait(role="push button", name="Undo: Set limit"))
    d.until(lambda: desk.value("Limit, at least") == "add", "no limit")
    menu(desk, "Load recipe…")
    choose(desk, "Load recipe", path)
    d.until(lambda: desk.value("Limit, at least") == "12.5\u00a0%", "the limit loaded")
    desk.settled()
    menu(desk, "Give all films this recipe")
    d.until(lambda: not desk.find(role="list item", contains="not judged"), "both films judged")
    desk.settled()
    desk.press(desk.wait(role="push button", name="Undo: Give all films this recipe"))
    desk.wait(role="list item", contains="not judged")


def wrong_recipe_is_named(desk, folder):
    path = os.path.join(folder, "wrong.recipe.json")
    with open(path, "w") as file:
        file.write('{"limit": "high"}')
    before = desk.value("Limit, at least")
    menu(desk, "Load recipe…")
    choose(desk, "Load recipe", path)
    sentence = desk.wait(role="label", contains="limit", top=desk.wait(role=("info bar", "alert")))
    d.need(sentence.name.endswith("."), sentence.name)
    d.same(desk.value("Limit, at least"), before, "the recipe as it was")
    desk.press(desk.wait(role="push button", name="Close the message"))


def place_that_cannot_be_written_is_named(desk, folder):
    menu(desk, "Save figure…")
    choose(desk, "Save figure", "/proc/figure.svg")  # where not even the superuser can make a file
    sentence = desk.wait(role="label", contains="/proc/figure.svg", top=desk.wait(role=("info bar", "alert")))
    d.need(sentence.name.endswith("."), sentence.name)
    desk.press(desk.wait(role="push button", name="Close the message"))


def escape_ends_a_drag(desk, folder):
    desk.settled()
    crown = desk.handle("S22 band 1, crown")
    before = desk.answer()
    x, y = desk.middle(crown)
    d.xdo("mousemove", x, y)
    d.xdo("mousedown", 1)
    for i in range(8):
        d.xdo("mousemove", x + 3 * i, y - 4 * i)
    d.until(lambda: desk.handle("S22 band 1, crown").description == "held", "the crown in the hand")
    desk.key("Escape")
    d.xdo("mouseup", 1)
    d.until(lambda: desk.handle("S22 band 1, crown").description == "", "the crown let go")
    d.until(lambda: desk.answer() == before, f"the answer before, {before}")


def flank_is_dragged(desk, folder):
    desk.settled()
    x, y = desk.middle(desk.handle("M11 band 1, crown"))
    d.xdo("mousemove", x, y + 8)  # the band lights up and shows its flanks
    flank = desk.handle("M11 band 1, right flank")
    width = flank.queryValue().currentValue
    x, y = desk.middle(flank)
    desk.drag((x, y), (x + 12, y))
    desk.wait(role="push button", name="Undo: Set width of M11")
    d.until(lambda: desk.handle("M11 band 1, right flank").queryValue().currentValue > width + 0.01, "a wider band")
    desk.settled()
    desk.key("ctrl+z")
    desk.settled()


def main_job_by_keyboard(desk, folder):
    """Thickness, a band, a range left out, and the report, without the pointer."""
    desk.focus("Film A2")
    desk.key("ctrl+t")
    d.until(lambda: desk.find(role="text", name="Thickness"), "the line open")
    desk.key("ctrl+a")
    d.xdo("type", "250(10) nm")
    desk.key("Return")
    d.until(lambda: desk.value("Thickness") == "250\u00a0nm", "the thickness")
    desk.settled()
    desk.key("F6")
    for _ in range(60):
        focused = [node for node in desk.find_all(role="slider") if node.getState().contains(desk.atspi.STATE_FOCUSED)]
        if focused and focused[0].name.startswith("S22 band 1, crown"):
            break
        desk.key("Tab")
    d.need(focused and focused[0].name.startswith("S22 band 1, crown"), "Tab comes to the crown of S22")
    before = focused[0].queryValue().currentValue
    desk.key("Right", "Right", "Right")
    desk.wait(role="push button", name="Undo: Move S22")
    d.until(lambda: abs(desk.handle("S22 band 1, crown").queryValue().currentValue - before - 0.003) < 1e-6, "three steps")
    desk.settled()
    desk.key("ctrl+z")
    desk.settled()


def cancel_and_fit_again(desk, folder):
    for i in range(12):
        forecast(folder, f"many-{i:02}.csv", "--film", f"Many {i:02}", "--lot", "Lot M", "--seed", str(100 + i))
    many = d.Desk(program, *[os.path.join(folder, f"many-{i:02}.csv") for i in range(12)], environment={"HOME": folder})
    many.press(many.wait(role="push button", name="Cancel the fits"))
    d.until(lambda: not many.spinning(), "no fit under way")
    d.need(many.find_all(role="list item", contains="failed", shown=False), "films without a result say so")
    many.focus("Many")
    last = many.rows()[-1]
    many.rows()[-1].parent.querySelection().selectChild(many.rows()[-1].getIndexInParent())
    many.key("F5")
    many.settled()
    errors = many.close()
    d.need("CRITICAL" not in errors, errors[-800:])
    del last


def leaves_in_the_middle(desk, folder):
    """Closing the window while films are being fitted ends the program at once and without complaint."""
    many = d.Desk(program, *[os.path.join(folder, f"many-{i:02}.csv") for i in range(12)], environment={"HOME": folder})
    many.wait(role="push button", name="Cancel the fits")
    many.focus("Many")
    many.key("ctrl+q")
    d.until(lambda: many.process.poll() is not None, "the end", 10)
    d.same(many.process.returncode, 0, "exit status")
    errors = many.close()
    d.need("CRITICAL" not in errors, errors[-800:])


def main():
    tap = d.Tap()
    with tempfile.TemporaryDirectory() as folder:
        forecast(folder, "a1.csv", "--film", "Film A1", "--lot", "Lot A", "--seed", "1")
        forecast(folder, "a2.csv", "--film", "Film A2", "--lot", "Lot A", "--seed", "2")
        with open(os.path.join(folder, "blank.csv"), "w") as file:
            file.write("wavelength_nm,absorbance\n" + "".join(f"{nm},{0.01 + 1e-5 * (nm % 7)}\n" for nm in range(200, 2601, 2)))
        desk = d.Desk(program, cwd=folder, environment={"HOME": folder})
        for function in (opens_by_dialog, opening_is_undone, blank_is_chosen_and_removed, file_is_shown_as_read, tables_are_saved, figure_is_saved,
                         reading_is_saved, recipe_goes_out_and_in, wrong_recipe_is_named, place_that_cannot_be_written_is_named,
                         escape_ends_a_drag, flank_is_dragged, main_job_by_keyboard):
            if not tap.test(function.__name__.replace("_", " "), function, desk, folder):
                desk.shot(os.path.join(shots, f"failed-{function.__name__}.png"))
                desk.key("Escape")
        errors = desk.close()
        complaints = [line for line in errors.splitlines() if "CRITICAL" in line or "WARNING" in line]
        tap.ok(not complaints, "the program never complained", "\n".join(complaints[:20]))
        for function in (cancel_and_fit_again, leaves_in_the_middle):
            tap.test(function.__name__.replace("_", " "), function, None, folder)
    return tap.done()


sys.exit(main())
