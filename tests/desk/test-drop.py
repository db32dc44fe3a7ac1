#!/usr/bin/python3
"""Twenty files of every sort dragged onto the window at once, by the pointer: each is on the rack, or named with a sentence that says why not.
Arguments: the program, the command line, a folder for shots."""
import math
import os
import subprocess
import sys
import tempfile

sys.path.insert(0, os.path.dirname(os.path.abspath(__file__)))
import desk as d

program, command, shots = (os.path.abspath(path) for path in sys.argv[1:4])
d.inside_display(1600, 1100)
os.makedirs(shots, exist_ok=True)


def curve(nm):
    return 0.4 * (nm / 500) ** -1.1 + 0.2 * math.exp(-((nm - 1000) / 80) ** 2) + 0.25 * math.exp(-((nm - 1800) / 130) ** 2)


AXIS = range(300, 2501, 4)


def table(row, head=""):
    return head + "".join(row(nm, curve(nm)) for nm in AXIS)


def make_files(folder):
    """Name, content, and what is to become of it: the number of films, or a word of the sentence."""
    jcamp = subprocess.run([command, "forecast", "--step-nm", "4", "--film", "Film J", "--output", os.path.join(folder, "j.csv")], check=True)
    assert jcamp.returncode == 0
    subprocess.run([command, "inspect", os.path.join(folder, "j.csv"), "--jcamp", os.path.join(folder, "05-diffs.jdx")], check=True, stdout=subprocess.DEVNULL)
    comma = lambda value: f"{value:.5f}".replace(".", ",")  # noqa: E731
    files = [
        ("01-plain.csv", table(lambda nm, a: f"{nm},{a:.5f}\n", "wavelength nm,A\n"), 1),
        ("02-semicolons.csv", table(lambda nm, a: f"{nm};{comma(a)}\r\n", "Wellenlänge nm;Extinktion\r\n").encode("latin-1"), 1),
        ("03-tabs.txt", table(lambda nm, a: f"{nm}\t{100 * 10 ** -a:.4f}\n", "nm\t%T\n"), 1),
        ("04-sixteen.txt", table(lambda nm, a: f"{nm}\t{a:.5f}\r\n", "nm\tAbs\r\n").encode("utf-16"), 1),
        ("05-diffs.jdx", None, 1),
        ("06-wavenumbers.dat", "".join(f"{1e7 / nm:.3f}   {curve(nm):.5f}\n" for nm in reversed(AXIS)), 1),
        ("07-energies.txt", table(lambda nm, a: f"{1239.841984 / nm:.6f} {a:.5f}\n", "energy eV absorbance\n"), 1),
        ("08-three.csv", table(lambda nm, a: f"{nm},{a:.5f},{0.9 * a:.5f},{1.1 * a:.5f}\n", "nm,one,two,three\n"), 3),
        ("09-preamble.csv", table(lambda nm, a: f"{nm},{a:.5f}\n", "Operator: nobody\nLamp hours: 12\n\nwavelength nm,A\n"), 1),
        ("10-missing.csv", table(lambda nm, a: f"{nm},{'****' if nm % 100 == 0 else f'{a:.5f}'}\n", "nm,A\n"), 1),
        ("11-quoted.csv", table(lambda nm, a: f'"{nm}","{a:.5f}"\n', '"Wavelength\n(nm)","A"\n'), 1),
        ("12-micrometres.csv", table(lambda nm, a: f"{nm / 1000:.4f},{a:.5f}\n", "um,A\n"), 1),
        ("13-old-mac.txt", table(lambda nm, a: f"{nm} {a:.5f}\r", "nm A\r"), 1),
        ("14-empty.csv", "", "14-empty.csv"),
        ("15-picture.png", b"\x89PNG\r\n\x1a\n" + bytes(range(256)) * 40, "15-picture.png"),
        ("16-prose.txt", "These are words about a film and no numbers at all.\n" * 20, "16-prose.txt"),
        ("17-one-column.txt", "".join(f"{curve(nm):.5f}\n" for nm in AXIS), "17-one-column.txt"),
        ("18-constant.csv", "".join(f"{nm},0.5\n" for nm in AXIS), "18-constant.csv"),
        ("19-one-line.csv", "9" * 200000, "19-one-line.csv"),
        ("20-folder", "folder", "20-folder"),
    ]
    for name, content, _ in files:
        path = os.path.join(folder, name)
        if content == "folder":
            os.mkdir(path)
        elif content is not None:
            with open(path, "wb") as file:
                file.write(content if isinstance(content, bytes) else content.encode("utf-8"))
    return files


def dragged(desk, folder, files):
    paths = [os.path.join(folder, name) for name, _, _ in files]
    here = os.path.dirname(os.path.abspath(__file__))
    source = subprocess.Popen(["/usr/bin/python3", os.path.join(here, "drag-source.py"), *paths], stdout=subprocess.PIPE, text=True)
    try:
        d.same(source.stdout.readline().strip(), "ready", "the window to drag from")
        d.until(lambda: subprocess.run(["xdotool", "search", "--onlyvisible", "--name", "Drag from here"], capture_output=True).stdout, "it shown")
        place = subprocess.run(["xdotool", "search", "--onlyvisible", "--name", "Drag from here", "getwindowgeometry", "--shell"], capture_output=True,
                               text=True, check=True).stdout
        geometry = dict(line.split("=") for line in place.split() if "=" in line)
        start = int(geometry["X"]) + int(geometry["WIDTH"]) // 2, int(geometry["Y"]) + int(geometry["HEIGHT"]) // 2
        end = desk.middle(desk.window)
        d.xdo("mousemove", *start)
        d.xdo("mousedown", 1)
        # A drag begins after some way; the target is told of every step.
        for i in range(1, 31):
            d.xdo("mousemove", round(start[0] + (end[0] - start[0]) * i / 30), round(start[1] + (end[1] - start[1]) * i / 30))
            d.until(lambda: True, "a step")
        d.xdo("mousemove", end[0] + 3, end[1] + 3)
        d.xdo("mouseup", 1)
        expected = sum(outcome for _, _, outcome in files if isinstance(outcome, int))
        d.until(lambda: len(desk.rows()) >= expected, f"{expected} films", 60)
        d.same(len(desk.rows()), expected, "films on the rack")
    finally:
        source.terminate()
        source.wait()


def every_failure_is_named(desk, folder, files):
    bar = desk.wait(role=("info bar", "alert"))
    sentences = [node.name for node in desk.find_all(role="label", top=bar, shown=False)]
    for name, _, outcome in files:
        if isinstance(outcome, int):
            d.need(not any(name in sentence for sentence in sentences), f"{name} was read: {sentences}")
            continue
        own = [sentence for sentence in sentences if name in sentence]
        d.same(len(own), 1, f"sentences about {name}")
        d.need(own[0].endswith(".") and len(own[0].split()) > 5, own[0])
    failed = sum(not isinstance(outcome, int) for _, _, outcome in files)
    d.same(sentences[0], f"{failed} of {len(files)} files could not be read:", "the sum above them")
    desk.shot(os.path.join(shots, "dropped.png"))


def films_are_graded(desk, folder, files):
    d.until(lambda: not desk.spinning(), "the fits", 240)


def main():
    tap = d.Tap()
    with tempfile.TemporaryDirectory() as folder:
        files = make_files(folder)
        d.same(len(files), 20, "files")
        desk = d.Desk(program, cwd=folder, environment={"HOME": folder})
        for function in (dragged, every_failure_is_named, films_are_graded):
            if not tap.test(function.__name__.replace("_", " "), function, desk, folder, files):
                desk.shot(os.path.join(shots, f"failed-{function.__name__}.png"))
        errors = desk.close()
        complaints = [line for line in errors.splitlines() if "CRITICAL" in line]
        tap.ok(not complaints, "the program never complained", "\n".join(complaints[:20]))
    return tap.done()


sys.exit(main())
