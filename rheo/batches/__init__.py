"""Many files of readings to one table of fits, screening and drift against a reference lot."""

from __future__ import annotations

from rheo.batches.job import Settings as BatchSettings
from rheo.batches.row import Row
from rheo.batches.run import BatchResult, batch
from rheo.batches.table import write_table

__all__ = ["BatchResult", "BatchSettings", "Row", "batch", "write_table"]
