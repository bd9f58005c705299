"""Floor 1: text and tables → reported results; the arithmetic check.

Stages, a module each: characters, scanner (with patterns and numbers), grouping, families,
assemble; tags and defaults for settings; tables and rows for tables. `read` never opens a file,
`files` does.
"""

from __future__ import annotations

from netsize.reported.records import Reading
from netsize.reported.sources import read

__all__ = ["Reading", "read"]
