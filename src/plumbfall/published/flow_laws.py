"""The laws of drag as printed, worked by hand, and the exact solutions they approximate."""

from __future__ import annotations

from functools import partial

from plumbfall.physics.exact import off_axis_coefficient
from plumbfall.physics.factors import inertia_factor, tube_drag_factor, wall_factor
from plumbfall.physics.inertia import reynolds_of_drag_abraham
from plumbfall.physics.run_in import relaxation_time, run_in_distance
from plumbfall.published.figure import (
    DEFINITION,
    FROM_MEMORY,
    SEEN_IN_PRINT,
    Figure,
    called,
    figures,
)

__all__ = ["FIGURES"]


def _wall(method: str, ratio: float, printed: str, formula: str) -> tuple[Figure, ...]:
    return figures(
        "flow",
        DEFINITION,
        f"wall law '{method}' at diameter ratio {ratio:g} by hand: {formula}",
        [
            (
                f"wall.{method}.{ratio:g}",
                printed,
                called(wall_factor, diameter_ratio=ratio, method=method),
            )
        ],
    )


def _inertia(method: str, reynolds: float, printed: str, formula: str) -> tuple[Figure, ...]:
    return figures(
        "flow",
        DEFINITION,
        f"inertia law '{method}' at Reynolds number {reynolds:g} by hand: {formula}",
        [
            (
                f"inertia.{method}.{reynolds:g}",
                printed,
                called(inertia_factor, reynolds=reynolds, method=method),
            )
        ],
    )


_WALLS = (
    *_wall("ladenburg", 0.1, "1.240000", "1 + 0.24 (Ladenburg 1907)"),
    *_wall("faxen-linear", 0.1, "1.266464", "1/(1 - 0.2104) (Faxen 1922)"),
    *_wall("faxen-cubic", 0.1, "1.263121", "1/(1 - 0.2104 + 0.00209) (Faxen 1922)"),
    *_wall("faxen", 0.1, "1.263136", "1/(1 - 0.2104 + 0.00209 - 0.0000095) (Faxen 1922)"),
    *_wall("bohlin", 0.1, "1.263208", "1/0.791634955 (Bohlin 1960)"),
    *_wall(
        "bohlin",
        0.5,
        "5.922764",
        "1/(1 - 1.052215 + 0.26109625 - 0.0296290625 - 0.0214375 + 0.0151171875 - 0.004091796875)",
    ),
    *_wall("francis", 0.1, "1.254556", "(0.9525/0.9)^4 (Francis 1933)"),
    *_wall(
        "haberman-sayre",
        0.1,
        "1.263302",
        "(1 - 0.0000075857)/(1 - 0.2105 + 0.0020865 - 0.000017068 + 0.00000072603)",
    ),
)

_INERTIA = (
    *_inertia("stokes", 0.5, "1.000000", "1 (Stokes 1851)"),
    *_inertia("oseen", 1.0, "1.187500", "1 + 3/16 (Oseen 1910)"),
    *_inertia("schiller-naumann", 1.0, "1.150000", "1 + 0.15 (Schiller and Naumann 1933)"),
    *_inertia("schiller-naumann", 100.0, "4.548880", "1 + 0.15 x 10^1.374"),
    *_inertia("clift-grace-weber", 1.0, "1.131500", "1 + 0.1315 (Clift and others 1978)"),
    *_inertia("clift-grace-weber", 10.0, "1.774329", "1 + 0.1315 x 10^0.77"),
    *_inertia("clift-grace-weber", 100.0, "4.529238", "1 + 0.1935 x 10^1.261"),
    *_inertia("clift-grace-weber", 1000.0, "19.62857", "1000/24 x 10^(1.6435 - 3.3726 + 1.4022)"),
    *_inertia(
        "clift-grace-weber",
        1e4,
        "168.8452",
        "1e4/24 x 10^(-2.4571 + 10.2232 - 14.872 + 6.7136)",
    ),
    *_inertia("brown-lawler", 1.0, "1.150002", "1 + 0.15 + 0.407/24/8711 (Brown and Lawler 2003)"),
    *_inertia("abraham", 82.0836, "4.000000", "(1 + 9.06/9.06)^2, as 82.0836 is 9.06^2"),
    *figures(
        "flow",
        DEFINITION,
        "Abraham 1970 turned round: the drag coefficient 4 x 24/82.0836 goes with 9.06^2",
        [
            (
                "inertia.abraham.inverse",
                "82.0836",
                called(reynolds_of_drag_abraham, drag_coefficient=96.0 / 82.0836),
            )
        ],
        exact=True,
    ),
)


def _unbounded(reynolds: float) -> float:
    return float(tube_drag_factor(diameter_ratio=0.0, reynolds=reynolds))


def _off_axis(offset: float) -> float:
    return float(off_axis_coefficient(offset)[0])


_SOLUTIONS = (
    *figures(
        "flow",
        FROM_MEMORY,
        "Chester and Breach 1969, J. Fluid Mech. 37, 751: their series for the unbounded drag "
        "factor, by hand; the tables of Navier-Stokes at diameter ratio 0",
        [
            ("unbounded.chester-breach.0.05", "1.0090", partial(_unbounded, 0.05)),
            ("unbounded.chester-breach.0.1", "1.0174", partial(_unbounded, 0.1)),
        ],
    ),
    *figures(
        "flow",
        SEEN_IN_PRINT,
        "Happel and Brenner 1965, chapter 7: drag coefficient of a ball off the axis of a tube, "
        "2.10444 - 0.6977 b^2, at b = 0 and b = 0.02",
        [
            ("off-axis.0", "2.10444", partial(_off_axis, 0.0)),
            ("off-axis.0.02", "2.10416", partial(_off_axis, 0.02)),
        ],
    ),
    *figures(
        "flow",
        FROM_MEMORY,
        "Haberman and Sayre 1958, David Taylor Model Basin report 1143: table of the wall factor. "
        "Only ratio 0.1: the others in print are off by 0.03 % and more",
        [("wall.haberman-sayre-table.0.1", "1.263", called(wall_factor, diameter_ratio=0.1))],
    ),
)

_RUN_IN = (
    *figures(
        "flow",
        DEFINITION,
        "run-in by a simple exponential, in steady speed x relaxation time: ln 100 - 0.99 and "
        "ln 1000 - 0.999",
        [
            (
                f"run-in.{fraction}",
                printed,
                called(run_in_distance, fall_speed=1.0, relaxation_time=1.0, fraction=fraction),
            )
            for fraction, printed in ((0.99, "3.615170"), (0.999, "5.908755"))
        ],
    ),
    *figures(
        "flow",
        DEFINITION,
        "relaxation time of 2 mm of steel in 1 Pa.s by hand: (7700 + 970/2) x 4e-6/18, in ms",
        [
            (
                "run-in.relaxation-time",
                "1.818889",
                called(
                    relaxation_time,
                    scale=1e3,
                    ball_diameter=2e-3,
                    ball_density=7700.0,
                    liquid_density=970.0,
                    viscosity=1.0,
                ),
            )
        ],
    ),
)

FIGURES = (*_WALLS, *_INERTIA, *_SOLUTIONS, *_RUN_IN)
