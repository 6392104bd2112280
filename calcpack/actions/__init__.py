"""Load cases, their combinations, and a beam analysed under them."""

from calcpack.actions.analysis import AnalysedBeam, CombinationResult, LoadSet, analyse_beam
from calcpack.actions.combinations import Combination, CombinationSet, combination_set, set_names
from calcpack.actions.reduction import Reduction, reduction
from calcpack.job.model import Occupancy
from calcpack.job.occupancies import OccupancyTable, occupancy_tables

__all__ = [
    "AnalysedBeam",
    "Combination",
    "CombinationResult",
    "CombinationSet",
    "LoadSet",
    "Occupancy",
    "OccupancyTable",
    "Reduction",
    "analyse_beam",
    "combination_set",
    "occupancy_tables",
    "reduction",
    "set_names",
]
