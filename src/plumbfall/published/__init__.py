"""Figures from print, with source and basis, and their recomputation with the shipped code."""
