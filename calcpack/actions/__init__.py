"""Load cases, their combinations, and a beam analysed under them."""

from calcpack.actions.analysis import AnalysedBeam, CombinationResult, LoadSet, analyse_beam
from calcpack.actions.combinations import Combination, CombinationSet, combination_set, set_names

__all__ = [
    "AnalysedBeam",
    "Combination",
    "CombinationResult",
    "CombinationSet",
    "LoadSet",
    "analyse_beam",
    "combination_set",
    "set_names",
]
