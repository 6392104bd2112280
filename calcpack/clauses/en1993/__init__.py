"""Steel beams after EN 1993-1-1:2005 and EN 1993-1-5:2006: rolled I-sections bent about the strong axis.

``rules`` holds the numbers of the standards, ``section``, ``buckling``, ``bearing``, ``segments`` and
``design`` work a beam out, ``lines_*`` write it down clause by clause.
"""
