#!/usr/bin/python3
"""Pictures of the window in its states, for a person to look at, and what can be checked of them without one.

Arguments: the program, the command line, a folder for the pictures; and, inside a display of its own, the name of the state.
"""
import os
import subprocess
import sys
import tempfile

sys.path.insert(0, os.path.dirname(os.path.abspath(__file__)))
import desk as d

# name: screen width, height, scale, environment, size of the window (None: its own), what to open, what to do
STATES = {
    "empty": (1280, 820, 1, {}, None, "nothing", None),
    "first-film": (1280, 820, 1, {}, None, "one", None),
    "demo": (1280, 820, 1, {}, None, "demo", None),
    "demo-dark": (1280, 820, 1, {"GTK_THEME": "Adwaita:dark"}, None, "demo", None),
    "small": (1000, 650, 1, {}, (1000, 650), "demo", None),
    "small-dark": (1000, 650, 1, {"GTK_THEME": "Adwaita:dark"}, (1000, 650), "demo", None),
    "twice": (2560, 1640, 2, {}, None, "demo", None),
    "wide": (1920, 1080, 1, {}, (1900, 1040), "demo", None),
    "errors": (1280, 820, 1, {}, None, "wrong", None),
    "editing": (1280, 820, 1, {}, None, "one", "edit"),
    "long-labels": (1280, 820, 1, {}, None, "long", None),
    "menu": (1280, 820, 1, {}, None, "one", "menu"),
    "large-text": (1280, 820, 1, {"GDK_DPI_SCALE": "1.4"}, None, "one", None),
}


def brightness(path):
    out = subprocess.run(["convert", path, "-colorspace", "gray", "-format", "%[fx:mean] %[fx:standard_deviation]", "info:"],
                         capture_output=True, text=True, check=True).stdout.split()
    return float(out[0]), float(out[1])


def arguments_for(what, folder, command):
    def forecast(name, *options):
        path = os.path.join(folder, name)
        subprocess.run([command, "forecast", "--output", path, *options], check=True)
        return path
    if what == "nothing":
        return []
    if what == "demo":
        return ["--demo"]
    if what == "long":
        return [forecast("long.csv", "--film", "A film with a label that goes on and on, because somebody wrote the whole story into it",
                         "--lot", "The lot that was made on the second line after the furnace had been repaired")]
    files = [forecast("a1.csv", "--film", "Film A1", "--lot", "Lot A", "--seed", "1")]
    if what == "wrong":
        for i in range(6):
            files.append(os.path.join(folder, f"wrong-{i}.txt"))
            with open(files[-1], "w") as file:
                file.write("no spectrum\n" * i)
        files.append(os.path.join(folder, "vanished.csv"))
    return files


def act(desk, what):
    if what == "edit":
        desk.press(desk.line("Thickness"))
        entry = desk.wait(role="text", name="Thickness")
        entry.queryEditableText().setTextContents("thick")
        entry.queryAction().doAction(0)
        desk.wait(role="label", contains="is not a number")
    elif what == "menu":
        x, y = desk.middle(desk.handle("S22 band 1, crown"))
        d.xdo("mousemove", x, y + 30)
        d.xdo("click", 3)
        desk.wait(role="menu item", name="Hold centre")


def inside(program, command, shots, name):
    width, height, scale, environment, size, what, deed = STATES[name]
    d.inside_display(width, height, scale)
    os.environ.update(environment)
    path = os.path.join(shots, f"{name}.png")
    with tempfile.TemporaryDirectory() as folder:
        desk = d.Desk(program, *arguments_for(what, folder, command), environment={"HOME": folder})
        if what != "nothing":
            desk.settled()
        if size:
            d.xdo("search", "--onlyvisible", "--pid", desk.process.pid, "--name", ".", "windowsize", *size, "windowmove", 0, 0)
            d.until(lambda: desk.window.queryComponent().getExtents(desk.atspi.DESKTOP_COORDS).width <= size[0], "the size")
        if deed:
            act(desk, deed)
        box = desk.window.queryComponent().getExtents(desk.atspi.DESKTOP_COORDS)
        desk.drawn()
        desk.shot(path)
        errors = desk.close()
    complaints = [line for line in errors.splitlines() if ("CRITICAL" in line or "WARNING" in line) and "system bus" not in line]
    d.same(complaints, [], "complaints")
    if size:
        d.need(box.width <= size[0] and box.height <= size[1], f"the window fits {size}: {box.width} x {box.height}")
    mean, spread = brightness(path)
    d.need(spread > 0.02, f"something is drawn: {spread}")
    if environment.get("GTK_THEME") == "Adwaita:dark":
        d.need(mean < 0.4, f"dark is dark: {mean}")
    elif what != "nothing":
        d.need(mean > 0.45, f"light is light: {mean}")


def main():
    program, command, shots = (os.path.abspath(path) for path in sys.argv[1:4])
    os.makedirs(shots, exist_ok=True)
    if len(sys.argv) > 4:
        try:
            inside(program, command, shots, sys.argv[4])
        except Exception as error:
            print(error)
            return 1
        return 0
    tap = d.Tap()
    only = os.environ.get("BANDTALLY_TEST_STATES")
    for name in only.split(",") if only else STATES:
        environment = {key: value for key, value in os.environ.items() if key != "BANDTALLY_TEST_DISPLAY"}
        run = subprocess.run(["/usr/bin/python3", os.path.abspath(__file__), program, command, shots, name], capture_output=True,
                             text=True, env=environment, timeout=120)
        tap.ok(run.returncode == 0, f"the window looks right: {name}", run.stdout[-1500:] + run.stderr[-1500:])
    return tap.done()


sys.exit(main())
