"""The curve of the same alkaline electrolyser in six parameters.

Ulleberg, Modeling of advanced alkaline electrolyzers, Int. J. Hydrogen Energy 28 (2003) 21, doi
10.1016/S0360-3199(02)00033-2. Certainty r for all but t1. For t1 the restatements disagree; -0.1002
follows the nine-parameter curve of the same stack within 4 mV rms (C), +1.002 is 190 mV off: the
printed number was not seen. The bracket turns negative above 107 degC.
"""

SOURCE = "set ulleberg-2003: Ulleberg, Int. J. Hydrogen Energy 28 (2003) 21 (r; t1 cross-checked)"
NUMBERS = {
    "r1": 8.05e-5,  # [ohm m2]
    "r2": -2.5e-7,  # [ohm m2/K]
    "r3": 0.0,
    "s1": 0.185,  # [V]
    "s2": 0.0,
    "s3": 0.0,
    "t1": -0.1002,  # [m2/A]
    "t2": 8.424,
    "t3": 247.3,
}
