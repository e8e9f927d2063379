"""Scatter that has a finding of its own, so that it is not warned about twice."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from plumbfall.findings.data import RunData
from plumbfall.findings.drifts import drifting, lagging, warming
from plumbfall.findings.outliers import in_pair

__all__ = ["explained_scatter"]


def explained_scatter(data: RunData) -> NDArray[np.bool_]:
    """Whether two outliers, a drift or temperature are why drops scatter, shape (run sets,)."""
    trends = drifting(data) | data.settling | warming(data) | lagging(data)
    return np.asarray(trends | in_pair(data))
