"""The design file read and typed: every problem at once, every default named."""

from __future__ import annotations

import hashlib
import json
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import Any, TypeVar

from parts import plausible, plausible_studies, records, records_studies
from parts.catalogue import Catalogue
from parts.design import (
    BearingWish,
    ChainEndWish,
    Design,
    DiscWish,
    FitsWish,
    LinkWish,
    LockPinWish,
    Material,
    PinWish,
    ShaftWish,
    SheavePinWish,
)
from parts.far_ends.base import FarEnd
from parts.far_ends.reading import Found, Source
from parts.far_ends.registry import KINDS
from parts.problems import DesignRefused, Problem, in_order, key_of, nearest, written
from parts.quantities import problem_with_inches
from parts.schema import (
    NOT_YET,
    TABLES,
    BearingsTable,
    BearingTable,
    ChainEndTable,
    ClearancesTable,
    DesignTable,
    DiscTable,
    EnclosureTable,
    FatigueTable,
    FitsTable,
    FrictionTable,
    LinkTable,
    LockPinTable,
    MaterialTable,
    MechanismTable,
    MovingTable,
    PinTable,
    ShaftTable,
    SheaveTable,
    SpringTable,
    StopTable,
    TargetsTable,
    unknown_key,
    validate,
)
from parts.schema_studies import DriveTable, TolerancesTable
from parts.schema_values import Table
from parts.spring_table import SpringFile, read_spring_csv, spring_table_problems
from parts.toml_source import read_source
from parts.trade_names import listed_material

_KERNEL = ("mechanism", "sheave", "spring", *KINDS)  # the mechanics need all of these
_UNREADABLE_CURVE = [(0.0, 0.0), (1.0, 1.0)]  # stands for a curve that has been refused, so that nothing asks for one
T = TypeVar("T", bound=Table)


@dataclass(frozen=True)
class Reading:
    """What a design file gave.

    ``design`` is there as soon as mechanism, sheave, spring and chain can be used, so that whoever knows the mechanics
    can add what is wrong with them; nothing is to be built from it while there are ``problems``. ``locate`` gives the
    line of a key in the file.
    """

    design: Design | None
    problems: tuple[Problem, ...]
    locate: Callable[[str], int | None]


def read_design(path: Path, catalogue: Catalogue) -> Reading:
    """Read a design file. Never raises for what is in the file, or for its absence: that is among the problems."""
    try:
        source = read_source(path)
    except DesignRefused as refusal:
        return Reading(None, refusal.problems, lambda key: None)
    draft = _Draft(source.values, path.parent, catalogue)
    design = draft.design()
    curve = draft.spring_file
    problems = draft.problems if curve is None else [curve.placed(problem) for problem in draft.problems]
    if draft.units == "us":
        problems = [problem_with_inches(problem) for problem in problems]
    located = (
        problem if problem.file or not problem.key else replace(problem, line=source.line(problem.key))
        for problem in problems
    )
    return Reading(design, in_order(located), source.line)


@dataclass
class _Draft:
    """One reading under way: the file's tables, and what has been found so far."""

    raw: dict[str, Any]
    folder: Path
    catalogue: Catalogue
    problems: list[Problem] = field(default_factory=list)
    defaults: records.Defaults = field(default_factory=records.Defaults)
    tables: dict[str, Table] = field(default_factory=dict)
    own_materials: dict[str, tuple[MaterialTable, Material]] = field(default_factory=dict)
    spring_file: SpringFile | None = None
    far: Found = field(default_factory=Found)

    def design(self) -> Design | None:
        if self._is_newer():
            return None
        self._check_the_tables_there_are()
        self._load_spring_file()
        for name, model in TABLES.items():
            self.tables[name], found = validate(model, (name,), self.raw.get(name, {}))
            self.problems += found
        self._load_own_materials()
        with_material = [
            name for name, table in self.tables.items() if name not in KINDS and hasattr(table, "material")
        ]
        materials = {name: self._material(name) for name in with_material}
        self.far = self._far_end()
        far_end = self.far.far_end
        pitch_radius = self._pitch_radius(far_end)
        self._check_together(pitch_radius)
        broken = self._kernel_is_broken()
        sheave_pin = self._sheave_pin()
        if far_end is None or broken or (far_end.over_sheave and pitch_radius is None):
            return None
        identity = records.identity(self._table(DesignTable, "design"), self.defaults)
        design = Design(
            identity=identity,
            mechanism=records.mechanism(self._table(MechanismTable, "mechanism"), self.defaults),
            sheave=(
                records.sheave(self._table(SheaveTable, "sheave"), pitch_radius, far_end, self.defaults)
                if far_end.over_sheave and pitch_radius is not None
                else None
            ),
            spring=records.spring(
                self._table(SpringTable, "spring"), self.spring_file.name if self.spring_file else None, self.defaults
            ),
            far_end=far_end,
            disc=DiscWish(**_sizes(self._table(DiscTable, "disc")), material=materials["disc"]),
            link=LinkWish(**_sizes(self._table(LinkTable, "link")), material=materials["link"]),
            stop=records.stop(self._table(StopTable, "stop"), materials["stop"]),
            crank_pin=PinWish(**_sizes(self._table(PinTable, "crank_pin")), material=materials["crank_pin"]),
            chain_pin=PinWish(**_sizes(self._table(PinTable, "chain_pin")), material=materials["chain_pin"]),
            chain_end=self.far.end
            or ChainEndWish(**_sizes(self._table(ChainEndTable, "chain_end")), material=materials["chain_end"]),
            plate_gap=self._table(ClearancesTable, "clearances").plate_gap,
            friction=records.friction(self._table(FrictionTable, "friction"), self.defaults),
            targets=records.targets(self._table(TargetsTable, "targets"), far_end, self.defaults),
            enclosure=(
                records.enclosure(self._table(EnclosureTable, "enclosure")) if "enclosure" in self.raw else None
            ),
            moving=records.moving(self._table(MovingTable, "moving"), self.defaults) if "moving" in self.raw else None,
            digest=self._digest(),
            own_materials=tuple(material for _, material in self.own_materials.values()),
            fits=FitsWish(**_sizes(self._table(FitsTable, "fits"))),
            shaft=ShaftWish(**_sizes(self._table(ShaftTable, "shaft")), material=materials["shaft"]),
            main_bearing=_bearing(self._table(BearingsTable, "bearings").main),
            sheave_bearing=_bearing(self._table(BearingsTable, "bearings").sheave),
            sheave_pin=sheave_pin,
            lock_pin=(
                LockPinWish(**_sizes(self._table(LockPinTable, "lock_pin")), material=materials["lock_pin"])
                if "lock_pin" in self.raw
                else None
            ),
            fatigue=records.fatigue(self._table(FatigueTable, "fatigue"), self.defaults)
            if "fatigue" in self.raw
            else None,
            tolerances=(
                records_studies.tolerances(self._table(TolerancesTable, "tolerances"), self.defaults)
                if "tolerances" in self.raw
                else None
            ),
            drive=records_studies.drive(self._table(DriveTable, "drive"), self.defaults)
            if "drive" in self.raw
            else None,
        )
        places = [*TABLES, "materials"]
        assumed = sorted(self.defaults.assumed, key=lambda a: places.index(a.key.partition(".")[0]))
        return replace(design, assumed=tuple(assumed))

    def _table(self, model: type[T], name: str) -> T:
        found = self.tables[name]
        assert isinstance(found, model)
        return found

    def _raw_table(self, name: str) -> Mapping[str, object]:
        found = self.raw.get(name)
        return found if isinstance(found, dict) else {}

    @property
    def units(self) -> str:
        """What the file asks to be shown, whatever else is wrong with it."""
        return "us" if self._raw_table("design").get("units") == "us" else "metric"

    def _is_newer(self) -> bool:
        """A file of a newer format is refused by its number alone: the rest of it may well be right in that format."""
        given = self._raw_table("design").get("format", 1)
        found = validate(DesignTable, ("design",), {"format": given})[1]
        newer = [problem for problem in found if problem.text]
        self.problems += newer
        return bool(newer)

    def _check_the_tables_there_are(self) -> None:
        known = [*TABLES, "materials"]
        for name in self.raw:
            if name in NOT_YET:
                why = f"this version does not evaluate [{name}] yet"
                self.problems.append(Problem(name, None, f"[{name}]", "a design without it", why))
            elif name not in known:
                self.problems.append(unknown_key((name,), known))
        for name, needed in plausible.NEEDED.items():
            self.problems += plausible.missing_keys((name,), self.raw.get(name), needed)

    def _load_spring_file(self) -> None:
        """The points of a CSV file in the place of its name, so that both kinds of table go the same way on."""
        spring = self._raw_table("spring")
        name = spring.get("table")
        if isinstance(name, str):
            self.spring_file = read_spring_csv(self.folder, name)
            self.problems += self.spring_file.problems
            points = _UNREADABLE_CURVE if self.spring_file.problems else self.spring_file.points
            curve = [list(point) for point in points]
            self.raw = self.raw | {"spring": {**spring, "table": curve}}

    def _check_together(self, pitch_radius: float | None) -> None:
        mechanism, spring = self._table(MechanismTable, "mechanism"), self._table(SpringTable, "spring")
        self.problems += plausible.mechanism_problems(mechanism)
        self.problems += plausible.sheave_problems(mechanism, self._table(SheaveTable, "sheave"), pitch_radius)
        if spring.table is not None:
            self.problems += spring_table_problems(spring.table)
        self.problems += plausible.stop_problems(self._table(StopTable, "stop"), self._raw_table("stop"))
        for name in ("link", "stop", "crank_pin", "chain_pin"):
            self.problems += plausible.hardening_problems(name, self._raw_table(name))
        if isinstance(raw := self.raw.get("spring"), dict):
            self.problems += plausible.spring_problems(spring, raw)
        if isinstance(raw := self.raw.get("enclosure"), dict):
            self.problems += plausible.enclosure_problems(self._table(EnclosureTable, "enclosure"), raw)
        if isinstance(raw := self.raw.get("moving"), dict):
            self.problems += plausible.moving_problems(self._table(MovingTable, "moving"), raw)
        if isinstance(raw := self.raw.get("fatigue"), dict):
            self.problems += plausible.missing_keys(("fatigue",), raw, ("shots",))
        if isinstance(raw := self.raw.get("drive"), dict):
            self.problems += plausible_studies.drive_problems(self._table(DriveTable, "drive"), raw)
        if isinstance(raw := self.raw.get("tolerances"), dict):
            self.problems += plausible_studies.tolerance_problems(
                self._table(TolerancesTable, "tolerances"), raw, self.raw, self._table(MechanismTable, "mechanism")
            )

    def _kernel_is_broken(self) -> bool:
        return any(
            problem.key.partition(".")[0] in _KERNEL and not problem.text.startswith("unknown")
            for problem in self.problems
        )

    def _digest(self) -> str:
        """SHA-256 of the values that were read, in the units used inside; layout and comments do not touch it."""
        values: dict[str, object] = {
            name: found
            for name, table in self.tables.items()
            if (found := table.model_dump(by_alias=True, exclude_none=True, exclude={"format"}))
        }
        values["materials"] = {
            name: table.model_dump(by_alias=True, exclude_none=True) for name, (table, _) in self.own_materials.items()
        }
        text = json.dumps(values, sort_keys=True, separators=(",", ":"), allow_nan=False)
        return hashlib.sha256(text.encode()).hexdigest()

    def _far_end(self) -> Found:
        """The one far end that the design has, and what is wrong with its table."""
        named = [name for name in KINDS if name in self.raw]
        if not named:
            tables = [f"[{name}]" for name in KINDS]
            accepted = f"one of {', '.join(tables[:-1])} or {tables[-1]}: what leads from the chain pin to the spring"
            self.problems.append(Problem("chain", None, "nothing", accepted, "missing"))
            return Found()
        for name in named[1:]:
            accepted = f"a design without it; or without [{named[0]}]"
            self.problems.append(Problem(name, None, f"[{named[0]}] and [{name}]", accepted, "two far ends"))
        kind, mechanism = KINDS[named[0]], self._table(MechanismTable, "mechanism")
        raw = self._raw_table(kind.name)
        source = Source(raw, self.catalogue, self._material, mechanism.crank_radius, mechanism.link_length)
        if isinstance(self.raw[kind.name], dict):
            found = kind.read(self.tables[kind.name], source)
        else:
            found = Found()  # said already
        self.problems += found.problems
        self.defaults.assumed += found.assumed
        if len(named) > 1:
            return Found()
        if found.far_end is not None:
            self._check_the_tables_of(found.far_end)
        return found

    def _check_the_tables_of(self, far_end: FarEnd) -> None:
        """A sheave where the far end runs over one, and neither that nor a chain end where it does not."""
        if far_end.over_sheave:
            self.problems += plausible.missing_keys(("sheave",), self.raw.get("sheave"), plausible.OF_A_SHEAVE)
            return
        for name in ("sheave", "chain_end"):
            if name in self.raw:
                text = f"a {far_end.noun} has none"
                self.problems.append(
                    Problem(name, None, f"[{name}]", f"a design without it; see [{far_end.table}]", text)
                )

    def _pitch_radius(self, far_end: FarEnd | None) -> float | None:
        given = self._table(SheaveTable, "sheave").pitch_radius
        if given is not None or "pitch_radius" in self._raw_table("sheave"):
            return given
        return None if far_end is None else far_end.usual_sheave[0]

    def _load_own_materials(self) -> None:
        rows = self.raw.get("materials", {})
        if not isinstance(rows, dict):
            self.problems.append(Problem("materials", None, written(rows), "tables, [materials.NAME]"))
            return
        for name, row in rows.items():
            path = ("materials", name)
            given, found = validate(MaterialTable, path, row)
            self.problems += found
            self.problems += plausible.missing_keys(path, row, plausible.NEEDED_OF_A_MATERIAL)
            self.problems += plausible.material_problems(path, given)
            raw = row if isinstance(row, dict) else {}
            self.own_materials[name] = given, records.own_material(name, key_of(path), given, raw, self.defaults)

    def _sheave_pin(self) -> SheavePinWish:
        given = self._table(SheaveTable, "sheave")
        return SheavePinWish(given.pin_diameter, given.cheek, self._material("sheave", "pin_material"))

    def _material(self, table: str, key: str = "material") -> Material | None:
        wanted: str | None = getattr(self.tables[table], key, None)
        if wanted is None:
            return None
        if wanted in self.own_materials:
            return self.own_materials[wanted][1]
        if wanted in self.catalogue.materials:
            return self.catalogue.materials[wanted]
        names = [*self.own_materials, *self.catalogue.materials]
        hint = listed_material(wanted, self.catalogue.materials)
        if hint is None and (near := nearest(wanted, names)):
            hint = f"{near} (the nearest)"
        accepted = f"{hint}; " if hint else ""
        accepted += f"one of {', '.join(names)}; or a table [materials.NAME] of one's own"
        self.problems.append(Problem(f"{table}.{key}", None, written(wanted), accepted, "not listed"))
        return None


def _bearing(table: BearingTable | None) -> BearingWish:
    return BearingWish() if table is None else BearingWish(**_sizes(table))


def _sizes(table: Table) -> dict[str, Any]:
    return {key: value for key, value in table if key != "material"}
