"""``python -m plumbfall``: the command line."""

from __future__ import annotations

import sys

from plumbfall.cli.program import main

sys.exit(main())
