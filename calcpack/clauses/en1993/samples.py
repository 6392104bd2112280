"""A profile that the examples of this package are worked with."""

from __future__ import annotations

from calcpack.clauses.en1993.section import Profile
from calcpack.clauses.steel import i_section
from calcpack.job.library import rolled_sections

IPE_330 = Profile("IPE 330", i_section(rolled_sections()["ipe330"]), 235e3, 210e6, 80.77e6)
"""IPE 330 in S235."""
