"""The picture of log10 K against temperature: reported points, law, 95 % band and range.

Plain SVG with classes from style.css, numbers of one decimal, a title and a description for those
who do not see it.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise

from markupsafe import Markup

from builder.chem.curve import CurveValue, at
from builder.chem.rounding import fixed
from builder.collection.choice import Evaluated
from builder.collection.figures import Reported

WIDTH, HEIGHT = 640.0, 400.0
LEFT, RIGHT, TOP, BOTTOM = 64.0, 12.0, 16.0, 48.0
LEAST_SPAN = 0.6  # log10 K shown at least


@dataclass(frozen=True)
class _Frame:
    low: float
    high: float

    def x(self, t: float) -> float:
        return LEFT + (WIDTH - LEFT - RIGHT) * t / 100.0

    def y(self, log10_k: float) -> float:
        share = (self.high - log10_k) / (self.high - self.low)
        return TOP + (HEIGHT - TOP - BOTTOM) * share


def law_picture(evaluated: Evaluated) -> Markup:
    """SVG of one salt; an empty string where no law can be drawn."""
    curve = evaluated.law.curve
    if curve is None:
        return Markup("")
    values = [at(curve, t) for t in range(0, 101, 2)]
    drawn = [v for v in values if v.log10_k is not None]
    points = [r for r in evaluated.reported.values() if r.log10_k is not None]
    frame = _frame(drawn, points)
    inside = [r for r in points if frame.low <= (r.log10_k or 0.0) <= frame.high]
    outside = len(points) - len(inside)
    name = evaluated.salt.name
    first, last = drawn[0], drawn[-1]
    description = (
        f"log10 K of {name} from {fixed(first.log10_k or 0.0, 2)} at {first.t_celsius:g} °C to "
        f"{fixed(last.log10_k or 0.0, 2)} at {last.t_celsius:g} °C, with {len(inside)} reported "
        f"values" + (f"; {outside} more lie outside the picture" if outside else "") + "."
    )
    body = Markup("").join(
        (_axes(frame), _band(frame, drawn), _lines(frame, drawn), _points(frame, inside, evaluated))
    )
    return Markup(
        '<svg class="plot" viewBox="0 0 {w:.0f} {h:.0f}" role="img" '
        'aria-labelledby="plot-title plot-text"><title id="plot-title">log10 K of {name} against '
        'temperature</title><desc id="plot-text">{description}</desc>{body}</svg>'
    ).format(w=WIDTH, h=HEIGHT, name=name, description=description, body=body)


def _frame(drawn: Sequence[CurveValue], points: Sequence[Reported]) -> _Frame:
    """Law and band, and every point within 1.5 of the law; misprints must not flatten the rest."""
    levels: list[float] = []
    for v in drawn:
        half = v.coverage_factor * (v.u or 0.0)
        levels += [(v.log10_k or 0.0) - half, (v.log10_k or 0.0) + half]
    middle = 0.5 * (min(levels) + max(levels))
    near = 0.5 * (max(levels) - min(levels)) + 1.0
    levels += [r.log10_k for r in points if r.log10_k and abs(r.log10_k - middle) <= near]
    low, high = min(levels), max(levels)
    if high - low < LEAST_SPAN:
        middle = 0.5 * (low + high)
        low, high = middle - 0.5 * LEAST_SPAN, middle + 0.5 * LEAST_SPAN
    margin = 0.06 * (high - low)
    return _Frame(low - margin, high + margin)


def _axes(frame: _Frame) -> Markup:
    parts: list[Markup] = []
    bottom = HEIGHT - BOTTOM
    for t in range(0, 101, 20):
        x = frame.x(float(t))
        parts.append(
            Markup(
                '<line class="grid" x1="{x:.1f}" y1="{a:.1f}" x2="{x:.1f}" y2="{b:.1f}"/>'
                '<text class="tick" x="{x:.1f}" y="{c:.1f}" text-anchor="middle">{t}</text>'
            ).format(x=x, a=TOP, b=bottom, c=bottom + 18.0, t=t)
        )
    step = _step(frame.high - frame.low)
    decimals = max(0, -math.floor(math.log10(step) + 1e-9))
    k = math.ceil(frame.low / step)
    while k * step <= frame.high:
        y = frame.y(k * step)
        label = fixed(k * step, decimals).replace("-", "−")
        parts.append(
            Markup(
                '<line class="grid" x1="{a:.1f}" y1="{y:.1f}" x2="{b:.1f}" y2="{y:.1f}"/>'
                '<text class="tick" x="{c:.1f}" y="{d:.1f}" text-anchor="end">{label}</text>'
            ).format(a=LEFT, b=WIDTH - RIGHT, y=y, c=LEFT - 8.0, d=y + 4.0, label=label)
        )
        k += 1
    parts.append(
        Markup(
            '<path class="axis" d="M{l:.1f} {t:.1f}V{b:.1f}H{r:.1f}"/>'
            '<text class="name" x="{m:.1f}" y="{n:.1f}" text-anchor="middle">temperature, °C</text>'
            '<text class="name" x="14" y="{o:.1f}" text-anchor="middle" '
            'transform="rotate(-90 14 {o:.1f})">log₁₀ K</text>'
        ).format(
            l=LEFT,
            t=TOP,
            b=bottom,
            r=WIDTH - RIGHT,
            m=0.5 * (LEFT + WIDTH - RIGHT),
            n=HEIGHT - 8.0,
            o=0.5 * (TOP + bottom),
        )
    )
    return Markup("").join(parts)


def _step(span: float) -> float:
    """1, 2 or 5 times a power of ten, for four to eight lines."""
    raw = span / 6.0
    power = 10.0 ** math.floor(math.log10(raw))
    return next(n * power for n in (1.0, 2.0, 5.0, 10.0) if n * power >= raw)


def _band(frame: _Frame, drawn: Sequence[CurveValue]) -> Markup:
    if any(v.u is None for v in drawn):
        return Markup("")
    above = [(frame.x(v.t_celsius), frame.y(_edge(v, 1.0))) for v in drawn]
    below = [(frame.x(v.t_celsius), frame.y(_edge(v, -1.0))) for v in reversed(drawn)]
    return Markup('<path class="band" d="{d}Z"/>').format(d=_path([*above, *below]))


def _edge(v: CurveValue, side: float) -> float:
    return (v.log10_k or 0.0) + side * v.coverage_factor * (v.u or 0.0)


def _lines(frame: _Frame, drawn: Sequence[CurveValue]) -> Markup:
    """The law piece by piece: solid where both ends lie within its range, dashed beyond."""
    parts: list[Markup] = []
    for css, beyond in (("law", False), ("beyond", True)):
        pieces = [
            f"M{frame.x(a.t_celsius):.1f} {frame.y(a.log10_k or 0.0):.1f}"
            f"L{frame.x(b.t_celsius):.1f} {frame.y(b.log10_k or 0.0):.1f}"
            for a, b in pairwise(drawn)
            if ("beyond-range" in (a.state, b.state)) == beyond
        ]
        if pieces:
            parts.append(Markup('<path class="{c}" d="{d}"/>').format(c=css, d="".join(pieces)))
    return Markup("").join(parts)


def _path(points: Sequence[tuple[float, float]]) -> str:
    return "M" + "L".join(f"{x:.1f} {y:.1f}" for x, y in points)


def _points(frame: _Frame, points: Sequence[Reported], evaluated: Evaluated) -> Markup:
    """Read in print: filled; recalled: hollow; computed: square. The chosen one is framed."""
    parts: list[Markup] = []
    for r in sorted(points, key=lambda r: r is evaluated.chosen):  # the chosen one on top
        x, y = frame.x(r.t_celsius), frame.y(r.log10_k or 0.0)
        evidence = r.determination.citation.evidence
        css = "point" + (" recalled" if evidence == "recalled" else "")
        if r is evaluated.chosen:
            css += " chosen"
        if evidence == "computed":
            mark = Markup('<rect class="{}" x="{:.1f}" y="{:.1f}" width="8" height="8"/>')
            parts.append(mark.format(css, x - 4.0, y - 4.0))
        else:
            mark = Markup('<circle class="{}" cx="{:.1f}" cy="{:.1f}" r="4"/>')
            parts.append(mark.format(css, x, y))
    return Markup("").join(parts)
