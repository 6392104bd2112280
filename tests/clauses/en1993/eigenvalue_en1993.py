"""Lateral-torsional buckling as an eigenvalue: the solution that the verification manual uses too."""

from calcpack.verification.eigenvalues import critical_factor

__all__ = ["critical_factor"]
