"""Steel beams of doubly symmetric I-shapes to AISC 360-22: clauses as figures, and as lines of a sheet."""
