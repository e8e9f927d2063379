"""What a command is added to."""

from __future__ import annotations

import argparse
from typing import TypeAlias

__all__ = ["Commands"]

Commands: TypeAlias = "argparse._SubParsersAction[argparse.ArgumentParser]"
