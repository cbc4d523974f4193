"""Electrochemical cells: voltage by current density, what leaks, and how a stack is sized.

SI throughout: current density [A/m2], voltage [V], temperature [K], pressure [Pa].
"""
