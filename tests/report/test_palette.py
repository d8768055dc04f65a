"""Colours stay apart in grey print and for people who see colours weakly."""

from __future__ import annotations

from itertools import combinations

import numpy as np
import pytest

from heataudit.report.charts.palette import COOLER, GROUP_COLOURS, HEAT, INK, TANK, contrast, luminance, on

# Machado, Oliveira, Fernandes: A physiologically-based model for simulation of color vision deficiency, IEEE TVCG 15
# (2009), table of matrices at severity 1.0 (from memory)
VISION = {
    "usual": np.eye(3),
    "protan": np.array([[0.152286, 1.052583, -0.204868], [0.114503, 0.786281, 0.099216],
                        [-0.003882, -0.048116, 1.051998]]),
    "deutan": np.array([[0.367322, 0.860646, -0.227968], [0.280085, 0.672501, 0.047413],
                        [-0.011820, 0.042940, 0.968881]]),
    "tritan": np.array([[1.255528, -0.076749, -0.178779], [-0.078411, 0.930809, 0.147602],
                        [0.004733, 0.691367, 0.303900]]),
}  # fmt: skip


def linear(colour):
    parts = np.array([int(colour[k : k + 2], 16) / 255 for k in (1, 3, 5)])
    return np.where(parts <= 0.04045, parts / 12.92, ((parts + 0.055) / 1.055) ** 2.4)


def lab(rgb):
    """CIE L*a*b* of linear sRGB at D65 (CIE 15, IEC 61966-2-1)."""
    to_xyz = np.array([[0.4124, 0.3576, 0.1805], [0.2126, 0.7152, 0.0722], [0.0193, 0.1192, 0.9505]])
    x = to_xyz @ np.clip(rgb, 0, 1) / np.array([0.9505, 1.0, 1.089])
    f = np.where(x > (6 / 29) ** 3, np.cbrt(x), x / (3 * (6 / 29) ** 2) + 4 / 29)
    return np.array([116 * f[1] - 16, 500 * (f[0] - f[1]), 200 * (f[1] - f[2])])


@pytest.mark.parametrize("vision", VISION)
def test_groups_stay_apart_for_everyone(vision):
    # a difference of 2.3 is just seen (Mahy 1994); 15 is a different colour side by side (judgement)
    seen = {name: lab(VISION[vision] @ linear(colour)) for name, colour in GROUP_COLOURS.items()}
    for a, b in combinations(seen, 2):
        assert np.linalg.norm(seen[a] - seen[b]) > 15, (a, b)


def test_groups_stay_apart_in_grey():
    grey = sorted(116 * luminance(colour) ** (1 / 3) - 16 for colour in GROUP_COLOURS.values())
    assert np.diff(grey).min() > 4  # lightness steps that are seen side by side


def test_curves_of_one_chart_stay_apart():
    for a, b in combinations((HEAT, TANK, COOLER), 2):
        for matrix in VISION.values():
            assert np.linalg.norm(lab(matrix @ linear(a)) - lab(matrix @ linear(b))) > 15


@pytest.mark.parametrize("colour", [*GROUP_COLOURS.values(), INK])
def test_text_on_a_colour_is_readable(colour):
    assert contrast(colour, on(colour)) > 4.5  # WCAG 2.1, 1.4.3
