"""Settings that must stand before numpy is imported."""

from __future__ import annotations

import os

# The solvers' small dense systems are far quicker on one thread than on several that wait.
for name in ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS"):
    os.environ.setdefault(name, "1")
