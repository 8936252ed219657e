"""Redox and energy state: free ratios, potentials, free ADP and AMP, phosphorylation, energy charge."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from panelview.assess.calls import Z95
from panelview.assess.plan import Plan, couple_analytes
from panelview.assess.review import Review, StateRow
from panelview.catalogue.couples import RATIO_POOLS, IndicatorCouple
from panelview.catalogue.load import Catalogue
from panelview.thermo.physical import FARADAY_CONSTANT, LN10

#: Standard transformed potentials at pH 7 and 25 °C, V (biochemistry textbooks, memory); NAD(P)⁺ takes up
#: one H⁺ for two electrons, so E′° falls by RT ln10/2F a pH unit.
STANDARD_POTENTIAL = {"nad": -0.320, "nadp": -0.324}

#: Under this lactate (mol/L) lactate/pyruvate does not separate causes of a raised ratio (Debray et al. 2007).
LEAST_LACTATE = 2.5e-3

_FLUIDS = frozenset({"plasma", "whole_blood", "csf"})


@dataclass(frozen=True)
class _LogQuantity:
    """ln of a quantity as nu·ln c + times·ln K′(step), of one specimen."""

    value: float
    sd: float
    open_below: bool
    open_above: bool


class _Specimen:
    """One specimen's numbers, with the arithmetic that every quantity shares."""

    def __init__(self, review: Review, row: int) -> None:
        self._used = review.concentrations
        self._row = row
        self._position = {a: k for k, a in enumerate(self._used.analytes)}
        self._step = {s.id: k for k, s in enumerate(review.catalogue.steps)}
        constants = review.constants
        at = constants.row[row]
        self.ph = float(review.conditions.ph[row])
        self.rt = float(constants.rt[row])
        self._ln_k = -constants.steps.delta_g0_prime[at] / self.rt
        self._ln_k_sd = constants.steps.sd[at] / self.rt
        self._ln_k_slope = -constants.steps.by[at] * constants.sd[at] / self.rt

    def has(self, *analytes: str) -> bool:
        return all(np.isfinite(self._used.ln_c[self._row, self._position[a]]) for a in analytes)

    def amount(self, analyte: str) -> float:
        """mol/L (the limit where censored)."""
        return float(np.exp(self._used.ln_c[self._row, self._position[analyte]]))

    def sd(self, analyte: str) -> float:
        return float(self._used.sd[self._row, self._position[analyte]])

    def log(self, nu: dict[str, float], constants: dict[str, float]) -> _LogQuantity:
        """nu: analyte → exponent; constants: step id → times ln K′."""
        k = [self._position[a] for a in nu]
        n = np.array(list(nu.values()))
        ln_c = self._used.ln_c[self._row, k]
        value = float(n @ ln_c)
        variance = float(n**2 @ self._used.sd[self._row, k] ** 2)
        shared, basis = self._used.shared_sd[self._row, k], self._used.basis[self._row, k]
        for code in set(basis.tolist()):
            variance += float(n[basis == code] @ shared[basis == code]) ** 2
        steps = [self._step[step] for step in constants]
        times = np.array(list(constants.values()))
        value += float(times @ self._ln_k[steps])
        # Constants err apart, but all of them stand at the same pH, temperature, ionic strength and pMg.
        variance += float(times**2 @ self._ln_k_sd[steps] ** 2 + ((times @ self._ln_k_slope[steps]) ** 2).sum())
        below, above = self._used.below[self._row, k], self._used.above[self._row, k]
        return _LogQuantity(
            value,
            float(np.sqrt(variance)),
            bool((below & (n > 0)).any() or (above & (n < 0)).any()),
            bool((above & (n > 0)).any() or (below & (n < 0)).any()),
        )


def state_of(review: Review, row: int) -> tuple[StateRow, ...]:
    """Every quantity that the analytes of one specimen allow, in the order of state.csv."""
    plan = review.plans[review.plan_of[row]]
    if plan.matrix == "urine":
        return ()
    specimen = _Specimen(review, row)
    return (
        *_redox(review.catalogue, plan, specimen, row),
        *_pairs(plan, specimen, row),
        *_adenylates(review.catalogue, plan, specimen, row),
        *_hydrolysis(review, plan, row),
    )


def _row(
    specimen: int,
    quantity: str,
    compartment: str,
    couple: str,
    log: _LogQuantity,
    unit: str,
    judged: tuple[str, str],
    transform: Callable[[float], float] = lambda x: float(np.exp(x)),
) -> StateRow:
    """A row from a log quantity; a side left open by a limit of quantification is ±inf or the range's end."""
    value = transform(log.value)
    lower = transform(log.value - Z95 * log.sd) if not log.open_below else transform(-np.inf)
    upper = transform(log.value + Z95 * log.sd) if not log.open_above else transform(np.inf)
    if log.open_below or log.open_above:
        value = float("nan")
    return StateRow(specimen, quantity, compartment, couple, value, lower, upper, unit, *judged)


def ln_ratio_terms(
    catalogue: Catalogue, couple: IndicatorCouple
) -> tuple[dict[str, float], dict[str, float]]:
    """ln(oxidised/reduced) of a couple's free pool as exponents of its pair and a multiple of ln K′.

    At equilibrium Σ ν ln c(pair) − ν_red ln r = ln K′, so ln r = (Σ ν ln c − ln K′)/ν_red.
    """
    reduced = RATIO_POOLS[couple.pool][1]
    step = next(s for s in catalogue.steps if s.id == couple.step_id)
    reduced_nu = next(n for i, n in step.stoichiometry if i == reduced)
    pair = couple_analytes(catalogue, couple)
    nu = {i: n / reduced_nu for i, n in step.stoichiometry if i in pair}
    return nu, {couple.step_id: -1.0 / reduced_nu}


def _redox(catalogue: Catalogue, plan: Plan, specimen: _Specimen, row: int) -> list[StateRow]:
    rows = []
    chosen = {use.pool: use.couple for use in plan.pools}
    for couple in sorted(
        catalogue.couples,
        key=lambda c: (list(RATIO_POOLS).index(c.pool), c.priority) if c.pool in RATIO_POOLS else (99, 0),
    ):
        if couple.pool not in RATIO_POOLS or plan.matrix not in couple.matrices:
            continue
        if not specimen.has(*couple_analytes(catalogue, couple)):
            continue
        form, _, compartment = RATIO_POOLS[couple.pool]
        log = specimen.log(*ln_ratio_terms(catalogue, couple))
        judged = _validity(catalogue, plan.matrix, couple)
        rows.append(_row(row, f"{_stem(form)}_free", compartment, couple.step_id, log, "1", judged))
        if chosen.get(couple.pool) is couple:
            rows.append(_potential(row, form, compartment, couple.step_id, log, specimen, judged))
    return rows


def _stem(form: str) -> str:
    return "nad_nadh" if form == "nad" else "nadp_nadph"


def _potential(
    row: int,
    form: str,
    compartment: str,
    couple: str,
    log: _LogQuantity,
    specimen: _Specimen,
    judged: tuple[str, str],
) -> StateRow:
    """E = E′°(pH) + (RT/2F) ln(ox/red) in mV (Nernst)."""
    slope = specimen.rt / (2 * FARADAY_CONSTANT)
    standard = STANDARD_POTENTIAL[form] - slope * LN10 * (specimen.ph - 7.0)

    def millivolt(ln_ratio: float) -> float:
        return float(1000 * (standard + slope * ln_ratio))

    return _row(row, f"{form}_potential", compartment, couple, log, "mV", judged, millivolt)


def _validity(catalogue: Catalogue, matrix: str, couple: IndicatorCouple) -> tuple[str, str]:
    entry = catalogue.applicability[couple.step_id, matrix]
    if entry.assessability == "assessed":
        return "valid", couple.assumption
    if entry.assessability == "proxy":
        return "proxy", entry.reason
    return "not_valid", entry.reason


def _pairs(plan: Plan, specimen: _Specimen, row: int) -> list[StateRow]:
    rows = []
    if specimen.has("lactate", "pyruvate"):
        log = specimen.log({"lactate": 1.0, "pyruvate": -1.0}, {})
        judged = ("valid", "ratio of two measured values")
        if plan.matrix in _FLUIDS:
            judged = (
                "proxy",
                ("stands in for cytosolic redox of the organs that release them; needs prompt "
                "deproteinisation"),
            )
            if specimen.amount("lactate") < LEAST_LACTATE:
                judged = (
                    "proxy",
                    ("lactate under 2.5 mmol/L: the ratio does not separate causes (Debray et "
                    "al. 2007), so it is shown and not called"),
                )
        rows.append(_row(row, "lactate_pyruvate_ratio", "extract", "lactate_dehydrogenase", log, "1", judged))
    if specimen.has("hydroxybutyrate_3", "acetoacetate"):
        log = specimen.log({"hydroxybutyrate_3": 1.0, "acetoacetate": -1.0}, {})
        judged = ("valid", "ratio of two measured values; acetoacetate falls on storage")
        if plan.matrix in _FLUIDS:
            judged = ("proxy", "stands in for mitochondrial redox of liver; acetoacetate falls on storage")
        if plan.matrix in ("erythrocyte", "skeletal_muscle"):
            judged = (
                "not_valid",
                "no 3-hydroxybutyrate dehydrogenase to speak of here: the values are blood's",
            )
        rows.append(
            _row(
                row,
                "hydroxybutyrate_acetoacetate_ratio",
                "extract",
                "hydroxybutyrate_dehydrogenase",
                log,
                "1",
                judged,
            )
        )
    return rows


def _adenylates(catalogue: Catalogue, plan: Plan, specimen: _Specimen, row: int) -> list[StateRow]:
    rows = []
    couples = {use.pool: use.couple for use in plan.pools}
    free_adp = couples["adp_cytosol"]
    adp: tuple[dict[str, float], dict[str, float]] = ({"adp": 1.0}, {})
    judged = (
        ("valid", "measured totals")
        if plan.matrix == "erythrocyte"
        else ("proxy", "from measured total ADP, most of which is bound in tissue")
    )
    source, place = "", "extract"
    if free_adp is not None and specimen.has(*couple_analytes(catalogue, free_adp)):
        # ADP + PCr = ATP + Cr at equilibrium: [ADP] = [ATP][Cr]/([PCr] K′).
        adp = ({"atp": 1.0, "creatine": 1.0, "phosphocreatine": -1.0}, {free_adp.step_id: -1.0})
        source, place = free_adp.step_id, "cytosol"
        judged = ("valid", free_adp.assumption)
        rows.append(_row(row, "adp_free", place, source, specimen.log(*adp), "mol/L", judged))
        free_amp = couples["amp_cytosol"]
        if free_amp is not None:
            # 2 ADP = ATP + AMP at equilibrium: [AMP] = K′ [ADP]²/[ATP].
            nu = {a: 2 * n - (1.0 if a == "atp" else 0.0) for a, n in adp[0].items()}
            amp = (nu, {free_adp.step_id: -2.0, free_amp.step_id: 1.0})
            judged_amp = ("valid", free_amp.assumption)
            rows.append(
                _row(row, "amp_free", place, free_amp.step_id, specimen.log(*amp), "mol/L", judged_amp)
            )
    if specimen.has("atp", "phosphate", *adp[0]):
        nu = {"atp": 1.0, "phosphate": -1.0}
        for analyte, n in adp[0].items():
            nu[analyte] = nu.get(analyte, 0.0) - n
        log = specimen.log(nu, {step: -times for step, times in adp[1].items()})
        rows.append(_row(row, "phosphorylation_potential", place, source, log, "L/mol", judged))
    if specimen.has("atp", "adp", "amp"):
        rows.append(_energy_charge(specimen, row))
    return rows


def _energy_charge(specimen: _Specimen, row: int) -> StateRow:
    """(ATP + ADP/2)/(ATP + ADP + AMP) of measured totals (Atkinson 1968), interval by propagation."""
    amounts = np.array([specimen.amount(a) for a in ("atp", "adp", "amp")])
    sd = np.array([specimen.sd(a) for a in ("atp", "adp", "amp")])
    weight = np.array([1.0, 0.5, 0.0])
    total = amounts.sum()
    charge = float(weight @ amounts / total)
    slope = amounts * (weight - charge) / total
    half = Z95 * float(np.sqrt(slope**2 @ sd**2))
    return StateRow(
        row,
        "adenylate_energy_charge",
        "extract",
        "",
        charge,
        max(charge - half, 0.0),
        min(charge + half, 1.0),
        "1",
        "valid",
        "measured totals, not free nucleotides",
    )


def _hydrolysis(review: Review, plan: Plan, row: int) -> list[StateRow]:
    findings = review.findings
    column = next(k for k, c in enumerate(review.columns) if c.step.id == "atp_hydrolysis")
    value = float(findings.delta_g[row, column])
    if not np.isfinite(value):
        return []
    totals = bool(plan.totals[column]) and plan.matrix != "erythrocyte"
    judged = ("proxy", "from measured total ADP") if totals else ("valid", "from ΔG′ of the hydrolysis step")
    return [
        StateRow(
            row,
            "atp_hydrolysis_delta_g",
            "cytosol" if plan.inferred[column] else "extract",
            "atp_hydrolysis",
            value,
            float(findings.delta_g_lower95[row, column]),
            float(findings.delta_g_upper95[row, column]),
            "kJ/mol",
            *judged,
        )
    ]
