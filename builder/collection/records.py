"""Records of the collection: what the files say, as typed values. Nothing here is computed."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Literal as OneOf

from builder.chem.weights import AtomicWeight
from builder.read.document import Document, Path
from builder.read.findings import Finding, Place
from builder.read.printed import Printed

Evidence = OneOf["open-copy", "recalled", "computed", "estimated", "measured-here"]

# One standard deviation from a printed ±, by what the source says the ± covers. Where the source
# does not say, the ± is taken as one standard deviation, as most papers mean it (DEVELOPERS.md).
COVERAGE_FACTOR = {"95 %": 1.96, "one sigma": 1.0, "not stated": 1.0}


@dataclass(frozen=True)
class Origin:
    """File and path inside it that a record was read from; for findings and digests."""

    document: Document
    path: Path

    def place(self, *keys: str | int) -> Place:
        return self.document.place((*self.path, *keys))


@dataclass(frozen=True)
class Uncertainty:
    """Three states: a number with its coverage, exact, or not stated. Never 0 for unknown."""

    state: OneOf["number", "exact", "not stated"]
    plus_minus: float | None = None
    text: str = ""
    coverage: str = ""

    @property
    def standard(self) -> float | None:
        """Standard uncertainty in the unit of the value; None where not stated."""
        if self.state == "exact":
            return 0.0
        if self.plus_minus is None:
            return None
        return self.plus_minus / COVERAGE_FACTOR[self.coverage]

    def words(self) -> str:
        if self.state != "number":
            return self.state
        return f"± {self.text} ({self.coverage})"


NOT_STATED = Uncertainty("not stated")


@dataclass(frozen=True)
class Citation:
    source: str
    locator: str
    evidence: Evidence
    via: str | None = None
    where: str | None = None


@dataclass(frozen=True)
class Figure:
    """A number as the source printed it, with what it is the number of."""

    quantity: str  # ksp, pksp, log10-k, gibbs-energy, solubility
    printed: Printed
    unit: str | None
    solid_as: str | None  # formula a mass refers to, where not the salt's own
    solid: str | None  # 'not stated' or 'other', where it is not surely this solid
    reaction: str | None  # where the source wrote another reaction
    temperature_c: float | None
    medium: str
    uncertainty: Uncertainty


@dataclass(frozen=True)
class Determination:
    id: str
    figure: Figure | None  # None: computed from formation properties
    table: str | None
    citation: Citation
    reduced_with: str | None
    note: str | None
    origin: Origin = field(compare=False)


@dataclass(frozen=True)
class Delta:
    """A printed enthalpy or heat-capacity change, in J/mol or J/(mol K)."""

    text: str
    unit: str
    value: float
    uncertainty: Uncertainty  # its plus_minus is in J too


@dataclass(frozen=True)
class Law:
    id: str
    kind: OneOf["enthalpy", "heat-capacity", "formation", "expression", "points", "water"]
    citation: Citation
    range_c: tuple[float, float] | None
    determination: str | None = None
    delta_h: Delta | None = None
    delta_cp: Delta | None = None
    table: str | None = None
    terms: Mapping[str, Printed] | None = None
    uncertainty: Uncertainty = NOT_STATED
    determinations: tuple[str, ...] = ()
    interpolation_only: bool = False
    note: str | None = None
    origin: Origin | None = field(default=None, compare=False)


@dataclass(frozen=True)
class Choice:
    determination: str
    law: str
    reason: str


@dataclass(frozen=True)
class Salt:
    id: str
    formula: str
    name: str
    other_names: tuple[str, ...]
    mineral: str | None
    cas: str | None
    solid: str
    reaction: str
    hazard: str | None
    mistaken_for: tuple[str, ...]
    needs: tuple[str, ...]
    choice: Choice
    determinations: Mapping[str, Determination]
    laws: Mapping[str, Law]
    entered: str
    second_look: str | None
    newest_date: str
    origin: Origin = field(compare=False)


@dataclass(frozen=True)
class Ion:
    formula: str
    name: str
    other_names: tuple[str, ...]
    size_angstrom: float
    linear: float  # kg/mol, 0 where only a size is known
    size_citation: Citation
    origin: Origin = field(compare=False)


@dataclass(frozen=True)
class SideReaction:
    id: str
    forms: str
    reaction: str
    figure: Figure
    citation: Citation
    law: Law
    law_evidence: str
    stands_beside: tuple[str, ...]
    gas_per: str | None  # unit of pressure of a gas in the reaction: atm or bar
    note: str | None
    origin: Origin = field(compare=False)


@dataclass(frozen=True)
class NoPairs:
    """A statement that certain ions do not associate noticeably."""

    id: str
    cations: tuple[str, ...]
    anions: tuple[str, ...]
    reason: str
    source: str
    origin: Origin = field(compare=False)


@dataclass(frozen=True)
class Electrolyte:
    formula: str
    name: str
    dissolves: str
    origin: Origin = field(compare=False)


@dataclass(frozen=True)
class Hazard:
    id: str
    words: str
    care: str
    source: str
    origin: Origin = field(compare=False)


@dataclass(frozen=True)
class Source:
    """A bibliographic record; `facts` keeps the CSL-JSON keys as written."""

    id: str
    kind: str
    family: str
    title: str
    facts: Mapping[str, object] = field(compare=False)
    origin: Origin = field(compare=False)


@dataclass(frozen=True)
class FormationEntry:
    """Formation properties at 298.15 K as printed (text; None where not stated)."""

    of: str
    gibbs_kj_mol: Printed | None
    enthalpy_kj_mol: Printed | None
    entropy_j_mol_k: Printed | None
    heat_capacity_j_mol_k: Printed | None


@dataclass(frozen=True)
class FormationTable:
    id: str
    source: str
    evidence: Evidence
    where: str
    entries: Mapping[str, FormationEntry]
    origin: Origin = field(compare=False)


@dataclass(frozen=True)
class Collection:
    """All constant files read together, keyed by id (ions by formula)."""

    salts: Mapping[str, Salt]
    ions: Mapping[str, Ion]
    side_reactions: Mapping[str, SideReaction]
    no_pairs: Mapping[str, NoPairs]
    electrolytes: Mapping[str, Electrolyte]
    hazards: Mapping[str, Hazard]
    sources: Mapping[str, Source]
    formation: Mapping[str, FormationTable]
    weights: Mapping[str, AtomicWeight]
    required: tuple[str, ...]  # ids of salts that a laboratory must find
    findings: tuple[Finding, ...]
    files: Mapping[str, bytes] = field(compare=False)
