"""Every kind of page in Chromium: alone, readable by everybody, on any screen, without scripts."""

from __future__ import annotations

import json
import re
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest
from playwright.sync_api import Browser, Page

from builder.chem.curve import CURVATURE_FROM_C, at
from builder.collection import amounts, choice, laws, mixture
from builder.collection.dissolve import dissolve
from builder.collection.folders import shipped_folder
from builder.collection.reference import Reference
from builder.read.findings import Finding, Place
from builder.site import bath, checks, find, notes, sources
from builder.site.frame import Frame
from builder.site.render import Renderer
from builder.site.words import constant_text

KINDS = [
    "index.html",
    "bath-table.html",
    "sources.html",
    "checks.html",
    "notes/how-the-numbers-are-made.html",
    "salts/lead-sulfate.html",
]

each_kind = pytest.mark.parametrize("address", KINDS)


def open_page(page: Page, site: Path, address: str) -> None:
    page.goto(f"file://{site}/{address}")


# ---- alone: from a folder or from a plain web server


@each_kind
def test_opens_from_a_folder_and_asks_for_no_other_file(
    address: str, page: Page, site: Path
) -> None:
    asked: list[str] = []
    page.on("request", lambda request: asked.append(request.url))
    open_page(page, site, address)
    page.wait_for_load_state("networkidle")
    assert [url for url in asked if not url.startswith("data:")] == [f"file://{site}/{address}"]
    assert page.locator("h1").count() == 1


@each_kind
def test_opens_from_a_plain_web_server(
    address: str, page: Page, site: Path, local_server: Callable[[Path], str]
) -> None:
    asked: list[str] = []
    page.on("request", lambda request: asked.append(request.url))
    url = f"{local_server(site)}/{address}"
    page.goto(url)
    page.wait_for_load_state("networkidle")
    assert [u for u in asked if not u.startswith("data:")] == [url]
    assert page.evaluate("document.documentElement.classList.contains('scripted')")


@each_kind
def test_the_policy_comes_first_and_nothing_inline_escapes_it(address: str, site: Path) -> None:
    text = (site / address).read_text(encoding="utf-8")
    head = text[text.index("<head>") :]
    assert re.match(r"<head>\s*<meta charset=\"utf-8\">\s*<meta http-equiv=\"Content-Sec", head)
    assert "default-src &#39;none&#39;" in head or "default-src 'none'" in head
    body = re.sub(r"<script.*?</script>", "", text, flags=re.DOTALL)
    assert not re.search(r"<[^>]+\s(?:style|on[a-z]+)=", body)
    assert not re.search(r"<(?:link|img|script|iframe)[^>]+(?:href|src)=\"(?!data:)", body)


@pytest.mark.parametrize("address", KINDS[:-1])
def test_style_and_scripts_keep_their_budget(address: str, site: Path) -> None:
    """60 kB together, style at most 20 kB; data are not counted. The sheet has its own budget."""
    text = (site / address).read_text(encoding="utf-8")
    style = re.findall(r"<style>(.*?)</style>", text, flags=re.DOTALL)
    scripts = re.findall(r"<script>(.*?)</script>", text, flags=re.DOTALL)
    assert len(style) == 1
    assert len(style[0].encode()) <= 20_000
    assert len("".join([*style, *scripts]).encode()) <= 60_000


def test_every_title_is_another_and_every_link_leads_somewhere(site: Path) -> None:
    titles: list[str] = []
    for file in sorted(site.rglob("*.html")):
        text = re.sub(r"<script.*?</script>", "", file.read_text("utf-8"), flags=re.DOTALL)
        titles += re.findall(r"<title>(.*?)</title>", text)
        for link in re.findall(r'href="([^"]+)"', text):
            if link.startswith(("http", "data:")):
                continue
            path, _, part = link.partition("#")
            target = (file.parent / path).resolve() if path else file
            assert target.is_file(), f"{file.name}: {link}"
            if part and "=" not in part:
                assert f'id="{part}"' in target.read_text("utf-8"), f"{file.name}: {link}"
    assert len(titles) == len(set(titles)) == len(list(site.rglob("*.html")))


# ---- for everybody

OUTLINE = """() => ({
  levels: [...document.querySelectorAll('h1,h2,h3,h4,h5,h6')].map(h => Number(h.tagName[1])),
  ids: [...document.querySelectorAll('[id]')].map(e => e.id),
  landmarks: ['header', 'nav', 'main', 'footer'].map(n => document.querySelectorAll(n).length),
  lang: document.documentElement.lang,
  skip: document.querySelector('a').getAttribute('href'),
  tables: [...document.querySelectorAll('table')].map(t => [
    t.caption ? t.caption.textContent.trim() : '',
    [...t.querySelectorAll('th')].filter(h => !h.scope || !h.textContent.trim()).length]),
  regions: [...document.querySelectorAll('.scroll')].map(r =>
    r.tabIndex === 0 && r.getAttribute('role') === 'region' &&
    document.getElementById(r.getAttribute('aria-labelledby')) !== null),
  unnamed: [...document.querySelectorAll('input,select,textarea,button')].filter(f =>
    !(f.labels && f.labels.length) && !f.textContent.trim() && !f.ariaLabel).map(f => f.outerHTML)
})"""


@each_kind
def test_outline_landmarks_tables_and_names(address: str, page: Page, site: Path) -> None:
    open_page(page, site, address)
    found = page.evaluate(OUTLINE)
    assert found["levels"][0] == 1
    steps = zip(found["levels"], found["levels"][1:], strict=False)
    assert all(below - above <= 1 for above, below in steps)
    assert len(found["ids"]) == len(set(found["ids"]))
    assert found["landmarks"] == [1, 1, 1, 1]
    assert found["lang"] == "en"
    assert found["skip"] == "#content"
    assert all(caption and bad == 0 for caption, bad in found["tables"]), found["tables"]
    assert all(found["regions"])
    assert found["unnamed"] == []


CONTRAST = """() => {
  const rgb = s => [...s.match(/[0-9.]+/g).map(Number), 1].slice(0, 4);
  const light = c => c.slice(0, 3).map(v => v / 255)
    .map(v => v <= 0.04045 ? v / 12.92 : ((v + 0.055) / 1.055) ** 2.4)
    .reduce((s, v, i) => s + v * [0.2126, 0.7152, 0.0722][i], 0);
  const behind = e => {
    for (; e; e = e.parentElement) {
      const c = rgb(getComputedStyle(e).backgroundColor);
      if (c[3] === 1) { return c; }
    }
    return [255, 255, 255];
  };
  const bad = [], walker = document.createTreeWalker(document.body, NodeFilter.SHOW_TEXT);
  let seen = 0;
  while (walker.nextNode()) {
    const e = walker.currentNode.parentElement;
    if (!walker.currentNode.data.trim() || e.closest('script,svg')) { continue; }
    if (!e.checkVisibility()) { continue; }
    const [a, b] = [light(rgb(getComputedStyle(e).color)), light(behind(e))].sort((x, y) => y - x);
    const ratio = (a + 0.05) / (b + 0.05);
    seen += 1;
    if (ratio < 4.5) { bad.push([walker.currentNode.data.trim(), ratio]); }
  }
  return { seen, bad };
}"""


@each_kind
@pytest.mark.parametrize("scheme", ["light", "dark"])
def test_every_word_stands_out(address: str, scheme: Any, page: Page, site: Path) -> None:
    """Contrast 4.5 : 1 at least, by the formula of WCAG 2.2, 1.4.3."""
    page.emulate_media(color_scheme=scheme)
    open_page(page, site, address)
    found = page.evaluate(CONTRAST)
    assert found["seen"] > 20
    assert found["bad"] == []


def test_dark_is_dark(page: Page, site: Path) -> None:
    shades = []
    for scheme in ("light", "dark"):
        page.emulate_media(color_scheme=scheme)  # type: ignore[arg-type]
        open_page(page, site, "index.html")
        shade = page.evaluate("getComputedStyle(document.body).backgroundColor")
        shades.append(sum(int(n) for n in re.findall(r"[0-9]+", shade)) / 3)
    assert shades[0] > 240
    assert shades[1] < 40


@each_kind
def test_a_narrow_screen_does_not_scroll_sideways(address: str, page: Page, site: Path) -> None:
    page.set_viewport_size({"width": 320, "height": 640})
    open_page(page, site, address)
    assert page.evaluate("document.documentElement.scrollWidth") <= 320


@each_kind
def test_targets_are_large_enough_to_hit(address: str, page: Page, site: Path) -> None:
    """24 by 24 px (WCAG 2.2, 2.5.8); links in running text are excepted there."""
    open_page(page, site, address)
    small = page.evaluate(
        """() => [...document.querySelectorAll('nav a, button, input, select, summary, .answers a')]
        .filter(e => e.checkVisibility()).map(e => [e.outerHTML, e.getBoundingClientRect()])
        .filter(([, r]) => r.height < 24 || r.width < 24).map(([html]) => html)"""
    )
    assert small == []


def test_the_skip_link_is_the_first_stop_and_the_focus_shows(page: Page, site: Path) -> None:
    open_page(page, site, "bath-table.html")
    page.keyboard.press("Tab")
    skip = page.locator("a.skip")
    assert skip.evaluate("e => e === document.activeElement")
    box = skip.bounding_box()
    assert box is not None
    assert box["x"] >= 0
    assert skip.evaluate("e => getComputedStyle(e).outlineStyle") == "solid"
    page.keyboard.press("Enter")
    assert page.evaluate("document.activeElement.id") == "content"


@each_kind
def test_reads_without_scripts_and_says_so(address: str, browser: Browser, site: Path) -> None:
    context = browser.new_context(java_script_enabled=False)
    page = context.new_page()
    open_page(page, site, address)
    assert page.locator(".needs-script:visible").count() == 0
    assert "DRAFT, not approved for use" in page.inner_text("header")
    assert "1 December 2026" in page.inner_text("header")
    if address in ("index.html", "bath-table.html"):
        assert "script was stopped or is switched off" in page.inner_text(".unscripted")
        assert page.locator("table tbody tr").count() >= 12
    context.close()


@each_kind
def test_paper_says_which_issue_it_is_and_leaves_out_what_cannot_be_used(
    address: str, page: Page, site: Path
) -> None:
    open_page(page, site, address)
    page.emulate_media(media="print")
    head = page.inner_text("header")
    assert "Issue of 1 December 2026" in head
    assert "DRAFT, not approved for use" in head
    assert page.locator("nav:visible, .find:visible, .screen-only:visible").count() == 0


# ---- the bath table


def bath_rows(page: Page) -> dict[str, list[str]]:
    """Texts of every row by the name of its salt."""
    rows: list[list[str]] = page.evaluate(
        "[...document.querySelectorAll('#bath tbody tr')].map(r => "
        "[...r.cells].map(c => c.textContent.trim()))"
    )
    return {row[1]: row[2:] for row in rows}


@pytest.mark.parametrize("t", [0.0, 4.0, 25.0, 37.0, 63.5, 88.25, 100.0])
def test_bath_digits_are_those_of_python(
    t: float, page: Page, site: Path, reference: Reference
) -> None:
    open_page(page, site, f"bath-table.html#t={t:g}")
    shown = bath_rows(page)
    assert len(shown) == len(reference.salts)
    for evaluated in reference.salts.values():
        curve = evaluated.law.curve
        assert curve is not None
        text = constant_text(at(curve, t))
        expected = [text.log10_k, text.u, text.k, text.low, text.high, bath.ratio(curve, t)]
        state = text.state_words.replace(" the range of the law", " range")
        assert shown[evaluated.salt.name] == [*expected, state], evaluated.salt.id


def narrowed(reference: Reference) -> Reference:
    """Invented ranges, for every state to occur: 30 to 50 °C, carried 5 K; one without a u."""
    salts = dict(reference.salts)
    for salt_id in ("silver-chloride", "gypsum"):
        law = salts[salt_id].law
        assert law.curve is not None
        covariance = law.curve.covariance if salt_id == "gypsum" else None
        curve = replace(law.curve, range_c=(30.0, 50.0), carries_k=5.0, covariance=covariance)
        salts[salt_id] = replace(salts[salt_id], law=replace(law, curve=curve))
    law = replace(salts["brucite"].law, curve=None, reason="invented: no constant")
    salts["brucite"] = replace(salts["brucite"], law=law)
    return replace(reference, salts=salts)


@pytest.mark.parametrize(
    ("t", "state"),
    [
        (24.0, "refused: 24 °C is 6 K beyond the range 30 to 50 °C of the law, which can be"
               " carried 5 K at most"),
        (28.0, "beyond range by 2.0 K"),
        (50.0, "within range"),
    ],
)  # fmt: skip
def test_bath_shows_every_state_as_python_does(
    t: float, state: str, page: Page, tmp_path: Path, reference: Reference
) -> None:
    other = narrowed(reference)
    file = tmp_path / "bath-table.html"
    file.write_text(rendered(bath, other), "utf-8")
    page.goto(f"file://{file}#t={t:g}")
    shown = bath_rows(page)
    assert shown["calcium sulfate dihydrate"][-1] == state
    assert shown["silver(I) chloride"][-1] == state
    assert shown["silver(I) chloride"][1] == ("" if t < 25 else "not evaluated")
    assert shown["magnesium hydroxide"] == [""] * 6 + ["refused: invented: no constant"]
    for salt_id in ("gypsum", "silver-chloride"):
        curve = other.salts[salt_id].law.curve
        assert curve is not None
        text = constant_text(at(curve, t))
        assert shown[other.salts[salt_id].salt.name][:5] == [
            text.log10_k, text.u, text.k, text.low, text.high
        ]  # fmt: skip


@pytest.mark.parametrize(
    ("typed", "words"),
    [
        ("37,5", "point"),
        ("warm", "not a number"),
        ("", "Type a number"),
        ("0x19", "not a number"),
        ("\u22124", "Between 0 and 100"),
        ("101", "Between 0 and 100"),
    ],
)
def test_bath_refuses_in_a_sentence_and_keeps_its_table(
    typed: str, words: str, page: Page, site: Path
) -> None:
    open_page(page, site, "bath-table.html#t=37")
    before = bath_rows(page)
    page.fill("#temperature", typed)
    assert words in page.inner_text("#temperature-error")
    assert page.get_attribute("#temperature", "aria-invalid") == "true"
    assert bath_rows(page) == before
    assert page.inner_text("#at") == "37"


def test_bath_keeps_the_temperature_in_the_address_and_in_its_links(page: Page, site: Path) -> None:
    open_page(page, site, "bath-table.html")
    page.fill("#temperature", "310.15 K")
    page.wait_for_url("**/bath-table.html#t=37")
    page.reload()
    assert page.inner_text("#at") == "37"
    page.click("#bath a:has-text('lead(II) sulfate')")
    assert page.url.endswith("salts/lead-sulfate.html#t=37")


def test_bath_refuses_unknown_parts_of_the_address_in_words(page: Page, site: Path) -> None:
    open_page(page, site, "bath-table.html#t=37&colour=<b>red")
    assert "“colour=<b>red”, which this page does not know" in page.inner_text("#address-error")
    assert page.inner_text("#at") == "37"


def test_bath_sorts_by_any_column_both_ways(page: Page, few_site: Path) -> None:
    open_page(page, few_site, "bath-table.html#t=0")
    for column, name in ((2, "log"), (4, "K"), (1, "Name")):
        button = page.locator("#bath thead button").nth(column)
        for order, falling in (("ascending", False), ("descending", True)):
            button.click()
            cell = page.locator("#bath thead th").nth(column)
            assert cell.get_attribute("aria-sort") == order, name
            assert page.locator("#bath thead [aria-sort]").count() == 1
            texts = page.locator(f"#bath tbody tr > :nth-child({column + 1})").all_inner_texts()
            keys = [number(t) if column != 1 else t for t in texts if t]
            assert keys == sorted(keys, reverse=falling), name
            # refused rows stay at the end, whichever way the column is sorted
            assert texts[len(keys) :] == [""] * (len(texts) - len(keys))


def number(shown: str) -> float:
    """The value of a number as pages show it."""
    plain = shown.replace("\u2212", "-").replace(" × 10", "e")
    return float(plain.translate(str.maketrans("⁻⁰¹²³⁴⁵⁶⁷⁸⁹", "-0123456789")))


def test_house_temperatures_stand_in_the_page_without_scripts(
    site: Path, reference: Reference
) -> None:
    text = (site / "bath-table.html").read_text("utf-8")
    table = text[text.index("house-caption") :]
    curve = reference.salts["silver-chloride"].law.curve
    assert curve is not None
    row = re.search(r"<tr>\s*<th scope=\"row\">AgCl</th>.*?</tr>", table, flags=re.DOTALL)
    assert row is not None
    plain = re.sub(r"<[^>]+>", "", row[0])
    for t in (4.0, 25.0, 37.0):
        expected = constant_text(at(curve, t))
        assert f"{expected.log10_k} ± {expected.u}" in plain


# ---- what the other pages hold


def test_the_list_holds_every_salt_with_its_solubility(site: Path, reference: Reference) -> None:
    text = (site / "index.html").read_text("utf-8")
    for salt_id, evaluated in reference.salts.items():
        row = re.search(rf'<tr>(?:(?!</tr>).)*href="salts/{salt_id}\.html".*?</tr>', text, re.S)
        assert row is not None, salt_id
        plain = re.sub(r"<[^>]+>", "", row[0])
        assert evaluated.salt.name in plain
        grams = dissolve(reference, salt_id, 25.0).solubility_g_per_l
        if grams is None:
            assert "refused" in plain
            continue
        last = re.search(r"([\d.]+(?: × 10\S+)?)\s*$", plain)
        assert last is not None, plain
        assert number(last[1]) == pytest.approx(grams * 1e3, rel=0.06)


def test_search_entries_are_small(reference: Reference) -> None:
    lines = [find.line(reference, salt_id) for salt_id in reference.salts]
    for entry in find.index(reference, lines)["salts"]:  # type: ignore[attr-defined]
        size = len(json.dumps(entry, ensure_ascii=False, separators=(",", ":")).encode())
        assert size <= find.LARGEST_ENTRY


def test_a_long_entry_loses_other_names_first(reference: Reference) -> None:
    line = find.line(reference, "gypsum")
    names = tuple(f"invented name of some length, number {i}" for i in range(20))
    salt = replace(line.evaluated.salt, other_names=names)
    long = replace(line, evaluated=replace(line.evaluated, salt=salt))
    entry = find.index(reference, [long])["salts"][0]  # type: ignore[index]
    assert len(json.dumps(entry, ensure_ascii=False, separators=(",", ":")).encode()) <= 300
    assert entry[0] == "gypsum"
    assert entry[3] == list(names[: len(entry[3])])
    assert 2 <= len(entry[3]) < 20


def test_a_citation_stands_in_the_order_of_iso_690(page: Page, site: Path) -> None:
    """ISO 690:2021: creators, title, host, numbering, date, identifier."""
    open_page(page, site, "sources.html")
    assert page.locator("#kell-1975 p").first.inner_text() == (
        "KELL, George S. Density, thermal expansivity, and compressibility of liquid water from "
        "0° to 150 °C: correlations and tables for atmospheric pressure and saturation reviewed "
        "and expressed on 1968 temperature scale. In: Journal of Chemical and Engineering Data, "
        "vol. 20, no. 1, pp. 97–105. 1975. DOI 10.1021/je60064a005."
    )


def test_authors_are_joined_and_unknown_ones_left_out() -> None:
    names = [{"family": "Baes", "given": "Charles F."}, {"literal": "IUPAC"}, {"family": "Li"}]
    assert sources.authors(names[:1]) == "BAES, Charles F."
    assert sources.authors(names) == "BAES, Charles F., IUPAC and LI"
    assert sources.authors([]) == ""


def test_every_source_names_the_salts_that_rest_on_it(page: Page, site: Path) -> None:
    """Powell 2009 is cited by the salts of lead and by lead pairs: constants/ of the project."""
    open_page(page, site, "sources.html#powell-2009")
    text = page.inner_text("#powell-2009")
    assert "lead(II) sulfate" in text
    assert "formation of PbSO4(aq)" in text


def test_checks_count_what_is_there(
    page: Page, site: Path, reference: Reference, repository: Path
) -> None:
    open_page(page, site, "checks.html")
    facts = page.inner_text(".facts")
    files = list((repository / "constants" / "salts").glob("*.yaml"))
    assert re.search(rf"Salts\s+{len(files)}\b", facts)
    entered = sum(
        len(re.findall(r"^  - id: ", f.read_text("utf-8").partition("\nlaws:")[0], re.M))
        for f in files
    )
    assert re.search(rf"Determinations\s+{entered}\b", facts)
    assert page.locator("table:has(#support-caption) tbody tr").count() == len(files)
    shares = page.locator("table:has(#evidence-caption) tbody td:nth-child(4)").all_inner_texts()
    assert sum(int(n) for n in shares) == len(reference.salts)


def rendered(module: Any, reference: Reference, *more: Any) -> str:
    """The first page of a module, in a frame invented for the test."""
    frame = Frame("2026-12-01", "DRAFT", "22222-222222", "0")
    renderer = Renderer.from_folder(shipped_folder("templates"))
    pages: dict[str, bytes] = module.pages(reference, frame, renderer, *more)
    return next(iter(pages.values())).decode("utf-8")


def test_findings_are_listed_and_hostile_texts_stay_texts(
    reference: Reference, page: Page, tmp_path: Path
) -> None:
    hostile = "<script>alert(1)</script><img src=x onerror=alert(2)>"
    findings = [
        Finding("doubt", "judge-exponent", Place("constants/salts/x.yaml", 3, 5), hostile, "look"),
        Finding("note", "judge-not-converted", Place("constants/salts/y.yaml", 1, 1), "b", "c"),
    ]
    text = rendered(checks, reference, findings)
    assert "<img" not in text
    file = tmp_path / "checks.html"
    file.write_text(text, "utf-8")
    page.goto(f"file://{file}")
    assert "0 errors, 1 doubt, 1 note" in page.inner_text("main")
    assert hostile in page.inner_text("table >> nth=0")
    assert "constants/salts/x.yaml:3:5" in page.inner_text("table >> nth=0")


def test_no_finding_is_said_in_words(reference: Reference) -> None:
    assert "None: no error, no doubt, no note." in rendered(checks, reference, [])


def test_a_note_cites_only_sources_that_are_there(reference: Reference) -> None:
    known = reference.collection.sources
    for file in (shipped_folder("templates") / "notes").glob("*.md"):
        cited = re.findall(r"\]\(source:([^)]*)\)", file.read_text("utf-8"))
        assert cited
        assert set(cited) <= set(known), file.name
    body = "See [Kell](source:kell-1975) and [nobody](source:not-there)."
    assert notes.with_citations(body, known) == (
        "See [Kell](../sources.html#kell-1975) and nobody."
    )


def test_a_note_without_a_title_is_refused() -> None:
    with pytest.raises(ValueError, match=r"x\.md does not start with its title"):
        notes.split_title("No title here\n", "x.md")


def test_the_note_tells_the_numbers_that_the_program_uses(site: Path) -> None:
    text = (site / "notes" / "how-the-numbers-are-made.html").read_text("utf-8")
    carried = sorted(laws.CARRIES_K.values())
    told = (
        f"{carried[0]:g} to {carried[-1]:g} K by kind of law",
        f"{laws.U_DELTA_H / 1e3:g} kJ/mol for ΔH",
        f"{laws.U_DELTA_CP:g} J/(mol K) for a known ΔCp",
        f"{laws.U_EXPRESSION:g} for the log",
        f"{laws.U_SIDE_PAIR:g} for a pair and {laws.U_SIDE_HYDROLYSIS:g} for a hydrolysis constant",
        f"0 ± {laws.U_SIDE_DELTA_CP:g} J/(mol K)",
        f"another {laws.U_BETWEEN_LABORATORIES:g} in log",
        f"never below {choice.U_FLOOR:g}",
        f"Above {CURVATURE_FROM_C:g} °C",
        f"I = {mixture.LIMIT:g} mol/kg",
        f"at {mixture.LIMIT_TWO_TWO:g} for salts of two doubly charged ions",
        f"at {mixture.LIMIT_HIGH_CHARGE:g} where an ion has three charges",
        f"made up at {amounts.MADE_UP_AT_C:g} °C",
    )
    assert [words for words in told if words not in text] == []
