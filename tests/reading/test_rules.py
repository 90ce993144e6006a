"""One failing example for every rule: a small invented collection, one edit, one finding.

The numbers of the collection (the folder `small`) are invented; formulae and molar masses are
real. The untouched collection has no finding at all. The expected place is where a piece of the
edited text stands.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path

import pytest

from builder.collection.folders import read_folders, shipped_folder
from builder.collection.inspection import (
    Inspection,
    inspect,
    inspect_files,
    inspect_salt,
    shipped_shapes,
)
from builder.collection.rules import CODES
from builder.read.findings import Finding
from builder.read.shape import Shapes

LEAD, GYPSUM = "salts/lead-sulfate.yaml", "salts/gypsum.yaml"
SIDE, IONS, SOURCES = "side_reactions/all.yaml", "ions/all.yaml", "sources/all.yaml"
TABLE, WEIGHTS, ELECTROLYTES = "formation/t.yaml", "weights/w.yaml", "electrolytes/e.yaml"

FOLDER = Path(__file__).resolve().parent / "small"
SMALL: Mapping[str, str] = {
    path.relative_to(FOLDER).as_posix(): path.read_text(encoding="utf-8")
    for path in sorted(FOLDER.rglob("*.yaml"))
}


@dataclass(frozen=True)
class Case:
    """In `file`, `old` becomes `new`; the finding stands where `at` begins in `at_file`."""

    code: str
    file: str
    old: str
    new: str
    at: str
    at_file: str = ""


FIRST = 'log10-k, as: "-7.80"'
CASES = (
    # formulae and reactions
    Case("chem-formula", LEAD, "formula: PbSO4", "formula: PbXO4", "XO4"),
    Case("chem-formula", TABLE, "of: Pb^2+", "of: Px^2+", "Px^2+"),
    Case("chem-spelling", GYPSUM, "formula: CaSO4·2H2O", "formula: CaSO4.2H2O", "CaSO4.2H2O"),
    Case("chem-spelling", IONS, "Na^+", "Na1^+", "Na1^+"),
    Case("chem-molar-mass", WEIGHTS, "  - {symbol: S, value: 32.06, plus_minus: 0.1}\n", "",
         "PbSO4\n", LEAD),
    Case("chem-reaction", LEAD, "= Pb^2+ +", "= Pb^2+ + 2X +", "X +"),
    Case("chem-reaction", ELECTROLYTES, "2Na^+ +", "2Qa^+ +", "Qa^+"),
    Case("chem-balance", LEAD, "= Pb^2+ +", "= Pb^3+ +", "PbSO4 = Pb^3+"),
    Case("chem-balance", SIDE, "= H^+ + OH^-", "= 2H^+ + OH^-", "H2O = 2H^+"),
    Case("chem-solid", LEAD, "reaction: PbSO4 =", "reaction: 2PbSO4 = PbSO4 +",
         "2PbSO4 = PbSO4"),
    Case("chem-solid", ELECTROLYTES, "formula: Na2SO4", "formula: NaSO4", '"Na2SO4 ='),
    Case("chem-unknown-form", IONS, "Ca^2+", "Ba^2+", "CaSO4·2H2O = ", GYPSUM),
    Case("chem-unknown-form", SIDE, "cations: [Ca^2+, ", "cations: [Sr^2+, ", "Sr^2+"),
    Case("chem-forms", SIDE, "forms: HSO4^-", "forms: HS^-", "HS^-\n"),
    Case("chem-form-twice", SIDE, "forms: HSO4^-\n    reaction: H^+ + SO4^2- = HSO4^-",
         "forms: OH^-\n    reaction: H2O = OH^- + H^+", "OH^-\n    reaction: H2O = OH^-"),
    Case("chem-form-circle", SIDE, "forms: HSO4^-\n    reaction: H^+ + SO4^2- = HSO4^-",
         "forms: SO4^2-\n    reaction: PbSO4(aq) = Pb^2+ + SO4^2-", "PbSO4(aq) = Pb^2+"),
    Case("chem-water-law", SIDE, "law: {kind: enthalpy, delta_h: {as: '50', unit: kJ/mol, "
         "uncertainty: not stated}", "law: {kind: water", "water, evidence: estimated"),
    Case("chem-water-missing", IONS, "formula: H^+", "formula: H3O^+", "CaSO4·2H2O = ",
         GYPSUM),
    Case("chem-side-quantity", SIDE, 'log10-k, as: "2.7"', 'pksp, as: "2.7"', "pksp"),
    # printed numbers and laws
    Case("chem-figure", LEAD, "1.6 × 10^-8", "-1.6 × 10^-8", '"-1.6'),
    Case("chem-figure", SIDE, '"2.7"', '"270"', '"270"'),
    Case("chem-printed-uncertainty", LEAD, "7.75 ± 0.10", "7.75 ± 0.01",
         '{plus_minus: "0.10"'),
    Case("chem-uncertainty", LEAD, 'plus_minus: "0.05"', 'plus_minus: "0.00"',
         '{plus_minus: "0.00"'),
    Case("chem-delta-unit", LEAD, '"9.0", unit: kJ/mol', '"9.0", unit: J/(mol K)', "J/(mol K)"),
    Case("chem-law-value", LEAD, 'as: "9.0"', 'as: "9000"', '"9000"'),
    Case("chem-law-value", LEAD, '"-474.0"', '"-474000"', "{one:"),
    Case("chem-formation-value", TABLE, '"-920.0"', '"-920000"', '"-920000"'),
    Case("chem-printed-number", LEAD, "1.6 × 10^-8", "1.6 × 10^x", '"1.6 × 10^x"'),
    Case("chem-printed-number", LEAD, 'as: "9.0"', "as: not stated", "not stated, unit"),
    Case("chem-quantity", LEAD, "{quantity: pksp", "{quantity: pk", "{quantity: pk,"),
    Case("chem-printed-or-computed", LEAD,
         "    computed: {rule: formation, table: invented-table}\n", "",
         'from: {source: invented-book, locator: "Table 5", evidence: computed}\nlaws'),
    Case("chem-law-kind", LEAD, "kind: expression", "kind: guess", "id: expression"),
    Case("chem-range", LEAD, "[5, 95]", "[95, 5]", "[95, 5]"),
    Case("judge-sign", LEAD, '"7.75 ± 0.10"', '"-7.75 ± 0.10"', '"-7.75'),
    Case("judge-temperature", GYPSUM, "temperature_c: 5,", "temperature_c: -5,", "-5,"),
    Case("judge-range", LEAD, "[5, 95]", "[5, 105]", "[5, 105]"),
    # what a salt names, and what identifies it
    Case("chem-file-name", LEAD, "id: lead-sulfate", "id: lead-sulphate", "lead-sulphate"),
    Case("chem-solid-state", LEAD, "formula: PbSO4", "formula: PbSO4(s)", "PbSO4(s)"),
    Case("chem-solid-as", GYPSUM, 'as: "0.19", unit: g/100 g water, solid_as: CaSO4',
         'as: "0.19", unit: g/100 g water, solid_as: CaO', "CaO"),
    Case("chem-needs-missing", LEAD, "needs: [", "needs: [Pb(SO4)2^2-, ", "Pb(SO4)2^2-"),
    Case("chem-cas", LEAD, "7446-14-2", "7446-41-2", "7446-41-2"),
    Case("chem-hazard", LEAD, "hazard: lead", "hazard: led", "led\n"),
    Case("chem-choice", LEAD, "law: enthalpy", "law: entropy", "entropy"),
    Case("chem-law-anchor", GYPSUM, "[at-5c, ", "[at-6c, ", "at-6c"),
    Case("chem-law-anchor", LEAD, "    determination: formation", "    determination: form",
         "form\n"),
    Case("chem-table", LEAD, "{rule: formation, table: invented-table}",
         "{rule: formation, table: other-table}", "other-table"),
    Case("chem-chosen-kind", LEAD, "determination: review\n  law", "determination: handout\n  law",
         "handout\n  law"),
    Case("chem-id-twice", LEAD, "- id: handout", "- id: book",
         "book\n    printed: {quantity: ksp, as: \"1.5"),
    Case("chem-id-twice", LEAD, "  - id: expression", "  - id: enthalpy",
         "enthalpy\n    kind: expression"),
    Case("chem-id-twice", TABLE, "of: SO4^2-", "of: Pb^2+", 'Pb^2+, gibbs_kj_mol: "-744.5"'),
    Case("chem-id-twice", IONS, "Na^+", "Ca^2+", "{formula: Ca^2+, name: sodium"),
    # words, people, dates
    Case("chem-alias-collision", LEAD, "[sulfate of lead]", "[gyp sum]", "gyp sum"),
    Case("chem-date", LEAD, "on: 2026-12-01", "on: 2026-02-30", "2026-02-30"),
    Case("chem-history-twice", LEAD, "history:\n", "history:\n"
         "  - {on: 2026-11-30, why: the tests, what: first entry}\n",
         "{on: 2026-11-30, what: first"),
    Case("chem-same-reader", LEAD, "by: second invented house", "by: Invented House",
         "Invented House"),
    Case("judge-name", LEAD, "lead(II) sulfate\n", "lead(II) sulfite\n", "lead(II) sulfite"),
    Case("judge-mineral", LEAD, "mineral: anglesite", "mineral: galena", "galena"),
    Case("judge-short-text", LEAD, "Written down from memory.", "Recalled.", "Recalled."),
    Case("judge-short-reason", GYPSUM, "It is the only invented measurement there is at this "
         "temperature, hence this one.", "The only one.", "The only one."),
    # sources
    Case("chem-source-unknown", LEAD, "invented-paper", "invented-papers", "invented-papers"),
    Case("chem-source-unknown", TABLE, "source: invented-book", "source: a-book", "a-book"),
    Case("chem-source-unused", LEAD, "source: invented-paper", "source: invented-book",
         "invented-paper, type", SOURCES),
    Case("chem-isbn", SOURCES, "978-0-306-40615-7", "978-0-306-40651-7", '"978'),
    Case("chem-isbn", SOURCES, "0-306-40615-2", "0-306-40615-X", '"0-306'),
    Case("chem-doi", SOURCES, "10.5555/invented.2", "10.5555/invented.2.", "10.5555/invented.2."),
    Case("judge-source-twice", SOURCES, "invented.2", "INVENTED.1", "10.5555/INVENTED.1"),
    # what only computed values show
    Case("judge-no-constant", GYPSUM, "temperature_c: 5,", "temperature_c: not stated,", "points"),
    Case("judge-not-converted", GYPSUM, "temperature_c: 5,", "temperature_c: not stated,",
         '"0.19"'),
    Case("judge-temperature-unknown", LEAD, FIRST + ", temperature_c: 25",
         FIRST + ", temperature_c: not stated", "not stated, medium: zero"),
    Case("judge-recalled-chosen", LEAD,
         "determination: review\n  law: enthalpy\n  reason: The invented review read its own "
         "invented measurements with the pair that is used here.",
         "determination: paper\n  law: enthalpy\n  reason: The invented paper measured it with "
         "care and twice over.", "paper\n  law"),
    Case("judge-choice-off", LEAD, '"-7.80"', '"-8.30"', "review\n  law"),
    Case("judge-law-off", LEAD, "law: enthalpy\n  reason", "law: formation\n  reason",
         "formation\n  reason"),
    Case("judge-exponent", LEAD, "1.6 × 10^-8", "1.6 × 10^-6", '"1.6 × 10^-6"'),
    Case("judge-exponent", LEAD, '"7.75 ± 0.10"', '"-7.80 ± 0.10"', '"-7.80 ± 0.10"'),
)  # fmt: skip


def write(folder: Path, files: Mapping[str, str]) -> Path:
    for name, text in files.items():
        path = folder / name
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_text(text, encoding="utf-8")
    return folder


@pytest.fixture(scope="module")
def shapes() -> Shapes:
    return shipped_shapes()


def inspected(folder: Path, shapes: Shapes) -> Inspection:
    return inspect_files(read_folders([folder], shapes), shapes)


def position(text: str, piece: str) -> tuple[int, int]:
    """Line and column, from 1, of a piece that stands in the text once."""
    assert text.count(piece) == 1, f"{piece!r} stands {text.count(piece)} times"
    before = text[: text.index(piece)]
    return before.count("\n") + 1, len(before) - (before.rfind("\n") + 1) + 1


def test_the_untouched_collection_has_no_finding() -> None:
    inspection = inspect([FOLDER])
    assert [str(f) for f in inspection.findings] == []
    assert inspection.reference is not None


@pytest.mark.parametrize("case", CASES, ids=lambda c: f"{c.code}-{c.file.split('/')[0]}")
def test_one_edit_one_finding(case: Case, tmp_path: Path, shapes: Shapes) -> None:
    assert SMALL[case.file].count(case.old) == 1, case.old
    edited = SMALL[case.file].replace(case.old, case.new)
    files = {**SMALL, case.file: edited}
    at_file = case.at_file or case.file
    line, column = position(files[at_file], case.at)
    findings = inspected(write(tmp_path / "small", files), shapes).findings
    places = [(f.place.file, f.place.line, f.place.column) for f in findings if f.code == case.code]
    assert (f"small/{at_file}", line, column) in places, "\n".join(map(str, findings))
    levels = {f.level for f in findings if f.code == case.code}
    assert levels == {CODES.get(case.code, "error")}


def test_every_code_has_an_example() -> None:
    """Also the codes of assembling, found in the modules as they are written there."""
    written: set[str] = set()
    import builder.collection

    for module in Path(str(builder.collection.__file__)).parent.glob("*.py"):
        text = module.read_text(encoding="utf-8")
        written |= set(re.findall(r'"((?:chem|judge)-[a-z-]+)"', text))
    examples = {case.code for case in CASES}
    assert examples == written
    assert set(CODES) <= written


def test_findings_are_sorted_and_on_one_line(tmp_path: Path, shapes: Shapes) -> None:
    files = {
        **SMALL,
        LEAD: SMALL[LEAD].replace("7446-14-2", "7446-41-2"),
        GYPSUM: SMALL[GYPSUM].replace("[at-5c, ", "[at-6c, "),
    }
    findings = inspected(write(tmp_path / "small", files), shapes).findings
    assert [f.code for f in findings] == ["chem-law-anchor", "chem-cas"]
    assert all(isinstance(f, Finding) and "\n" not in str(f) for f in findings)


def test_a_broken_file_is_not_blamed_on_others(tmp_path: Path, shapes: Shapes) -> None:
    """Sources that can not be read: no citation is called unknown, no source unused."""
    files = {**SMALL, SOURCES: SMALL[SOURCES].replace("sources:", "sources: [", 1)}
    findings = inspected(write(tmp_path / "small", files), shapes).findings
    assert {f.place.file for f in findings} == {f"small/{SOURCES}"}


def test_polymorphs_share_a_formula_but_no_name(tmp_path: Path, shapes: Shapes) -> None:
    other = (
        SMALL[GYPSUM]
        .replace("id: gypsum", "id: gypsum-two")
        .replace("mineral: none", "mineral: powder")
    )
    files = {**SMALL, "salts/gypsum-two.yaml": other}
    shared = inspected(write(tmp_path / "small", files), shapes).findings
    assert [(f.code, f.place.line) for f in shared] == [("chem-alias-collision", 4)]
    named = other.replace("dihydrate", "dihydrate, second form")
    files = {**SMALL, "salts/gypsum-two.yaml": named}
    assert inspected(write(tmp_path / "small", files), shapes).findings == ()


def test_one_salt_alone_finds_what_all_together_find(shapes: Shapes) -> None:
    sound = inspect([FOLDER]).collection
    for case in CASES:
        if case.file != LEAD or (case.at_file or LEAD) != LEAD:
            continue
        edited = SMALL[LEAD].replace(case.old, case.new)
        found = inspect_salt(edited.encode("utf-8"), f"small/{LEAD}", sound, shapes)
        assert case.code in {f.code for f in found}, case


def test_shipped_constants_have_no_error() -> None:
    inspection = inspect([shipped_folder("constants")])
    assert [str(f) for f in inspection.findings if f.level == "error"] == []
    assert inspection.reference is not None
    assert len(inspection.reference.salts) >= 12
