import io

import pytest

from chainflow.equipment.register import kinds
from chainflow.report.kinds import print_kind, print_kinds
from chainflow.report.plain import console


def printed(kind):
    out = io.StringIO()
    print_kind(console(out), kind)
    return out.getvalue()


@pytest.mark.parametrize("name", kinds())
def test_every_kind_is_printed_in_full(name):
    kind = kinds()[name]
    text = printed(kind)
    assert text.startswith(name)
    for field in kind.model_fields:
        assert f"  {field} (" in text
    for port in kind.ports:
        assert port.means in text
    for line in (*kind.formulas, *kind.sources):
        assert line in text


@pytest.mark.parametrize("name", kinds())
def test_every_setting_says_in_words_what_it_takes(name):
    text = printed(kinds()[name]).partition("\nSettings\n")[2]
    for sign in ("typing.", "Annotated", "class '", "NoneType", "<", "measured("):
        assert sign not in text


def test_units_ranges_and_defaults():
    text = printed(kinds()["compressor"])
    assert "discharge_limit (default 150 degC)" in text
    assert "pressure (required): pressure at the outlet, absolute [a pressure in bar" in text
    assert "drive_efficiency (default 95 %)" in text
    assert "aftercool (optional)" in text


def test_settings_of_a_map_stand_below_it_by_their_address():
    text = printed(kinds()["electrolyser"])
    assert "pem (optional): numbers of the cells (model: pem) [a map, see below]" in text
    assert "  pem.thickness (default 127 um): membrane thickness [a length in m" in text
    assert "  solid_oxide.conversion (default 70 %): " in text


def test_the_list_has_one_line_for_each_kind():
    out = io.StringIO()
    print_kinds(console(out), kinds())
    lines = out.getvalue().splitlines()
    assert [line.split()[0] for line in lines] == list(kinds())
    assert all(len(line.split(maxsplit=1)[1]) > 10 for line in lines)


def test_units_that_a_reader_would_write():
    battery = printed(kinds()["battery"])
    assert "mass (default 5.479 kg/kWh)" in battery
    assert "volume (default 2.105 L/kWh)" in battery
    assert "self_discharge (default 0 %/d)" in battery
    assert "module.gap (default 1.121 eV)" in printed(kinds()["pv-field"])
    assert "cell.series_resistance (default 1 ohm*cm2)" in printed(kinds()["photoelectrode"])


def test_settings_that_name_a_file_say_which():
    assert "[weather file: EPW, TMY3 (CSV) or TM2]" in printed(kinds()["sunlight"])
    assert "or a CSV file: wavelength [nm]" in printed(kinds()["photoelectrode"])
