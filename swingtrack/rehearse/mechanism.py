"""The plain mechanics of each suspension, written apart from `inertia/` so that one can test the other.

Everything is in masses, heights and torques, never in the reduced form that the fit uses.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass

from ..errors import BadRig
from ..records import Rig
from .air import air_moment

REHEARSED_GRAVITY = 9.81  # m/s², where the rig says neither gravity nor latitude: any value on Earth would do


@dataclass(frozen=True, eq=False)
class Mechanism:
    """A body with one coordinate q: I(q) q'' + ½ I'(q) q'² = torque(q) − losses · I(0).

    Parameters
    ----------
    inertia, half_slope : q (rad) → I(q), kg m², and ½ dI/dq
    torque : q → N m
    rise : q → m
        By how much the body's centre is lifted.
    potential : q → J
    at_rest, stiffness : float
        I(0), kg m², and −d(torque)/dq at 0, N m/rad.
    moment_kg_m2 : float
        Of the article itself, about the axis through its centre of mass.
    """

    inertia: Callable[[float], float]
    half_slope: Callable[[float], float]
    torque: Callable[[float], float]
    rise: Callable[[float], float]
    potential: Callable[[float], float]
    at_rest: float
    stiffness: float
    moment_kg_m2: float

    @property
    def period_s(self) -> float:
        """Small undamped swings: 2π √(I(0)/stiffness)."""
        return 2.0 * math.pi * math.sqrt(self.at_rest / self.stiffness)


@dataclass(frozen=True)
class Strings:
    """Equal strings between circles of radii `upper_m` and `lower_m`; the upper ends hang `drop_m` over the lower.

    `count` strings; of two the circles' radii are half the spacings.
    """

    upper_m: float
    lower_m: float
    drop_m: float
    count: int


def mechanism_of(rig: Rig, moment: float) -> Mechanism:
    """The plain mechanics of the rig with an article of the given moment of inertia, kg m².

    Raises
    ------
    BadRig
        The suspension can't be rehearsed, or a number that it needs is missing or impossible.

    Examples
    --------
    >>> from swingtrack.records import Article, Quantity, Suspension
    >>> wire = Suspension("torsion-wire", {"stiffness": Quantity(0.02, 0.0, "N m/rad")})
    >>> round(mechanism_of(Rig(Article("blade", None), wire), 0.02).period_s, 6)
    6.283185
    """
    if not (math.isfinite(moment) and moment > 0.0):
        raise BadRig(f"A moment of inertia of {moment:g} kg m² was given.", "Needed: a number over zero.")
    x = {key: q.value for key, q in rig.suspension.dimensions.items()}
    kind = rig.suspension.kind
    whole = moment + air_moment(rig.air)
    if kind == "torsion-wire":
        return _torsion(x["stiffness"] if "stiffness" in x else wire_stiffness(x), whole, moment)
    if kind not in ("knife-edge", "bifilar", "trifilar"):
        raise BadRig(
            f"A {kind} suspension can't be rehearsed.",
            "Needed: bifilar, trifilar, torsion-wire or knife-edge.",
            "For two edges rehearse each as a knife-edge with its own pivot_to_centre.",
        )
    if rig.article.mass is None:
        raise BadRig("article.mass is missing.", "Needed: the mass of the article that is rehearsed.")
    mass, g = rig.article.mass.value, gravity_of(rig)
    if kind == "knife-edge":
        return _pendulum(x["pivot_to_centre"], mass, g, whole, moment)
    return _on_strings(_effective(strings_of(rig), x), x, (mass, g), whole, moment)


def strings_of(rig: Rig) -> Strings:
    """Where the strings of a bifilar or n-string rig are tied."""
    x = {key: q.value for key, q in rig.suspension.dimensions.items()}
    if "upper_spacing" in x:
        a, b = 0.5 * x["upper_spacing"], 0.5 * x.get("lower_spacing", x["upper_spacing"])
    else:
        a, b = x["upper_radius"], x.get("lower_radius", x["upper_radius"])
    if "drop" in x:
        return Strings(a, b, x["drop"], rig.suspension.strings)
    slack = x["length"] ** 2 - (a - b) ** 2
    if slack <= 0.0:
        raise BadRig(
            f"Strings of {x['length']:.4g} m can't reach across from {a:.4g} m to {b:.4g} m off the axis.",
            "Needed: strings longer than the difference of the half spacings.",
        )
    return Strings(a, b, math.sqrt(slack), rig.suspension.strings)


def wire_stiffness(x: Mapping[str, float]) -> float:
    """Twist stiffness of a round wire, N m/rad: G times the polar second moment π d⁴/32, over the length."""
    polar = 0.5 * math.pi * (0.5 * x["wire_diameter"]) ** 4
    return x["shear_modulus"] * polar / x["length"]


def gravity_of(rig: Rig) -> float:
    """Gravity of the rehearsed place, m/s²: as given, by latitude and altitude (GRS 80 normal gravity), or 9.81."""
    if rig.gravity is not None:
        return rig.gravity.value
    if rig.latitude is None:
        return REHEARSED_GRAVITY
    # Moritz, Geodetic Reference System 1980: closed (Somigliana) form and free-air gradient, from memory.
    s2 = math.sin(rig.latitude.value) ** 2
    at_sea = 9.7803267715 * (1.0 + 0.001931851353 * s2) / math.sqrt(1.0 - 0.0066943800229 * s2)
    height = rig.altitude.value if rig.altitude is not None else 0.0
    return at_sea - 3.086e-6 * height


def _torsion(stiffness: float, whole: float, moment: float) -> Mechanism:
    return Mechanism(
        inertia=lambda q: whole,
        half_slope=lambda q: 0.0,
        torque=lambda q: -stiffness * q,
        rise=lambda q: 0.0,
        potential=lambda q: 0.5 * stiffness * q * q,
        at_rest=whole,
        stiffness=stiffness,
        moment_kg_m2=moment,
    )


def _pendulum(arm: float, mass: float, g: float, whole: float, moment: float) -> Mechanism:
    about_edge, pull = whole + mass * arm**2, mass * g * arm
    return Mechanism(
        inertia=lambda q: about_edge,
        half_slope=lambda q: 0.0,
        torque=lambda q: -pull * math.sin(q),
        rise=lambda q: 0.0,  # the body turns about the edge, which stands still
        potential=lambda q: pull * (1.0 - math.cos(q)),
        at_rest=about_edge,
        stiffness=pull,
        moment_kg_m2=moment,
    )


def _effective(strings: Strings, x: Mapping[str, float]) -> Strings:
    """Off the middle by e the two arms are b − e and b + e: circles with the mean square arm ab − e²."""
    offset = x.get("centre_offset", 0.0)
    if offset == 0.0:
        return strings
    share = 1.0 - offset**2 / (strings.upper_m * strings.lower_m)
    if share <= 0.0:
        raise BadRig(
            f"centre_offset = {offset:.4g} m puts the centre of mass outside the strings.",
            "Needed: a centre of mass between them.",
        )
    scale = math.sqrt(share)
    return Strings(strings.upper_m * scale, strings.lower_m * scale, strings.drop_m, strings.count)


def _on_strings(
    strings: Strings, x: Mapping[str, float], load: tuple[float, float], whole: float, moment: float
) -> Mechanism:
    """A body that turns by q on inextensible strings and rises as it turns.

    Each string runs from (a, 0) above to (b cos q, b sin q) below: h² = L² − a² − b² + 2ab cos q. A string of mass
    M_s/n moves as a straight rod hung from its upper end: half its weight is lifted with the body, and a third of
    its mass moves with the lower end.
    """
    mass, g = load
    a, b, drop = strings.upper_m, strings.lower_m, strings.drop_m
    if not (a > 0.0 and b > 0.0):
        raise BadRig("The strings meet on the axis.", "Needed: spacings over zero.")
    flat = drop**2 - 2.0 * a * b  # h² without the 2ab cos q: L² − a² − b²
    string_mass, twist = x.get("string_mass", 0.0), x.get("string_stiffness", 0.0)
    lifted, moved = mass + 0.5 * string_mass, mass + string_mass / 3.0
    turning = whole + string_mass / 3.0 * b**2

    def height(q: float) -> float:
        return math.sqrt(flat + 2.0 * a * b * math.cos(q))

    def slope(q: float) -> float:
        return a * b * math.sin(q) / height(q)

    def curve(q: float) -> float:
        h = height(q)
        return a * b * math.cos(q) / h + (a * b * math.sin(q)) ** 2 / h**3

    return Mechanism(
        inertia=lambda q: turning + moved * slope(q) ** 2,
        half_slope=lambda q: moved * slope(q) * curve(q),
        torque=lambda q: -lifted * g * slope(q) - twist * q,
        rise=lambda q: drop - height(q),
        potential=lambda q: lifted * g * (drop - height(q)) + 0.5 * twist * q * q,
        at_rest=turning,
        stiffness=lifted * g * a * b / drop + twist,
        moment_kg_m2=moment,
    )
