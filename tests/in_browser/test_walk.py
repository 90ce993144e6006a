"""From a typed name to the sheet: what the search finds, opens, asks and refuses."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest
from playwright.sync_api import Page


@pytest.fixture(scope="session")
def site(few_site: Path) -> Path:
    """Few salts: what a query finds does not change when the collection grows."""
    return few_site


@pytest.fixture(params=["file", "http"])
def start(request: pytest.FixtureRequest, site: Path, local_server: Callable[[Path], str]) -> str:
    """Address of the first page's folder, once as files and once from a web server."""
    return f"file://{site}" if request.param == "file" else local_server(site)


def typed(page: Page, start: str, query: str) -> None:
    page.goto(f"{start}/index.html")
    page.fill("#query", query)


def found(page: Page) -> list[str]:
    """Addresses of the salts found, in order."""
    links: list[str] = page.evaluate(
        "[...document.querySelectorAll('#answers a')].map(a => a.getAttribute('href'))"
    )
    return [link.removeprefix("salts/") for link in links]


def files(site: Path) -> str:
    return f"file://{site}"


def test_lead_sulfate_at_37_is_six_keys_and_enter_away(page: Page, start: str) -> None:
    typed(page, start, "PbSO4 37")
    assert "lead(II) sulfate at 37 °C" in page.inner_text("#answers")
    page.press("#query", "Enter")
    page.wait_for_url(f"{start}/salts/lead-sulfate.html#t=37")
    assert "lead(II) sulfate" in page.inner_text("h1")


@pytest.mark.parametrize(
    ("query", "lands"),
    [
        ("PbSO4 37", "lead-sulfate.html#t=37"),
        ("pbso4 37", "lead-sulfate.html#t=37"),
        ("PbSO₄ 37", "lead-sulfate.html#t=37"),
        ("  Pb SO4   37 °C ", "lead-sulfate.html#t=37"),
        ("anglesite 310.15 K", "lead-sulfate.html#t=37"),
        ("7446-14-2 37C", "lead-sulfate.html#t=37"),
        ("lead sulfate 0.5", "lead-sulfate.html#t=0.5"),
        ("Lead(II) sulfate", "lead-sulfate.html"),
        ("gypsum 60 C", "gypsum.html#t=60"),
        ("CaSO4·2H2O 60", "gypsum.html#t=60"),
        ("CaSO4.2H2O", "gypsum.html"),
        ("CaSO₄ * 2 H₂O", "gypsum.html"),
        ("CaSO4", "anhydrite.html"),
        ("Mg(OH)2 4", "brucite.html#t=4"),
        ("AgCl 25", "silver-chloride.html#t=25"),
        ("PbI 2", "lead-iodide.html"),  # a formula with a space is no temperature
        ("Ag2CrO4", "silver-chromate.html"),
    ],
)
def test_enter_opens_what_is_named_completely(
    query: str, lands: str, page: Page, site: Path
) -> None:
    typed(page, files(site), query)
    page.press("#query", "Enter")
    page.wait_for_url(f"{files(site)}/salts/{lands}")


@pytest.mark.parametrize(
    ("query", "salts"),
    [
        ("chromate", {"silver-chromate"}),
        ("CrO4^2-", {"silver-chromate"}),
        ("Pb2+", {"lead-sulfate", "lead-iodide"}),
        ("Pb²⁺", {"lead-sulfate", "lead-iodide"}),
        ("lead", {"lead-sulfate", "lead-iodide"}),
        ("SO₄²⁻", {"lead-sulfate", "barium-sulfate", "gypsum", "anhydrite", "strontium-sulfate"}),
        ("sulphate", {"lead-sulfate", "barium-sulfate", "gypsum", "anhydrite",
                      "strontium-sulfate"}),
        ("calcium sul", {"gypsum", "anhydrite"}),
        ("10101-41", {"gypsum"}),
        ("barit", {"barium-sulfate"}),
    ],
)  # fmt: skip
def test_parts_and_ions_find_their_salts(
    query: str, salts: set[str], page: Page, site: Path
) -> None:
    typed(page, files(site), query)
    assert {link.removesuffix(".html") for link in found(page)} >= salts
    if query in ("chromate", "lead", "10101-41", "barit", "calcium sul"):
        assert {link.removesuffix(".html") for link in found(page)} == salts


def test_several_salts_are_offered_and_enter_opens_none(page: Page, site: Path) -> None:
    typed(page, files(site), "sulfate")
    assert len(found(page)) == 5
    assert "5 salts found" in page.inner_text("#said")
    page.press("#query", "Enter")
    assert page.url.endswith("index.html")


@pytest.mark.parametrize(
    ("query", "words"),
    [
        ("PbSO4 130", "Between 0 and 100 °C"),
        ("PbSO4 -4", "Between 0 and 100 °C"),
        ("gypsum \u22124", "Between 0 and 100 °C"),
        ("gypsum 200 K", "Between 0 and 100 °C"),
        ("gypsum 37,5", "with a point"),
    ],
)
def test_a_temperature_that_cannot_be_is_said(
    query: str, words: str, page: Page, site: Path
) -> None:
    typed(page, files(site), query)
    assert words in page.inner_text("#said")
    page.press("#query", "Enter")
    assert page.url.endswith("index.html")


@pytest.mark.parametrize(
    ("query", "asked", "salt"),
    [
        ("anglasite", "anglesite", "lead-sulfate.html"),
        ("gipsum", "gypsum", "gypsum.html"),
        ("gpysum 60", "gypsum 60", "gypsum.html#t=60"),
        ("bariite", "barite", "barium-sulfate.html"),
        ("chrmate", "chromate", "silver-chromate.html"),
    ],
)
def test_one_slip_is_asked_about_and_never_opened_by_enter(
    query: str, asked: str, salt: str, page: Page, site: Path
) -> None:
    typed(page, files(site), query)
    assert page.inner_text("#said") == f"Did you mean “{asked}”?"
    assert salt in found(page)
    page.press("#query", "Enter")
    assert page.url.endswith("index.html")
    page.click("#answers a >> nth=0")
    page.wait_for_url(f"{files(site)}/salts/{salt}")


@pytest.mark.parametrize(
    "query", ["PbSO5", "PbF3", "PbSOO", "AgCrO", "leed", "gyyypsum", "Xx", "37"]
)
def test_formulae_short_words_and_two_slips_are_not_guessed(
    query: str, page: Page, site: Path
) -> None:
    typed(page, files(site), query)
    assert found(page) == []
    said = page.inner_text("#said")
    assert said.startswith(f"Nothing found for “{query}”. Try ")
    page.press("#query", "Enter")
    assert page.url.endswith("index.html")


def test_arrows_walk_through_the_answers_and_enter_opens_one(page: Page, site: Path) -> None:
    typed(page, files(site), "sulfate")
    links = found(page)
    page.press("#query", "ArrowDown")
    page.keyboard.press("ArrowDown")
    at = page.evaluate("document.activeElement.getAttribute('href')")
    assert at == f"salts/{links[1]}"
    page.keyboard.press("Escape")
    assert page.evaluate("document.activeElement.id") == "query"
    page.keyboard.press("ArrowDown")
    page.keyboard.press("ArrowUp")
    assert page.evaluate("document.activeElement.id") == "query"
    page.keyboard.press("ArrowDown")
    page.keyboard.press("Enter")
    page.wait_for_url(f"{files(site)}/salts/{links[0]}")


@pytest.mark.parametrize(
    "query", ["<img src=x onerror=alert(1)>", "((((", "\\", "[-", "a" * 5000, "\u0000", "🧂", "·"]
)
def test_odd_queries_do_no_harm(query: str, page: Page, site: Path) -> None:
    typed(page, files(site), query)
    assert page.locator("#said img, #answers img").count() == 0
    assert found(page) == []


def test_clearing_the_field_clears_the_answers(page: Page, site: Path) -> None:
    typed(page, files(site), "sulfate")
    page.fill("#query", "")
    assert page.inner_text("#said") == ""
    assert not page.is_visible("#answers")


def test_pages_lead_to_each_other(page: Page, start: str) -> None:
    page.goto(f"{start}/index.html")
    for words in ("Bath table", "Sources", "Checks", "How the numbers are made", "Find a salt"):
        page.click(f"nav a:has-text('{words}')")
        assert page.inner_text("nav [aria-current=page]") == words
        assert words in page.inner_text("h1")
