"""What a large bias looks like: a unit, a kind of viscosity, a row of the certificate, a degree.

They are hints for whoever looks for the cause, and decide nothing.
"""

from __future__ import annotations

import math

__all__ = ["explanations"]

NEAR = 0.005
"""Relative distance within which a ratio looks like a slip (common practice, no source)."""
ROWS = (5.0, 10.0, 15.0, 20.0)
"""Steps of temperature between rows of certificates, in kelvin (common practice, no source)."""
ROW_NEAR = 0.3
LEAST = 0.02
"""Smallest relative distance of a density from that of water that tells kinds of viscosity apart.

Closer to 1 g/cm3 a slip of kind is not to be told from a bias."""


def explanations(
    *, ratio: float, u: float, density: float | None, slope: float | None
) -> tuple[str, ...]:
    """Return what would explain a bias, in plain words.

    Parameters
    ----------
    ratio : float [1]
        Measured over certified viscosity.
    u : float [1]
        Standard uncertainty of the ratio.
    density : float, optional [kg/m3]
        Density of the liquid.
    slope : float, optional [1/K]
        Relative change of its viscosity with temperature.

    Returns
    -------
    tuple of str
        Slips that would make such a ratio, then the error of temperature that would.

    Examples
    --------
    >>> explanations(ratio=1.0 / 0.85, u=0.001, density=850.0, slope=None)
    ('the ratio is that of kinematic to dynamic viscosity: mm2/s typed as mPa.s?',)
    """
    found = []
    size = math.log(ratio)
    near = max(NEAR, 2 * u)
    power = round(math.log10(ratio))
    if power and abs(size - power * math.log(10.0)) < 4 * near:
        found.append(f"the ratio is near 10^{power}: a unit (P, Pa.s, mPa.s) typed for another?")
    if density is not None and abs(kind := math.log(density / 1000.0)) > LEAST:
        for sign in (1.0, -1.0):
            if abs(size - sign * kind) < near:
                found.append(
                    "the ratio is that of kinematic to dynamic viscosity: mm2/s typed as mPa.s?"
                )
    if abs(size - math.log(4.0)) < 4 * near or abs(size + math.log(4.0)) < 4 * near:
        found.append("the ratio is near 4: a radius typed for a diameter?")
    if slope:
        off = size / slope
        rows = [row for row in ROWS if abs(abs(off) - row) < ROW_NEAR]
        if rows:
            found.append(
                f"it is {rows[0]:g} K of temperature: another row of the certificate typed?"
            )
        if abs(off) < ROWS[-1]:
            found.append(f"an error of temperature of {abs(off):.2g} K alone would make it")
    return tuple(found)
