"""The words of the report: verdicts, explanations, statements and cautions."""

from __future__ import annotations

__all__ = ["CAUTIONS", "NOT_SUPPLIED", "STATEMENTS", "TERMS", "VERDICTS", "Explainer"]

NOT_SUPPLIED = "not supplied"

VERDICTS = {
    "valid": "Valid",
    "valid-with-warnings": "Valid, with warnings",
    "invalid": "Invalid",
}
"""What is said of each status; it judges the data, never the product."""

TERMS = {
    "run set": "drops of one liquid at one temperature in one tube, reduced together",
    "coverage interval": "holds the true value with the stated probability, if the numbers "
    "supplied are right",
    "expanded uncertainty": "half the width of the coverage interval",
    "coverage factor": "the expanded uncertainty is this many standard uncertainties",
    "standard uncertainty": "the uncertainty stated as a standard deviation",
    "degrees of freedom": "how much evidence is behind the uncertainty; with few of them the "
    "interval widens",
    "kinematic viscosity": "viscosity over density",
    "tube constant": "viscosity = K x (ball density - liquid density) x time",
    "Stokes' law": "the drag on a slow ball in a liquid without walls",
    "drag factor": "drag on the ball in this tube over its drag by Stokes' law; walls, inertia "
    "and ends each have a part in it",
    "Reynolds number": "inertia against viscosity: liquid density x speed x ball diameter / "
    "viscosity",
    "diameter ratio": "ball diameter over tube bore",
    "shear rate": "3 x speed / ball diameter, the most that the liquid is sheared at the ball",
    "residual": "the drop's viscosity at the set's temperature over the set's value, less 1",
    "sensitivity": "how far the viscosity moves for one unit of the input",
    "share": "the input's part of the squared standard uncertainty",
    "scope": "shared: one error for all drops, which repetition does not average down; ball: one "
    "for each ball; drop: one for each drop",
    "apparent viscosity": "it changes with the shear rate, so it holds at the stated one only",
    "p-value": "how often sound data would show at least as much",
    "temperature law": "how viscosity falls as the liquid warms; its parameters are fitted to the "
    "run sets by generalised least squares, with all that the sets' errors share",
    "chi-squared": "squared distances of the run sets from the law in units of their uncertainty; "
    "about the degrees of freedom where the law holds",
    "linear": "propagation of uncertainty by the GUM, JCGM 100",
    "bias": "measured over certified, less 1",
    "E_n": "the difference over its expanded uncertainty; within 1 is satisfactory",
    "zeta": "the difference over its standard uncertainty; within 2 is satisfactory, from 3 on "
    "unsatisfactory",
    "conformance probability": "how likely the true bias lies within the tolerance",
    "correlation": "1 where both values share all their errors, 0 where none",
    "repeatability limit": "what two single drops differ by at most, 19 times of 20",
    "critical difference": "what the means of the two sets differ by at most, 19 times of 20, if "
    "nothing but the scatter of drops parts them",
    "moving range": "difference from the check before",
    "action limits": "three standard deviations from the centre: a bench in control passes them "
    "once in some 370 checks",
    "warning limits": "two standard deviations from the centre: passed once in some 20 checks",
    "moving average": "shows a small lasting shift sooner than single checks do",
    "monte-carlo": "propagation of distributions by JCGM 101",
}
"""Explanations of words that an outsider does not know; printed once, where first used."""

STATEMENTS = (
    "The results relate only to the sample tested, as received and under the conditions stated.",
    "The verdict judges the timings and the bench sheet, never the product.",
    "This report is not to be reproduced except in full. It claims no accreditation.",
    "A correct result on a reference liquid does not rule out errors that happen to cancel each "
    "other.",
    "Results are computed from the numbers you supply. They are not a substitute for calibration "
    "by an accredited laboratory, and must not be the only basis for safety-critical or legal "
    "decisions.",
)

CAUTIONS = (
    "Hot baths burn and catch fire: stay well below the flash point, use a drip tray, and never "
    "bring water near oil above 100 °C.",
    "Glass breaks: inspect tubes for cracks, wear cut-resistant gloves, never force a stopper, "
    "set the tube in a second container, and do not invert it hot. Fetch steel balls with a "
    "magnet or drain the tube.",
    "Spilled oil and silicone are slippery. Solvents need ventilation, no source of ignition, "
    "suitable gloves, their safety data sheet and a waste route; prefer cleaners without chromium.",
    "Toxic, flammable, radioactive or biological samples need a risk assessment first. Avoid "
    "mercury and lead.",
    "Local codes, the site's rules and licensed practice come before anything written here.",
)


class Explainer:
    """Gives the explanation of a term the first time it is asked for, and then no more."""

    def __init__(self) -> None:
        self._done: set[str] = set()

    def __call__(self, term: str) -> str:
        """Return the explanation where ``term`` is first printed, else an empty string."""
        if term in self._done or term not in TERMS:
            return ""
        self._done.add(term)
        return TERMS[term]

    def once(self, text: str) -> str:
        """Return a text the first time it is given, and then an empty string."""
        if text in self._done:
            return ""
        self._done.add(text)
        return text
