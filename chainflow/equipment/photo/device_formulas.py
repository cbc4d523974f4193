"""Formulas and sources of the photoelectrode, as `chainflow kinds` prints them."""

FORMULAS: tuple[str, ...] = (
    "available current = q * photons above the gap; one watt of light has the spectrum of the sun",
    "plateau = available current * quantum efficiency * separation * catalyst",
    (
        "shape: x = 1 / (1 + exp(-(V - half_wave) / width)); J = plateau (x - x(onset)) / "
        "(1 - x(onset)), zero before the onset; a photocathode is its mirror image"
    ),
    (
        "needed = potential of the photoanode + overpotential of the dark cathode + J * "
        "electrolyte_resistance; photocathode: reversible + overpotential of the dark anode + J * "
        "electrolyte_resistance - potential"
    ),
    "dark electrode: overpotential = tafel_slope / ln 10 * asinh(J / (2 exchange_current))",
    (
        "junction: J = quantum_efficiency * photons - J_0 (exp((V + J R) / (n kT/q)) - 1) - "
        "(V + J R) / shunt; J_0 = light sent out in the detailed balance / radiative_efficiency"
    ),
    (
        "measured cell: J = measured J + (r - 1) J_sc, V = measured V - series_resistance (r - 1) "
        "J_sc; r = photons of the junction that gets the fewest, now per when it was measured"
    ),
    "works where needed = sum of the junctions' voltages + bias, at the same current",
    "hydrogen = faraday_efficiency * current / 2F",
    (
        "solar_to_hydrogen = J * 1.229 V * faraday_efficiency / irradiance; net of bias: "
        "J * (1.229 V * faraday_efficiency - bias) / irradiance"
    ),
    (
        "light + bias = not_absorbed + passed + not_collected + thermalised + voltage_not_used + "
        "hydrogen_work, the last as 1.229 V * faraday_efficiency * current"
    ),
    (
        "photovoltage = reversible + own overpotential in the dark - potential (photoanode), "
        "potential + own overpotential in the dark (photocathode)"
    ),
)
SOURCES: tuple[str, ...] = (
    "spectrum: ASTM G173-03, global (C)",
    (
        "solar to hydrogen: Chen et al., J. Mater. Res. 25 (2010) 3; Dotan et al., J. Phys. Chem. "
        "Lett. 5 (2014) 3330 (R)"
    ),
    (
        "current = absorbed * separation * catalyst: Dotan et al., Energy Environ. Sci. 4 (2011) "
        "958 (M for the form)"
    ),
    (
        "detailed balance: Shockley and Queisser, J. Appl. Phys. 32 (1961) 510; Ruehle, Solar "
        "Energy 130 (2016) 139 (C)"
    ),
    "measured cell in other light: IEC 60891, procedure 1 (M)",
    "shape by onset, half-wave and width: own",
    (
        "dark electrodes: ranges in McCrory et al., JACS 135 (2013) 16977 (M); width 0.05 to "
        "0.12 V, common practice, no source"
    ),
    "certainty: R read, C computed or cross-checked, M from memory",
)
