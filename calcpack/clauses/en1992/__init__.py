"""Concrete beams after EN 1992-1-1:2004 + AC:2010.

The modules named after what they work out are pure numbers (m, kN, kPa); those that begin with ``write_``
put the same numbers on a sheet, line by line with clause.
"""
