"""The parts that records share: printed figures, citations, uncertainties, laws."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from typing import Any, cast

from builder.collection.records import (
    NOT_STATED,
    Citation,
    Delta,
    Determination,
    Figure,
    Ion,
    Law,
    Origin,
    Uncertainty,
)
from builder.read.findings import Finding, Place
from builder.read.printed import Printed, PrintedError, parse_printed
from builder.read.shape import Shapes

QUANTITIES = ("ksp", "pksp", "log10-k", "gibbs-energy", "solubility")
LAW_KINDS = ("enthalpy", "heat-capacity", "formation", "expression", "points")
SIDE_LAW_KINDS = ("enthalpy", "heat-capacity", "expression", "water")

# To joules; the calorie is the thermochemical one, 4.184 J exactly.
JOULES = {
    "kJ/mol": 1e3,
    "J/mol": 1.0,
    "kcal/mol": 4184.0,
    "cal/mol": 4.184,
    "J/(mol K)": 1.0,
    "kJ/(mol K)": 1e3,
    "cal/(mol K)": 4.184,
}


class Parts:
    """Makes parts of records and appends what is wrong to the findings given."""

    def __init__(self, shapes: Shapes, findings: list[Finding]) -> None:
        self.shapes = shapes
        self.findings = findings

    def report(self, code: str, place: Place, found: str, cure: str) -> None:
        self.findings.append(Finding("error", code, place, found, cure))

    def _sound(self, shape: str, origin: Origin, *keys: str | int) -> bool:
        found = self.shapes.check(shape, origin.document, (*origin.path, *keys))
        self.findings += found
        return not found

    def number(self, place: Place, text: str, decimal_comma: bool = False) -> Printed | None:
        """A printed number; None with a finding where the text is none."""
        try:
            return parse_printed(text, decimal_comma)
        except PrintedError as wrong:
            self.report("chem-printed-number", place, wrong.found, wrong.cure)
            return None

    def uncertainty(self, origin: Origin, value: Any, *keys: str | int) -> Uncertainty:
        if isinstance(value, str):
            return Uncertainty(cast(Any, value))
        if not self._sound("uncertainty", origin, *keys):
            return NOT_STATED
        printed = self.number(origin.place(*keys, "plus_minus"), value["plus_minus"])
        if printed is None:
            return NOT_STATED
        return Uncertainty("number", printed.value, value["plus_minus"], value["coverage"])

    def citation(self, origin: Origin, value: Any) -> Citation | None:
        if not self._sound("from", origin, "from"):
            return None
        return Citation(
            value["source"],
            value["locator"],
            value["evidence"],
            value.get("via"),
            value.get("where"),
        )

    def figure(self, origin: Origin, value: Mapping[str, Any]) -> Figure | None:
        """The `printed:` map of a determination or side reaction."""
        quantity = value.get("quantity")
        if quantity not in QUANTITIES:
            self.report(
                "chem-quantity",
                origin.place("printed"),
                f"the quantity {quantity!r}",
                f"write one of {', '.join(QUANTITIES)}",
            )
            return None
        if not self._sound(f"printed-{quantity}", origin, "printed"):
            return None
        comma = bool(value.get("decimal_comma", False))
        printed = self.number(origin.place("printed", "as"), value["as"], comma)
        uncertainty = self.uncertainty(origin, value["uncertainty"], "printed", "uncertainty")
        if printed is None:
            return None
        t = value["temperature_c"]
        return Figure(
            quantity=quantity,
            printed=printed,
            unit=value.get("unit"),
            solid_as=value.get("solid_as"),
            solid=value.get("solid"),
            reaction=value.get("reaction"),
            temperature_c=None if isinstance(t, str) else float(t),
            medium=value["medium"],
            uncertainty=uncertainty,
        )

    def determination(self, origin: Origin, value: Mapping[str, Any]) -> Determination | None:
        if not self._sound("determination", origin):
            return None
        figure, table = None, None
        if ("printed" in value) == ("computed" in value):
            self.report(
                "chem-printed-or-computed",
                origin.document.missing_place(origin.path, "printed", ("id", "printed", "from")),
                f"a determination {value['id']!r} with both or neither of printed and computed",
                "write printed: with the characters of the source, or computed: with the rule",
            )
            return None
        if "printed" in value:
            figure = self.figure(origin, value["printed"])
            if figure is None:
                return None
        else:
            if not self._sound("computed", origin, "computed"):
                return None
            table = value["computed"]["table"]
        citation = self.citation(origin, value["from"])
        if citation is None:
            return None
        return Determination(
            value["id"],
            figure,
            table,
            citation,
            value.get("reduced_with"),
            value.get("note"),
            origin,
        )

    def delta(self, origin: Origin, value: Mapping[str, Any] | None, *keys: str) -> Delta | None:
        if value is None or not self._sound("delta", origin, *keys):
            return None
        printed = self.number(origin.place(*keys, "as"), value["as"])
        if printed is None:
            return None
        scale = JOULES[value["unit"]]
        u = self.uncertainty(origin, value["uncertainty"], *keys, "uncertainty")
        if u.plus_minus is not None:
            u = replace(u, plus_minus=u.plus_minus * scale)
        return Delta(value["as"], value["unit"], printed.value * scale, u)

    def law(self, origin: Origin, value: Mapping[str, Any]) -> Law | None:
        """A law of a salt."""
        kind = value.get("kind")
        if kind not in LAW_KINDS:
            self.report(
                "chem-law-kind",
                origin.place(),
                f"a law of the kind {kind!r}",
                f"write one of {', '.join(LAW_KINDS)}",
            )
            return None
        if not self._sound(f"law-{kind}", origin):
            return None
        before = len(self.findings)
        citation = self.citation(origin, value["from"])
        low, high = (float(x) for x in value["range_c"])
        if not low < high:
            self.report(
                "chem-range",
                origin.place("range_c"),
                f"a range from {low:g} to {high:g} °C",
                "write the lower temperature first",
            )
        law = Law(
            id=value["id"],
            kind=kind,
            citation=cast(Citation, citation),
            range_c=(low, high),
            determination=value.get("determination"),
            delta_h=self.delta(origin, value.get("delta_h"), "delta_h"),
            delta_cp=self.delta(origin, value.get("delta_cp"), "delta_cp"),
            table=value.get("table"),
            terms=self._terms(origin, value.get("terms"), "terms"),
            uncertainty=self.uncertainty(
                origin, value.get("uncertainty", "not stated"), "uncertainty"
            ),
            determinations=tuple(value.get("determinations", ())),
            interpolation_only=bool(value.get("interpolation_only", False)),
            note=value.get("note"),
            origin=origin,
        )
        return None if len(self.findings) > before else law

    def side_law(
        self, origin: Origin, value: Mapping[str, Any], cited: Citation | None
    ) -> Law | None:
        """The law of a side reaction; its source is that of the constant unless it names one."""
        kind = value.get("kind")
        if kind not in SIDE_LAW_KINDS:
            self.report(
                "chem-law-kind",
                origin.place("law"),
                f"a law of the kind {kind!r}",
                f"write one of {', '.join(SIDE_LAW_KINDS)}",
            )
            return None
        if cited is None or not self._sound(f"side-law-{kind}", origin, "law"):
            return None
        before = len(self.findings)
        range_c = value.get("range_c")
        law = Law(
            id="law",
            kind=cast(Any, kind),
            citation=replace(
                cited,
                source=value.get("source", cited.source),
                locator=value.get("locator", cited.locator),
                evidence=value.get("evidence", cited.evidence),
            ),
            range_c=None if range_c is None else (float(range_c[0]), float(range_c[1])),
            delta_h=self.delta(origin, value.get("delta_h"), "law", "delta_h"),
            delta_cp=self.delta(origin, value.get("delta_cp"), "law", "delta_cp"),
            terms=self._terms(origin, value.get("terms"), "law", "terms"),
        )
        return None if len(self.findings) > before else law

    def _terms(
        self, origin: Origin, value: Mapping[str, str] | None, *keys: str
    ) -> dict[str, Printed] | None:
        if value is None:
            return None
        read = {k: self.number(origin.place(*keys, k), text) for k, text in value.items()}
        return {k: number for k, number in read.items() if number is not None}

    def ion(self, origin: Origin, value: Mapping[str, Any]) -> Ion:
        size = value["size"]
        best = value.get("linear", size)
        return Ion(
            formula=value["formula"],
            name=value["name"],
            other_names=tuple(value["other_names"]),
            size_angstrom=float(best["angstrom"]),
            linear=float(best.get("b", 0.0)),
            size_citation=Citation(
                best["source"], best["locator"], best["evidence"], best.get("via")
            ),
            origin=origin,
        )
