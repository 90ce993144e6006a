"""Chemical formulae: reading, balance counts, canonical and typographic forms.

A formula is one or more parts joined by a middle dot (`CaSO4·2H2O`, `3CaO·Al2O3·12H2O`), then
perhaps a charge (`Pb^2+`, `Cl^-`) and a state (`PbSO4(aq)`). Read as equals: `.`, `*` and other
centred dots, subscript digits, superscript charges, `½` before a part.
"""

import difflib
import functools
import re
from dataclasses import dataclass
from fractions import Fraction

_BY_ATOMIC_NUMBER = (
    "H He Li Be B C N O F Ne Na Mg Al Si P S Cl Ar K Ca Sc Ti V Cr Mn Fe Co Ni Cu Zn Ga Ge As Se Br"
    " Kr Rb Sr Y Zr Nb Mo Tc Ru Rh Pd Ag Cd In Sn Sb Te I Xe Cs Ba La Ce Pr Nd Pm Sm Eu Gd Tb Dy Ho"
    " Er Tm Yb Lu Hf Ta W Re Os Ir Pt Au Hg Tl Pb Bi Po At Rn Fr Ra Ac Th Pa U Np Pu Am Cm Bk Cf Es"
    " Fm Md No Lr Rf Db Sg Bh Hs Mt Ds Rg Cn Nh Fl Mc Lv Ts Og"
)
ELEMENTS = tuple(_BY_ATOMIC_NUMBER.split())
_KNOWN = frozenset(ELEMENTS)

# Bounds on hostile texts, far above any real formula.
LONGEST_TEXT = 200
DEEPEST_NESTING = 8

# One character for one, so that a column of the plain text is a column of the text given.
_PLAIN = str.maketrans(
    "₀₁₂₃₄₅₆₇₈₉.*•∙⋅・−–",
    "0123456789······--",
)
_RAISED = str.maketrans("⁺⁻⁰¹²³⁴⁵⁶⁷⁸⁹", "+-0123456789")
_HALVES = {"½": Fraction(1, 2), "¼": Fraction(1, 4), "¾": Fraction(3, 4), "⅓": Fraction(1, 3)}
_CLOSING = {"(": ")", "[": "]"}

_MULTIPLE = re.compile(r"([0-9]+)(?:(·)([0-9]+)|/([0-9]+))?|([½¼¾⅓])")
_SYMBOL = re.compile(r"[A-Z][a-z]?")
_COUNT = re.compile(r"[0-9]+")
_CHARGE = re.compile(r"\^([0-9]*)([+-])|([⁰¹²³⁴⁵⁶⁷⁸⁹]*)([⁺⁻])")
_STATE = re.compile(r"\((aq|s|g|l)\)")

# The end of what people type: text, count, perhaps a space and charge, signs, perhaps charge.
_TYPED_CHARGE = re.compile(r"(.*[^\s0-9+-])([0-9]*)(?:(\s+)([0-9]*))?([+]+|-+)([0-9]*)")
_TYPED_WATER = re.compile(r"(?:\s*[·.*•∙⋅]\s*|\s+)([0-9.½¼¾⅓/]*)\s*(H[2₂]O)$")
# One element, yet the digit counts atoms: triiodide and azide.
_NOT_MONATOMIC = frozenset({"I3-", "N3-"})

_LOWERED_OR_RAISED = re.compile(r"(?<=[A-Za-z)\]])[0-9]+|\^[0-9]*[+-]")
_SUBSCRIPTS = str.maketrans("0123456789", "₀₁₂₃₄₅₆₇₈₉")
_SUPERSCRIPTS = str.maketrans("0123456789+−", "⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻")

Counts = tuple[tuple[str, Fraction], ...]


class FormulaError(ValueError):
    """A text that does not read as chemistry; `column` counts from 1 in the text given."""

    def __init__(self, text: str, column: int, found: str, cure: str) -> None:
        super().__init__(f"{text!r}, column {column}: {found}; {cure}")
        self.text = text
        self.column = column
        self.found = found
        self.cure = cure


@dataclass(frozen=True)
class Formula:
    """What a formula says. Counts are atoms per formula unit, waters of the parts included."""

    text: str  # as it was given
    canonical: str  # ASCII but for the middle dot
    elements: Counts  # in the order of first appearance
    charge: int
    water: Fraction  # waters of crystallisation, the parts that are H2O
    state: str  # 'aq', 's', 'g', 'l' or empty


@functools.cache
def parse_formula(text: str) -> Formula:
    """Read one formula strictly; `FormulaError` says where and what would be right."""
    return _Reader(text).formula()


def canonical(formula: Formula) -> str:
    """The one spelling: `CaSO4·2H2O`, `Pb^2+`, `PbSO4(aq)`."""
    return formula.canonical


def parse_typed_formula(text: str) -> Formula:
    """Read a formula as people type it: `Pb2+`, `SO42-`, `SO4 2-`, `Ca++`, `PO4-3`, `CaSO4 2H2O`.

    A digit before the sign is the charge of a single element and the count in a polyatomic ion
    (`NH4+`); of two digits the last is the charge. Raises `FormulaError` on the text so completed.
    """
    if len(text) > LONGEST_TEXT:
        return parse_formula(text)  # which refuses it
    tidy = text.strip().replace("−", "-").replace("–", "-")
    tidy = _TYPED_WATER.sub(r"·\1\2", tidy)
    tidy = re.sub(r"\s+(?=\((?:aq|s|g|l)\)$)", "", tidy)
    match = _TYPED_CHARGE.fullmatch(tidy)
    if match is None or "^" in tidy:
        return parse_formula(tidy)
    body, count, gap, charge, signs, charge_after = match.groups()
    if gap or charge_after or len(signs) > 1:
        charge = charge or charge_after or str(len(signs))
    elif len(count) > 1:
        count, charge = count[:-1], count[-1]
    elif body[-1] in "₀₁₂₃₄₅₆₇₈₉" or (body in _KNOWN and tidy not in _NOT_MONATOMIC):
        count, charge = "", count
    return parse_formula(f"{body}{count}^{charge or ''}{signs[0]}")


def to_html(text: str) -> list[tuple[str, str]]:
    """Parts of a canonical formula or reaction as ('text' | 'sub' | 'sup', characters).

    The page escapes the characters and sets the marks; U+2212 is the minus of a charge.
    """
    parts: list[tuple[str, str]] = []
    end = 0
    for match in _LOWERED_OR_RAISED.finditer(text):
        if match.start() > end:
            parts.append(("text", text[end : match.start()]))
        raised = match.group().startswith("^")
        shown = match.group().lstrip("^").replace("-", "−")
        parts.append(("sup" if raised else "sub", shown))
        end = match.end()
    if end < len(text):
        parts.append(("text", text[end:]))
    return parts


def to_unicode(text: str) -> str:
    """A canonical formula or reaction in plain Unicode: `CaSO₄·2H₂O`, `SO₄²⁻`."""
    tables: dict[str, dict[int, int]] = {"text": {}, "sub": _SUBSCRIPTS, "sup": _SUPERSCRIPTS}
    return "".join(shown.translate(tables[kind]) for kind, shown in to_html(text))


class _Reader:
    """One pass over one text, from left to right."""

    def __init__(self, text: str) -> None:
        self.text = text
        self.plain = text.translate(_PLAIN)
        self.at = 0
        if len(text) > LONGEST_TEXT:
            raise self.error("a text this long", f"a formula has at most {LONGEST_TEXT} characters")

    def error(self, found: str, cure: str) -> FormulaError:
        return FormulaError(self.text, self.at + 1, found, cure)

    def here(self) -> str:
        if self.at >= len(self.plain):
            return "the end of the formula"
        return repr(self.text[self.at])

    def take(self, pattern: re.Pattern[str]) -> re.Match[str] | None:
        match = pattern.match(self.plain, self.at)
        if match:
            self.at = match.end()
        return match

    def formula(self) -> Formula:
        counts: dict[str, Fraction] = {}
        water = Fraction(0)
        spelled: list[str] = []
        while True:
            start = self.at
            multiple = self.multiple()
            part, spelling = self.units(depth=0)
            for symbol, count in part.items():
                counts[symbol] = counts.get(symbol, Fraction(0)) + multiple * count
            if spelled and part == {"H": 2, "O": 1}:
                water += multiple
            spelled.append(("" if multiple == 1 else _number_text(multiple)) + spelling)
            if self.at >= len(self.plain) or self.plain[self.at] != "·":
                break
            self.at += 1
        if len(spelled) == 1 and multiple != 1:
            self.at = start
            raise self.error("a number before the formula", "leave it out: it is for reactions")
        charge, charge_text = self.charge()
        state = self.take(_STATE)
        if self.at < len(self.plain):
            raise self.error(self.here(), "write it like CaSO4·2H2O, SO4^2- or PbSO4(aq)")
        return Formula(
            text=self.text,
            canonical="·".join(spelled) + charge_text + (state.group() if state else ""),
            elements=tuple(counts.items()),
            charge=charge,
            water=water,
            state=state.group(1) if state else "",
        )

    def multiple(self) -> Fraction:
        """The number before a part; 1 where there is none."""
        start = self.at
        match = self.take(_MULTIPLE)
        if match is None:
            return Fraction(1)
        whole, dot, decimals, divisor, half = match.groups()
        if half:
            return _HALVES[half]
        if dot and self.text[match.start(2)] != ".":
            # '3·5' is no decimal number: only a full stop is a decimal point.
            self.at = match.start(2)
            raise self.error(self.here(), "a part follows its number at once, as in ·2H2O")
        if divisor:
            value = Fraction(int(whole), int(divisor)) if int(divisor) else Fraction(0)
        else:
            value = Fraction(f"{whole}.{decimals or 0}")
        if value == 0:
            self.at = start
            raise self.error("a part taken zero times", "leave the part out")
        return value

    def units(self, depth: int) -> tuple[dict[str, Fraction], str]:
        """Elements and groups up to what is neither; at least one."""
        counts: dict[str, Fraction] = {}
        spelled = ""
        while self.at < len(self.plain) and not _STATE.match(self.plain, self.at):
            opening = self.plain[self.at]
            if opening in _CLOSING:
                inner, spelling = self.group(depth + 1)
            elif opening.isascii() and opening.isalpha():
                spelling = self.symbol()
                inner = {spelling: Fraction(1)}
            else:
                break
            times = self.count()
            for symbol, count in inner.items():
                counts[symbol] = counts.get(symbol, Fraction(0)) + times * count
            spelled += spelling + ("" if times == 1 else str(times))
        if not spelled:
            raise self.error(self.here(), "an element is wanted here, as in PbSO4")
        return counts, spelled

    def group(self, depth: int) -> tuple[dict[str, Fraction], str]:
        start = self.at
        opening = self.plain[start]
        if depth > DEEPEST_NESTING:
            raise self.error("too many brackets", f"nest at most {DEEPEST_NESTING} deep")
        self.at += 1
        inner, spelling = self.units(depth)
        if self.at >= len(self.plain):
            self.at = start
            raise self.error(f"{opening!r} that is not closed", f"add {_CLOSING[opening]!r}")
        if self.plain[self.at] != _CLOSING[opening]:
            raise self.error(self.here(), f"{_CLOSING[opening]!r} is wanted here")
        self.at += 1
        return inner, opening + spelling + _CLOSING[opening]

    def symbol(self) -> str:
        match = _SYMBOL.match(self.plain, self.at)
        found = match.group() if match else self.plain[self.at : self.at + 2]
        if match is None or found not in _KNOWN:
            cure = f"perhaps {_nearest(found)}" if _nearest(found) else "see the periodic table"
            raise self.error(f"{found!r} is no element", cure)
        self.at = match.end()
        return found

    def count(self) -> int:
        start = self.at
        match = self.take(_COUNT)
        if match is None:
            return 1
        if match.group().startswith("0"):
            self.at = start
            raise self.error(f"the count {match.group()!r}", "counts are 1, 2, 3, ...")
        return int(match.group())

    def charge(self) -> tuple[int, str]:
        start = self.at
        match = self.take(_CHARGE)
        if match is None:
            if self.plain[self.at : self.at + 1] in ("^", "+", "-"):
                raise self.error(self.here(), "a charge is written ^2+ or ^-")
            return 0, ""
        size = (match.group(1) or match.group(3) or "").translate(_RAISED)
        sign = (match.group(2) or match.group(4)).translate(_RAISED)
        if size.startswith("0"):
            self.at = start
            raise self.error(f"the charge {match.group()!r}", "a charge is written ^2+ or ^-")
        magnitude = int(size or 1)
        text = f"^{magnitude if magnitude > 1 else ''}{sign}"
        return (magnitude if sign == "+" else -magnitude), text


def _number_text(value: Fraction) -> str:
    """`2`, `0.5`; `1/3` where decimals do not end."""
    if value.denominator == 1:
        return str(value.numerator)
    places = next((n for n in range(1, 7) if 10**n % value.denominator == 0), None)
    if places is None:
        return f"{value.numerator}/{value.denominator}"
    digits = str(value * 10**places).rjust(places + 1, "0")
    return f"{digits[:-places]}.{digits[-places:]}"


def _nearest(found: str) -> str:
    """The known symbol most like what was found, or nothing."""
    tidy = found[:1].upper() + found[1:].lower()
    if tidy in _KNOWN:
        return tidy
    return next(iter(difflib.get_close_matches(tidy, ELEMENTS, n=1, cutoff=0.5)), "")
