"""From the words of a ``costs:`` block to figures in SI, checked against the equipment.

Sizes and rates are addresses as everywhere else; here they are aimed, so that the account has only
to multiply. What is wrong becomes a fault at its place.
"""

from __future__ import annotations

from collections.abc import Iterator
from collections.abc import Mapping as AnyMapping
from dataclasses import dataclass, field
from typing import Literal

from chainflow.basis.faults import Fault, Place
from chainflow.basis.names import shorten, suggest
from chainflow.basis.quantities import QuantityFault, parse
from chainflow.basis.units import resolve, usual_unit
from chainflow.equipment.base import Equipment
from chainflow.equipment.boundary import Product, Supply
from chainflow.equipment.power import Grid
from chainflow.equipment.stores import Store
from chainflow.equipment.sunlight import Sunlight
from chainflow.flowsheet.addresses import AddressError, parse_result, parse_setting
from chainflow.flowsheet.costs import YEAR, CostBlock, PieceCost, Prices
from chainflow.flowsheet.money import Money
from chainflow.flowsheet.tree import Mapping, place_at

_RATES = {"W": "J", "mol/s": "mol", "kg/s": "kg", "m3/s": "m3"}  # unit of a rate -> what adds up
_PRICED = {"power": ("J",), "heat": ("J",), "cold": ("J",), "material": ("kg", "mol", "J")}


@dataclass(frozen=True, slots=True)
class Measure:
    """An address whose number the costs go by."""

    address: str
    path: tuple[str, ...]  # of a setting; empty for a result
    piece: str
    unit: str


@dataclass(frozen=True, slots=True)
class PieceFigures:
    """One piece of equipment; money in the file's currency, size in SI, times [a]."""

    name: str
    size: Measure
    reference: float
    purchase: float  # at the reference size, in money of the block's year
    exponent: float
    installation: float
    lifetime: float
    fixed_share: float  # of the installed cost, a year
    fixed_amount: float  # a year
    variable: float  # per J, mol, kg or m3 of what `counted` names
    counted: Measure | None


@dataclass(frozen=True, slots=True)
class CostPlan:
    """All that the costs of a plant are worked out from; `hours` [s] a year."""

    currency: str
    interest: float
    lifetime: float  # [a]
    hours: float
    year: int | None
    pieces: tuple[PieceFigures, ...] = ()
    bought: Prices = field(default_factory=Prices)
    sold: Prices = field(default_factory=Prices)


class CostReader:
    """Aims the addresses of one block; what is wrong goes into `faults`."""

    def __init__(
        self,
        block: CostBlock,
        node: Mapping,
        pieces: AnyMapping[str, Equipment],
        broken: frozenset[str],
        components: tuple[str, ...],
        faults: list[Fault],
    ) -> None:
        self.block, self.node = block, node
        self.pieces, self.broken = pieces, broken  # broken: equipment with faults of its own
        self.components, self.faults = components, faults

    def plan(self) -> CostPlan:
        """Return the figures; entries with faults are left out."""
        block = self.block
        self._check_years()
        self._check_prices("bought", block.bought, (Supply, Store))
        self._check_prices("sold", block.sold, (Product,))
        entries = block.equipment.items()
        figures = [self._figures(name, cost) for name, cost in entries if name not in self.broken]
        return CostPlan(
            currency=block.currency,
            interest=block.interest,
            lifetime=block.lifetime / YEAR,
            hours=block.hours,
            year=block.year,
            pieces=tuple(one for one in figures if one is not None),
            bought=block.bought,
            sold=block.sold,
        )

    def _fault(self, code: str, text: str, *path: str, at_key: bool = False) -> None:
        spot: Place = place_at(self.node, path, at_key=at_key)
        where = ".".join(("costs", *path))
        self.faults.append(Fault(code, f"{where}: {text}").located(spot))

    # --- years and prices ----------------------------------------------------------------------

    def _check_years(self) -> None:
        for name, cost in self.block.equipment.items():
            if cost.year is None or self.block.year == cost.year:
                continue
            path = ("equipment", name, "year")
            if self.block.year is None:
                text = "the costs have no 'year' of their own to compare with: give one"
                self._fault("wrong-setting", text, *path)
                continue
            missing = [y for y in (cost.year, self.block.year) if y not in self.block.index]
            if missing:
                years = " and ".join(map(str, missing))
                self._fault(
                    "wrong-setting", f"'index' of the costs has no figure for {years}", *path
                )

    def _check_prices(self, side: str, prices: Prices, senders: tuple[type, ...]) -> None:
        for what in ("power", "heat", "cold"):
            price: Money | None = getattr(prices, what)
            if price is not None:
                self._check_unit(price, what, side, what)
        if side == "sold" and prices.cold is not None:
            self._fault("wrong-setting", "a plant sells no cold: remove it", side, "cold")
        for name, price in prices.material.items():
            self._check_unit(price, "material", side, "material", name)
            piece = self.pieces.get(name)
            if name in self.broken:
                continue
            if piece is None:
                text = f"there is no equipment {shorten(name)}{suggest(name, self.pieces)}"
                self._fault("unknown-equipment", text, side, "material", name, at_key=True)
            elif not isinstance(piece, senders):
                kinds = " or a ".join(str(cls.kind) for cls in senders if hasattr(cls, "kind"))
                done = "brings nothing from outside" if side == "bought" else "sells nothing"
                text = f"{name} ({piece.kind}) {done}, wanted a {kinds}"
                self._fault("wrong-setting", text, side, "material", name, at_key=True)

    def _check_unit(self, price: Money, what: str, *path: str) -> None:
        if price.per not in _PRICED[what]:
            per = {"J": "MWh", "kg": "t", "mol": "kmol"}
            wanted = " or ".join(f"per {per[unit]}" for unit in _PRICED[what])
            self._fault(
                "wrong-quantity", f"a price per {price.per} does not fit, wanted {wanted}", *path
            )

    # --- equipment -----------------------------------------------------------------------------

    def _figures(self, name: str, cost: PieceCost) -> PieceFigures | None:
        if name not in self.pieces:
            text = f"there is no equipment {shorten(name)}{suggest(name, self.pieces)}"
            self._fault("unknown-equipment", text, "equipment", name, at_key=True)
            return None
        size = self._measure(name, "size", cost.size)
        if size is None:
            return None
        scale = self._scale(name, cost, size)
        counted = self._counted(name, cost, size)
        if scale is None or (cost.variable is not None and counted is None):
            return None
        reference, purchase = scale
        fixed = cost.fixed or self.block.fixed or Money(0.0, "share")
        installation = (
            cost.installation if cost.installation is not None else self.block.installation
        )
        lifetime = cost.lifetime if cost.lifetime is not None else self.block.lifetime
        known = cost.year is None or {cost.year, self.block.year} <= {*self.block.index, cost.year}
        return PieceFigures(
            name=name,
            size=size,
            reference=reference,
            purchase=purchase * (self.block.index_ratio(cost.year) if known else 1.0),
            exponent=cost.exponent,
            installation=installation,
            lifetime=lifetime / YEAR,
            fixed_share=fixed.value if fixed.per == "share" else 0.0,
            fixed_amount=fixed.value if fixed.per != "share" else 0.0,
            variable=cost.variable.value if cost.variable is not None else 0.0,
            counted=counted,
        )

    def _measure(self, name: str, key: Literal["size", "per"], address: str) -> Measure | None:
        if address.partition(".")[0] in self.broken:
            return None
        try:
            setting = parse_setting(address, self.pieces)
        except AddressError:
            pass
        else:
            return Measure(address, setting.path, setting.piece, setting.unit or "1")
        try:
            result = parse_result(address, self.pieces, self.components)
        except AddressError as problem:
            self._fault("unknown-address", str(problem), "equipment", name, key)
            return None
        return Measure(address, (), result.piece, result.unit)

    def _scale(self, name: str, cost: PieceCost, size: Measure) -> tuple[float, float] | None:
        """Return the reference size [SI] and the purchase cost there."""
        path = ("equipment", name)
        shown = f"{cost.size} in {size.unit}"
        if not cost.purchase.per:
            if cost.reference is None:
                text = f"'reference' is missing: for which size ({shown}) is this?"
                self._fault("missing-setting", text, *path, "purchase")
                return None
            reference = self._reference(name, cost.reference, size)
            return None if reference is None else (reference, cost.purchase.value)
        if resolve(cost.purchase.per).exponents != resolve(size.unit).exponents:
            per = usual_unit(resolve(size.unit).exponents)
            text = (
                f"a cost per {cost.purchase.per} does not fit the size {shown}: "
                f"write it per {per}, or as one amount with the 'reference' size it is for"
            )
            self._fault("wrong-quantity", text, *path, "purchase")
            return None
        if cost.reference is None:
            if cost.exponent != 1.0:
                text = "a cost per size with an exponent needs its 'reference' size"
                self._fault("missing-setting", text, *path, "exponent")
                return None
            return 1.0, cost.purchase.value
        reference = self._reference(name, cost.reference, size)
        return None if reference is None else (reference, cost.purchase.value * reference)

    def _reference(self, name: str, text: str, size: Measure) -> float | None:
        try:
            return parse(text, size.unit, gt=0.0)
        except QuantityFault as problem:
            self._fault("wrong-quantity", str(problem), "equipment", name, "reference")
            return None

    def _counted(self, name: str, cost: PieceCost, size: Measure) -> Measure | None:
        """Return the rate that the variable cost counts."""
        if cost.variable is None:
            return None
        counted = size if cost.per is None else self._measure(name, "per", cost.per)
        if counted is None:
            return None
        amount = _RATES.get(counted.unit)
        path = ("equipment", name, "variable" if cost.per is None else "per")
        if amount is None:
            text = (
                f"{counted.address} is in {counted.unit} and no rate: name in 'per' the power or "
                "flow that the variable cost counts"
            )
            self._fault("wrong-setting", text, *path)
            return None
        if cost.variable.per != amount:
            text = (
                f"a cost per {cost.variable.per} does not fit {counted.address} in {counted.unit}"
            )
            self._fault("wrong-quantity", text, "equipment", name, "variable")
            return None
        return counted


def without_figures(plan: CostPlan, pieces: AnyMapping[str, Equipment]) -> Iterator[str]:
    """Yield the equipment that the costs say nothing about, the plant's border left out."""
    priced = {one.name for one in plan.pieces}
    for name, piece in pieces.items():
        free = piece.family in ("boundary", "junctions") or isinstance(piece, Grid | Sunlight)
        if not free and name not in priced:
            yield name


__all__ = ["CostPlan", "CostReader", "Measure", "PieceFigures", "without_figures"]
