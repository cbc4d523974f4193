"""The curve of an alkaline electrolyser in nine parameters, and its Faraday efficiency.

    U = U_rev + (r1 + r2 T + r3 T^2) i + (s1 + s2 T + s3 T^2) log10[(t1 + t2/T + t3/T^2) i + 1]

with T in degC and i in A/m2. Ulleberg, Stand-alone power systems for the future, thesis, NTNU
Trondheim (1998); a 26 kW stack of 0.25 m2 cells, 30 wt% KOH, 7 bar. Certainty r: eight or more
restatements agree, one misprints t1, one the sign of s3. Faraday efficiency, i in mA/cm2:
i^2/(f1 + i^2) f2 (r, two restatements). Valid from 30 to 80 degC and to 3000 A/m2; the pressure is
within the parameters. It says nothing about newer electrodes.
"""

SOURCE = (
    "set ulleberg-1998: Ulleberg, thesis, NTNU Trondheim (1998) (r); Faraday efficiency: "
    "Ulleberg, Int. J. Hydrogen Energy 28 (2003) 21 (r)"
)
PRESSURE = 7e5  # [Pa] of the stack
HIGHEST_DENSITY = 3000.0  # [A/m2] of the data
NUMBERS = {
    "r1": 7.331e-5,  # [ohm m2]
    "r2": -1.107e-7,  # [ohm m2/K]
    "r3": 0.0,
    "s1": 0.1586,  # [V]
    "s2": 1.378e-3,
    "s3": -1.606e-5,
    "t1": 1.599e-2,  # [m2/A]
    "t2": -1.302,
    "t3": 421.3,
}
FARADAY = {"f11": 50.0, "f12": 2.5, "f21": 1.0, "f22": -2.5e-4}  # [mA2/cm4], T in degC
