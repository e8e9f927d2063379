"""Propagation of uncertainty through any function of named inputs; it knows nothing of balls."""
