"""Formulas and sources of the electrolyser, as `chainflow kinds` prints them."""

from chainflow.equipment.cells import alkaline, pem, solid_oxide

FORMULAS: tuple[str, ...] = (
    "power = direct current * (1 / rectifier + auxiliaries)",
    "specific-energy: hydrogen = direct current / energy_use (per mass of hydrogen)",
    "voltage: hydrogen = direct current / (2 F voltage), Faraday efficiency 1",
    (
        "others: hydrogen = Faraday efficiency * current / 2F; voltage = reversible + "
        "activation + ohmic + concentration"
    ),
    (
        "reversible = dG/2F + RT/2F ln(p_H2 p_O2^0.5 / a_H2O), pressures of the gases "
        "without their moisture, in bar"
    ),
    (
        "pem: activation RT/(alpha z F) asinh(i / 2 i0) at each electrode; ohmic i "
        "(thickness / conductivity + contact); concentration -RT/2F ln(1 - i / limiting)"
    ),
    (
        "pem: hydrogen crossing = permeability (pressure + supersaturation i) / "
        "thickness; recombination burns a share of it, the rest leaves with the oxygen"
    ),
    (
        "alkaline, empirical: (r1 + r2 T + r3 T^2) i + (s1 + s2 T + s3 T^2) log10((t1 + "
        "t2/T + t3/T^2) i + 1), T in degC, at 7 bar; Faraday efficiency i^2 / (f1 + i^2) "
        "f2"
    ),
    (
        "alkaline, physical: both electrodes by asinh, less what bubbles cover; gaps / "
        "(conductivity (1 - 2/3 cover)^1.5) + diaphragm"
    ),
    (
        "solid-oxide: current density * integral of resistance / (voltage - local "
        "reversible voltage) over what is converted = 1; feed = current / (2F conversion "
        "(H2O + CO2 per mol))"
    ),
    (
        "heat = enthalpy of both gases - enthalpy of what enters at stack temperature - "
        "direct current"
    ),
    "moisture of a dry gas flow n: n * r / (1 - r), r = saturation pressure / pressure",
)
SOURCES: tuple[str, ...] = (
    "Faraday constant: CODATA 2018",
    (
        "saturation pressure: Wagner and Pruss, J. Phys. Chem. Ref. Data 31 (2002) 387 "
        "(IAPWS-95 auxiliary equation)"
    ),
    *pem.SOURCES,
    *alkaline.SOURCES,
    *solid_oxide.SOURCES,
    ("certainty: R read, r read as restated by others, C computed or cross-checked, M from memory"),
)
