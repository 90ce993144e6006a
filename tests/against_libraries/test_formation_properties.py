"""Formation properties, and the changes formed from them, against the package `chemicals`.

The package carries two tables of the CRC Handbook of Chemistry and Physics: 'Standard
Thermodynamic Properties of Chemical Substances' and 'Thermodynamic Properties of Aqueous Ions',
in J/mol and J/(mol K). Both are read here from the package's own files; reactions and CAS numbers
are written down here, R and the temperature come from scipy. The collection's table is another
copy of the same handbook, so this shows that it was copied and put together rightly, not that the
handbook is right.
"""

from __future__ import annotations

import csv
import math
import re
from importlib.resources import files

import pytest
from scipy import constants

from builder.chem.temperature import delta_cp, delta_h
from builder.collection.figures import reaction_change
from builder.collection.folders import shipped_folder
from builder.collection.inspection import inspect
from builder.collection.records import FormationEntry
from builder.collection.reference import Reference

# formula: (CAS number, phase letter of the package's columns)
SUBSTANCES = {
    "AgBr(s)": ("7785-23-1", "s"),
    "AgCl(s)": ("7783-90-6", "s"),
    "Ag2CrO4(s)": ("7784-01-2", "s"),
    "BaSO4(s)": ("7727-43-7", "s"),
    "CaF2(s)": ("7789-75-5", "s"),
    "CaSO4(s)": ("7778-18-9", "s"),
    "Mg(OH)2(s)": ("1309-42-8", "s"),
    "PbI2(s)": ("10101-63-0", "s"),
    "PbSO4(s)": ("7446-14-2", "s"),
    "SrSO4(s)": ("7759-02-6", "s"),
    "TlCl(s)": ("7791-12-0", "s"),
    "H2O(l)": ("7732-18-5", "l"),
}
# salt: (solid, ions set free)
DISSOLUTIONS = {
    "silver-bromide": ("AgBr(s)", {"Ag^+": 1, "Br^-": 1}),
    "silver-chloride": ("AgCl(s)", {"Ag^+": 1, "Cl^-": 1}),
    "silver-chromate": ("Ag2CrO4(s)", {"Ag^+": 2, "CrO4^2-": 1}),
    "barium-sulfate": ("BaSO4(s)", {"Ba^2+": 1, "SO4^2-": 1}),
    "fluorite": ("CaF2(s)", {"Ca^2+": 1, "F^-": 2}),
    "anhydrite": ("CaSO4(s)", {"Ca^2+": 1, "SO4^2-": 1}),
    "brucite": ("Mg(OH)2(s)", {"Mg^2+": 1, "OH^-": 2}),
    "lead-iodide": ("PbI2(s)", {"Pb^2+": 1, "I^-": 2}),
    "lead-sulfate": ("PbSO4(s)", {"Pb^2+": 1, "SO4^2-": 1}),
    "strontium-sulfate": ("SrSO4(s)", {"Sr^2+": 1, "SO4^2-": 1}),
    "thallium-chloride": ("TlCl(s)", {"Tl^+": 1, "Cl^-": 1}),
}
G, H, S, CP = "gibbs", "enthalpy", "entropy", "heat capacity"
Properties = dict[str, float]  # J/mol, J/(mol K); a property the table does not give is absent


@pytest.fixture(scope="module")
def reference() -> Reference:
    found = inspect([shipped_folder("constants")]).reference
    assert found is not None
    return found


@pytest.fixture(scope="module")
def handbook() -> dict[str, Properties]:
    """Properties by the formula the collection uses, from the package's files."""
    substances = _table(
        "Heat Capacity", "CRC Standard Thermodynamic Properties of Chemical Substances"
    )
    ions = _table("Electrolytes", "CRC Thermodynamic Properties of Aqueous Ions")
    by_cas = {row["CAS"]: row for row in substances}
    out = {}
    for name, (cas, phase) in SUBSTANCES.items():
        columns = {f"Gf{phase}": G, f"Hf{phase}": H, f"S0{phase}": S, f"Cp{phase}": CP}
        out[name] = _properties(by_cas[cas], columns)
    for row in ions:
        # 'SO4-2' to 'SO4^2-', 'Ag+' to 'Ag^+'
        formula = re.sub(r"([+-])(\d*)$", r"^\2\1", row["Formula"])
        columns = {"Gf(aq)": G, "Hf(aq)": H, "S(aq)": S, "Cp(aq)": CP}
        out[formula] = _properties(row, columns)
    return out


def _table(folder: str, name: str) -> list[dict[str, str]]:
    text = (files("chemicals") / folder / f"{name}.tsv").read_text("utf-8")
    return list(csv.DictReader(text.splitlines(), delimiter="\t"))


def _properties(row: dict[str, str], columns: dict[str, str]) -> Properties:
    return {mine: float(row[its]) for its, mine in columns.items() if row[its]}


def _own(entry: FormationEntry) -> Properties:
    numbers = {
        G: (entry.gibbs_kj_mol, 1e3),
        H: (entry.enthalpy_kj_mol, 1e3),
        S: (entry.entropy_j_mol_k, 1.0),
        CP: (entry.heat_capacity_j_mol_k, 1.0),
    }
    return {name: n.value * scale for name, (n, scale) in numbers.items() if n is not None}


def _change(handbook: dict[str, Properties], salt: str, name: str) -> float | None:
    """Products less solid, J/mol or J/(mol K); None where the table lacks a number."""
    solid, ions = DISSOLUTIONS[salt]
    if any(name not in handbook[f] for f in (solid, *ions)):
        return None
    return sum(n * handbook[f][name] for f, n in ions.items()) - handbook[solid][name]


def test_every_entry_is_that_of_the_handbook(
    reference: Reference, handbook: dict[str, Properties]
) -> None:
    """Number by number, and not stated exactly where the handbook has nothing."""
    entries = reference.collection.formation["crc-formation"].entries
    wrong = []
    for name, entry in entries.items():
        if name == "H^+":  # zero by definition; the table leaves it out
            assert set(_own(entry).values()) == {0.0}
            continue
        own, its = _own(entry), handbook[name]
        same = own.keys() == its.keys() and all(own[k] == pytest.approx(its[k]) for k in own)
        if not same:
            wrong.append(f"{name}: {own}, handbook {its}")
    assert not wrong, "\n".join(wrong)


def test_all_salts_with_a_formation_value_are_here(reference: Reference) -> None:
    with_value = {
        salt_id
        for salt_id, evaluated in reference.salts.items()
        for reported in evaluated.reported.values()
        if reported.determination.table == "crc-formation"
    }
    with_law = {
        salt_id
        for salt_id, evaluated in reference.salts.items()
        for law in evaluated.laws.values()
        if law.law.table == "crc-formation"
    }
    assert with_value | with_law <= set(DISSOLUTIONS)


@pytest.mark.parametrize("salt", DISSOLUTIONS)
def test_constant_and_changes(
    salt: str, reference: Reference, handbook: dict[str, Properties]
) -> None:
    evaluated = reference.salts[salt]
    entries = reference.collection.formation["crc-formation"].entries
    fields = {G: "gibbs_kj_mol", H: "enthalpy_kj_mol", CP: "heat_capacity_j_mol_k"}
    for name, field in fields.items():
        expected = _change(handbook, salt, name)
        found = reaction_change(evaluated.salt.reaction, entries, field)
        assert (found is None) == (expected is None), f"{name}: {found}, handbook {expected}"
        if found is not None and expected is not None:
            joules = found[0] * (1.0 if name == CP else 1e3)
            assert joules == pytest.approx(expected, abs=1e-6), name
    gibbs = _change(handbook, salt, G)
    assert gibbs is not None
    log10_k = -gibbs / (constants.R * 298.15 * math.log(10.0))
    for reported in evaluated.reported.values():
        if reported.determination.table == "crc-formation":
            assert reported.log10_k == pytest.approx(log10_k, abs=1e-9)


@pytest.mark.parametrize("salt", DISSOLUTIONS)
def test_law_from_formation_properties(
    salt: str, reference: Reference, handbook: dict[str, Properties]
) -> None:
    """ΔH of the law at 25 °C, and ΔCp where all heat capacities are tabulated."""
    laws = [x for x in reference.salts[salt].laws.values() if x.law.kind == "formation"]
    enthalpy, capacity = _change(handbook, salt, H), _change(handbook, salt, CP)
    assert enthalpy is not None
    for law in laws:
        assert law.curve is not None, law.reason
        # a law's coefficients are rounded to ten digits when made
        assert delta_h(law.curve.law, 25.0) == pytest.approx(enthalpy, rel=1e-8, abs=1e-4)
        if capacity is not None:
            assert delta_cp(law.curve.law, 25.0) == pytest.approx(capacity, rel=1e-8)
            assert "known" in law.heat_capacity_note
        else:
            assert "estimated" in law.heat_capacity_note


def test_recorded_enthalpies_computed_from_the_tables(
    reference: Reference, handbook: dict[str, Properties]
) -> None:
    """Enthalpies typed into a law with evidence `computed` are the differences they claim."""
    seen = 0
    for salt, evaluated in reference.salts.items():
        for law in evaluated.laws.values():
            given = law.law.delta_h
            if given is None or law.law.citation.evidence != "computed":
                continue
            assert law.law.citation.source == "crc-formation-table"
            assert given.value == pytest.approx(_change(handbook, salt, H), abs=1e-6)
            seen += 1
    assert seen >= 2


@pytest.mark.parametrize("salt", DISSOLUTIONS)
def test_recorded_properties_close(salt: str, reference: Reference) -> None:
    """ΔG = ΔH - TΔS of every dissolution within 0.5 kJ/mol (0.09 in log10 K).

    Rounding alone leaves about 0.1 kJ/mol. Where it does not close, a number is mistyped or not
    on the scale of the others, and the constant formed from them is worth less.
    """
    entries = reference.collection.formation["crc-formation"].entries
    reaction = reference.salts[salt].salt.reaction
    changes = [
        reaction_change(reaction, entries, field)
        for field in ("gibbs_kj_mol", "enthalpy_kj_mol", "entropy_j_mol_k")
    ]
    gibbs, enthalpy, entropy = (change[0] for change in changes if change is not None)
    assert gibbs - (enthalpy - 0.29815 * entropy) == pytest.approx(0.0, abs=0.5)
