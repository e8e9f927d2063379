"""Settings that must stand before numpy is imported, and how properties are tried."""

from __future__ import annotations

import os

from hypothesis import settings

# The solvers' small dense systems are far quicker on one thread than on several that wait.
for name in ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS"):
    os.environ.setdefault(name, "1")

# The same examples every time, so that a test run says what the code is like and not what luck was;
# `HYPOTHESIS_PROFILE=explore pytest tests/timings tests/bench` tries others.
settings.register_profile("settled", derandomize=True)
settings.register_profile("explore", derandomize=False, max_examples=1000)
settings.load_profile(os.environ.get("HYPOTHESIS_PROFILE", "settled"))
