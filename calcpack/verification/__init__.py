"""Published values beside ours, and the manual that is made of them."""

from calcpack.verification.comparison import Allowed, Comparison
from calcpack.verification.findings import Findings, Summary, verify
from calcpack.verification.reckon import compare_row, compare_table
from calcpack.verification.tables import Row, Table, Topic, read_topics

__all__ = [
    "Allowed",
    "Comparison",
    "Findings",
    "Row",
    "Summary",
    "Table",
    "Topic",
    "compare_row",
    "compare_table",
    "read_topics",
    "verify",
]
