"""Control charts: constants by sample size, and worked examples of three charts."""

from __future__ import annotations

from functools import partial

from plumbfall.calibration.chart_constants import chart_constants
from plumbfall.calibration.control_charts import cusum, ewma, ewma_limits, individuals
from plumbfall.published.figure import FROM_MEMORY, figures

__all__ = ["FIGURES"]

AREA = "statistics"

# name of the constant, sample sizes, and the factors as printed
_PRINTED = (
    ("d2", range(2, 11), "1.128 1.693 2.059 2.326 2.534 2.704 2.847 2.970 3.078"),
    ("c4", range(2, 11), "0.7979 0.8862 0.9213 0.9400 0.9515 0.9594 0.9650 0.9693 0.9727"),
    ("d3", (7,), "0.833"),
    ("A2", (2, 5, 10), "1.880 0.577 0.308"),
    ("A3", (7,), "1.182"),
    ("D3", (7,), "0.076"),
    ("D4", (7,), "1.924"),
    ("B3", (7,), "0.118"),
    ("B4", (7,), "1.882"),
)


def _constant(name: str, n: int) -> float:
    return float(getattr(chart_constants(n), name))


_CONSTANTS = figures(
    AREA,
    FROM_MEMORY,
    "ISO 7870-2, factors for control limits, by sample size; allowed half of 0.001 more, as "
    "printed tables were made from rounded factors",
    [
        (f"chart.{name}.{n}", printed, partial(_constant, name, n))
        for name, sizes, row in _PRINTED
        for n, printed in zip(sizes, row.split(), strict=True)
    ],
    allowance=5e-4,
)

INDIVIDUALS = (49.6, 47.6, 49.9, 51.3, 47.8, 51.2, 52.6, 52.4, 53.6, 52.1)
"""Ten batches of the worked example."""


def _limit(side: int) -> float:
    return individuals(INDIVIDUALS).limits()[side]


_INDIVIDUALS = figures(
    AREA,
    FROM_MEMORY,
    "NIST/SEMATECH e-Handbook, 6.3.2.2: control limits of ten single values; allowed 0.0017, as "
    "print divides by 1.128, and d2 is 1.12838",
    [
        ("individuals.high", "55.8041", partial(_limit, 1)),
        ("individuals.low", "45.8159", partial(_limit, 0)),
    ],
    allowance=1.7e-3,
)

EWMA = (
    52.0, 47.0, 53.0, 49.3, 50.1, 47.0, 51.0, 50.1, 51.2, 50.5,
    49.6, 47.6, 49.9, 51.3, 47.8, 51.2, 52.6, 52.4, 53.6, 52.1,
)  # fmt: skip
"""Twenty values of the worked example of a moving average."""


def _average(place: int) -> float:
    return float(ewma(EWMA, weight=0.3, start=50.0)[place])


def _average_limit(side: int) -> float:
    # the limit that the averages tend to, reached to the last digit long before point 1000
    return float(ewma_limits(centre=50.0, sd=2.0539, weight=0.3, count=1000)[side][-1])


_EWMA = figures(
    AREA,
    FROM_MEMORY,
    "NIST/SEMATECH e-Handbook, 6.3.2.4: exponentially weighted moving average, weight 0.3, and "
    "its limits for a standard deviation of 2.0539; allowed 0.0001 for the rounding of that",
    [
        ("ewma.high", "52.5884", partial(_average_limit, 1)),
        ("ewma.low", "47.4115", partial(_average_limit, 0)),
        *(
            (f"ewma.{place}", printed, partial(_average, place - 1))
            for place, printed in ((6, "49.21"), (20, "51.99"))
        ),
    ],
    allowance=1e-4,
)

CUSUM = (
    324.925, 324.675, 324.725, 324.350, 325.350, 325.225, 324.125, 324.525, 325.225, 324.600,
    324.625, 325.150, 328.325, 327.250, 327.825, 328.500, 326.675, 327.775, 326.875, 328.350,
)  # fmt: skip
"""Twenty means of the worked example of cumulative sums."""


def _sum(place: int) -> float:
    return float(cusum(CUSUM, target=325.0, slack=0.3175).high[place])


_CUSUM = figures(
    AREA,
    FROM_MEMORY,
    "NIST/SEMATECH e-Handbook, 6.3.2.3: cumulative sums above the target 325 with slack 0.3175, "
    "at the first sign, the alarm and after",
    [
        (f"cusum.{place}", printed, partial(_sum, place - 1))
        for place, printed in ((13, "3.01"), (14, "4.94"), (17, "11.99"))
    ],
)

FIGURES = (*_CONSTANTS, *_INDIVIDUALS, *_EWMA, *_CUSUM)
