"""The measurement equation of a falling ball and its inverse, in columns over all drops."""
