"""Colours that every reader tells apart, and text that stands out from its page, day and night."""

from __future__ import annotations

import itertools
import re

import numpy as np
import pytest

from swingtrack.report.html import source
from swingtrack.report.look import DARK, DATA, FAINT, FIT, INK, PAPER, THIRD

# Machado, Oliveira and Fernandes, IEEE Trans. Vis. Comput. Graph. 15 (2009) 1291, table of matrices at severity 1.0.
# From memory; each row adds up to one, as it must for grey to stay grey.
SIGHT = {
    "full": np.eye(3),
    "protan": np.array(
        [[0.152286, 1.052583, -0.204868], [0.114503, 0.786281, 0.099216], [-0.003882, -0.048116, 1.051998]]
    ),
    "deutan": np.array(
        [[0.367322, 0.860646, -0.227968], [0.280085, 0.672501, 0.047413], [-0.011820, 0.042940, 0.968881]]
    ),
    "tritan": np.array(
        [[1.255528, -0.076749, -0.178779], [-0.078411, 0.930809, 0.147602], [0.004733, 0.691367, 0.303900]]
    ),
}
# CIE 1976 ΔE from which two marks a few pixels wide are told apart with ease: well over ten. Common practice, no source.
APART = 15.0
COLOURS = {"light": (DATA, FIT, THIRD, INK), "dark": tuple(DARK[c] for c in (DATA, FIT, THIRD, INK))}


def linear(colour: str) -> np.ndarray:
    """sRGB to linear light (IEC 61966-2-1)."""
    parts = np.array([int(colour[i : i + 2], 16) for i in (1, 3, 5)]) / 255.0
    return np.where(parts <= 0.04045, parts / 12.92, ((parts + 0.055) / 1.055) ** 2.4)


def lab(light: np.ndarray) -> np.ndarray:
    """CIE L*a*b* (1976) under D65."""
    to_xyz = np.array([[0.4124, 0.3576, 0.1805], [0.2126, 0.7152, 0.0722], [0.0193, 0.1192, 0.9505]])
    ratio = to_xyz @ light / np.array([0.95047, 1.0, 1.08883])
    f = np.where(ratio > 0.008856, np.cbrt(ratio), 7.787 * ratio + 16.0 / 116.0)
    return np.array([116.0 * f[1] - 16.0, 500.0 * (f[0] - f[1]), 200.0 * (f[1] - f[2])])


def contrast(one: str, other: str) -> float:
    """Contrast ratio, WCAG 2.2, 1.4.3: (L1 + 0.05)/(L2 + 0.05)."""
    light = sorted(float(linear(c) @ np.array([0.2126, 0.7152, 0.0722])) for c in (one, other))
    return (light[1] + 0.05) / (light[0] + 0.05)


def test_the_matrices_keep_grey() -> None:
    for matrix in SIGHT.values():
        assert matrix.sum(axis=1) == pytest.approx(1.0, abs=2e-6)


@pytest.mark.parametrize("sight", SIGHT)
@pytest.mark.parametrize("page", COLOURS)
def test_colours_are_told_apart(page: str, sight: str) -> None:
    seen = {c: lab(np.clip(SIGHT[sight] @ linear(c), 0.0, 1.0)) for c in COLOURS[page]}
    for one, other in itertools.combinations(seen, 2):
        assert np.linalg.norm(seen[one] - seen[other]) > APART, (one, other)


def test_a_traffic_light_pair_would_fail() -> None:
    seen = [lab(np.clip(SIGHT["deutan"] @ linear(c), 0.0, 1.0)) for c in ("#3f9f3f", "#c26a28")]
    assert np.linalg.norm(seen[0] - seen[1]) < APART


def variables(css: str) -> list[dict[str, str]]:
    """The colour variables of each :root block of the page's style, in order: light, dark, print."""
    return [
        dict(re.findall(r"--([\w]+):\s*(#[0-9a-f]{6})", block))
        for block in re.findall(r":root \{(.*?)\}", css, re.S)
    ]


def test_text_on_the_page_has_enough_contrast() -> None:
    light, dark, printed = variables(source("page.css"))
    for page in (light, dark, {**light, **printed}):
        for name in ("ink", "quiet", "accent", "fit"):
            assert contrast(page[name], page["paper"]) >= 4.5, name  # WCAG 2.2 AA, text
        for name in ("data", "third", "faint"):
            assert contrast(page[name], page["paper"]) >= 3.0, name  # WCAG 2.2 AA, graphics


def test_figures_and_page_share_their_colours() -> None:
    light, dark, _ = variables(source("page.css"))
    names = {"ink": INK, "faint": FAINT, "paper": PAPER, "data": DATA, "fit": FIT, "third": THIRD}
    assert {name: light[name] for name in names} == names
    assert {name: dark[name] for name in names} == {name: DARK[colour] for name, colour in names.items()}
