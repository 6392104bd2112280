"""Concrete beams to ACI 318-19."""
