"""Reagent files to definitions."""

from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import Final

from bufferfolio.definitions import Citation, Family, Ion, Reagent, Source, Stock
from bufferfolio.reading.families import cite
from bufferfolio.reading.formulas import Formula, is_ion_name, parse_formula, parse_ion
from bufferfolio.reading.known import Complaints, Known
from bufferfolio.reading.models import ReagentShape
from bufferfolio.reading.nodes import Document
from bufferfolio.reading.proof import prove
from bufferfolio.reading.quantities import MOLARITY, Unfit, suggestion


@dataclass(frozen=True, slots=True)
class Brought:
    """What one mole of a reagent brings."""

    families: Mapping[str, float]
    ions: Mapping[Ion, float]
    parts: tuple[tuple[Formula, float], ...]  # for the proof
    whole: bool  # False: something is unknown, and there is nothing to prove


def reagent(
    key: str,
    document: Document,
    shape: ReagentShape,
    sources: Known[Source],
    families: Known[Family],
) -> tuple[Reagent | None, Complaints]:
    """Return the reagent without what accompanies it, or None with complaints about the file."""
    complaints = Complaints(document)
    formula = _formula(shape, complaints)
    brought = _brought(shape, families, complaints)
    if formula is not None and brought.whole:
        try:
            prove(formula, brought.parts)
        except Unfit as problem:
            complaints.at(("formula",), problem.problem, problem.accepted)
    _check_cas(shape, complaints)
    _check_releases(shape, families, complaints)
    stock = _stock(shape, formula, complaints)
    citation = cite(complaints, shape, (), sources)
    if complaints.errors or formula is None or citation is None or not brought.whole:
        return None, complaints
    return _assembled(key, document, shape, formula, brought, stock, citation), complaints


def _assembled(
    key: str,
    document: Document,
    shape: ReagentShape,
    formula: Formula,
    brought: Brought,
    stock: Stock | None,
    citation: Citation,
) -> Reagent:
    return Reagent(
        key=key,
        label=shape.label,
        formula=shape.formula,
        synonyms=tuple(shape.synonyms),
        cas=shape.cas,
        molar_mass=formula.molar_mass,
        hydrate_water=formula.hydrate_water,
        families=brought.families,
        ions=brought.ions,
        purity=1.0 if shape.purity is None else shape.purity,
        stock=stock,
        hazards=tuple(shape.hazards),
        releases=tuple(shape.releases),
        handling=shape.handling,
        citation=citation,
        place=document.root.place,
    )


def _formula(shape: ReagentShape, complaints: Complaints) -> Formula | None:
    try:
        formula = parse_formula(shape.formula)
    except Unfit as problem:
        complaints.at(("formula",), f"formula {problem.problem}", problem.accepted)
        return None
    if formula.charge:
        complaints.at(("formula",), "formula carries a charge", "a neutral substance")
        return None
    return formula


def _brought(shape: ReagentShape, families: Known[Family], complaints: Complaints) -> Brought:
    found: dict[str, float] = {}
    ions: dict[Ion, float] = {}
    parts: list[tuple[Formula, float]] = []
    for name, times in shape.brings.items():
        if is_ion_name(name):
            formula = _strong_ion(name, families, complaints)
            if formula is not None:
                ions[Ion(name=name, charge=formula.charge)] = times
                parts.append((formula, times))
            continue
        family = complaints.find(families, name, ("brings", name), by_key=True)
        if family is not None:
            found[name] = times
            parts.append((parse_formula(family.species[0].name), times))
    return Brought(found, ions, tuple(parts), len(parts) == len(shape.brings))


def _strong_ion(name: str, families: Known[Family], complaints: Complaints) -> Formula | None:
    location = ("brings", name)
    try:
        formula = parse_ion(name)
    except Unfit as problem:
        complaints.at_key(location, f"the ion {problem.problem}", problem.accepted)
        return None
    if set(formula.atoms) <= {"H", "O"}:
        problem_text = f"{name} is not brought: protons and hydroxide follow from the charges"
        complaints.at_key(location, problem_text, "families and ions other than H+ and OH-")
        return None
    for family in families.found.values():
        for species in family.species:
            other = parse_formula(species.name)
            if other.atoms == formula.atoms and other.charge == formula.charge:
                problem_text = f"{name} takes up or loses protons: it belongs to a family"
                complaints.at_key(location, problem_text, f"{family.key}: {MOLES}")
                return None
    return formula


def _check_cas(shape: ReagentShape, complaints: Complaints) -> None:
    if shape.cas is None:
        return
    *digits, check = [int(letter) for letter in shape.cas if letter.isdigit()]
    total = sum(place * digit for place, digit in enumerate(reversed(digits), start=1))
    if total % 10 != check:
        problem = f"cas has a check digit that does not fit: {shape.cas!r}"
        complaints.at(("cas",), problem, "the CAS number as on the label of the reagent")


def _check_releases(shape: ReagentShape, families: Known[Family], complaints: Complaints) -> None:
    partners = sorted({"acid", "base", *families.found, *families.broken})
    for number, danger in enumerate(shape.releases):
        partner = danger.rsplit(" with ", 1)[1]
        if partner not in partners:
            problem = f"releases names the unknown partner {partner!r}"
            problem += suggestion(partner, partners)
            complaints.at(("releases", number), problem, "acid, base, or the key of a family")


def _stock(shape: ReagentShape, formula: Formula | None, complaints: Complaints) -> Stock | None:
    if shape.stock is None:
        if shape.purity is None:
            complaints.at((), "the file lacks `purity` or `stock`", ONE_FORM)
        return None
    if shape.purity is not None:
        complaints.at_key(("purity",), "purity stands beside `stock`", ONE_FORM)
    strength = shape.stock.concentration
    fraction = strength.value
    if strength.dimension == MOLARITY.name:
        if formula is None:
            return None
        fraction = strength.value * formula.molar_mass / shape.stock.density
    if not 0.0 < fraction <= 1.0:
        problem = f"concentration is more than pure: {strength.stated!r}"
        complaints.at(("stock", "concentration"), problem, "at most 100 % of the liquid's mass")
        return None
    return Stock(mass_fraction=fraction, density=shape.stock.density, temperature=shape.stock.at)


def accompanied(
    reagent: Reagent,
    document: Document,
    shape: ReagentShape,
    bases: Known[Reagent],
    shapes: Mapping[str, ReagentShape],
) -> tuple[Reagent | None, Complaints]:
    """Return the reagent with what comes along in it added, or None with complaints."""
    complaints = Complaints(document)
    families, ions = dict(reagent.families), dict(reagent.ions)
    water, releases = reagent.hydrate_water, list(reagent.releases)
    for key, times in shape.accompanied_by.items():
        other = complaints.find(bases, key, ("accompanied_by", key), by_key=True)
        if key == reagent.key or (other is not None and shapes[key].accompanied_by):
            problem = f"{key} is itself accompanied by other reagents"
            complaints.at_key(("accompanied_by", key), problem, "a reagent that comes alone")
        if other is None:
            return None, complaints
        water += times * other.hydrate_water
        releases += [danger for danger in other.releases if danger not in releases]
        for name, amount in other.families.items():
            families[name] = families.get(name, 0.0) + times * amount
        for ion, amount in other.ions.items():
            ions[ion] = ions.get(ion, 0.0) + times * amount
    if complaints.errors:
        return None, complaints
    full = replace(
        reagent, families=families, ions=ions, hydrate_water=water, releases=tuple(releases)
    )
    return full, complaints


MOLES: Final = "mol per mol"
ONE_FORM: Final = "`purity` for a solid, or `stock` for a liquid; one of the two"
