"""The study of limits: what it finds, and its document."""

import pytest

from chainflow.basis.constants import ELEMENTARY_CHARGE
from chainflow.basis.faults import UsageFault
from chainflow.studies.limits import limits, limits_document

EV = ELEMENTARY_CHARGE


def test_one_gap():
    found = limits([2.1 * EV], 0.8)
    ideal, real = found.splitting
    (absorber,) = found.absorbers
    assert ideal.needed == pytest.approx(1.229, abs=0.001)
    assert real.needed == pytest.approx(2.029, abs=0.001)
    assert absorber.share == pytest.approx(0.153, abs=0.001)  # all photons, see tests/outside
    assert absorber.wavelength == pytest.approx(1239.84e-9 / 2.1, rel=1e-5)  # hc/q in eV nm, CODATA
    assert ideal.alone[0].efficiency == pytest.approx(absorber.share, rel=0.01)
    assert real.alone[0].efficiency == 0.0
    # what is in front takes all photons above it, so with 2.1 eV in front its photons are the limit
    assert real.behind.efficiency <= absorber.share
    assert real.behind.efficiency == pytest.approx(absorber.share, rel=0.01)
    assert real.behind.gaps[0] == 2.1 * EV


def test_a_partner_is_never_worse_than_any_other():
    from chainflow.equipment.sun.photons import reference_photons
    from chainflow.thermo.detailed_balance import DetailedBalance

    balance = DetailedBalance(reference_photons())
    (_, real) = limits([1.8 * EV], 0.6).splitting
    for lower in (0.6, 0.9, 1.1, 1.3, 1.5):
        other = balance.tandem(1.8 * EV, lower * EV, real.needed).efficiency
        assert other <= real.behind.efficiency * 1.0011
    for upper in (1.9, 2.1, 2.5, 3.0):
        other = balance.tandem(upper * EV, 1.8 * EV, real.needed).efficiency
        assert other <= real.front.efficiency * 1.0001
    assert real.best_two.efficiency >= real.behind.efficiency
    assert real.best_two.efficiency >= real.front.efficiency


def test_a_pair_in_any_order():
    first, second = limits([1.7 * EV, 1.1 * EV], 0.5), limits([1.1 * EV, 1.7 * EV], 0.5)
    assert first == second
    pair = first.splitting[1].pair
    upper, lower = (one.available for one in first.absorbers)
    assert pair.limited_by == "lower"
    assert pair.current_density == pytest.approx(lower - upper, rel=0.02)
    assert pair.current_density < lower - upper


def test_a_pair_limited_by_its_upper_absorber_and_by_its_voltage():
    assert limits([2.3 * EV, 1.1 * EV], 0.5).splitting[1].pair.limited_by == "upper"
    assert limits([1.4 * EV, 0.8 * EV], 0.5).splitting[1].pair.limited_by == "voltage"


def test_without_overpotential_there_is_one_column():
    assert len(limits([1.6 * EV], 0.0).splitting) == 1


def test_the_ends_of_the_spectrum():
    low, high = limits([0.31 * EV], 0.8), limits([4.4 * EV], 0.8)
    assert low.splitting[0].behind is None
    assert high.splitting[0].front is None
    assert low.absorbers[0].available > high.absorbers[0].available


@pytest.mark.parametrize(
    ("gaps", "says"),
    [([], "0 band gaps are given"), ([1, 2, 3], "3 band gaps"), ([2e-19, 2e-19], "the same")],
)
def test_what_is_said_of_a_wrong_number_of_gaps(gaps, says):
    with pytest.raises(UsageFault, match=says):
        limits(gaps, 0.8)


def test_the_document_says_it_all():
    found = limits_document(limits([1.7 * EV, 1.1 * EV], 0.5))
    assert [one["gap_eV"] for one in found["absorbers"]] == [1.7, 1.1]
    assert [one["overpotential_V"] for one in found["splitting"]] == [0.0, 0.5]
    real = found["splitting"][1]
    assert real["tandem"]["gaps_eV"] == [1.7, 1.1]
    assert real["best_behind"] is None
    assert 0.0 < real["tandem"]["solar_to_hydrogen"] < real["best_tandem"]["solar_to_hydrogen"]


def test_what_makes_hydrogen_is_named_alike_everywhere():
    """`efficiency` is that of solar cells alone."""
    one, pair = (limits_document(limits([g * EV for g in gaps], 0.5)) for gaps in ([2.2], [1.7, 1]))
    for found, names in ((one, ("best_behind", "best_in_front")), (pair, ("tandem",))):
        for split in found["splitting"]:
            entries = [*split["one_absorber"], split["best_one_absorber"], split["best_tandem"]]
            for entry in [*entries, *(split[name] for name in names)]:
                assert "solar_to_hydrogen" in entry
                assert "efficiency" not in entry
        assert set(found["best_cell"]) == {"gaps_eV", "efficiency"}
