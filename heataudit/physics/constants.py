"""Constants of nature and of the unit system."""

from __future__ import annotations

STANDARD_GRAVITY = 9.80665
"""Acceleration of free fall [m/s²], exact by definition (ISO 80000-3)."""

STEFAN_BOLTZMANN = 5.670374419e-8
"""Stefan-Boltzmann constant [W/(m²·K⁴)] (CODATA 2018)."""

KELVIN = 273.15
"""Temperature [K] of 0 °C, exact by definition."""

INCH = 0.0254
"""One inch [m], exact by definition."""
