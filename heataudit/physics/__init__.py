"""Published formulas of oil hydraulics and heat: pure functions of numbers or arrays, in SI units.

Temperatures are in K, pressures in Pa relative to the tank, kinematic viscosities in m²/s, rotational speeds in rev/s
and displacements in m³/rev. Every function takes numbers or arrays that broadcast against each other and returns an
array of the common shape (a NumPy number where all arguments are numbers).
"""
