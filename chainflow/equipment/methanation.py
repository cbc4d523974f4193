"""Methanation of CO2 and CO: one cooled or adiabatic reactor, or a train of adiabatic beds.

SI throughout: flows [mol/s], temperature [K], pressure [Pa], heat [W].
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import replace
from typing import Annotated, Any, ClassVar, Literal

import numpy as np
from pydantic import Field, model_validator
from pydantic_core import PydanticCustomError

from chainflow.basis.quantities import (
    Fraction,
    OpenFraction,
    Temperature,
    measured,
)
from chainflow.equipment.base import (
    Array,
    Caution,
    Flow,
    Outcome,
    Port,
    Role,
    Site,
    material,
)
from chainflow.equipment.bed_train import Train, TrainSettings, run_train, train_cautions
from chainflow.equipment.carbon_margin import CARBON_FORMS_ABOVE, greatest_activity
from chainflow.equipment.catalysis import (
    METHANATION,
    OXYGEN,
    Approach,
    converted,
    missing_components,
    stated_reaction,
    those_there,
)
from chainflow.equipment.junctions import spread_faults
from chainflow.equipment.ports import Feeds
from chainflow.equipment.published import roensch_2016 as nickel
from chainflow.equipment.published.en_437 import UPPER_WOBBE_INDEX, GasGroup
from chainflow.equipment.reactions import Reaction
from chainflow.equipment.reactor_base import (
    TRACE,
    Product,
    ReactorBase,
    conversions,
    exchanging,
    share_of,
)
from chainflow.thermo.components import Matter
from chainflow.thermo.gas_quality import RESULTS, gas_quality
from chainflow.thermo.streams import Stream
from chainflow.thermo.validity import StateError

MOST_BEDS = 6
_CONDENSATE = ("H2O", "CO2")  # what a knock-out takes out
_TRAIN_ONLY = ("bed_limit", "knock_out", "knock_outs", "hold", "blower_efficiency")

_STATED = ("CO2 + 4 H2 -> CH4 + 2 H2O", "CO + 3 H2 -> CH4 + H2O")


class MethanationReactor(ReactorBase):
    """Methanation of CO2 and CO with the shift beside it: cooled, adiabatic or a train of beds.

    The product is at equilibrium; with an `approach` the constants are taken that much above the
    outlet temperature (the reaction gives heat off); 0 to 20 K are common practice for fresh
    catalysts, 10 to 30 K for aged ones (certainty M).  `conversion` of CO2 (of CO if there is no
    CO2) replaces it.

    `beds` makes it a train of adiabatic beds, each fed at `bed_inlet`.  No bed passes `bed_limit`:
    one that would is held there by its own product, cooled and blown back, or by steam that is
    called; the amount is found.  `knock_out` takes water out between beds, to `liquid`.
    The product leaves as the last bed leaves it.  Its quality is that of the dry gas (ISO 6976,
    combustion and metering at 15 degC as in EN 437).
    """

    kind: ClassVar[str] = "methanation-reactor"
    gives: ClassVar[tuple[str, ...]] = (
        *ReactorBase.gives,
        *RESULTS,
        "hottest_bed_K",
        "recycle_mol_s",
        "blower_work_W",
        "steam_used_mol_s",
        "condensed_mol_s",
        *(f"bed_{k}_outlet_K" for k in range(1, MOST_BEDS + 1)),
        *(f"bed_{k}_recycle_ratio" for k in range(1, MOST_BEDS + 1)),
    )
    ports: ClassVar[tuple[Port, ...]] = (
        *ReactorBase.ports,
        Port(
            "steam",
            "material",
            Role.CALLS,
            optional=True,
            means="steam that holds the beds at `bed_limit` (with `hold: steam`)",
        ),
        Port(
            "liquid",
            "material",
            Role.OFFERS,
            optional=True,
            means="water taken out between beds (with `knock_out`)",
        ),
    )
    formulas: ClassVar[tuple[str, ...]] = (
        "CO2 + 4 H2 = CH4 + 2 H2O, CO + 3 H2 = CH4 + H2O",
        "minimum of the Gibbs energy, constants at T + approach",
        "recycle = (H_fed - H_product) / (H_product - H_cooled - w), product at `bed_limit`",
        "blower: w = V * (pressure_drop / beds) / blower_efficiency",
        "Wobbe index = heating value per volume / sqrt(relative density), dry, 15 degC / 15 degC",
    )
    sources: ClassVar[tuple[str, ...]] = (
        *ReactorBase.sources,
        "window of nickel catalysts: Roensch et al., Fuel 166 (2016) 276 (from memory)",
        "heating value, relative density, Wobbe index: definitions of ISO 6976",
        "reference conditions and gas groups: EN 437 (from memory)",
    )

    temperature: Annotated[float, measured("K", ge=423.15, le=1273.15)] | None = Field(
        None, description="temperature of the product"
    )
    approach: Approach = Field(0.0, description="distance from equilibrium in temperature")
    conversion: Fraction | None = Field(
        None, description="stated conversion of CO2 instead of equilibrium"
    )
    beds: Annotated[int, Field(ge=1, le=MOST_BEDS)] | None = Field(
        None, description="number of adiabatic beds in a row; 2 to 4 are common"
    )
    bed_inlet: Annotated[float, measured("K", ge=423.15, le=973.15)] = Field(
        nickel.LOWEST_INLET, description="temperature at which each bed is fed"
    )
    bed_limit: Annotated[float, measured("K", ge=473.15, le=1273.15)] | None = Field(
        None, description="temperature that no bed's outlet may pass"
    )
    hold: Literal["recycle", "steam"] = Field(
        "recycle", description="what holds a bed that would pass `bed_limit`"
    )
    knock_out: Annotated[float, measured("K", gt=273.15, le=473.15)] | None = Field(
        None, description="temperature to which the gas is cooled between beds to take water out"
    )
    knock_outs: Literal["every", "last"] = Field(
        "every", description="water is taken out in every gap between beds, or before the last bed"
    )
    blower_efficiency: OpenFraction = Field(
        0.75, description="of the blower that recycles, isentropic; common practice, no source"
    )
    catalyst_limit: Temperature = Field(
        nickel.ORDINARY_LIMIT,
        description="above it there is a caution; 700 degC for high-temperature grades",
    )
    gas_group: GasGroup | None = Field(
        None, description="gas group of EN 437 that the dry product is to meet, for a caution"
    )

    # --- settings ----------------------------------------------------------------------------

    @model_validator(mode="after")
    def _beds_or_one_reactor(self) -> MethanationReactor:
        fields = type(self).model_fields
        if self.beds is None:
            for name in _TRAIN_ONLY:
                if getattr(self, name) != fields[name].default:
                    raise _wrong(f"'{name}' is given but no 'beds': say how many beds there are")
            return self
        for name in ("temperature", "duty", "conversion"):
            if getattr(self, name) is not None:
                raise _wrong(
                    f"'beds' and '{name}' are both given: adiabatic beds reach equilibrium, and "
                    "'bed_inlet' and 'bed_limit' set their temperatures"
                )
        if self.bed_limit is not None and self.bed_limit <= self.bed_inlet:
            raise _wrong(
                f"'bed_limit' is {self.bed_limit - 273.15:.4g} degC, wanted above the 'bed_inlet' "
                f"of {self.bed_inlet - 273.15:.4g} degC"
            )
        if self.hold == "steam" and self.bed_limit is None:
            raise _wrong("'hold: steam' wants the 'bed_limit' at which steam holds the beds")
        if self.knock_out is not None and self.beds == 1:
            raise _wrong("'knock_out' is between beds, wanted 2 or more 'beds'")
        return self

    def port_list(self) -> tuple[Port, ...]:
        absent = set()
        if self.beds is None or self.hold != "steam":
            absent.add("steam")
        if self.beds is None or self.knock_out is None:
            absent.add("liquid")
        return tuple(
            replace(port, optional=False) if port.name == "steam" else port
            for port in self.ports
            if port.name not in absent
        )

    def setting_faults(self, matter: Matter) -> Iterator[tuple[tuple[str, ...], str]]:
        stated = ("H2", "H2O", "CO2", "CH4")
        needed = stated if self.conversion is not None else METHANATION
        yield from missing_components(matter, needed, "methanation")

    def pressure_faults(self, inlets: Mapping[str, tuple[float, ...]]) -> Iterator[tuple[str, str]]:
        yield from spread_faults(inlets)

    def destinations(
        self, inlet: str, species: str, outlets: Iterable[str], matter: Matter
    ) -> Iterable[tuple[str, str]]:
        pairs = exchanging(species, (*METHANATION, *OXYGEN), outlets, matter)
        return [(o, name) for o, name in pairs if o != "liquid" or name in _CONDENSATE]

    def equilibrium_species(self, matter: Matter) -> tuple[str, ...] | None:
        return None if self.conversion is not None else those_there(matter, METHANATION)

    @property
    def shift_of_temperature(self) -> float:
        return self.approach

    def stated(self, flows: Array, matter: Matter) -> tuple[Reaction, ...]:
        if self.conversion is None:
            return ()
        return (stated_reaction(flows, matter, self.conversion, _STATED),)

    def convert(self, flows: Array, matter: Matter) -> Product:
        return converted(flows, matter, *self.stated(flows, matter))

    # --- the train ---------------------------------------------------------------------------

    def operate(self, feeds: Feeds, asked: Mapping[str, Any], site: Site) -> Outcome:
        if self.beds is None:
            return super().operate(feeds, asked, site)
        feed, steam, matter = material(feeds, "feed"), None, site.matter
        level = float(feed.pressure)
        if self.hold == "steam":
            steam = material(feeds, "steam")
            level = min(level, float(steam.pressure))
        settings = self._train_settings(level, matter)
        train = run_train(feed.at_pressure(level), steam, settings, site)
        duties, electric, drawn, given = self.settle(train.duties, site)
        drawn["power"] = electric + train.work  # without a line it is bought
        if steam is not None:
            drawn["steam"] = train.steam
        product = train.beds[-1].product
        outlets: dict[str, Flow] = {"product": product, **given}
        if self.knock_out is not None:
            outlets["liquid"] = train.liquid
        report = self._train_report(feed, steam, train, settings, site) if site.detail else ({}, ())
        return Outcome(
            outlets,
            drawn,
            duties,
            power=electric + train.work,
            results=report[0],
            cautions=report[1],
            unmet={"steam" if steam is not None else "feed": train.why} if train.why else {},
        )

    def _train_settings(self, pressure: float, matter: Matter) -> TrainSettings:
        assert self.beds is not None
        return TrainSettings(
            self.beds,
            self.bed_inlet,
            self.bed_limit,
            self.hold == "steam",
            self.approach,
            self.pressure_drop / self.beds,
            self.knock_out,
            self.knock_outs == "last",
            self.blower_efficiency,
            those_there(matter, METHANATION),
        )

    def _train_report(
        self,
        feed: Stream,
        steam: Stream | None,
        train: Train,
        settings: TrainSettings,
        site: Site,
    ) -> tuple[dict[str, float], tuple[Caution, ...]]:
        product = train.beds[-1].product
        entering = feed.flows if steam is None else feed.flows + train.steam * steam.flows
        results, cautions = self._report(feed, product, site)
        leaving = product.flows + sum((s.flows for s in train.liquids), np.zeros(len(entering)))
        results |= conversions(entering, leaving, site.matter, self.followed)
        outlets = [float(bed.product.temperature) for bed in train.beds]
        results |= {
            "hottest_bed_K": max(outlets),
            "recycle_mol_s": sum(bed.recycle * float(bed.fed.total) for bed in train.beds),
            "blower_work_W": train.work,
            "steam_used_mol_s": train.steam,
            "condensed_mol_s": float(sum(s.total for s in train.liquids)),
        }
        for k, bed in enumerate(train.beds, 1):
            results[f"bed_{k}_outlet_K"] = outlets[k - 1]
            results[f"bed_{k}_recycle_ratio"] = bed.recycle
        more = [*self._hot(max(outlets)), *_carbon_in_beds(train, site.matter)]
        return results, tuple(dict.fromkeys([*cautions, *more, *train_cautions(train, settings)]))

    def slopes(
        self, feeds: Feeds, asked: Mapping[str, Any], site: Site, outcome: Outcome
    ) -> dict[str, dict[str, Array]]:
        return {} if self.beds is not None else super().slopes(feeds, asked, site, outcome)

    # --- what is reported ---------------------------------------------------------------------

    def _report(
        self, feed: Stream, product: Stream, site: Site
    ) -> tuple[dict[str, float], tuple[Caution, ...]]:
        results, cautions = super()._report(feed, product, site)
        try:
            quality = gas_quality(site.matter, product.flows)
        except StateError:  # nothing but water flows, or the dry gas is liquid where it is metered
            return results, cautions
        results |= quality.results()
        return results, (*cautions, *self._out_of_group(quality.heating.upper_wobbe_index))

    def _out_of_group(self, wobbe: float) -> Iterator[Caution]:
        if self.gas_group is None:
            return
        low, high = UPPER_WOBBE_INDEX[self.gas_group]
        if not low <= wobbe <= high:
            text = (
                f"upper Wobbe index of the dry product {wobbe / 1e6:.4g} MJ/m3, group "
                f"{self.gas_group} of EN 437 wants {low / 1e6:.4g} to {high / 1e6:.4g}"
            )
            yield Caution("outside-gas-group", text)

    def _window(self, level: float) -> Iterator[Caution]:
        yield from self._hot(level)
        if level < nickel.STARTS_ABOVE:
            yield Caution(
                "below-catalyst-window",
                f"{level - 273.15:.4g} degC is below the 200 degC where nickel catalysts start to "
                "work",
            )

    def _hot(self, level: float) -> Iterator[Caution]:
        if level > max(nickel.HIGH_TEMPERATURE_LIMIT, self.catalyst_limit):
            yield Caution(
                "above-catalyst-window",
                f"{level - 273.15:.4g} degC is above the 700 degC that high-temperature nickel "
                "catalysts stand",
            )
        elif level > self.catalyst_limit:
            ordinary = self.catalyst_limit == nickel.ORDINARY_LIMIT
            whose = "of ordinary nickel catalysts" if ordinary else "of 'catalyst_limit'"
            yield Caution(
                "above-catalyst-window",
                f"{level - 273.15:.4g} degC is above the {self.catalyst_limit - 273.15:.4g} degC "
                f"{whose}",
            )

    def _traces(self, feed: Stream, product: Stream) -> Iterator[Caution]:
        inlet = float(feed.temperature) if self.beds is None else self.bed_inlet
        coldest = min(inlet, float(product.temperature))
        monoxide = max(share_of(feed, "CO"), share_of(product, "CO"))
        if monoxide > TRACE and coldest < nickel.CARBONYL_BELOW:
            text = (
                f"{100 * monoxide:.2g} % CO can meet nickel at {coldest - 273.15:.4g} degC: below "
                "about 200 degC very toxic nickel carbonyl forms; preheat the feed before the "
                "catalyst"
            )
            yield Caution("nickel-carbonyl", text)


def _wrong(text: str) -> PydanticCustomError:
    return PydanticCustomError("reactor", "{text}", {"text": text})


def _carbon_in_beds(train: Train, matter: Matter) -> Iterator[Caution]:
    """Carbon at the outlets of beds that are not the last."""
    for k, bed in enumerate(train.beds[:-1], 1):
        gas, level = bed.product, float(bed.product.temperature)
        activity = greatest_activity(matter, gas.flows, level, float(gas.pressure))
        if activity > 1.0 and level > CARBON_FORMS_ABOVE:
            text = (
                f"carbon activity {activity:.3g} behind bed {k}: soot can form; more steam or "
                "hydrogen lowers it"
            )
            yield Caution("carbon-activity", text)
