"""The answer of `dissolve` in lines for people."""

from __future__ import annotations

from builder.chem.formula import to_unicode
from builder.collection.answer import Dissolved
from builder.collection.forms import HYDROGEN
from builder.collection.reference import Reference
from builder.commands.dissolve import Answer
from builder.commands.telling import (
    aligned,
    between,
    celsius,
    digits,
    give_or_take,
    paragraph,
    plain,
    table,
    typographic,
)
from builder.commands.value import range_words

SMALLEST_SHARE = 0.0005  # of the dissolved metal; smaller ones get no line
BUDGET_LINES = 3

# Ion, the pH below which its solution gives off too much, and what: common practice.
GIVES_OFF = (
    ("CN^-", 11.0, "hydrogen cyanide, a gas that kills quickly"),
    ("HS^-", 9.0, "hydrogen sulfide, a gas that kills quickly and dulls the sense of smell"),
    ("HSe^-", 9.0, "hydrogen selenide, a very poisonous gas"),
    ("N3^-", 6.0, "hydrogen azide, a very poisonous and explosive gas"),
    ("SO3^2-", 6.0, "sulfur dioxide, a poisonous gas"),
    ("S2O3^2-", 6.0, "sulfur dioxide, a poisonous gas"),
    ("F^-", 6.0, "hydrogen fluoride, which burns deeply and can kill through the skin"),
)
AMMONIA_ABOVE = 7.0  # pH; below it hardly any ammonium is ammonia
OWN_RULES = "The laboratory's own procedure and local rules hold where they differ."

Lines = list[tuple[str, str]]


def text(reference: Reference, asked: Answer) -> str:
    """The whole answer: amounts, forms, what the uncertainty comes from, cautions."""
    it = asked.shown
    parts = [_title(reference, asked)]
    if dangers := _dangers(reference, asked):
        parts.insert(0, aligned([("caution", danger) for danger in dangers]))
    if it.state == "refused":
        refused = ("refused", typographic(it.reason))
        parts.append(aligned([refused, *_cautions(reference, it)]))
        return "\n".join(parts)
    parts.append(aligned(_amounts(reference, asked)))
    parts.append(_forms(it))
    parts.append(aligned([*_grounds(reference, asked), *_cautions(reference, it)]))
    return "\n".join(parts)


def _title(reference: Reference, asked: Answer) -> str:
    salt = reference.salts[asked.shown.salt].salt
    solution = " and ".join(
        f"{digits(m)} mol/kg {to_unicode(formula)}" for formula, m in asked.conditions.additions
    )
    title = f"{salt.name}, {to_unicode(salt.formula)} ({salt.id}), at "
    title += f"{celsius(asked.shown.temperature_c)} in {solution or 'water'}"
    if asked.conditions.ph is not None:
        title += f", pH held at {_ph(asked.conditions.ph)}"
    if asked.conditions.co2_bar is not None:
        title += f", under {digits(asked.conditions.co2_bar)} bar of carbon dioxide"
    title += "\n"
    if asked.textbook_asked:
        title += "Textbook answer: free ions only, concentrations for activities.\n"
        if asked.beyond_textbook:
            title += "It knows neither held pH nor carbon dioxide nor other solids: compare only.\n"
    return title


def _dangers(reference: Reference, asked: Answer) -> list[str]:
    """What the solution asked for would give off or become."""
    conditions = asked.conditions
    held = () if conditions.ph is None else (conditions.acid, conditions.base)
    added = [formula for formula, m in conditions.additions if m > 0.0]
    present = set(reference.dissolving[asked.full.salt].base)
    present.update(*(reference.additions[formula].base for formula in (*added, *held)))
    ph = asked.full.ph if conditions.ph is None else conditions.ph
    # a refused answer has no pH of its own; then an acid among the additions decides
    acidic = any(reference.additions[f].base.get(HYDROGEN, 0.0) > 0.0 for f in added)
    dangers = [
        f"{'Acid' if ph is None else f'At pH {_ph(ph)} it'} sets free {gas}. Common practice: only "
        f"in a fume cupboard made ready for it, never alone. {OWN_RULES}"
        for ion, below, gas in GIVES_OFF
        if ion in present and (acidic if ph is None else ph < below)
    ]
    if {"Ag^+", "NH4^+"} <= present and (not acidic if ph is None else ph > AMMONIA_ABOVE):
        dangers.append(
            "Silver with ammonia: such solutions, and what dries from them, can explode on "
            "standing. Common practice: make them only when needed, never store them, acidify "
            f"them before disposal. {OWN_RULES}"
        )
    return list(dict.fromkeys(dangers))


def _ph(ph: float) -> str:
    """Two decimals, or as many as were typed."""
    return plain(ph, 2) if round(ph, 2) == ph else typographic(f"{ph:.10g}")


def _amounts(reference: Reference, asked: Answer) -> Lines:
    it = asked.shown
    s, litre, metal_l = it.solubility_mol_per_kg, it.solubility_g_per_l, it.metal_mg_per_l
    dry = it.solubility_g_per_l_anhydrous
    assert s is not None and litre is not None and dry is not None and metal_l is not None
    comes_out = s < 0.0
    interval = None if comes_out else it.interval
    lines: Lines = []
    if comes_out:
        lines.append(("dissolves", "nothing: the solution as made up is oversaturated"))
        lines.append(("comes out", f"{digits(-s)} mol/kg, {digits(-litre)} g/L of the solid"))
    else:
        tail = f", {between(*interval)}" if interval else "; interval not evaluated"
        lines.append(("dissolves", f"{digits(s)} mol/kg{tail}"))
        grams = f"{digits(litre)} g/L"
        if abs(dry - litre) > 1e-9 * litre:
            grams += f", counted without water of crystallisation {digits(dry)} g/L"
        lines.append(("", grams))
    metal = f"{digits(metal_l)} mg/L"
    # where another solid forms, what dissolves does not all stay dissolved
    if (span := it.metal_interval) is not None and not it.formed:
        metal += f", {between(*span)}"
    lines += [
        (f"dissolved {to_unicode(it.metal)}", metal),
        (
            "",
            "metal in all its dissolved forms, what was added included, "
            f"in a litre at {celsius(it.temperature_c)}",
        ),
        ("", "(volume by the density of water)"),
        *_surroundings(reference, asked),
        *_textbook(asked),
    ]
    return lines


def _surroundings(reference: Reference, asked: Answer) -> Lines:
    """What was held, and which of the solids that may form did."""
    it, holds = asked.shown, asked.holds
    lines: Lines = []
    if holds.ph is not None and it.titrant_mol_per_kg is not None:
        amount = f"{digits(it.titrant_mol_per_kg)} mol/kg {to_unicode(it.titrant)}"
        lines.append(("held", f"pH {_ph(holds.ph)} held by {amount}"))
    if holds.co2_bar is not None:
        lines.append(("carbon dioxide", f"{digits(holds.co2_bar)} bar over the solution"))
    formed = {other.salt: other.mol_per_kg for other in it.formed}
    for other in holds.also:
        if other in formed:
            lines.append(("formed", f"{digits(formed[other])} mol/kg {_solid(reference, other)}"))
        else:
            lines.append(("not formed", _solid(reference, other)))
    return lines


def _textbook(asked: Answer) -> Lines:
    """The other of the two answers, and the factor between them."""
    if asked.textbook_asked:
        label, other, tail = "full answer", asked.full.solubility_mol_per_kg, ""
    else:
        label, other = "textbook", asked.full.textbook_mol_per_kg
        tail = " from free ions and concentrations"
        if asked.beyond_textbook:
            tail += ", knowing neither held pH nor carbon dioxide nor other solids"
    if other is None:
        return [(label, f"refused: {typographic(asked.full.reason)}")]
    told = f"{digits(abs(other))} mol/kg{' comes out' if other < 0.0 else ''}{tail}"
    if asked.full.factor is not None:
        told += f"; the full answer is {digits(asked.full.factor)} times the textbook's"
    return [(label, told)]


def _forms(it: Dissolved) -> str:
    """A table of the forms of the metal by share; the others in one line below."""
    metal = to_unicode(it.metal)
    shared = [f for f in it.forms if f.share is not None and f.share >= SMALLEST_SHARE]
    shared.sort(key=lambda f: (-(f.share or 0.0), f.form))
    rows = [
        (
            to_unicode(f.form),
            f"{plain(100.0 * (f.share or 0.0), 1)} %",
            digits(f.mol_per_kg),
            plain(f.activity_coefficient, 3),
        )
        for f in shared
    ]
    head = ("dissolved form", f"share of all {metal}", "mol/kg", "activity coefficient")
    others = ", ".join(
        f"{to_unicode(f.form)}\u00a0{digits(f.mol_per_kg)}" for f in it.forms if f.share is None
    )
    return table(head, rows) + paragraph(f"without {metal}, mol/kg: {others}")


def _grounds(reference: Reference, asked: Answer) -> Lines:
    it = asked.shown
    gas = "no" if asked.holds.co2_bar is None else "with"
    evaluated = reference.salts[it.salt]
    constant = it.constant
    assert it.ionic_strength is not None and it.ph is not None and constant.log10_k is not None
    lines: Lines = [
        (
            "solution",
            f"ionic strength {digits(it.ionic_strength)} mol/kg, pH {plain(it.ph, 2)}, "
            f"{gas} carbon dioxide; activity model: {it.activity_model}",
        ),
        (
            "log10 K",
            f"{give_or_take(constant.log10_k, constant.u)}, "
            f"{evaluated.chosen.determination.id}, {range_words(evaluated, constant)}",
        ),
    ]
    if it.standard_uncertainty_log10 is not None:
        left_out = ["the solids that formed"] if it.formed else []
        left_out += ["carbon dioxide as a gas"] if asked.holds.co2_bar is not None else []
        uncounted = f"; not counted: constants of {' and of '.join(left_out)}" if left_out else ""
        largest = ", ".join(
            f"{plain(100.0 * line.share, 0)} % {line.constant}" for line in it.budget[:BUDGET_LINES]
        )
        lines.append(
            (
                "uncertainty",
                f"of log10 of the amount {digits(it.standard_uncertainty_log10, 2)} "
                f"(one standard deviation); its variance: {largest}{uncounted}",
            )
        )
    else:
        lines.append(("uncertainty", "not evaluated"))
    for other in it.other_solids:
        lines.append(
            (
                "other solid",
                f"{_solid(reference, other.salt)} is oversaturated here, saturation index "
                f"{plain(other.saturation_index, 2)}: it may form instead, and the answer not hold",
            )
        )
    return lines


def _solid(reference: Reference, salt_id: str) -> str:
    salt = reference.salts[salt_id].salt
    return f"{salt.name} ({to_unicode(salt.formula)})"


def _cautions(reference: Reference, it: Dissolved) -> Lines:
    hazard = reference.collection.hazards.get(reference.salts[it.salt].salt.hazard or "")
    return [] if hazard is None else [("caution", hazard.words), ("", hazard.care)]
