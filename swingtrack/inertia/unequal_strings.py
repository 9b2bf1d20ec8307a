"""Two strings of slightly unequal length under a level article: how much it can matter, and when to doubt."""

from __future__ import annotations

from typing import Any

from ..records import Doubt, Rig

# Against the exact modes of the rigid body the formula below errs by 0.29 (δ/L)² at δ/L = 0.1 (its check in the
# tests); yaw then also sways the article. Half of (δ/L)² holds that with a margin.
COUPLING = 0.5
WORTH_SAYING = 1e-3  # relative part of the moment from which unequal strings are pointed out: our judgment


def unequal_stiffness(near: Any, far: Any, lengths: tuple[Any, Any]) -> Any:
    """Restoring torque per weight and angle, m, of a level article on parallel strings of lengths L1 and L2.

    (d1 d2/D)(d1/L1 + d2/L2), D = d1 + d2: string 1 at the distance d1 from the centre of mass carries d2/D of the weight
    and so on (docs/theory.md, Bifilar; the exact yaw is coupled with sway).

    Examples
    --------
    >>> round(unequal_stiffness(0.2, 0.2, (1.0, 1.1)) / 0.15**2, 5)
    1.69697
    """
    return near * far / (near + far) * (near / lengths[0] + far / lengths[1])


def unequal_part(rig: Rig) -> float:
    """Limit, relative, of what the stated difference of the string lengths can change of the moment.

    Nobody says which string is the longer one, so that with the centre of mass off the middle the sign is open.
    """
    given = rig.suspension.dimensions
    length = given.get("length") or given.get("drop")
    if "length_difference" not in given or length is None:
        return 0.0
    half, offset = 0.5 * given["upper_spacing"].value, 0.0
    if "centre_offset" in given:
        offset = given["centre_offset"].value
    mean, part = length.value, 0.5 * given["length_difference"].value
    if part >= mean:
        return 1.0
    equal = (half + offset) * (half - offset) / mean
    changes = [
        unequal_stiffness(half + offset, half - offset, (mean + way * part, mean - way * part)) / equal - 1.0
        for way in (1.0, -1.0)
    ]
    return float(max(abs(change) for change in changes) + COUPLING * (2.0 * part / mean) ** 2)


def unequal_doubts(rig: Rig) -> tuple[Doubt, ...]:
    """A doubt where the difference of the lengths can change the moment visibly."""
    part = unequal_part(rig)
    if part <= WORTH_SAYING:
        return ()
    return (
        Doubt(
            "strings-unequal",
            f"The strings differ by {1e3 * rig.suspension.dimensions['length_difference'].value:.3g} mm, which can change "
            f"the moment by {100 * part:.2g} %; yaw then also sways the article.",
            "Make the strings equal: hang the article level from hooks at one height.",
        ),
    )
