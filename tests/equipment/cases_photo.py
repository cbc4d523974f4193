"""Cases of photoelectrodes for the battery of laws."""

from chainflow.equipment.ports import Light
from tests.equipment.feeds import NOON, stream

POINTS = {
    "potential": ["0.2 V", "0.4 V", "0.6 V", "0.8 V", "1.0 V", "1.2 V", "1.4 V"],
    "current_density": [
        f"{j} mA/cm2" for j in ("-0.02", "0.05", "0.9", "2.6", "4.1", "4.6", "4.7")
    ],
}
EFFICIENCY = {
    "wavelength": ["350 nm", "400 nm", "450 nm", "500 nm", "540 nm"],
    "efficiency": ["60 %", "75 %", "70 %", "40 %", "5 %"],
}
CELL = {
    "voltage": ["0 V", "0.2 V", "0.4 V", "0.5 V", "0.55 V", "0.6 V", "0.64 V", "0.67 V"],
    "current_density": [
        f"{j} mA/cm2" for j in ("38", "37.9", "37.6", "36.2", "33.5", "26", "13", "-2")
    ],
}
OXIDE = {"band_gap": "2.0 eV", "shape": {"onset": "0.5 V", "half_wave": "0.8 V"}}
TANDEM = {**OXIDE, "cell": {"gaps": ["1.1 eV"], "in_series": 2}}


def photoelectrodes(add):
    """Note the cases."""
    water = stream({"H2O": 1.0}, 25.0, 30.0)
    salty = stream({"H2O": 0.998, "CO2": 0.002}, 15.0, 2.0)
    noon = {"light": NOON, "water": water}
    add("tandem", "photoelectrode", TANDEM, noon, outlets=("hydrogen", "oxygen"))
    add(
        "two junctions, warm, under pressure",
        "photoelectrode",
        {
            **OXIDE,
            "separation": "80 %",
            "catalyst": "90 %",
            "faraday_efficiency": "95 %",
            "cell": {"gaps": ["1.4 eV", "0.9 eV"], "ideality": 1.4, "shunt_resistance": "1 ohm*m2"},
            "temperature": "60 degC",
            "pressure": "5 bar",
        },
        {"light": NOON, "water": water},
    )
    add(
        "heat offered",
        "photoelectrode",
        {**TANDEM, "temperature": "50 degC"},
        noon,
        outlets=("heat",),
    )
    add(
        "measured, biased, dissolved gas",
        "photoelectrode",
        {"band_gap": "2.4 eV", "curve": POINTS, "bias": "0.9 V"},
        {"light": NOON, "water": salty},
        inlets=("power",),
    )
    add(
        "photocathode, cell beside",
        "photoelectrode",
        {
            "electrode": "photocathode",
            "band_gap": "1.6 eV",
            "shape": {"onset": "0.6 V", "half_wave": "0.3 V", "saturation": "15 mA/cm2"},
            "cell": {"gaps": ["1.5 eV"], "place": "beside", "area": "40 %"},
            "counter_electrode": {"tafel_slope": "60 mV", "exchange_current": "1e-6 A/m2"},
        },
        {"light": NOON, "water": water},
    )
    add(
        "measured cell",
        "photoelectrode",
        {**OXIDE, "cell": {"gaps": ["1.1 eV"], "in_series": 2, "curve": CELL}},
        noon,
    )
    add(
        "measured cell beside",
        "photoelectrode",
        {**OXIDE, "cell": {"gaps": ["1.1 eV"], "place": "beside", "in_series": 3, "curve": CELL}},
        noon,
    )
    add(
        "by wavelength, bias bought",
        "photoelectrode",
        {**OXIDE, "band_gap": "2.3 eV", "quantum_efficiency": EFFICIENCY, "bias": "0.7 V"},
        noon,
    )
    add(
        "limited by the cell",
        "photoelectrode",
        {
            **OXIDE,
            "band_gap": "1.7 eV",
            "shape": {"onset": "-0.4 V", "half_wave": "-0.2 V"},
            "cell": {"gaps": ["1.5 eV"], "in_series": 3},
        },
        noon,
    )
    dim = Light(2e3, 4.0, 0.85, 293.15, 2.0)
    add("too dim", "photoelectrode", TANDEM, {"light": dim, "water": water})
    add("in the dark", "photoelectrode", TANDEM, {"light": NOON.scaled(0.0), "water": water})
    add("curves that do not cross", "photoelectrode", OXIDE, noon, unmet=True)
    air = stream({"N2": 0.78, "O2": 0.21, "H2O": 0.01}, 25.0, 1.2)
    add("no water", "photoelectrode", TANDEM, {"light": NOON, "water": air}, unmet=True)
