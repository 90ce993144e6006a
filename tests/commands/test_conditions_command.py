"""`dissolve` at a held pH, under carbon dioxide and with other solids; odd input answered in words.

What comes from the literature is named beside the check; it was recalled, not looked up.
"""

from __future__ import annotations

import csv
import io
import json
import re
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from running import Ran, here, house, one_line, shipped

NEW_KEYS = ["ph_held", "co2_bar", "titrant", "titrant_mol_per_kg", "formed"]
SILVER_G_PER_MOL = 107.87  # IUPAC abridged standard atomic weight


def dissolve(*arguments: str) -> Ran:
    return here("dissolve", *arguments)


def forms(answer: dict[str, object]) -> dict[str, dict[str, float]]:
    listed = answer["forms"]
    assert isinstance(listed, list)
    return {form["form"]: form for form in listed}


def activity(answer: dict[str, object], form: str) -> float:
    found = forms(answer)[form]
    return found["mol_per_kg"] * found["activity_coefficient"]


def unfolded(out: str) -> str:
    return re.sub(r"\n {5,}", " ", out)


def test_fluorite_dissolves_more_in_acid_and_shows_hydrogen_fluoride() -> None:
    """Skoog, West, Holler (solubility and pH); log10 K(HF) = 3.18 of the NEA reviews."""
    acid = dissolve("fluorite", "--at", "25", "--ph", "3", "--json").json
    neutral = dissolve("fluorite", "--at", "25", "--ph", "7.0", "--json").json
    assert acid["solubility_mol_per_kg"] > 1.5 * neutral["solubility_mol_per_kg"]
    ratio = activity(acid, "HF(aq)") / activity(acid, "F^-")
    assert ratio == pytest.approx(10 ** (3.18 - 3.0), rel=0.02)
    assert re.search(r"HF\(aq\) 0\.000\d+", dissolve("fluorite", "--at", "25", "--ph", "3").out)


@pytest.mark.parametrize(
    ("arguments", "titrant", "ion"),
    [
        (("--ph", "9.5"), "HCl", "Cl^-"),
        (("--ph", "12"), "NaOH", "Na^+"),
        (("--ph", "9.5", "--acid", "hydrobromic acid"), "HBr", "Br^-"),
        (("--ph", "12", "--base", "koh"), "KOH", "K^+"),
    ],
)
def test_the_titrant_is_named_and_is_what_its_ion_says(
    arguments: tuple[str, ...], titrant: str, ion: str
) -> None:
    """Brucite takes acid below its own pH and base above; these ions form no pair there."""
    answer = dissolve("brucite", "--at", "25", *arguments, "--json").json
    assert answer["titrant"] == titrant
    assert answer["titrant_mol_per_kg"] > 0
    assert answer["titrant_mol_per_kg"] == pytest.approx(forms(answer)[ion]["mol_per_kg"], rel=1e-6)
    out = dissolve("brucite", "--at", "25", *arguments).out
    assert re.search(rf"pH {float(arguments[1]):.2f} held by 0\.\d+ mol/kg {titrant}\n", out)


@pytest.mark.parametrize("ph", ["3", "7.25", "8.125", "11"])
def test_held_ph_is_the_ph_reported(ph: str) -> None:
    answer = dissolve("fluorite", "--at", "60", "--ph", ph, "--json").json
    assert answer["ph"] == pytest.approx(float(ph), abs=1e-9)
    assert answer["ph_held"] == float(ph)


def test_a_hydroxide_follows_the_square_of_the_hydrogen_ion() -> None:
    """a(Mg^2+) / a(H^+)^2 is one number for Mg(OH)2, whatever the pH (mass action).

    But for the water of the two solutions, whose activity is 1 - 0.018 Σm (Raoult), squared.
    """
    low, high = (
        dissolve("brucite", "--at", "25", "--ph", ph, "--json").json for ph in ("9.8", "10.8")
    )
    water = 1.0 - 0.018015 * sum(form["mol_per_kg"] for form in low["forms"])
    water /= 1.0 - 0.018015 * sum(form["mol_per_kg"] for form in high["forms"])
    assert activity(low, "Mg^2+") / activity(high, "Mg^2+") == pytest.approx(
        100 / water**2, rel=2e-5
    )


def test_carbon_dioxide_of_the_air_makes_water_acid() -> None:
    """pH 5.6 for water under air (Stumm and Morgan, Aquatic Chemistry); barium sulfate leaves it.

    Henry's constant 10^-1.47 (Plummer and Busenberg 1982, Geochim. Cosmochim. Acta 46, 1011).
    """
    answer = dissolve("barium-sulfate", "--at", "25", "--co2", "0.0004", "--json").json
    assert answer["ph"] == pytest.approx(5.6, abs=0.05)
    assert forms(answer)["H2CO3(aq)"]["mol_per_kg"] == pytest.approx(0.0004 * 10**-1.47, rel=0.03)
    assert (answer["co2_bar"], answer["titrant"]) == (0.0004, None)
    out = dissolve("barium-sulfate", "--at", "25", "--co2", "4e-4 bar").out
    assert "carbon dioxide  0.000400 bar" in out
    assert "no carbon dioxide" not in out


def test_another_solid_forms_and_all_silver_is_found_again() -> None:
    """Mass balance by hand: silver of the chromate = silver chloride + silver in solution."""
    words = ("silver-chromate", "--at", "25", "--with", "NaCl=0.01mol/kg", "--form-also", "AgCl")
    answer = dissolve(*words, "--json").json
    (formed,) = answer["formed"]
    assert formed["salt"] == "silver-chloride"
    in_solution = answer["metal_mg_per_kg"] / 1000 / SILVER_G_PER_MOL
    assert formed["mol_per_kg"] + in_solution == pytest.approx(
        2 * answer["solubility_mol_per_kg"], rel=1e-4
    )
    assert answer["other_solids"] == []
    out = dissolve(*words, "--form-also", "brucite").out
    assert re.search(r"formed +0\.00\d+ mol/kg silver\(I\) chloride \(AgCl\)", out)
    assert re.search(r"not formed +magnesium hydroxide", out)
    alone = dissolve(*words[:-2], "--json").json
    assert [other["salt"] for other in alone["other_solids"]] == ["silver-chloride"]


def test_a_form_of_the_same_composition_is_refused_in_words() -> None:
    """Gypsum is the stable one at 25 °C (Hardie 1967, Am. Mineral. 52, 171)."""
    words = ("anhydrite", "--at", "25", "--form-also", "gypsum")
    answer = dissolve(*words, "--json").json
    assert answer["state"] == "refused"
    assert "ask for that solid instead" in answer["reason"]
    assert [answer[key] for key in NEW_KEYS] == [None] * 5


def test_a_solid_without_a_constant_is_no_solid_that_does_not_form(tmp_path: Path) -> None:
    """Invented: lead iodide with a law that ends far below 100 °C."""
    text, changed = re.subn(r"range_c: \[.*?\]", "range_c: [0, 30]", shipped("lead-iodide"))
    assert changed
    own = house(tmp_path / "house", "lead-iodide.yaml", text)
    words = ("lead-sulfate", "--at", "95", "--with", "KI=0.01mol/kg", "--form-also", "PbI2")
    answer = dissolve(*words, "--json", "--constants", str(own)).json
    assert answer["state"] == "refused"
    assert "no constant for lead-iodide, which may form" in answer["reason"]
    assert dissolve(*words, "--json").json["state"] == "computed"


def test_keys_are_there_where_nothing_was_asked() -> None:
    answer = dissolve("gypsum", "--at", "25", "--json").json
    assert list(answer)[-5:] == NEW_KEYS
    assert [answer[key] for key in NEW_KEYS] == [None, None, None, None, []]


def test_the_textbook_knows_none_of_it_and_says_so() -> None:
    words = ("fluorite", "--at", "25", "--ph", "3", "--co2", "0.0004")
    plain = dissolve("fluorite", "--at", "25", "--textbook", "--json").json
    asked = dissolve(*words, "--textbook", "--json").json
    assert asked["solubility_mol_per_kg"] == plain["solubility_mol_per_kg"]
    assert [asked[key] for key in NEW_KEYS] == [None, None, None, None, []]
    full = dissolve(*words, "--json").json
    factor = full["solubility_mol_per_kg"] / plain["solubility_mol_per_kg"]
    assert asked["textbook_factor"] == pytest.approx(factor, rel=1e-8)
    out = dissolve(*words, "--textbook").out
    assert "\nIt knows neither held pH nor carbon dioxide nor other solids" in out
    assert "It knows neither" not in dissolve("fluorite", "--at", "25", "--textbook").out
    assert "knowing neither held pH" in unfolded(dissolve(*words).out)


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (("fluorite", "--ph", "3"), "hydrogen fluoride"),
        (("fluorite", "--co2", "1"), "hydrogen fluoride"),
        (("fluorite", "--ph", "0"), "hydrogen fluoride"),
        (("AgCl", "--ph", "4", "--with", "NaCN=0.001mol/kg"), "hydrogen cyanide"),
        (("PbSO4", "--ph", "4", "--with", "NaHS=0.001mol/kg"), "hydrogen sulfide"),
        (("gypsum", "--ph", "4", "--with", "Na2SO3=0.01mol/kg"), "sulfur dioxide"),
        (("gypsum", "--with", "NaF=1mol/kg", "--with", "HCl=1mol/kg"), "hydrogen fluoride"),
        (("PbSO4", "--ph", "3", "--acid", "HF"), "hydrogen fluoride"),
        (("AgCl", "--with", "NH3=0.1mol/kg"), "can explode"),
        (("AgCl", "--with", "NH3=9mol/kg"), "can explode"),
        (("AgCl", "--with", "NH4NO3=0.1mol/kg", "--ph", "9"), "can explode"),
        (("fluorite", "--ph", "3", "--textbook"), "hydrogen fluoride"),
    ],
)
def test_danger_is_said_before_the_answer(arguments: tuple[str, ...], words: str) -> None:
    """Common practice; also where the answer itself is refused."""
    out = unfolded(dissolve(*arguments, "--at", "25").out)
    first = out.splitlines()[0]
    assert first.startswith("caution")
    assert words in first
    assert "procedure and local rules" in first


@pytest.mark.parametrize(
    "arguments",
    [
        ("fluorite",),
        ("fluorite", "--ph", "8"),
        ("gypsum", "--ph", "3"),
        ("gypsum", "--ph", "3", "--with", "NaF=0mol/kg"),
        ("AgCl", "--with", "NH4NO3=0.1mol/kg"),
        ("AgCl", "--with", "NaCN=0.001mol/kg", "--ph", "12"),
    ],
)
def test_no_danger_is_said_where_there_is_none(arguments: tuple[str, ...]) -> None:
    assert not dissolve(*arguments, "--at", "25").out.startswith("caution")


def test_batch_with_surroundings_equals_single_answers(tmp_path: Path) -> None:
    rows = [
        ("fluorite,25,,3,,,HNO3,", ("fluorite", "--ph", "3", "--acid", "HNO3")),
        (
            "silver-chromate,25,NaCl=0.01mol/kg;KBr=0.01mol/kg,8.0,0.0004,AgCl; AgBr,,KOH",
            ("silver-chromate", "--with", "NaCl=0.01mol/kg", "--with", "KBr=0.01mol/kg", "--ph",
             "8", "--co2", "0.0004", "--form-also", "AgCl", "--form-also", "AgBr", "--base", "KOH"),
        ),
        ("gypsum,25,,,,,,", ("gypsum",)),
        ("gypsum,25,,20,,,,", ("gypsum", "--ph", "20")),
    ]  # fmt: skip
    file = tmp_path / "rows.csv"
    head = "salt,at,with,ph,co2,form-also,acid,base"
    file.write_text("\n".join([head, *(row for row, _ in rows)]) + "\n", encoding="utf-8")
    ran = dissolve("--batch", str(file))
    assert (ran.code, ran.err) == (0, "")
    answers = list(csv.DictReader(io.StringIO(ran.out)))
    for answer, (_, words) in zip(answers, rows, strict=True):
        single = dissolve(*words, "--at", "25", "--json").json
        assert list(answer) == list(single)
        for key in ("solubility_mol_per_kg", "ph", "state", "reason", *NEW_KEYS[:4]):
            expected = "" if single[key] is None else str(single[key])
            assert answer[key] == expected
        for solid in single["formed"] or []:
            assert f"salt {solid['salt']}, mol_per_kg {solid['mol_per_kg']!r}" in answer["formed"]
    assert answers[1]["formed"].count("salt ") == 2
    assert "outside -1 to 15" in answers[3]["reason"]


def test_wrong_cells_are_named_by_line(tmp_path: Path) -> None:
    file = tmp_path / "rows.csv"
    file.write_text(
        'salt,at,ph,co2,form-also,acid\ngypsum,25,"8,0",,,\ngypsum,25,,99,,\n'
        "gypsum,25,,,salt of nowhere,\ngypsum,25,,,,HCl\ngypsum,25,8,0.0004,AgCl,HCl\n",
        encoding="utf-8",
    )
    ran = dissolve("--batch", str(file))
    assert (ran.code, ran.out) == (2, "")
    lines = ran.err.splitlines()
    assert [int(line.split(", line ")[1].split(":")[0]) for line in lines] == [2, 3, 4, 5]
    cures = ("write a point", "at most 10 bar", "no salt is called", "write --ph")
    assert all(cure in line for line, cure in zip(lines, cures, strict=True))


@pytest.mark.parametrize(
    "more",
    [["--ph", "8"], ["--co2", "1"], ["--form-also", "AgCl"], ["--acid", "HCl"], ["--base="]],
)
def test_batch_takes_surroundings_from_its_file_alone(tmp_path: Path, more: list[str]) -> None:
    file = tmp_path / "rows.csv"
    file.write_text("salt,at\ngypsum,25\n", encoding="utf-8")
    ran = dissolve("--batch", str(file), *more)
    assert (ran.code, one_line(ran.err)) == (2, True)
    assert "leave out" in ran.err


@pytest.mark.parametrize(
    ("arguments", "cure"),
    [
        (("--ph", "8,0"), "write a point, as in 8.0"),
        (("--ph", "neutral"), "is no pH; write a number"),
        (("--ph", ""), "is no pH"),
        (("--ph", "nan"), "is no pH"),
        (("--ph", "٨"), "is no pH"),
        (("--ph", "1" * 400), "is no pH"),
        (("--co2", "0,0004"), "write a point, as in 0.0004"),
        (("--co2", "400 ppm"), "write it in bar"),
        (("--co2=-1",), "no pressure of carbon dioxide"),
        (("--co2", "0"), "more than 0 and at most 10 bar"),
        (("--co2", "10.1"), "more than 0 and at most 10 bar"),
        (("--co2", "1e999"), "more than 0 and at most 10 bar"),
        (("--form-also", "unobtainium"), "no salt is called"),
        (("--form-also", "CaF2"), "is the salt itself"),
        (("--acid", "HCl"), "write --ph 8.0"),
        (("--base", ""), "write --ph 8.0"),
        (("--ph", "3", "--acid", ""), "no electrolyte is called"),
        (("--ph", "3", "--acid", "HCl=1mol/kg"), "no electrolyte is called"),
        (("--ph", "3", "--acid", "NaCl"), "NaCl is no acid"),
        (("--ph", "9", "--base", "HCl"), "HCl is no base"),
    ],
)
def test_wrong_surroundings_get_one_line_with_the_cure(
    arguments: tuple[str, ...], cure: str
) -> None:
    ran = dissolve("fluorite", "--at", "25", *arguments)
    assert (ran.code, ran.out) == (2, "")
    assert one_line(ran.err)
    assert cure in ran.err


@pytest.mark.parametrize("base", ["NH3", "Na2CO3", "KOH"])
def test_a_weak_base_holds_a_ph_too(base: str) -> None:
    answer = dissolve("fluorite", "--at", "25", "--ph", "9", "--base", base, "--json").json
    assert (answer["state"], answer["titrant"]) == ("computed", base)


@pytest.mark.parametrize("ph", ["-1", "−0.5", "14.9", "15.1", "-1.1"])
def test_extreme_ph_is_answered_or_refused_but_no_error(ph: str) -> None:
    ran = dissolve("fluorite", "--at", "25", f"--ph={ph}", "--json")
    assert (ran.code, ran.json["state"]) == (0, "refused")
    assert ran.json["ph_held"] == float(ph.replace("−", "-"))


TEXT = st.text(st.characters(exclude_categories=["Cs"], exclude_characters="\0"), max_size=20)
NUMBERS = st.one_of(TEXT, st.floats().map(str), st.floats(-2, 16).map(str))


@settings(max_examples=15, deadline=None)
@given(
    st.sampled_from(["PbSO4", "gypsum", "brucite", "AgCl", "fluorite"]),
    st.one_of(st.none(), NUMBERS),
    st.one_of(st.none(), NUMBERS),
    st.lists(st.one_of(TEXT, st.sampled_from(["AgBr", "anhydrite", "PbI2", "SrSO4"])), max_size=3),
    st.one_of(st.none(), TEXT, st.sampled_from(["NH4Cl", "HF", "Na2HPO4", "FeCl3", "H2SO4"])),
)
def test_any_surroundings(
    salt: str, ph: str | None, co2: str | None, also: list[str], acid: str | None
) -> None:
    """An answer or one clear line, never an exception."""
    words = [f"--form-also={solid}" for solid in also]
    typed = {"ph": ph, "co2": co2, "acid": acid, "base": acid}
    words += [f"--{name}={text}" for name, text in typed.items() if text is not None]
    for more in ([], ["--json"], ["--textbook"]):
        ran = dissolve(salt, "--at=25", "--with=KI=0.01mol/kg", *words, *more)
        assert ran.code in (0, 2)
        assert one_line(ran.err) if ran.code == 2 else ran.err == ""
        if ran.out.startswith("{"):
            json.loads(ran.out, parse_constant=pytest.fail)  # NaN and Infinity
