"""Densities of materials as limits: a range of a table is what is known of an unnamed alloy or board.

Sources: J. M. Gere, Mechanics of Materials, Table H-1 ("Gere"); W. D. Callister, Materials Science and Engineering,
Table B.1 ("Callister"); the rest from memory, which `source_of` says. A single number of a table gets 1 % as limits.
"""

from __future__ import annotations

import math

from ..records import Quantity

SINGLE_NUMBER_LIMITS = 0.01  # of a table that gives one number: round numbers and alloys differ by so much

# kg/m³: lowest, highest, source
DENSITIES: dict[str, tuple[float, float, str]] = {
    "aluminium alloy": (2600.0, 2800.0, "Gere"),
    "aluminium 6061": (2700.0, 2700.0, "Gere"),
    "aluminium 2014": (2800.0, 2800.0, "Gere"),
    "aluminium 7075": (2800.0, 2800.0, "Gere"),
    "brass": (8400.0, 8600.0, "Gere"),
    "bronze": (8200.0, 8800.0, "Gere"),
    "cast iron": (7000.0, 7400.0, "Gere"),
    "copper": (8900.0, 8900.0, "Gere"),
    "glass": (2400.0, 2800.0, "Gere"),
    "magnesium alloy": (1760.0, 1830.0, "Gere"),
    "nickel": (8800.0, 8800.0, "Gere"),
    "steel": (7850.0, 7850.0, "Gere"),
    "titanium": (4500.0, 4500.0, "Gere"),
    "nylon": (880.0, 1100.0, "Gere"),
    "polyethylene": (960.0, 1400.0, "Gere"),
    "rubber": (960.0, 1300.0, "Gere"),
    "douglas fir": (480.0, 560.0, "Gere"),
    "oak": (640.0, 720.0, "Gere"),
    "southern pine": (560.0, 640.0, "Gere"),
    "water": (1000.0, 1000.0, "Gere"),
    "pmma": (1190.0, 1190.0, "Callister"),
    "polypropylene": (905.0, 905.0, "Callister"),
    "polystyrene": (1050.0, 1050.0, "Callister"),
    "pet": (1350.0, 1350.0, "Callister"),
    "ptfe": (2170.0, 2170.0, "Callister"),
    "pvc": (1300.0, 1580.0, "Callister"),
    "uhmwpe": (940.0, 940.0, "Callister"),
    "e-glass": (2580.0, 2580.0, "Callister"),
    "carbon fibre": (1780.0, 1810.0, "Callister"),
    "aramid-epoxy": (1400.0, 1400.0, "Callister"),
    "red oak": (610.0, 670.0, "Callister"),
    "abs": (1040.0, 1060.0, "memory"),
    "pla": (1240.0, 1240.0, "memory"),
    "polycarbonate": (1200.0, 1200.0, "memory"),
    "plywood": (500.0, 700.0, "memory"),
    "balsa": (100.0, 200.0, "memory"),
    "eps foam": (15.0, 30.0, "memory"),
    "xps foam": (28.0, 45.0, "memory"),
    "carbon-epoxy": (1550.0, 1600.0, "memory"),
    "lead": (11340.0, 11340.0, "memory"),
}


def density_of(material: str) -> Quantity | None:
    """Density of a material of the table with its range as limits, kg/m³; None where it is not in the table.

    Examples
    --------
    >>> oak = density_of("Oak")
    >>> oak.value, round(oak.u, 2)
    (680.0, 23.09)
    """
    entry = DENSITIES.get(plain_name(material))
    if entry is None:
        return None
    low, high, _ = entry
    middle = 0.5 * (low + high)
    half = 0.5 * (high - low) or SINGLE_NUMBER_LIMITS * middle
    return Quantity(middle, half / math.sqrt(3.0), "kg/m^3", shape="rectangular")


def source_of(material: str) -> str | None:
    """Where the table's number comes from; None where the material is not in it."""
    entry = DENSITIES.get(plain_name(material))
    return None if entry is None else entry[2]


def plain_name(material: str) -> str:
    """A material's name without the differences of spelling that do not matter."""
    return " ".join(
        material.lower().replace("aluminum", "aluminium").replace("carbon fiber", "carbon fibre").split()
    )
