"""The answer to how much dissolves, as a record: amounts, forms, budget, intervals."""

from __future__ import annotations

from dataclasses import dataclass

from builder.chem.curve import CurveValue


@dataclass(frozen=True)
class FormAmount:
    """One dissolved form. share: of all dissolved metal of the salt; None for a form without it."""

    form: str
    share: float | None
    mol_per_kg: float
    activity_coefficient: float


@dataclass(frozen=True)
class BudgetLine:
    """Part of the variance of log10 of the solubility that one constant carries."""

    constant: str
    sensitivity: float
    u: float
    share: float  # of the variance


@dataclass(frozen=True)
class OtherSolid:
    """Another solid of the collection the answer is supersaturated with."""

    salt: str
    saturation_index: float


@dataclass(frozen=True)
class Formed:
    """Another solid that formed, mol per kg of water."""

    salt: str
    mol_per_kg: float


@dataclass(frozen=True)
class Dissolved:
    """Answer of `dissolve`. Where state is refused the numbers are None and reason says why.

    A negative solubility is what comes out of a solution that is oversaturated as made up.
    metal_mg_per_mol: mg of the metal in one mol of the solid. textbook_mol_per_kg may be there
    where the answer itself is refused.
    """

    salt: str
    temperature_c: float
    state: str
    reason: str
    constant: CurveValue
    solubility_mol_per_kg: float | None = None
    solubility_mol_per_l: float | None = None
    solubility_g_per_l: float | None = None
    solubility_g_per_l_anhydrous: float | None = None
    metal: str = ""
    metal_mg_per_mol: float = 0.0
    metal_mg_per_kg: float | None = None
    metal_mg_per_l: float | None = None
    forms: tuple[FormAmount, ...] = ()
    ionic_strength: float | None = None
    activity_model: str = ""
    ph: float | None = None
    standard_uncertainty_log10: float | None = None
    budget: tuple[BudgetLine, ...] = ()
    textbook_mol_per_kg: float | None = None
    other_solids: tuple[OtherSolid, ...] = ()
    titrant: str = ""
    titrant_mol_per_kg: float | None = None
    formed: tuple[Formed, ...] = ()

    @property
    def interval(self) -> tuple[float, float] | None:
        """95 % interval of the solubility, mol/kg; None where it is not evaluated."""
        s, u = self.solubility_mol_per_kg, self.standard_uncertainty_log10
        if s is None or u is None:
            return None
        half = self.constant.coverage_factor * u
        low, high = sorted((s * 10.0**-half, s * 10.0**half))
        return low, high

    @property
    def metal_interval(self) -> tuple[float, float] | None:
        """95 % interval of the metal, mg/L: what was added is exact, what dissolves is not.

        None where another solid formed too: it holds metal of its own.
        """
        if self.formed:
            return None
        s, litre = self.solubility_mol_per_kg, self.solubility_mol_per_l
        if self.interval is None or s is None or litre is None or self.metal_mg_per_l is None:
            return None
        low, high = ((bound - s) * self.metal_mg_per_mol * litre / s for bound in self.interval)
        return max(self.metal_mg_per_l + low, 0.0), self.metal_mg_per_l + high

    @property
    def factor(self) -> float | None:
        """This answer over the textbook's; None where one is missing or the solid comes out."""
        full, simple = self.solubility_mol_per_kg, self.textbook_mol_per_kg
        if full is None or simple is None or full <= 0.0 or simple <= 0.0:
            return None
        return full / simple
