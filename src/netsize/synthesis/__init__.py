"""Floor 2: pooling, classical corrections, the exact selection model, diagnostics."""
