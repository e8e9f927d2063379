"""Densities of what balls are made of, and the words by which the bench sheet names it."""

from __future__ import annotations

import re
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

__all__ = ["MATERIALS", "BallMaterial", "material_named", "of_a_material"]


@dataclass(frozen=True, slots=True)
class BallMaterial:
    """A material with the densities (kg/m3) that balls of it have, and where they are from.

    ``words`` are regular expressions, any of which names it; the first material of
    :data:`MATERIALS` that is named counts, so that alloys stand before their family.
    """

    name: str
    words: tuple[str, ...]
    low: float
    high: float
    source: str


_MEMORY = "from memory"
_EN = "EN 10088-1 and data sheets"
_STEEL = r"^(?=.*(?:steel|stainless|aisi)).*"

MATERIALS = (
    BallMaterial(
        "martensitic stainless steel (420, 440C)",
        (r"\b440 ?c\b", _STEEL + r"\b4[24]0\b"), 7620, 7800, _EN,
    ),
    BallMaterial(
        "austenitic stainless steel (302, 304, 316)",
        (r"\b316 ?l\b", _STEEL + r"\b3(?:02|04|16)\b"), 7860, 8060, _EN,
    ),
    BallMaterial(
        "bearing steel (52100)", ("52100", "100 ?cr ?6", "chrome steel", "bearing steel"),
        7770, 7860, _MEMORY,
    ),
    BallMaterial("silicon nitride", ("silicon nitride", r"\bsi3n4\b"), 3100, 3300, "data sheets"),
    BallMaterial(
        "tungsten carbide", ("tungsten carbide", "hard metal", r"\bwc\b"), 13800, 15200, _MEMORY
    ),
    BallMaterial("steel", ("steel", "stainless", r"\baisi\b"), 7600, 8060, _EN),
    BallMaterial(
        "borosilicate glass", ("borosilicate", r"\bboro\b"), 2200, 2260, "ISO 3585 (3.3 glass)"
    ),
    BallMaterial("soda-lime glass", ("soda", r"\ba[- ]glass\b"), 2440, 2560, _MEMORY),
    BallMaterial("glass", ("glass",), 2180, 2700, "ISO 3585; heavy ones from memory"),
    BallMaterial(
        "ruby, sapphire or alumina", ("ruby", "sapphire", "corundum", "alumina", "al2o3"),
        3850, 4020, _MEMORY,
    ),
    BallMaterial("zirconia", ("zirconi", r"\bzro2\b"), 5850, 6150, _MEMORY),
    BallMaterial("PTFE", (r"\bptfe\b",), 2120, 2220, "data sheets"),
    BallMaterial("PMMA", (r"\bpmma\b", "acrylic"), 1160, 1210, "data sheets"),
    BallMaterial("polyamide", ("polyamide", "nylon", r"\bpa ?6"), 1080, 1180, "data sheets"),
    BallMaterial("polyacetal", ("acetal", r"\bpom\b"), 1380, 1440, _MEMORY),
    BallMaterial("polystyrene", ("polystyrene",), 1030, 1080, _MEMORY),
    BallMaterial("polypropylene", ("polypropylene",), 890, 930, _MEMORY),
    BallMaterial("polyethylene", ("polyethylene",), 910, 980, _MEMORY),
    BallMaterial("agate or quartz", ("agate", "quartz"), 2180, 2670, _MEMORY),
    BallMaterial("aluminium", ("alumini?um",), 2630, 2850, _MEMORY),
    BallMaterial("titanium", ("titanium",), 4380, 4550, _MEMORY),
    BallMaterial("brass or bronze", ("brass", "bronze"), 8300, 8950, _MEMORY),
    BallMaterial("copper", ("copper",), 8850, 8980, _MEMORY),
    BallMaterial("silver", ("silver",), 10400, 10600, _MEMORY),
    BallMaterial("lead", (r"\blead\b",), 11200, 11400, _MEMORY),
    BallMaterial("tantalum", ("tantalum",), 16400, 16700, _MEMORY),
    BallMaterial("gold", (r"\bgold\b",), 19100, 19400, _MEMORY),
)  # fmt: skip
"""Materials of balls; ranges cover the grades in use, and are wider than any one ball's."""


def of_a_material(density: NDArray[np.float64], margin: float = 0.03) -> NDArray[np.bool_]:
    """Whether densities (kg/m3) are those of a material, within a relative margin.

    Examples
    --------
    >>> of_a_material(np.array([7700.0, 17840.0, 9440.0])).tolist()
    [True, False, False]
    """
    low = np.array([one.low for one in MATERIALS]) * (1 - margin)
    high = np.array([one.high for one in MATERIALS]) * (1 + margin)
    within = (density[:, None] >= low) & (density[:, None] <= high)
    return np.asarray(within.any(axis=1))


def material_named(*texts: str) -> BallMaterial | None:
    """Return the material that the texts name; ``None`` where none is named.

    Examples
    --------
    >>> material_named("B3", "stainless 440C").low, material_named("glass").name
    (7620, 'glass')
    >>> material_named("B3", "float") is None
    True
    """
    text = " ".join(texts).casefold().replace("_", " ").replace("-", " ")
    for material in MATERIALS:
        if any(re.search(word, text) for word in material.words):
            return material
    return None
