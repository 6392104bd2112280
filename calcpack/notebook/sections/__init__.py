"""The sections of a load sheet, in the order they stand on it."""

from calcpack.notebook.sections.checks import state_checks
from calcpack.notebook.sections.closing import state_notation, state_summary, write_record
from calcpack.notebook.sections.effects import state_combinations, state_effects
from calcpack.notebook.sections.given import state_given
from calcpack.notebook.sections.loads import state_loads
from calcpack.notebook.sections.opening import state_basis, state_place
from calcpack.notebook.sections.reduction import state_reduction
from calcpack.notebook.sections.transfer import state_transfer
from calcpack.notebook.sections.uniform import state_equivalents

__all__ = [
    "state_basis",
    "state_checks",
    "state_combinations",
    "state_effects",
    "state_equivalents",
    "state_given",
    "state_loads",
    "state_notation",
    "state_place",
    "state_reduction",
    "state_summary",
    "state_transfer",
    "write_record",
]
