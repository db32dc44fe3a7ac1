"""Drives the window as a person would: through the accessibility bus for what has a name, with the pointer for what is dragged.

Every wait has a deadline and ends as soon as its condition holds; nothing sleeps for a fixed time.
"""
import os
import shutil
import subprocess
import sys
import time

DEADLINE = float(os.environ.get("BANDTALLY_TEST_DEADLINE", "40"))


def inside_display(width=1400, height=900, scale=1):
    """Starts this very script again in a display, a session bus and a window manager of its own; returns within that."""
    if os.environ.get("BANDTALLY_TEST_DISPLAY") == "own":
        start_window_manager()
        return
    environment = dict(os.environ, BANDTALLY_TEST_DISPLAY="own", GDK_BACKEND="x11", GSETTINGS_BACKEND="memory", NO_AT_BRIDGE="0",
                       LC_ALL=os.environ.get("BANDTALLY_TEST_LOCALE", "C.UTF-8"))
    environment.pop("WAYLAND_DISPLAY", None)
    if scale != 1:
        environment["GDK_SCALE"] = str(scale)
    screen = f"-screen 0 {width}x{height}x24 -noreset"
    os.execvpe("xvfb-run", ["xvfb-run", "-a", "-s", screen, "dbus-run-session", "--", "/usr/bin/python3"] + sys.argv, environment)


def start_window_manager():
    subprocess.Popen(["openbox"], stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL)
    until(lambda: b"_NET_SUPPORTING_WM_CHECK(WINDOW)" in subprocess.run(
        ["xprop", "-root", "_NET_SUPPORTING_WM_CHECK"], capture_output=True).stdout, "the window manager")


class Late(Exception):
    pass


def until(condition, what, deadline=None):
    """Waits until condition() is true and returns what it returned."""
    import gi
    from gi.repository import GLib
    end = time.monotonic() + (deadline or DEADLINE)
    context = GLib.MainContext.default()
    while True:
        try:
            result = condition()
        except (GLib.Error, AttributeError, LookupError):  # an object that went away while it was looked at
            result = None
        if result:
            return result
        if time.monotonic() > end:
            raise Late(f"waited in vain for {what}")
        while context.iteration(False):
            pass
        time.sleep(0.03)


class Desk:
    """One running program."""

    def __init__(self, program, *arguments, cwd=None, environment=None):
        self.process = subprocess.Popen([program, "--new-process", *arguments], cwd=cwd, stderr=subprocess.PIPE, text=True,
                                        env=dict(os.environ, **(environment or {})))
        import pyatspi
        self.atspi = pyatspi
        self.app = until(self._find_app, "the program on the accessibility bus")
        self.window = until(lambda: self.find(role="frame"), "the window")

    def _find_app(self):
        if self.process.poll() is not None:
            raise Late(f"the program ended with {self.process.returncode}: {self.process.stderr.read()[-2000:]}")
        desktop = self.atspi.Registry.getDesktop(0)
        for app in desktop:
            if app is not None and app.get_process_id() == self.process.pid:
                return app
        return None

    def close(self):
        """Ends the program; returns what it wrote to standard error."""
        if self.process.poll() is None:
            self.process.terminate()
        try:
            _, errors = self.process.communicate(timeout=10)
        except subprocess.TimeoutExpired:
            self.process.kill()
            _, errors = self.process.communicate()
        return errors

    def walk(self, top=None):
        stack = [top or self.app]
        while stack:
            node = stack.pop()
            if node is None:
                continue
            yield node
            stack.extend(reversed([node.getChildAtIndex(i) for i in range(min(node.childCount, 400))]))

    def showing(self, node):
        return node.getState().contains(self.atspi.STATE_SHOWING)

    def visible(self, node):
        return node.getState().contains(self.atspi.STATE_VISIBLE)

    def find_all(self, role=None, name=None, starts=None, contains=None, top=None, shown=True):
        found = []
        for node in self.walk(top):
            text = node.name or ""
            if role and node.getRoleName() not in ((role,) if isinstance(role, str) else role):
                continue
            if (name is None or text == name) and (starts is None or text.startswith(starts)) \
                    and (contains is None or contains in text) and (self.showing(node) if shown else self.visible(node)):
                found.append(node)
        return found

    def find(self, **how):
        found = self.find_all(**how)
        return found[0] if found else None

    def wait(self, deadline=None, **how):
        return until(lambda: self.find(**how), f"{how}", deadline)

    def answer(self):
        """The header bar's one line on the film."""
        node = self.find(role="label", contains="% semiconducting")
        return node.name if node else None

    def settled(self):
        """Waits until no fit is under way."""
        until(lambda: self.rows() and not self.spinning() and self.answer(), "the fits")

    def spinning(self):
        return [row for row in self.rows() if row.description]

    def rows(self):
        rack = self.find(name="Films on the rack")
        return [row for row in self.walk(rack) if row.getRoleName() == "list item"] if rack else []

    def press(self, node):
        node.queryAction().doAction(0)

    def line(self, name):
        """The button that opens a ledger line, by the line's name."""
        return self.wait(role=("push button", "button"), starts=f"{name}: ", shown=False)

    def value(self, name):
        """What a ledger line says."""
        for node in self.find_all(starts=f"{name}: ", shown=False):
            return node.name[len(name) + 2:]
        return None

    def type_line(self, name, text):
        """Opens a line, types, and presses Enter."""
        self.press(self.line(name))
        entry = self.wait(role="text", name=name, shown=False)
        entry.queryEditableText().setTextContents(text)
        action = entry.queryAction()
        for i in range(action.nActions):
            if action.getName(i) == "activate":
                action.doAction(i)
                return entry
        raise AssertionError("the entry has no activate action")

    def middle(self, node):
        box = node.queryComponent().getExtents(self.atspi.DESKTOP_COORDS)
        return box.x + box.width // 2, box.y + box.height // 2

    def handle(self, starts):
        return self.wait(role="slider", starts=starts)

    def drag(self, start, end, steps=12, hold=None):
        xdo("mousemove", *start)
        if hold:
            xdo("keydown", hold)
        xdo("mousedown", 1)
        for i in range(1, steps + 1):
            xdo("mousemove", round(start[0] + (end[0] - start[0]) * i / steps), round(start[1] + (end[1] - start[1]) * i / steps))
        xdo("mouseup", 1)
        if hold:
            xdo("keyup", hold)

    def focus(self, title):
        """Brings the window whose title holds these words to the front."""
        xdo("search", "--onlyvisible", "--pid", self.process.pid, "--name", title, "windowactivate")

    def key(self, *names):
        for name in names:
            xdo("key", name)

    def drawn(self):
        """Waits until two pictures in a row are the same: transitions are over."""
        import hashlib

        def picture():
            raw = subprocess.run(["import", "-window", "root", "rgb:-"], capture_output=True).stdout
            return hashlib.sha256(raw).digest()
        last = [picture()]

        def still():
            now = picture()
            same_as_last, last[0] = now == last[0], now
            return same_as_last
        until(still, "a still picture")

    def shot(self, path):
        if shutil.which("import"):
            subprocess.run(["import", "-window", "root", path], check=False)


def xdo(*words):
    subprocess.run(["xdotool", *[str(word) for word in words]], check=True, stdout=subprocess.DEVNULL)


def location_entry(desk, dialog):
    """A dialog for opening shows its entry once asked; the key may come before the dialog has the focus."""
    entry = desk.find(role="text", top=dialog)
    if not entry:
        xdo("key", "--delay", 200, "ctrl+l")
    return entry


def choose(desk, title, path):
    """Types a path into the file dialog of that title and presses Enter."""
    dialog = desk.wait(role=("file chooser", "dialog"), contains=title)
    entry = until(lambda: location_entry(desk, dialog), "the place to type a path")
    entry.queryEditableText().setTextContents(path)
    until(lambda: entry.queryText().getText(0, -1) == path, "the path in the entry")
    entry.queryComponent().grabFocus()
    desk.key("Return")
    until(lambda: not desk.find(role=("file chooser", "dialog"), contains=title), f"the dialog {title} closed")


def menu(desk, *names):
    desk.press(desk.wait(name="Menu", role="toggle button"))
    for name in names:
        desk.press(desk.wait(name=name))


class Tap:
    """Prints the tests' outcomes in TAP and says at the end whether all passed."""

    def __init__(self):
        self.count = self.failed = 0

    def ok(self, passed, name, detail=""):
        self.count += 1
        self.failed += not passed
        print(f"{'ok' if passed else 'not ok'} {self.count} - {name}", flush=True)
        if not passed and detail:
            for line in str(detail).splitlines():
                print(f"# {line}", flush=True)
        return passed

    def test(self, name, function, *arguments):
        try:
            function(*arguments)
        except Exception as error:  # a test that fails must not take the others with it
            import traceback
            return self.ok(False, name, f"{error}\n{traceback.format_exc()}")
        return self.ok(True, name)

    def done(self):
        print(f"1..{self.count}", flush=True)
        return 1 if self.failed else 0


def same(found, expected, what):
    if found != expected:
        raise AssertionError(f"{what}: found {found!r}, expected {expected!r}")


def need(truth, what):
    if not truth:
        raise AssertionError(what)
