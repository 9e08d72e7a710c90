"""The demo's load cases for the tension strap: 200 invented ones, the same in each run."""

from __future__ import annotations

import csv
import io
import random
from pathlib import Path

from doubler.workbook.output import write_file

COUNT = 200
SEED = 1407
HEADER = (
    "case",
    "load_axial [kN]",
    "width [mm]",
    "thickness [in]",
    "pin_diameter [mm]",
    "hole_diameter [mm]",
    "edge_distance [cm]",
    "shear_planes",
    "tensile_yield [MPa]",
    "tensile_ultimate [ksi]",
    "factor_fitting",
)
# Name, share of the rated load of 90 kN from … to.
SITUATIONS = (
    ("slack-water-lift", 0.6, 1.1),
    ("lift-in-current", 0.8, 1.4),
    ("snag-on-guide", 1.2, 2.1),
    ("parked-in-swell", 0.3, 0.9),
    ("proof-test", 1.24, 1.26),
)
PINS = (28.0, 30.0, 32.0)
PLATES_IN = (0.5, 0.625, 0.75)
STEELS = ((355.0, 71.0), (420.0, 75.5), (460.0, 78.5))  # yield in MPa, ultimate in ksi


def rows() -> list[tuple[str, ...]]:
    """Return the cases as texts, below the header."""
    pick = random.Random(SEED)
    found = []
    for number in range(1, COUNT + 1):
        name, low, high = SITUATIONS[pick.randrange(len(SITUATIONS))]
        pin = pick.choice(PINS)
        strong, ultimate = pick.choice(STEELS)
        found.append(
            (
                f"LC{number:03d}-{name}",
                f"{90.0 * pick.uniform(low, high):.2f}",
                f"{pick.choice((72.0, 76.0, 80.0)):.1f}",
                f"{pick.choice(PLATES_IN):g}",
                f"{pin:.1f}",
                f"{pin + pick.choice((0.1, 0.2, 0.3)):.1f}",
                f"{pick.choice((4.6, 5.0, 5.4)):.1f}",
                pick.choice(("2", "2", "2", "1")),
                f"{strong:.0f}",
                f"{ultimate:.1f}",
                pick.choice(("1.15", "1.15", "1.25")),
            )
        )
    return found


def build(folder: Path) -> None:
    """Write the cases table."""
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow(HEADER)
    writer.writerows(rows())
    write_file(folder / "strap_cases.csv", [text.getvalue().encode("utf-8")])
