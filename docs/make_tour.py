"""Make the pictures of the tour in LibreOffice (docs/tour-calc.md): real windows under a virtual screen.

Needs LibreOffice with a screen part (Debian: libreoffice-calc, python3-uno, libreoffice-gtk3), Xvfb, openbox, xdotool,
and ImageMagick (xvfb, openbox, xdotool, imagemagick). Run from the repository: ``.venv/bin/python docs/make_tour.py``.
"""

from __future__ import annotations

import os
import shutil
import subprocess
import tempfile
import time
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any

from doubler.demo_data import templates_folder
from doubler.hosts import calc_commands, calc_profile

IMAGES = Path(__file__).parent / "images"
LONG = "DOUBLER.FUNCTIONS."
WIDTH, HEIGHT = 1180, 720
LARGEST = 200_000
"""Bytes of a picture."""
PROGRAMS = ("soffice", "Xvfb", "openbox", "xdotool", "import", "convert")

BARS: dict[str, Any] = {
    "A1": "Stress in three bars",
    "A3": "Force [kN]",
    "B3": "Area [mm^2]",
    "C3": "Stress",
    "A4": 12.5,
    "A5": 18.0,
    "A6": -7.25,
    "B4": 150.0,
    "B5": 150.0,
    "B6": 95.0,
    "E3": "Largest",
}


def main() -> None:
    """Start a virtual screen and take all pictures on it."""
    missing = [name for name in PROGRAMS if shutil.which(name) is None]
    if missing:
        raise SystemExit(f"not installed: {', '.join(missing)}")
    with tempfile.TemporaryDirectory() as place, screen():
        profile = Path(place) / "profile"
        calc_commands.install(profile)
        with calc_profile.Driven(profile) as office:
            office("configure", "/org.openoffice.Office.Common/Misc", "ShowTipOfTheDay", False)
            office("configure", "/org.openoffice.Setup/Product", "ooSetupLastVersion", "99.9")
        with calc_profile.Driven(profile, visible=True) as office:
            wizard(office)
            array(office)
            reason(office)
            template(office, Path(place))


@contextmanager
def screen() -> Iterator[None]:
    """Run a virtual screen with a window manager; all programs started meanwhile show on it."""
    number = next(n for n in range(90, 200) if not Path(f"/tmp/.X11-unix/X{n}").exists())
    os.environ["DISPLAY"] = f":{number}"
    server = subprocess.Popen(
        ["Xvfb", f":{number}", "-screen", "0", f"{WIDTH}x{HEIGHT}x24", "-nolisten", "tcp"], stderr=subprocess.DEVNULL
    )
    try:
        time.sleep(1.5)
        manager = subprocess.Popen(["openbox"], stderr=subprocess.DEVNULL)
        try:
            yield
        finally:
            manager.terminate()
            manager.wait()
    finally:
        server.terminate()
        server.wait()


def press(*keys: str) -> None:
    """Press keys in the window that has the focus."""
    subprocess.run(["xdotool", "key", "--delay", "60", *keys], check=True)


def picture(name: str, seconds: float = 2.0) -> None:
    """Take the whole screen, and make the file small."""
    time.sleep(seconds)
    target = IMAGES / f"{name}.png"
    subprocess.run(["import", "-window", "root", str(target)], check=True)
    subprocess.run(["convert", str(target), "-strip", "-colors", "128", str(target)], check=True)
    if target.stat().st_size > LARGEST:
        raise SystemExit(f"{target} has {target.stat().st_size} bytes")
    print(f"{target}: {target.stat().st_size // 1000} kB")


def sheet(office: calc_profile.Driven, key: str, cells: dict[str, Any], widths: dict[str, int]) -> None:
    """Open a new spreadsheet with these cells."""
    office("open", key, "")
    office("put", key, "", cells)
    office("widen", key, "", widths)


def wizard(office: calc_profile.Driven) -> None:
    """Show the function wizard on a formula of ours."""
    cells = {"A1": "Force", "B1": 12.5, "C1": "kN", "A2": "Area", "B2": 150.0, "C2": "mm^2", "A4": "Stress"}
    sheet(office, "wizard", {**cells, "B4": f'={LONG}STRESS_AXIAL(B1:C1;B2:C2;"MPa")', "C4": "MPa"}, {"A": 3000})
    office("show", "wizard", "", "B4", [0, 0, WIDTH, HEIGHT - 30], 120)
    time.sleep(2)
    press("ctrl+F2")
    time.sleep(2)
    picture("tour_wizard")
    press("Escape")
    time.sleep(1)
    office("show", "wizard", "", "B6", [0, 0, WIDTH, HEIGHT - 30], 120)
    time.sleep(1)
    press("ctrl+F2")
    time.sleep(2)
    subprocess.run(["xdotool", "type", "--delay", "80", "STRESS_VON"], check=True)
    press("Tab", "Tab", "Down", "Up")
    picture("tour_list")
    press("Escape", "Escape")
    time.sleep(1)
    office("shut", "wizard")


def array(office: calc_profile.Driven) -> None:
    """Show a column of results from headed columns, their unit beside them, and the largest of them."""
    sheet(office, "array", BARS, {"A": 3200, "B": 3200, "C": 3200, "D": 2200, "E": 3000})
    office("put_array", "array", "", "C4:D6", f"={LONG}STRESS_AXIAL(A3:A6;B3:B6)")
    office("put", "array", "", {"E4": "=MAX(C4:C6)"})
    office("show", "array", "", "C4:D6", [0, 0, WIDTH, HEIGHT - 30], 140)
    picture("tour_array")
    office("shut", "array")


def reason(office: calc_profile.Driven) -> None:
    """Show an empty cell and an impossible value as errors, each with its reason beside it."""
    cells = {
        "A1": "Force [N]", "B1": "Area [mm^2]", "C1": "Stress [MPa]", "D1": "Why",
        "A2": 12000.0, "B2": 150.0, "A3": 9000.0, "A4": 12000.0, "B4": 0.0, "A5": 12000.0, "B5": "150",
        "A7": "Largest", "C7": "=MAX(C2:C5)",
        **{f"C{row}": f'={LONG}STRESS_AXIAL(A{row};B{row};"N-mm")' for row in range(2, 6)},
        **{f"D{row}": f"={LONG}UNIT_REASON(C{row})" for row in range(2, 6)},
    }  # fmt: skip
    sheet(office, "reason", cells, {"A": 2600, "B": 3000, "C": 3000, "D": 15500})
    office("show", "reason", "", "D3", [0, 0, WIDTH, HEIGHT - 30], 120)
    picture("tour_reason")
    office("shut", "reason")


def template(office: calc_profile.Driven, place: Path) -> None:
    """Show a shipped template, recalculated by LibreOffice."""
    path = place / "tension_strap.xlsx"
    shutil.copy(templates_folder() / path.name, path)
    office("open", "template", str(path))
    office("calculate", "template")
    office("show", "template", "", "C35", [0, 0, WIDTH, HEIGHT - 30], 70)
    picture("tour_template")
    office("shut", "template")


if __name__ == "__main__":
    main()
