"""Whose a quantity of the bench sheet is: the identity of the thing it belongs to."""

from __future__ import annotations

from plumbfall.bench.keys import key_path
from plumbfall.bench.records import Bench

__all__ = ["identity_of"]

_OWNERS = {
    "timer": "timers",
    "thermometer": "thermometers",
    "gauge": "gauges",
    "balance": "balances",
    "tube": "tubes",
    "material": "materials",
    "ball": "balls",
    "liquid": "liquids",
    "reference": "references",
    "constant": "constants",
}


def identity_of(bench: Bench, key: str) -> str:
    """Return the ``identity`` of the entry that a key path belongs to; empty where it has none.

    >>> from plumbfall.bench.reader import read_bench
    >>> ball = {"diameter": "2.0 mm", "density": "7.7 g/cm3", "identity": "B-12"}
    >>> identity_of(read_bench({"ball": {"A": ball}}), "ball.A.density")
    'B-12'
    """
    kind = key.split(".", 1)[0]
    for name, entry in getattr(bench, _OWNERS.get(kind, ""), {}).items():
        if key.startswith(key_path(kind, name) + "."):
            return str(entry.identity.identity)
    return ""
