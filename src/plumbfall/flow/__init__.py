"""Numerical solvers of the flow round a ball in a tube, run offline to make the shipped tables.

Each solver module states its method at its head, and knows when it has converged. Nothing here
is imported when drops are reduced: the tables in ``physics/tables`` carry the results.
``python -m plumbfall.flow`` makes all tables anew; ``--check`` recomputes a sample of their nodes.
"""

from __future__ import annotations

__all__: list[str] = []
