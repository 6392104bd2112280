"""Strengths of common materials, to try the clauses with."""

from __future__ import annotations

from calcpack.clauses.en1992.model import Strengths

C30 = Strengths(
    fck=30e3,
    fcm=38e3,
    fctm=2900.0,
    fctk=2000.0,
    ecm=33e6,
    eps_cu=0.0035,
    eps_cu2=0.0035,
    lam=0.8,
    eta=1.0,
    fcd=20e3,
    fctd=2000.0 / 1.5,
    fyk=500e3,
    fyd=500e3 / 1.15,
    es=200e6,
)
"""C30/37 with B500B at the recommended partial factors."""
