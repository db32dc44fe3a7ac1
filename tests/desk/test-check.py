#!/usr/bin/python3
"""The window that checks the instrument: open a scan, see what is wrong, save the page, carry the uncertainty into the recipe.
Arguments: the program, the command line, a folder for shots."""
import math
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
# Control positions of holmium oxide in perchloric acid: Ph. Eur. 2.2.25, older edition.
HOLMIUM = (241.15, 287.15, 361.5, 536.3)
# Potassium dichromate, 60 mg/L: nominal values of solutions made from NIST SRM 935a.
DICHROMATE = ((225, 0.70), (235, 0.743), (257, 0.865), (313, 0.290), (350, 0.643), (420, 0.02))


def write(folder, name, points):
    path = os.path.join(folder, name)
    with open(path, "w") as file:
        file.write("wavelength_nm,absorbance\n" + "".join(f"{x:.2f},{y:.5f}\n" for x, y in points))
    return path


def holmium(folder, name, shift):
    return write(folder, name, ((x / 4, 0.1 + sum(0.4 * math.exp(-4 * math.log(2) * ((x / 4 - band - shift) / 3.2) ** 2) for band in HOLMIUM))
                                for x in range(900, 2600)))


def dichromate(folder, name, factor):
    def value(x):
        for (x0, y0), (x1, y1) in zip(DICHROMATE, DICHROMATE[1:]):
            if x0 <= x <= x1:
                return y0 + (y1 - y0) * (1 - math.cos(math.pi * (x - x0) / (x1 - x0))) / 2
    return write(folder, name, ((x / 2, factor * value(x / 2)) for x in range(450, 841)))


def open_scan(desk, path):
    window = desk.wait(role="frame", name="Check the instrument")
    desk.press(desk.wait(role="push button", name="Open scan…", top=window))
    choose(desk, "Open the scan", path)
    return window


def states(desk, window):
    """Wavelengths and words of the table's rows."""
    table = desk.find(name="Published values and what was found", top=window).queryTable()

    def text(row, column):
        return table.getAccessibleAt(row, column).queryText().getText(0, -1) if column != 5 else " ".join(
            node.name for node in desk.walk(table.getAccessibleAt(row, column)) if node.name)
    return [(text(row, 0), text(row, 5)) for row in range(table.nRows)]


def fault_is_shown(desk, folder):
    menu(desk, "Check the instrument…")
    window = open_scan(desk, holmium(folder, "shifted.csv", 1.6))
    desk.wait(role="label", contains="have the instrument seen to", top=window)
    found = states(desk, window)
    d.same([row[0] for row in found if row[1] == "OUTSIDE"], ["241.15 nm", "287.15 nm", "361.50 nm"], "wavelengths outside")
    d.same([row[0] for row in found if row[1] == "within"], ["536.30 nm"], "wavelengths within")
    desk.drawn()
    desk.shot(os.path.join(shots, "check.png"))


def page_is_saved(desk, folder):
    path = os.path.join(folder, "check.pdf")
    desk.press(desk.wait(role="push button", name="Save PDF…"))
    choose(desk, "Save the check", path)
    d.until(lambda: os.path.exists(path), "the page")
    text = subprocess.run(["pdftotext", path, "-"], capture_output=True, text=True, check=True).stdout
    for part in ("Wavelength check with holmium oxide", "shifted.csv", "OUTSIDE", "Signature"):
        d.need(part in text, f"{part} on the page: {text}")


def check_is_carried_and_undone(desk, folder):
    window = open_scan(desk, holmium(folder, "good.csv", 0.4))
    desk.wait(role="label", contains="Every judged value is within", top=window)
    desk.press(desk.wait(role="push button", name="Carry into the recipe", top=window))
    desk.wait(role="label", contains="wavelength uncertainty of 0.40 nm", top=window)
    desk.wait(role="push button", name="Undo: Carry the check into the recipe")
    desk.settled()
    desk.press(desk.wait(role="push button", name="Undo: Carry the check into the recipe"))
    desk.wait(role="push button", name="Redo: Carry the check into the recipe")
    desk.press(desk.wait(role="push button", name="Redo: Carry the check into the recipe"))
    desk.settled()


def dichromate_is_chosen(desk, folder):
    window = open_scan(desk, dichromate(folder, "dichromate.csv", 1.01))
    combo = desk.wait(role="combo box", name="Standard", top=window)
    combo.querySelection().selectChild(1)
    desk.wait(role="label", contains="standard uncertainty of an absorbance", top=window)
    d.same([row[0] for row in states(desk, window) if row[1] == "within"], ["235.00 nm", "257.00 nm", "313.00 nm", "350.00 nm"], "within")
    desk.press(desk.wait(role="push button", name="Carry into the recipe", top=window))
    # Root mean square of 1 % of the four values: 0.0067.
    desk.wait(role="label", contains="photometric uncertainty of 0.0067", top=window)
    desk.settled()


def recipe_holds_both(desk, folder):
    import json
    path = os.path.join(folder, "checked.recipe.json")
    desk.key("Escape")
    d.until(lambda: not desk.find(role="frame", name="Check the instrument"), "the window closed")
    menu(desk, "Save recipe…")
    choose(desk, "Save recipe", path)
    d.until(lambda: os.path.exists(path) and os.path.getsize(path), "the recipe")
    with open(path) as file:
        recipe = json.load(file)
    d.need(abs(recipe["wavelength_u_nm"] - 0.4) < 0.02 and abs(recipe["photometric_u"] - 0.0067) < 1e-4, recipe)


def unreadable_scan_is_named(desk, folder):
    path = os.path.join(folder, "empty.csv")
    open(path, "w").close()
    menu(desk, "Check the instrument…")
    window = open_scan(desk, path)
    desk.wait(role="label", contains="empty.csv", top=window)
    d.same(states(desk, window), [], "rows of another file")
    d.need(not desk.find(name="Save PDF…", top=window).getState().contains(desk.atspi.STATE_SENSITIVE), "nothing to save")


def main():
    tap = d.Tap()
    with tempfile.TemporaryDirectory() as folder:
        film = os.path.join(folder, "film.csv")
        subprocess.run([command, "forecast", "--output", film, "--film", "Film A", "--seed", "1"], check=True)
        desk = d.Desk(program, film, cwd=folder, environment={"HOME": folder})
        desk.settled()
        for function in (fault_is_shown, page_is_saved, check_is_carried_and_undone, dichromate_is_chosen, recipe_holds_both,
                         unreadable_scan_is_named):
            if not tap.test(function.__name__.replace("_", " "), function, desk, folder):
                desk.shot(os.path.join(shots, f"failed-{function.__name__}.png"))
        errors = desk.close()
        complaints = [line for line in errors.splitlines() if "CRITICAL" in line or "WARNING" in line]
        tap.ok(not complaints, "the program never complained", "\n".join(complaints[:20]))
    return tap.done()


sys.exit(main())
