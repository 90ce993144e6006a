"""The sheet in Chromium: the digits shown are those of the Python reference; bad input is said."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest
from playwright.sync_api import Page

from builder.chem.curve import at
from builder.collection.amounts import molality
from builder.collection.dissolve import dissolve
from builder.collection.reference import Reference
from builder.site.words import amount_text, constant_text

QUESTIONS = [
    ("lead-sulfate", 37.0, "Na2SO4", "0.05 mol/kg"),
    ("lead-sulfate", 90.0, "", ""),
    ("silver-chloride", 15.0, "NaCl", "0.01 mol/kg"),
    ("silver-chloride", 25.0, "NH3", "0.1 mol/L"),
    ("silver-bromide", 60.0, "KNO3", "10 g/L"),
    ("barium-sulfate", 4.0, "NaCl", "0.1 mol/L"),
    ("strontium-sulfate", 50.0, "KCl", "20 mmol/kg"),
    ("gypsum", 25.0, "NaCl", "0.1 mol/kg"),
    ("anhydrite", 70.0, "", ""),
    ("fluorite", 25.0, "NaF", "42 mg/L"),
    ("lead-iodide", 45.0, "KNO3", "0.1 mol/kg"),
    ("thallium-chloride", 37.0, "KCl", "0.05 mol/kg"),
    ("brucite", 25.0, "NaOH", "0.01 mol/kg"),
    ("silver-chromate", 25.0, "AgNO3", "0.001 mol/kg"),
    ("silver-chloride", 25.0, "AgNO3", "0.01 mol/kg"),
]


def open_sheet(page: Page, site: Path, address: str) -> None:
    page.goto(f"file://{site}/salts/{address}")


@pytest.mark.parametrize(("salt", "t", "formula", "amount"), QUESTIONS)
def test_displayed_digits_are_those_of_python(
    salt: str, t: float, formula: str, amount: str, page: Page, site: Path, reference: Reference
) -> None:
    added = []
    if formula:
        added = [(formula, molality(amount, reference.molar_mass(formula)))]
    expected = dissolve(reference, salt, t, added)
    assert expected.state == "computed", expected.reason
    number, _, unit = amount.partition(" ")
    with_part = f"&with={formula}:{number}{unit}" if formula else ""
    open_sheet(page, site, f"{salt}.html#t={t:g}{with_part}")
    curve = reference.salts[salt].law.curve
    assert curve is not None
    constant, amounts = constant_text(at(curve, t)), amount_text(expected)
    shown = {
        name: page.inner_text(f"#{name}")
        for name in ("k", "k-low", "k-high", "log10-k", "u", "state", "mg", "mg-low", "mg-high",
                     "mol", "g", "factor")
    }  # fmt: skip
    assert shown == {
        "k": constant.k,
        "k-low": constant.low,
        "k-high": constant.high,
        "log10-k": constant.log10_k,
        "u": constant.u,
        "state": constant.state_words,
        "mg": amounts.metal_mg_per_l,
        "mg-low": amounts.low_mg_per_l,
        "mg-high": amounts.high_mg_per_l,
        "mol": amounts.mol_per_kg,
        "g": amounts.g_per_l,
        "factor": amounts.factor,
    }
    assert page.inner_text("#address-error") == ""


@pytest.mark.parametrize("served", ["file", "http"])
def test_the_walk(served: str, page: Page, site: Path, local_server: Callable[[Path], str]) -> None:
    """Types `PbSO4 37`, reads the constant with its interval and the dissolved lead in water and
    in 0.05 mol/kg Na2SO4, ion pairs included, and follows the number to its printed source."""
    start = f"file://{site}" if served == "file" else local_server(site)
    page.goto(f"{start}/index.html")
    page.keyboard.press("Tab")
    page.fill("#query", "PbSO4 37")
    page.press("#query", "Enter")
    page.wait_for_url(f"{start}/salts/lead-sulfate.html#t=37")
    assert page.inner_text("#t-words") == "37 °C"
    assert page.inner_text("#k").endswith("× 10⁻⁸")
    assert page.inner_text("#k-low")
    assert page.inner_text("#k-high")
    in_water = float(page.inner_text("#mg"))
    assert 30.0 < in_water < 40.0
    page.select_option("#salt-0", "Na2SO4")
    page.fill("#amount-0", "0.05")
    with_sulfate = float(page.inner_text("#mg"))
    assert 2.5 < with_sulfate < 4.5  # mg Pb per litre, near enough per kg
    shares = page.inner_text("#shares").splitlines()
    pairs = [float(line.split()[1]) for line in shares if "SO4" in line]
    assert sum(pairs) > 60.0  # per cent of the dissolved lead
    assert float(page.inner_text("#factor")) > 4.5
    page.click("#value-powell-2009 a")
    assert "Powell" in page.inner_text("#source-powell-2009").title()


def test_typing_changes_the_answer_and_the_address(page: Page, site: Path) -> None:
    open_sheet(page, site, "lead-sulfate.html")
    in_water = page.inner_text("#mg")
    page.fill("#t", "310.15 K")
    assert page.inner_text("#t-words") == "37 °C"
    page.select_option("#salt-0", "Na2SO4")
    page.fill("#amount-0", "0.05")
    assert page.inner_text("#mg") != in_water
    assert page.url.endswith("#t=37&with=Na2SO4:0.05mol/kg")
    page.reload()
    assert page.input_value("#amount-0") == "0.05"
    assert page.is_visible("#salt-1")


@pytest.mark.parametrize(
    ("field", "typed", "words"),
    [
        ("#t", "37,5", "point"),
        ("#t", "warm", "not a number"),
        ("#t", "", "Type a number"),
        ("#t", "140", "Between 0 and 100"),
        ("#amount-0", "0,05", "point"),
        ("#amount-0", "-1", "not negative"),
        ("#amount-0", "\u22121", "not negative"),
        ("#amount-0", "0x10", "not a number"),
        ("#amount-0", "1e9", "More than water can hold"),
    ],
)
def test_bad_input_gets_a_sentence_and_nothing_is_computed_from_it(
    field: str, typed: str, words: str, page: Page, site: Path
) -> None:
    open_sheet(page, site, "gypsum.html#t=25&with=NaCl:0.1mol/kg")
    before = page.inner_text("#amounts")
    page.fill(field, typed)
    error = page.inner_text("#t-error" if field == "#t" else "#amount-error-0")
    assert words in error
    assert page.get_attribute(field, "aria-invalid") == "true"
    assert page.inner_text("#amounts") == before


def test_what_is_not_known_is_refused_in_words(page: Page, site: Path) -> None:
    open_sheet(page, site, "mercury-i-sulfate.html#t=25&with=Na2CO3:0.1mol/kg")
    assert "nothing on how Hg₂²⁺ and CO₃²⁻ combine" in page.inner_text("#amount-state")
    assert not page.is_visible("#mg")
    open_sheet(page, site, "barium-sulfate.html#t=25&with=NaCl:0.45mol/kg")
    assert "would pass 0.2 mol/kg" in page.inner_text("#amount-state")


def test_a_solution_supersaturated_with_another_solid_says_so(page: Page, site: Path) -> None:
    open_sheet(page, site, "anhydrite.html#t=25")
    assert "supersaturated with calcium sulfate dihydrate" in page.inner_text("#also")


@pytest.mark.parametrize(
    "address", ["#t=37&colour=red", "#t=hot", "#t=37&with=Unobtainium:1mol/kg"]
)
def test_unknown_parts_of_the_address_are_refused_in_words(
    address: str, page: Page, site: Path
) -> None:
    open_sheet(page, site, f"lead-sulfate.html{address}")
    assert "Not understood in the address" in page.inner_text("#address-error")
    assert page.inner_text("#k") != ""


def test_without_scripts_the_sheet_reads_and_says_so(browser, site: Path) -> None:  # type: ignore[no-untyped-def]
    context = browser.new_context(java_script_enabled=False)
    page = context.new_page()
    page.goto(f"file://{site}/salts/lead-sulfate.html")
    assert page.is_visible("text=The script of this page did not run")
    assert not page.is_visible("#t")
    assert "37" in page.inner_text("table.fives")
    assert page.inner_text("#log10-k").startswith("\u22127.8")
    context.close()


def test_every_number_leads_to_its_printed_source(page: Page, site: Path) -> None:
    """From the working to the printed text, its source and place, and the citation on the sheet."""
    open_sheet(page, site, "lead-sulfate.html#t=37")
    assert "\u22127.80" in page.inner_text("#working")
    row = page.locator("#value-powell-2009")
    assert "-7.80" in row.inner_text()
    row.locator("a").first.click()
    assert page.url.endswith("#source-powell-2009")
    assert "Pure and Applied Chemistry" in page.inner_text("#source-powell-2009")
