"""Numbers of a page, each taken from the result document, rounded by the one rule and marked with where it came from.

A page asks for "swing.period_s" and gets `<data value="3.1021…" data-key="swing.period_s" …>3.10211 ± 0.00011 s</data>`:
what is read, what is stored, and which entry of result.json it is stand together, and a test compares all three.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from markupsafe import Markup, escape

from .rounding import UNKNOWN, bare, change, count, deviation, percent, rounded, show_entry
from .units import shown_in


class Numbers:
    """The numbers and words of one document, by their dotted place in it ("inertia.budget.0.value")."""

    def __init__(self, document: Mapping[str, Any], *, label: str = "") -> None:
        self._document = document
        self._label = label  # which document, on a page of several

    def get(self, place: str) -> Any:
        """What stands at a place; None where there is nothing."""
        found: Any = self._document
        for part in place.split("."):
            if isinstance(found, Mapping):
                found = found.get(part)
            elif isinstance(found, list | tuple) and part.isdigit() and int(part) < len(found):
                found = found[int(part)]
            else:
                return None
        return found

    def quantity(self, place: str, unit: str = "", scale: float = 1.0, k: float | None = None) -> Markup:
        """Value ± k·u; the unit is that of `units.shown_in` where none is asked for."""
        entry = self.get(place)
        if not isinstance(entry, Mapping):
            return self._unknown(place)
        if not unit:
            unit, scale = shown_in(str(entry["unit"]), float(entry["value"] or 0.0))
        text = show_entry(entry, unit, scale=scale, k=k or 1.0)
        marks = {"form": "quantity", "unit": unit, "scale": repr(scale), "k": repr(k or 1.0)}
        return self._data(place, entry["value"], _dim(text), marks)

    def value_of(self, place: str, unit: str, scale: float) -> Markup:
        """The value alone of a record that has "value" and "u" (a line of a budget), to the place of its u."""
        line = self.get(place)
        text = rounded(line["value"] * scale, line["u"] * scale)[0].replace("-", "−")
        return self._data(
            f"{place}.value", line["value"], text, {"form": "value", "unit": unit, "scale": repr(scale)}
        )

    def plain(
        self, place: str, digits: int = 3, unit: str = "", scale: float = 1.0, *, floor: float = 0.0
    ) -> Markup:
        """A number without uncertainty of its own."""
        number = self.get(place)
        if number is None:
            return self._unknown(place)
        text = bare(number * scale, digits, unit, floor=floor)
        marks = {"form": "bare", "unit": unit, "scale": repr(scale), "digits": str(digits)}
        return self._data(place, number, text, marks)

    def count(self, place: str) -> Markup:
        """A whole number."""
        number = self.get(place)
        return (
            self._unknown(place)
            if number is None
            else self._data(place, number, count(number), {"form": "count"})
        )

    def length(self, place: str) -> Markup:
        """How many entries a list has."""
        return self._data(
            place, len(self.get(place) or ()), count(len(self.get(place) or ())), {"form": "length"}
        )

    def percent(self, place: str, decimals: int = 1) -> Markup:
        """A part of one as percent."""
        number = self.get(place)
        if number is None:
            return self._unknown(place)
        return self._data(
            place, number, percent(number, decimals=decimals), {"form": "percent", "digits": str(decimals)}
        )

    def change(self, place: str) -> Markup:
        """The relative change that a correction made, in percent."""
        line = self.get(place)
        text = change(line["relative"], line["u"])
        return self._data(f"{place}.relative", line["relative"], text, {"form": "change"})

    def deviation(self, place: str) -> Markup:
        """A relative deviation in percent, with its sign."""
        number = self.get(place)
        return self._data(place, number, deviation(number), {"form": "deviation"})

    def said(self, place: str, *, base: bool = False, spaced: bool = False) -> Markup:
        """Words as they stand in the document, escaped; `base` leaves the folders of a file name out,
        `spaced` turns the underscores of a key into spaces."""
        words = self.get(place)
        if words is None:
            return self._unknown(place)
        text = ", ".join(map(str, words)) if isinstance(words, list | tuple) else str(words)
        if spaced:
            text = text.replace("_", " ")
        if base:
            text = text.replace("\\", "/").rsplit("/", 1)[-1]
        return Markup('<span data-said="{}" {}>{}</span>').format(place, self._which(), text)

    def inputs(self, place: str = "inputs") -> list[tuple[str, str]]:
        """All that was given, as (name in words, place) of every single entry."""
        return list(_leaves(self.get(place), place, ()))

    def _data(self, place: str, stored: Any, shown: str | Markup, marks: Mapping[str, str]) -> Markup:
        attributes = [Markup('data-{}="{}"').format(name, value) for name, value in marks.items() if value]
        return Markup('<data value="{}" data-key="{}" {}>{}</data>').format(
            repr(stored), place, Markup(" ").join([*attributes, self._which()]), shown
        )

    def _unknown(self, place: str) -> Markup:
        return Markup('<span data-unknown="{}" {}>{}</span>').format(place, self._which(), UNKNOWN)

    def _which(self) -> Markup:
        return Markup('data-document="{}"').format(self._label) if self._label else Markup("")


def _leaves(found: Any, place: str, names: tuple[str, ...]) -> Any:
    if isinstance(found, Mapping) and set(found) >= {"value", "unit"}:
        yield " › ".join(names), place
    elif isinstance(found, Mapping):
        for name, entry in found.items():
            yield from _leaves(entry, f"{place}.{name}", (*names, str(name).replace("_", " ")))
    elif isinstance(found, list | tuple) and not all(isinstance(entry, int | float) for entry in found):
        for index, entry in enumerate(found):
            yield from _leaves(entry, f"{place}.{index}", (*names, str(index + 1)))
    else:
        yield " › ".join(names), place


def _dim(text: str) -> Markup:
    """The part from ± on in a lighter dress; the text itself stays as it is."""
    value, sign, rest = text.partition(" ± ")
    if not sign:
        return escape(text)
    return Markup('{}<span class="doubt-of"> ± {}</span>').format(value, rest)
