"""Tube constants as a file keeps them: with what they were found with, and where they hold."""

from __future__ import annotations

from dataclasses import dataclass

from plumbfall.estimate import Estimate

__all__ = ["Certified", "ConstantFile", "Domain", "StoredConstant", "StoredInput"]


@dataclass(frozen=True, slots=True)
class StoredInput:
    """An input that a constant was found with: the estimate, whose it was, and dK/d(input)."""

    estimate: Estimate
    identity: str
    sensitivity: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Domain:
    """Between what a constant was found; ``None`` where the file does not say."""

    temperature: tuple[float, float] | None = None
    viscosity: tuple[float, float] | None = None
    time: tuple[float, float] | None = None
    tilt: float | None = None
    gravity: float | None = None
    ball_identity: str = ""
    tube_identity: str = ""


@dataclass(frozen=True, slots=True)
class Certified:
    """A certified liquid that a constant rests on."""

    reference: str
    certificate: str = ""
    identity: str = ""


@dataclass(frozen=True, slots=True, kw_only=True)
class StoredConstant:
    """One constant of a file, in m2/s2.

    ``own_u`` and ``own_dof`` are what no input listed in ``inputs`` accounts for. ``scatter`` says
    that this is the scatter of the calibration's drops, which the ball has to itself; otherwise
    it may hold anything, the certificate's error too. ``varies`` is what the calibration said of a
    constant that is none, empty where it found nothing.
    """

    name: str
    tube: str
    ball: str
    value: float
    u: float
    own_u: float
    own_dof: float
    inputs: tuple[StoredInput, ...]
    domain: Domain
    certified: tuple[Certified, ...]
    scatter: bool = True
    varies: str = ""


@dataclass(frozen=True, slots=True)
class ConstantFile:
    """A file of constants; ``edited`` says that it is not as ``calibrate`` wrote it."""

    path: str
    sha256: str
    constants: tuple[StoredConstant, ...]
    edited: bool
