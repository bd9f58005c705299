"""Floor 2: pooling, classical corrections, the exact selection model, diagnostics."""

from netsize.synthesis.weighing import Weighing, weigh

__all__ = ["Weighing", "weigh"]
