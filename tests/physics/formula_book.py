"""Values of the project's formula book, computed by solvers other than those of this program.

Creeping flow: multipoles and collocation. Navier-Stokes: finite elements, tube radius 100 to 2000
ball radii, 0.05 %; in a tube 1e-4.
"""

from __future__ import annotations

EXACT_WALL_FACTOR = {
    0.01: 1.0214946420,
    0.02: 1.04391998,
    0.05: 1.1172705435,
    0.10: 1.2632139053,
    0.15: 1.44657215,
    0.20: 1.6794788848,
    0.25: 1.97907741,
    0.30: 2.3700948902,
    0.35: 2.88905245,
    0.40: 3.5913732680,
    0.45: 4.56383695,
    0.50: 5.9473742458,
    0.60: 11.0918967730,
    0.70: 24.6759838510,
    0.80: 74.6699662503,
    0.90: 469.22439,
}

UNBOUNDED = {
    0.01: "1.00185",
    0.1: "1.01741",
    0.2: "1.03332",
    0.5: "1.0762",
    1.0: "1.1382",
    2.0: "1.2431",
    5.0: "1.4871",
    10.0: "1.7950",
    20.0: "2.2661",
    50.0: "3.2835",
    100.0: "4.535",
}
"""Inertia factor by Reynolds number, as printed."""

IN_TUBE_REYNOLDS = (0.0, 0.1, 0.5, 1.0, 2.0, 5.0, 10.0, 20.0, 50.0, 100.0)
IN_TUBE = {
    0.1: (1.2632, 1.2635, 1.2703, 1.2895, 1.3488, 1.5517, 1.8444, 2.3087, 3.3264, 4.5826),
    0.3: (2.3701, 2.3701, 2.3710, 2.3738, 2.3846, 2.4523, 2.6293, 3.0300, 4.0915, 5.5110),
    0.5: (5.9474, 5.9474, 5.9477, 5.9486, 5.9524, 5.9781, 6.0627, 6.3430, 7.5464, 9.6826),
}
"""Drag factor by diameter ratio at each of the Reynolds numbers."""

IN_TUBE_POINTS = [
    (ratio, reynolds, factor)
    for ratio, factors in IN_TUBE.items()
    for reynolds, factor in zip(IN_TUBE_REYNOLDS, factors, strict=True)
]


def half_digit(printed: str) -> float:
    """Half of the last digit of a printed number."""
    decimals = len(printed.partition(".")[2])
    return 0.5 * 10.0**-decimals
