"""Fischer-Tropsch synthesis: hydrocarbon chains and water from carbon monoxide and hydrogen.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], heat [W].
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from types import ModuleType
from typing import Annotated, ClassVar, Literal, NamedTuple

import numpy as np
from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.names import suggest
from chainflow.basis.quantities import Fraction, measured
from chainflow.equipment.base import Array, Caution, Site
from chainflow.equipment.catalysis import SHIFT, missing_components
from chainflow.equipment.chain_lengths import ChainLengths, Olefins
from chainflow.equipment.published import (
    kuipers_1995,
    maretto_1999,
    song_2004,
    vervloet_2012,
    yermakova_2000,
)
from chainflow.equipment.reactor_base import Product, ReactorBase, share_of
from chainflow.equipment.synthesis_bed import Bed
from chainflow.thermo.chains import WAX, alkene
from chainflow.thermo.components import Matter
from chainflow.thermo.equilibrium import equilibrate
from chainflow.thermo.streams import Stream

Growth = Annotated[float, measured("1", ge=0.5, le=0.98)]
Ratio = Annotated[float, measured("1", ge=0.0, le=20.0)]
_CORRELATIONS: dict[str, ModuleType] = {
    "yermakova-2000": yermakova_2000,
    "song-2004": song_2004,
    "vervloet-2012": vervloet_2012,
}
_LEAST_GROWTH, _MOST_GROWTH = 0.70, 0.96  # a correlation is believed between these
_SHARP = 1e-12  # of a chain growth found from what it leads to
_MOST_STEPS = 100
_WINDOW = (453.15, 623.15)  # [K]: cobalt 200-240, iron to 350 degC; from memory
_WATER_PER_HYDROGEN = 1.0  # at the outlet; above it cobalt oxidises; common practice, no source


class _Run(NamedTuple):
    """What the chains do: growth, what one CO becomes, and the share of the CO that reacts."""

    growth: float
    made: Array
    conversion: float
    wanted: float  # growth before it is kept within what is believed


class FischerTropschReactor(ReactorBase):
    """Fischer-Tropsch synthesis at one temperature: CO + 2 H2 -> chains of CH2 + H2O.

    Chains C1 to C30 by Anderson, Schulz and Flory, all longer ones as `wax`, with methane beyond
    the distribution, less C2, and 1-alkenes where they are among the components.  `conversion` is
    the share of the CO that becomes hydrocarbons in one pass; a mass of cobalt `catalyst` finds it
    instead.  `chain_growth` is given, or follows H2/CO at the outlet by a published correlation.
    On iron, `shift_approach` of the way to the equilibrium of the shift is gone.  Heat is given off
    at the temperature of the reactor.  No oxygenates, no branched chains.
    """

    kind: ClassVar[str] = "fischer-tropsch-reactor"
    followed: ClassVar[tuple[str, ...]] = ("CO", "H2")
    gives: ClassVar[tuple[str, ...]] = (
        *ReactorBase.gives,
        "conversion_H2",
        "conversion_per_pass",
        "growth_probability",
        "share_methane",
        "share_C5_plus",
        "share_wax",
        "share_CO2",
        "usage_H2_CO",
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "carbon in C_n: n (1 - a)^2 a^(n-1); longer than N: a^N (N (1 - a) + 1), as wax",
        "C2 is two_share of that, the rest goes to longer chains; methane + extra_methane",
        "alkenes per alkane: ethylene_ratio; from C3 olefin_ratio exp(-olefin_decline (n - 3))",
        "H2, H2O by the balance of atoms; per CO 3 - a of H2 if all is paraffin",
        "catalyst activity = F_CO int dX/r, r = a p_CO p_H2 / (1 + b p_CO)^2, plug flow",
        "shift: product + shift_approach (equilibrium - product)",
    )
    sources: ClassVar[tuple[str, ...]] = (
        *ReactorBase.sources,
        "default chain growth 0.90, extra methane 5 %, C2 half: cobalt at 220 degC (M)",
        yermakova_2000.SOURCE,
        song_2004.SOURCE,
        vervloet_2012.SOURCE,
        kuipers_1995.SOURCE,
        maretto_1999.SOURCE,
    )

    temperature: Annotated[float, measured("K", ge=423.15, le=673.15)] = Field(
        description="temperature of the reactor and of the product"
    )
    conversion: Fraction | None = Field(
        None, description="share of the CO that becomes hydrocarbons in one pass"
    )
    catalyst: Annotated[float, measured("kg", gt=0.0)] | None = Field(
        None, description="mass of cobalt catalyst, instead of the conversion"
    )
    activity: Annotated[float, measured("1", gt=0.0, le=1000.0)] = Field(
        1.0, description="rate over the published one; 3 to 10 today (from memory)"
    )
    chain_growth: Growth = Field(0.90, description="probability that a chain grows")
    growth_by: Literal["given", "yermakova-2000", "song-2004", "vervloet-2012"] = Field(
        "given", description="correlation that replaces chain_growth"
    )
    numbers: dict[str, float] = Field(
        {},
        description="numbers that replace the published ones, {b: 0.65}; of the rate {rate_a: ...}",
    )
    extra_methane: Fraction = Field(
        0.05, description="share of the converted CO that becomes methane beside the chains"
    )
    two_share: Fraction = Field(0.5, description="C2 as a share of what the distribution gives")
    ethylene_ratio: Ratio = Field(kuipers_1995.AT_TWO, description="ethylene per ethane")
    olefin_ratio: Ratio = Field(kuipers_1995.AT_THREE, description="propene per propane")
    olefin_decline: Annotated[float, measured("1", ge=0.0, le=5.0)] = Field(
        kuipers_1995.DECLINE, description="fall of ln(olefins per paraffin) per carbon atom"
    )
    longest: int = Field(
        30, ge=4, le=30, description="longest chain by itself; all longer ones are wax"
    )
    shift_approach: Fraction = Field(
        0.0, description="share of the way to the equilibrium of the shift (iron)"
    )

    @model_validator(mode="after")
    def _one_amount(self) -> FischerTropschReactor:
        if (self.conversion is None) == (self.catalyst is None):
            raise PydanticCustomError(
                "fischer-tropsch", "give one of 'conversion' and 'catalyst'", {}
            )
        if self.extra_methane == 1.0:
            raise PydanticCustomError(
                "fischer-tropsch", "extra_methane is 100 %, wanted some chains beside it", {}
            )
        known = self._published()
        for name in self.numbers:
            if name not in known:
                raise PydanticCustomError(
                    "fischer-tropsch",
                    "numbers: there is no {name} in the model in use{hint}; it has {known}",
                    {
                        "name": name,
                        "hint": suggest(name, known),
                        "known": ", ".join(known) or "none",
                    },
                )
        return self

    def _published(self) -> dict[str, float]:
        """The numbers of the models in use."""
        known: dict[str, float] = {}
        if self.growth_by != "given":
            known |= _CORRELATIONS[self.growth_by].NUMBERS
        if self.catalyst is not None:  # both have an a: the rate's are called rate_a, ...
            known |= {f"rate_{name}": value for name, value in maretto_1999.NUMBERS.items()}
        return known

    @property
    def chains(self) -> ChainLengths:
        """The distribution without its growth."""
        olefins = Olefins(self.ethylene_ratio, self.olefin_ratio, self.olefin_decline)
        return ChainLengths(self.extra_methane, self.two_share, olefins, self.longest)

    # --- structure ---------------------------------------------------------------------------

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        shift = SHIFT if self.shift_approach > 0.0 else ()
        wanted = dict.fromkeys(("H2", "CO", "H2O", *shift, *self.chains.needed()))
        yield from missing_components(matter, tuple(wanted), "this Fischer-Tropsch reactor")
        if {"olefin_ratio", "ethylene_ratio"} & self.model_fields_set:
            olefins = [alkene(n) for n in range(2, 21) if alkene(n) in matter.index]
            if not olefins and (self.olefin_ratio or self.ethylene_ratio):
                yield (
                    ("olefin_ratio",),
                    (
                        "no 1-alkene is among the components: add C2H4, C3H6, 1-C4H8 and so on, "
                        "or leave the ratio out"
                    ),
                )

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        made = {species}
        if species in ("CO", "H2"):
            made |= {"H2O", *self.chains.possible(matter)}
        if self.shift_approach > 0.0 and species in SHIFT:
            made |= set(SHIFT) - ({"H2"} if species == "CO" else set())
            made -= {"CO", "CO2"} if species == "H2" else set()
        return [(o, name) for o in outlets for name in matter.components if name in made]

    # --- physics -----------------------------------------------------------------------------

    def equilibrium_species(self, matter: Matter) -> tuple[str, ...] | None:
        return None

    def _made_at(self, flows: Array, level: float, pressure: float, matter: Matter) -> Product:
        run = self._run(flows, level, pressure, matter)
        place = matter.index["CO"]
        out = flows + run.made * (run.conversion * float(flows[place]))
        hydrogen = matter.index["H2"]
        if out[hydrogen] < -1e-12 * float(flows.sum()):
            return self._short_of_hydrogen(flows, run, matter)
        out = np.maximum(out, 0.0)
        by_feed = np.eye(len(flows))
        by_feed[:, place] += run.conversion * run.made
        fixed = self.growth_by == "given" and self.catalyst is None
        if self.shift_approach > 0.0 and out.any():
            found = equilibrate(matter, out, level, pressure, SHIFT)
            out = out + self.shift_approach * (found.flows - out)
            by_feed = by_feed + self.shift_approach * (found.by_feed @ by_feed - by_feed)
        return Product(out, by_feed if fixed else None, {})

    def _short_of_hydrogen(self, flows: Array, run: _Run, matter: Matter) -> Product:
        """More hydrogen is wanted than there is: react as far as it goes and say so."""
        hydrogen, monoxide = (float(flows[matter.index[name]]) for name in ("H2", "CO"))
        use = -float(run.made[matter.index["H2"]])
        out = flows + run.made * (hydrogen / use)
        text = (
            f"the chains use {use:.4g} mol of H2 per mol of CO, in all "
            f"{use * run.conversion * monoxide:.6g} mol/s, the feed has {hydrogen:.6g}: lower the "
            "conversion or feed more H2"
        )
        return Product(np.maximum(out, 0.0), None, {"feed": text})

    def _run(self, flows: Array, level: float, pressure: float, matter: Matter) -> _Run:
        """The run in which growth and conversion agree: secants, kept inside a bracket."""
        if self.growth_by == "given" or not float(flows[matter.index["CO"]]) > 0.0:
            return self._with(self.chain_growth, flows, level, pressure, matter)
        low, high = _LEAST_GROWTH, _MOST_GROWTH
        before: tuple[float, float] | None = None
        trial = _believed(self.chain_growth)
        for _ in range(_MOST_STEPS):
            run = self._followed(trial, flows, level, pressure, matter)
            excess = _believed(run.wanted) - trial
            if abs(excess) <= _SHARP:
                break
            low, high = (trial, high) if excess > 0.0 else (low, trial)
            better = trial + excess
            if before is not None and excess != before[1]:
                better = trial - excess * (trial - before[0]) / (excess - before[1])
            before = (trial, excess)
            trial = better if low <= better <= high else 0.5 * (low + high)
        return run

    def _followed(
        self, growth: float, flows: Array, level: float, pressure: float, matter: Matter
    ) -> _Run:
        """The run with a growth, and the growth that the gas at its end would lead to."""
        run = self._with(growth, flows, level, pressure, matter)
        monoxide, hydrogen = matter.index["CO"], matter.index["H2"]
        end = flows + run.made * (run.conversion * float(flows[monoxide]))
        least = 1e-9 * float(flows.sum())
        ratio = max(float(end[hydrogen]), 0.0) / max(float(end[monoxide]), least)
        module = _CORRELATIONS[self.growth_by]
        own = module.NUMBERS | {k: v for k, v in self.numbers.items() if k in module.NUMBERS}
        return run._replace(wanted=module.chain_growth(ratio, level, own))

    def _with(
        self, growth: float, flows: Array, level: float, pressure: float, matter: Matter
    ) -> _Run:
        made = self.chains.made(growth, matter)
        if self.conversion is not None:
            return _Run(growth, made, self.conversion, growth)
        assert self.catalyst is not None
        numbers = {n: self.numbers.get(f"rate_{n}", v) for n, v in maretto_1999.NUMBERS.items()}
        bed = Bed(self.catalyst * self.activity, numbers)
        return _Run(growth, made, bed.conversion(flows, made, level, pressure, matter), growth)

    # --- report ------------------------------------------------------------------------------

    def _report(
        self, feed: Stream, product: Stream, site: Site
    ) -> tuple[dict[str, float], tuple[Caution, ...]]:
        results, cautions = super()._report(feed, product, site)
        matter, level, pressure = site.matter, float(product.temperature), float(product.pressure)
        run = self._run(feed.flows, level, pressure, matter)
        results |= {
            "conversion_per_pass": run.conversion,
            "growth_probability": run.growth,
            "usage_H2_CO": -float(run.made[matter.index["H2"]]),
        }
        results |= _shares(feed, product, matter)
        if run.wanted != run.growth and not _LEAST_GROWTH <= run.wanted <= _MOST_GROWTH:
            text = (
                f"the correlation gives a chain growth of {run.wanted:.4g}, taken is "
                f"{run.growth:g}, the end of what is believed, {_LEAST_GROWTH:g} to "
                f"{_MOST_GROWTH:g}"
            )
            cautions = (*cautions, Caution("chain-growth-limited", text))
        return results, cautions

    def _window(self, level: float) -> Iterator[Caution]:
        if not _WINDOW[0] <= level <= _WINDOW[1]:
            yield Caution(
                "outside-catalyst-window",
                f"{level - 273.15:.4g} degC: cobalt works at 200 to 240 degC, iron at 220 to 350",
            )
        if self.catalyst is not None and not (
            maretto_1999.LOWEST - 0.1 <= level <= maretto_1999.HIGHEST + 0.1
        ):
            yield Caution(
                "outside-measured-range",
                f"the rate, measured at 220 to 240 degC, is taken at {level - 273.15:.4g} degC",
            )

    def _traces(self, feed: Stream, product: Stream) -> Iterator[Caution]:
        hydrogen, water = share_of(product, "H2"), share_of(product, "H2O")
        if water > _WATER_PER_HYDROGEN * hydrogen and self.shift_approach == 0.0:
            yield Caution(
                "water-over-cobalt",
                f"{water / max(hydrogen, 1e-9):.3g} mol of water per mol of H2 at the outlet: "
                "above about 1 cobalt oxidises, lower the conversion in one pass",
            )


def _believed(growth: float) -> float:
    return min(max(growth, _LEAST_GROWTH), _MOST_GROWTH)


def _shares(feed: Stream, product: Stream, matter: Matter) -> dict[str, float]:
    """Shares of the CO that reacted by what its carbon is in at the end."""
    carbon = matter.formula[matter.elements.index("C")]
    oxygen = matter.formula[matter.elements.index("O")]
    gained = (product.flows - feed.flows) * carbon
    used = -float(gained[matter.index["CO"]])
    if used <= 0.0:
        return {}
    long = (carbon >= 5.0) & (oxygen == 0.0)
    dioxide = matter.carbon_dioxide
    return {
        "share_methane": float(gained[matter.index["CH4"]]) / used,
        "share_C5_plus": float(gained[long].sum()) / used,
        "share_wax": float(gained[matter.index[WAX]]) / used,
        "share_CO2": float(gained[dioxide]) / used if dioxide is not None else 0.0,
    }
