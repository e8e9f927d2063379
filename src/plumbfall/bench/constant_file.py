"""The file of tube constants that ``calibrate`` writes, read back as records.

A constant is kept with its sensitivities to the inputs it was found with, so that whoever uses it
shares their errors. The file carries a hash of its own content, which an edit by hand breaks.
"""

from __future__ import annotations

import hashlib
import json
import math
import os
from collections.abc import Mapping
from pathlib import Path
from typing import Any

from plumbfall.bench.stored_constants import (
    Certified,
    ConstantFile,
    Domain,
    StoredConstant,
    StoredInput,
)
from plumbfall.errors import InputError, Problem
from plumbfall.estimate import DISTRIBUTIONS, Estimate

__all__ = [
    "CONSTANTS_SCHEMA",
    "CONTENT_HASH",
    "content_hash",
    "read_constants",
]

CONSTANTS_SCHEMA = "plumbfall/constants/1"
CONTENT_HASH = "content_sha256"
VARIES = "constant-varies"
"""Code of the finding that a constant is none."""

ROUNDING, AS_PRINTED = 1e-9, 0.02
"""Parts of a variance that the rounding of floats explains, and that of a file by hand."""


def content_hash(document: Mapping[str, Any]) -> str:
    """Return the SHA-256 of a document of constants, its own hash left out."""
    kept = {key: value for key, value in document.items() if key != CONTENT_HASH}
    text = json.dumps(kept, sort_keys=True, separators=(",", ":"), ensure_ascii=True)
    return hashlib.sha256(text.encode("ascii")).hexdigest()


def read_constants(path: str | os.PathLike[str], key: str = "", sheet: str = "") -> ConstantFile:
    """Read a file of constants.

    Parameters
    ----------
    path
        The file.
    key, sheet
        Where the bench sheet names it, for the message if there is no such file.

    Raises
    ------
    InputError
        Where it is missing, is no such file, or holds what no constant can be.
    """
    shown = os.fspath(path)
    try:
        data = Path(path).read_bytes()
    except OSError as error:
        missing = isinstance(error, FileNotFoundError)
        raise InputError(
            f"{shown}: no such file" if missing else f"{shown} cannot be read: {error.strerror}",
            path=sheet,
            key=key,
            remedy="make it with plumbfall calibrate --out, or correct the name",
        ) from None
    try:
        document = json.loads(data.decode("utf-8-sig"))
    except ValueError as error:
        raise InputError(
            f"is no JSON: {error}", path=shown, remedy="write it anew with plumbfall calibrate"
        ) from None
    reader = _Reader(shown)
    constants = reader.constants(document)
    if reader.problems:
        raise InputError(reader.problems)
    return ConstantFile(
        path=shown,
        sha256=hashlib.sha256(data).hexdigest(),
        constants=constants,
        edited=document.get(CONTENT_HASH) != content_hash(document),
    )


class _Reader:
    """Reads one file's document and keeps everything wrong with it."""

    def __init__(self, path: str) -> None:
        self.path = path
        self.problems: list[Problem] = []

    def refuse(self, key: str, what: str, remedy: str) -> None:
        self.problems.append(Problem(what, remedy, path=self.path, key=key))

    def constants(self, document: Any) -> tuple[StoredConstant, ...]:
        schema = document.get("schema") if isinstance(document, dict) else None
        listed = document.get("constants") if isinstance(document, dict) else None
        if schema != CONSTANTS_SCHEMA or not isinstance(listed, list):
            self.refuse(
                "schema",
                f"is no file of tube constants (schema {CONSTANTS_SCHEMA})",
                "name the file that plumbfall calibrate --out wrote",
            )
            return ()
        found = [self._constant(item, f"constants[{n}]") for n, item in enumerate(listed)]
        pairs = [(one.tube, one.ball) for one in found if one is not None]
        for n, pair in enumerate(pairs):
            if pair in pairs[:n]:
                self.refuse(
                    f"constants[{n}]",
                    f"tube '{pair[0]}' and ball '{pair[1]}' have a second constant",
                    "keep one of them",
                )
        return tuple(one for one in found if one is not None)

    def _constant(self, item: Any, key: str) -> StoredConstant | None:
        if not isinstance(item, dict):
            self.refuse(key, "is no constant", "write the file anew with plumbfall calibrate")
            return None
        value = self._number(item, "value", key, above=0.0)
        u = self._number(item, "standard_uncertainty", key, least=0.0)
        dof = self._optional(item, "dof", key)
        inputs = self._inputs(item.get("sensitivities") or {}, f"{key}.sensitivities")
        scatter = item.get("scatter")
        scatter = scatter if isinstance(scatter, dict) else {}
        left = u**2 - sum((one.sensitivity * one.estimate.u) ** 2 for one in inputs)
        if left < -AS_PRINTED * u**2:
            self.refuse(
                f"{key}.standard_uncertainty",
                f"{u:.3g} is less than what its sensitivities come to",
                "write the file anew with plumbfall calibrate, or type the constant by hand",
            )
        own_u = math.sqrt(left) if left > ROUNDING * u**2 else 0.0
        own_dof = self._optional(scatter, "dof", f"{key}.scatter")
        if math.isinf(own_dof) and math.isfinite(dof):
            own_dof = dof * (own_u / u) ** 4 if own_u else math.inf
        return StoredConstant(
            name=str(item.get("name", "")),
            tube=self._text(item, "tube", key),
            ball=self._text(item, "ball", key),
            value=value,
            u=u,
            own_u=own_u,
            own_dof=own_dof,
            inputs=inputs,
            domain=self._domain(item.get("domain") or {}, f"{key}.domain"),
            certified=self._certified(item),
            varies=self._varies(item.get("findings")),
            scatter=abs(_number(scatter.get("standard_uncertainty")) - own_u) <= AS_PRINTED * u,
        )

    def _inputs(self, listed: Any, key: str) -> tuple[StoredInput, ...]:
        found = []
        for name, item in listed.items() if isinstance(listed, dict) else ():
            place = f'{key}."{name}"'
            if not isinstance(item, dict):
                self.refuse(place, "has no value, u and sensitivity", "give these three")
                continue
            u = self._number(item, "u", place, least=0.0)
            dof = self._optional(item, "dof", place)
            shape = str(item.get("distribution", "normal"))
            if shape not in DISTRIBUTIONS or (shape == "t" and math.isinf(dof)):
                shape = "normal"
            found.append(
                StoredInput(
                    Estimate(
                        self._number(item, "value", place),
                        u,
                        shape if u else "exact",
                        dof,
                        name,
                        str(item.get("unit", "1")),
                    ),
                    str(item.get("identity", "")),
                    self._number(item, "sensitivity", place),
                )
            )
        return tuple(found)

    def _domain(self, item: Any, key: str) -> Domain:
        def span(name: str) -> tuple[float, float] | None:
            given = item.get(name)
            if not given:
                return None
            numbers = [_number(one) for one in given] if isinstance(given, list) else [math.nan]
            if any(map(math.isnan, numbers)):
                self.refuse(f"{key}.{name}", f"{given!r} is no range", "write [lowest, highest]")
                return None
            return min(numbers), max(numbers)

        def number(name: str) -> float | None:
            given = _number(item.get(name))
            return None if math.isnan(given) else given

        if not isinstance(item, dict):
            return Domain()
        return Domain(
            temperature=span("temperature_K"),
            viscosity=span("viscosity_Pa_s"),
            time=span("time_s"),
            tilt=number("tilt_rad"),
            gravity=number("gravity_m_s2"),
            ball_identity=str(item.get("ball_identity") or ""),
            tube_identity=str(item.get("tube_identity") or ""),
        )

    @staticmethod
    def _certified(item: Mapping[str, Any]) -> tuple[Certified, ...]:
        told = {
            str(one.get("reference")): one
            for one in item.get("certificates") or ()
            if isinstance(one, dict)
        }
        return tuple(
            Certified(
                str(name),
                str(told.get(str(name), {}).get("certificate") or ""),
                str(told.get(str(name), {}).get("identity") or ""),
            )
            for name in item.get("references") or ()
        )

    @staticmethod
    def _varies(findings: Any) -> str:
        told = [
            str(one.get("message", ""))
            for one in (findings if isinstance(findings, list) else ())
            if isinstance(one, dict) and one.get("code") == VARIES
        ]
        return "; ".join(told)

    def _text(self, item: Mapping[str, Any], name: str, key: str) -> str:
        given = item.get(name)
        if not isinstance(given, str) or not given:
            self.refuse(f"{key}.{name}", "is missing", f"give the name of the {name}")
            return ""
        return given

    def _number(
        self,
        item: Mapping[str, Any],
        name: str,
        key: str,
        above: float = -math.inf,
        least: float = -math.inf,
    ) -> float:
        given = item.get(name)
        number = _number(given)
        if math.isfinite(number) and number > above and number >= least:
            return number
        allowed = " above 0" if above == 0 else " of 0 or more" if least == 0 else ""
        self.refuse(
            f"{key}.{name}",
            "is missing" if given is None else f"{given!r} is no number{allowed}",
            f"give a number{allowed}",
        )
        return 1.0

    def _optional(self, item: Any, name: str, key: str) -> float:
        """Return degrees of freedom; infinite where not given."""
        if not isinstance(item, dict) or item.get(name) is None:
            return math.inf
        return self._number(item, name, key, above=0.0)


def _number(given: Any) -> float:
    """Return a number as it stands, anything else as NaN."""
    plain = isinstance(given, int | float) and not isinstance(given, bool)
    return float(given) if plain else math.nan
