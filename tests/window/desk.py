# SPDX-License-Identifier: GPL-3.0-or-later
"""The window as a person and an assistive technology meet it: keys and pointer by xdotool, words through AT-SPI,
acts over the session bus. Every wait is for a state, with a deadline."""

import os
import shutil
import struct
import subprocess
import tempfile
import time
import zlib

import gi

gi.require_version("Atspi", "2.0")
from gi.repository import Atspi, Gio, GLib  # noqa: E402

from tap import Failure  # noqa: E402

PROGRAM = os.environ["HALFWHEEL"]
COMMAND_LINE = os.environ["HALFWHEEL_CLI"]
SAMPLES = os.environ["HALFWHEEL_SAMPLES"]
APP_ID = "org.halfwheel.Halfwheel"
WINDOW_PATH = "/org/halfwheel/Halfwheel/window/%d"
DEADLINE_S = 60


def wait_for(what, probe):
    """Repeats probe() until it gives something true, and returns that."""
    end = time.monotonic() + DEADLINE_S
    while True:
        result = probe()
        if result:
            return result
        if time.monotonic() > end:
            raise Failure("waited in vain for " + what)
        time.sleep(0.03)


class Desk:
    """One running program; use it in a `with`."""

    def __init__(self, *arguments, env=None, window=True):
        self.bus = Gio.bus_get_sync(Gio.BusType.SESSION)
        self.log = tempfile.TemporaryFile()
        wait_for("the former program to end", lambda: not self.has_owner())
        self.process = subprocess.Popen([PROGRAM, *arguments], stderr=self.log, stdout=self.log,
                                        env=dict(os.environ, **(env or {})))
        self.number = 1
        if window:
            wait_for("the window", self.find_window)

    def __enter__(self):
        return self

    def __exit__(self, kind, value, trace):
        if self.process.poll() is None:
            if kind is None:
                self.process.terminate()
            else:
                self.process.kill()
            self.process.wait()
        if kind is not None:
            print("# the program said: " + self.read_log().replace("\n", "\n# "))
        self.log.close()

    def read_log(self):
        self.log.seek(0)
        return self.log.read().decode(errors="replace")

    def has_owner(self):
        answer = self.bus.call_sync("org.freedesktop.DBus", "/org/freedesktop/DBus", "org.freedesktop.DBus",
                                    "NameHasOwner", GLib.Variant("(s)", (APP_ID,)), None, 0, -1, None)
        return answer.unpack()[0]

    # acts over the session bus

    def call(self, method, parameters):
        return self.bus.call_sync(APP_ID, WINDOW_PATH % self.number, "org.gtk.Actions", method, parameters, None,
                                  0, DEADLINE_S * 1000, None).unpack()

    def act(self, name, text=None):
        wait_for("the act %s to be allowed" % name, lambda: self.is_enabled(name))
        values = [GLib.Variant("s", text)] if text is not None else []
        self.call("Activate", GLib.Variant("(sava{sv})", (name, values, {})))

    def is_enabled(self, name):
        try:
            return self.call("Describe", GLib.Variant("(s)", (name,)))[0][0]
        except GLib.Error:
            return False

    # what an assistive technology reads

    def find_application(self):
        desktop = Atspi.get_desktop(0)
        for index in range(desktop.get_child_count()):
            application = desktop.get_child_at_index(index)
            try:
                if application and application.get_process_id() == self.process.pid:
                    application.set_cache_mask(Atspi.Cache.NONE)
                    return application
            except GLib.Error:
                continue
        return None

    def find_window(self):
        if self.process.poll() is not None:
            raise Failure("the program ended with %d: %s" % (self.process.returncode, self.read_log()))
        application = self.find_application()
        if application and application.get_child_count() > 0:
            return application.get_child_at_index(0)
        return None

    def everything(self, root=None):
        """All accessibles that are not hidden, parents first."""
        heap = [root or self.find_application()]
        while heap:
            item = heap.pop()
            if item is None:
                continue
            try:
                count = item.get_child_count()
                children = [item.get_child_at_index(i) for i in range(count)]
                states = item.get_state_set()
                if item.get_role() != Atspi.Role.APPLICATION and not states.contains(Atspi.StateType.VISIBLE):
                    continue
            except GLib.Error:
                continue
            heap.extend(reversed(children))
            yield item

    def find(self, role, name=None, root=None):
        for item in self.everything(root):
            try:
                if item.get_role() == role and (name is None or item.get_name() == name):
                    return item
            except GLib.Error:
                continue
        return None

    def picture(self):
        return wait_for("the picture", lambda: self.find(Atspi.Role.IMAGE, "Picture"))

    def description(self):
        """Of the picture: where the line stands, how many markers there are."""
        return self.picture().get_description()

    def rows(self):
        """The rows of the finish list, as they are spoken."""
        listing = self.find(Atspi.Role.LIST, "Finish list") or self.find(Atspi.Role.LIST_BOX, "Finish list")
        if not listing:
            return []
        try:
            children = [listing.get_child_at_index(i) for i in range(listing.get_child_count())]
            return [child.get_name() for child in children if child.get_role() == Atspi.Role.LIST_ITEM]
        except (GLib.Error, AttributeError):
            return []

    def click_row(self, part):
        """Clicks the row of the finish list whose spoken words have `part` in them."""

        def row():
            return next((item for item in self.everything() if item.get_role() == Atspi.Role.LIST_ITEM and
                         part in item.get_name()), None)

        box = wait_for("a row with " + part, row).get_component_iface().get_extents(Atspi.CoordType.WINDOW)
        self.click(box.x + BORDER + box.width // 2, box.y + BORDER + box.height // 2)

    def texts(self):
        """What labels say."""
        found = []
        for item in self.everything():
            try:
                if item.get_role() == Atspi.Role.LABEL:
                    found.append(item.get_name())
            except GLib.Error:
                continue
        return found

    def says(self, part):
        return any(part in text for text in self.texts())

    def press_button(self, name):
        """In the newest window: the dialog, where there is one."""

        def newest():
            application = self.find_application()
            window = application.get_child_at_index(application.get_child_count() - 1)
            # The toolkit says the names of its dialogs' buttons twice.
            return (self.find(Atspi.Role.PUSH_BUTTON, name, window) or
                    self.find(Atspi.Role.PUSH_BUTTON, name + " " + name, window))

        wait_for("the button " + name, newest).do_action(0)

    # hands

    def keys(self, *keys):
        subprocess.run(["xdotool", "key", "--delay", "5", *keys], check=True)

    def window_id(self):
        answer = subprocess.run(["xdotool", "search", "--onlyvisible", "--pid", str(self.process.pid)],
                                capture_output=True, text=True, check=False)
        return answer.stdout.split()[0] if answer.stdout.split() else None

    def picture_box(self):
        """x, y, width, height on the screen."""
        box = self.picture().get_component_iface().get_extents(Atspi.CoordType.WINDOW)
        return box.x + BORDER, box.y + BORDER, box.width, box.height

    def focus_picture(self):
        """Clicks on the ruler's foot, which moves nothing but the line, and waits for the focus."""
        picture = self.picture()
        if not picture.get_state_set().contains(Atspi.StateType.FOCUSED):
            x, y, width, height = self.picture_box()
            subprocess.run(["xdotool", "mousemove", str(x + width // 2), str(y + height // 2), "click", "1"], check=True)
        wait_for("the focus", lambda: self.picture().get_state_set().contains(Atspi.StateType.FOCUSED))

    def click(self, x, y):
        subprocess.run(["xdotool", "mousemove", str(int(x)), str(int(y)), "click", "1"], check=True)

    def ended(self):
        return self.process.poll() is not None


# Between the window's corner on the screen and where AT-SPI counts from, without a window manager.
BORDER = 5


def screenshot():
    """Width, height and a function of x and y that gives RGB: the screen, read from the server's own memory, which
    it keeps as an X window dump (X11 XWDFile.h, version 7)."""
    with open(os.environ["HALFWHEEL_FRAMEBUFFER"], "rb") as dump:
        data = dump.read()
    head = struct.unpack(">25I", data[:100])
    size, version, width, height, order, bits, stride, colours = (head[0], head[1], head[4], head[5], head[7],
                                                                  head[11], head[12], head[19])
    if version != 7 or bits != 32:
        raise Failure("the screen is no 32-bit window dump of version 7")
    at = size + colours * 12

    def rgb(x, y):
        start = at + int(y) * stride + int(x) * 4
        value = struct.unpack(">I" if order else "<I", data[start:start + 4])[0]
        return (value >> 16 & 255, value >> 8 & 255, value & 255)

    return width, height, rgb


# Small recordings, written without any of the program's own code.

def write_png(path, rows, width, rgb):
    """rgb(column, row) gives a pixel; 8 bits, no filter."""
    raw = bytearray()
    for row in range(rows):
        raw.append(0)
        for column in range(width):
            raw.extend(rgb(column, row))

    def chunk(kind, data):
        return struct.pack(">I", len(data)) + kind + data + struct.pack(">I", zlib.crc32(kind + data))

    with open(path, "wb") as out:
        out.write(b"\x89PNG\r\n\x1a\n" + chunk(b"IHDR", struct.pack(">IIBBBBB", width, rows, 8, 2, 0, 0, 0)) +
                  chunk(b"IDAT", zlib.compress(bytes(raw), 1)) + chunk(b"IEND", b""))


def write_recording(folder, name, travel="left", later="right", columns=1200, rows=100, rgb=None):
    """One block of 1000 columns a second. rgb(column, row) is in time's own order."""
    path = os.path.join(folder, name)
    os.mkdir(path)
    paint = rgb or (lambda column, row: ((column // 40) % 2 * 60 + 90,) * 3)
    if later == "left":
        write_png(os.path.join(path, "block.png"), rows, columns, lambda c, r: paint(columns - 1 - c, r))
    else:
        write_png(os.path.join(path, "block.png"), rows, columns, paint)
    with open(os.path.join(path, "recording.json"), "w") as out:
        out.write("""{"halfwheel_recording": 1, "title": "Made for a test", "epoch": "2027-06-13T16:02:11+02:00",
"travel": "%s", "later": "%s", "scan": {"rate_hz": 1000, "exposure_us": 200, "stamp": "middle"},
"blocks": [{"file": "block.png", "columns": %d, "first_ns": 0}]}""" % (travel, later, columns))
    return path


class Folder:
    def __enter__(self):
        self.path = tempfile.mkdtemp()
        return self.path

    def __exit__(self, *_):
        shutil.rmtree(self.path, ignore_errors=True)
