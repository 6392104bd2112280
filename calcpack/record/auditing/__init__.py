"""The audit of sheets: every number worked out again, by roads that the sheet itself did not take.

What this package rests on, it has of its own: units, reading of printed texts, evaluation of formulas,
analysis of the beam. Nothing here runs anything that a record, a notebook or a PDF holds.
"""
