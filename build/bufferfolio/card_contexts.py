"""What the template of a printed card is given: words and numbers, nothing left to compute."""

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Final

from markupsafe import Markup

from bufferfolio.card_room import BLOCKS, lines_of, room_for_log, room_for_readings
from bufferfolio.cards import FIRST, Card, Correction, Reading, card_of
from bufferfolio.definitions import Formulation
from bufferfolio.dosing import LEAST_MASS, LEAST_VOLUME
from bufferfolio.formatting import celsius, fixed, mass, plain, sentence, significant, volume
from bufferfolio.make_up_contexts import grade_of, hazard_rows, reagents_of
from bufferfolio.plots import drift_figure, titration_figure
from bufferfolio.sheets import Sheet, Side
from bufferfolio.svg_figures import card_svg


@dataclass(frozen=True, slots=True, kw_only=True)
class ReadingRow:
    """One line of the table of readings."""

    celsius: str
    expected: str
    band: str
    target: str
    accepted: str
    reference: bool  # whether the pH is stated for this temperature
    outside: bool  # whether the target lies outside the limits of use


@dataclass(frozen=True, slots=True, kw_only=True)
class DoseLine:
    """One line of a table of first portions."""

    distance: str
    reads: str  # at the reference temperature
    portions: tuple[str, ...]  # one a batch size; empty where it is refused
    refusal: str  # in a word or two


@dataclass(frozen=True, slots=True, kw_only=True)
class CardSide:
    """Readings too high, or too low, and what brings them back."""

    high: bool
    titrant: str  # "": none
    hazards: tuple[str, ...]
    lines: tuple[DoseLine, ...]
    refusal: str  # a sentence in place of the lines; "": there are some
    reserve: str  # a sentence; "": there is no titrant


@dataclass(frozen=True, slots=True, kw_only=True)
class Picture:
    """A small figure."""

    title: str
    drawing: Markup


@dataclass(frozen=True, slots=True, kw_only=True)
class CardContext:
    """What a card adds to the words of its sheet."""

    at: str  # °C, of the corrections
    target: str
    limits: tuple[str, str]  # of use, pH
    tolerance: str  # "": the chemist states no target
    blocks: tuple[tuple[ReadingRow, ...], ...]  # side by side
    outside: bool  # whether any line has its target outside the limits of use
    batches: tuple[str, ...]
    usual: int  # which of them is the recipe's own
    sides: tuple[CardSide, ...]  # too high, too low
    differ: str  # per cent, at most, of doses over the temperatures of use; "": no doses
    falls: bool  # whether the first portion may be too much at another temperature
    pictures: tuple[Picture, ...]
    gases: str  # what stands before what may be set free
    log_lines: int  # to write on


def card_context(sheet: Sheet) -> CardContext:
    """Return what the card of a formulation says, in as many lines as its two pages have room."""
    formulation = sheet.subject.formulation
    card = card_of(sheet.subject, _room(sheet), MOST_CORRECTIONS)
    expected = formulation.expected
    rows = tuple(_reading_row(sheet, card, reading) for reading in card.readings)
    figures = (drift_figure(sheet), titration_figure(sheet))
    sides = tuple(_side(sheet, card, high) for high in (True, False))
    return CardContext(
        at=celsius(card.temperature),
        target=fixed(card.target, 2),
        limits=limits_of(formulation),
        tolerance="" if expected is None else plain(expected.tolerance),
        blocks=_blocks(rows),
        outside=any(row.outside for row in rows),
        batches=tuple(_batch(formulation, share) for share in SHARES),
        usual=SHARES.index(1.0),
        sides=sides,
        differ=_at_most(card.spread),
        falls=card.fall > 1.0 - FIRST,
        pictures=tuple(
            Picture(title=figure.title, drawing=Markup(card_svg(figure)))
            for figure in figures
            if figure is not None and figure.series
        ),
        gases=GASES,
        log_lines=room_for_log(
            max(len(side.lines) for side in sides),
            max(_words_beside(side) for side in sides),
            pictures=True,
        ),
    )


def _room(sheet: Sheet) -> int:
    """Return how many readings the first page has room for beside recipe and cautions."""
    formulation = sheet.subject.formulation
    reagents = reagents_of(formulation)
    recipe = [
        f"{portion.reagent.label} {portion.reagent.formula} {grade_of(portion.reagent)}"
        for portion in formulation.make_up.portions
    ]
    releases = [f"{GASES} {each.label}: {'; '.join(each.releases)}" for each in reagents]
    freed = [text for text, each in zip(releases, reagents, strict=True) if each.releases]
    hazards = "; ".join(f"{row.code} {row.words}" for row in hazard_rows(reagents))
    return room_for_readings(
        formulation.title,
        formulation.purpose,
        recipe,
        [*freed, *formulation.cautions],
        [text for text in ("; ".join(sheet.warnings), hazards) if text],
    )


def _reading_row(sheet: Sheet, card: Card, reading: Reading) -> ReadingRow:
    formulation = sheet.subject.formulation
    expected = formulation.expected
    tolerance = math.nan if expected is None else expected.tolerance
    return ReadingRow(
        celsius=celsius(reading.temperature),
        expected=fixed(reading.pH, 2),
        band=_between(reading.low, reading.high),
        target=fixed(reading.target, 2),
        accepted=_between(reading.target - tolerance, reading.target + tolerance),
        reference=abs(reading.temperature - card.temperature) < 1e-6,
        outside=not formulation.use_pH.holds(reading.target),
    )


def _between(low: float, high: float) -> str:
    return f"{fixed(low, 2)}–{fixed(high, 2)}"


def _blocks(rows: Sequence[ReadingRow]) -> tuple[tuple[ReadingRow, ...], ...]:
    height = math.ceil(len(rows) / BLOCKS)
    return tuple(tuple(rows[at : at + height]) for at in range(0, len(rows), height))


def _batch(formulation: Formulation, share: float) -> str:
    make_up = formulation.make_up
    if make_up.mass is not None:
        return mass(share * make_up.mass)
    return volume(share * (make_up.volume or 0.0))


def _side(sheet: Sheet, card: Card, high: bool) -> CardSide:
    formulation = sheet.subject.formulation
    own = [each for each in card.corrections if (each.distance > 0.0) == high]
    direction = "downward" if high else "upward"
    named = [each for each in formulation.titrants if each.direction == direction]
    refusals = {each.dose.refusal for each in own}
    if not own:
        refusal = "Within the limits of use a reading on this side is within the tolerance."
    elif len(refusals) == 1 and "" not in refusals:
        refusal = SENTENCES.get(next(iter(refusals)), "Do not correct: make the batch anew.")
    else:
        refusal = ""
    return CardSide(
        high=high,
        titrant=named[0].label if named else "",
        hazards=named[0].reagent.hazards if named else (),
        # From the target outwards.
        lines=() if refusal else _lines(card, sorted(own, key=lambda each: abs(each.distance))),
        refusal=refusal,
        reserve=_reserve(sheet, direction),
    )


def _words_beside(side: CardSide) -> int:
    """Return how many lines the words around one table of doses take."""
    note = " ".join([side.titrant, *side.hazards]) if side.hazards else ""
    words = [f"Too high: add {side.titrant}", side.refusal, note, side.reserve]
    return sum(lines_of(text, HALF_WIDTH) for text in words if text)


def _lines(card: Card, own: Sequence[Correction]) -> tuple[DoseLine, ...]:
    unit, size, least = _unit(own)
    return tuple(
        DoseLine(
            distance=fixed(abs(each.distance), 2),
            reads=fixed(card.target + each.distance, 2),
            portions=()
            if each.dose.refusal
            else tuple(_portion(share * each.first, unit, size, least) for share in SHARES),
            refusal=WORDS.get(each.dose.refusal, "make anew") if each.dose.refusal else "",
        )
        for each in own
    )


def _unit(own: Sequence[Correction]) -> tuple[str, float, float]:
    """Return one unit for a whole table, so that no portion is read for a thousand times it.

    With it come its size and the least that can be measured out, in m3 or, of a solid, in kg.
    """
    liquid = any(math.isfinite(each.dose.volume) for each in own)
    units, least = (VOLUMES, LEAST_VOLUME) if liquid else (MASSES, LEAST_MASS)
    smallest = min(SHARES) * min(each.first for each in own if math.isfinite(each.first))
    name, size = next((each for each in units if smallest >= 0.1 * each[1]), units[-1])
    return name, size, least


def _portion(amount: float, unit: str, size: float, least: float) -> str:
    return "too little" if amount < least else f"{_two_figures(amount / size)} {unit}"


def _two_figures(value: float) -> str:
    """Write a number with two figures and no power of ten: nobody weighs a first portion finer."""
    if not value >= 100.0:
        return significant(value, 2)
    power = 10.0 ** (math.floor(math.log10(value)) - 1)
    return fixed(math.floor(value / power + 0.5) * power, 0)


def _reserve(sheet: Sheet, direction: str) -> str:
    side = next((each for each in sheet.sides if each.titrant.direction == direction), None)
    if side is None:
        return ""
    limit = limits_of(sheet.subject.formulation)[0 if direction == "downward" else 1]
    name = side.titrant.label
    if not side.reserve > 0.0:
        return f"{sentence(name)} has doubled it before it reads {limit}."
    return f"{_dose(side, sheet.subject.water)} of {name} bring it to pH {limit}."


def limits_of(formulation: Formulation) -> tuple[str, str]:
    """Return the limits of use, with one decimal at least."""
    low, high = formulation.use_pH.low, formulation.use_pH.high
    return max(fixed(low, 1), plain(low), key=len), max(fixed(high, 1), plain(high), key=len)


def _dose(side: Side, water: float) -> str:
    moles = side.reserve * water
    if side.added.volume is None:
        return mass(moles * side.added.mass, 2)
    return volume(moles * side.added.volume, 2)


def _at_most(spread: float) -> str:
    """Return a round percentage that a spread stays below, also between where it was looked at."""
    if math.isnan(spread):
        return ""
    wanted = 110.0 * spread
    return plain(next((each for each in ROUND if each >= wanted), math.ceil(wanted)))


SHARES: Final = (0.1, 0.5, 1.0, 2.0)  # of the recipe's own batch
VOLUMES: Final = (("m³", 1.0), ("L", 1e-3), ("mL", 1e-6), ("µL", 1e-9))
MASSES: Final = (("kg", 1.0), ("g", 1e-3), ("mg", 1e-6))
ROUND: Final = (1.0, 2.0, 5.0, 10.0, 15.0, 20.0, 25.0, 30.0, 40.0, 50.0, 75.0, 100.0)

MOST_CORRECTIONS: Final = 8  # lines a side
HALF_WIDTH: Final = 44  # letters across half a page
GASES: Final = "May set gas free."

WORDS: Final[Mapping[str, str]] = {
    "impossible": "check the electrode",
    "target": "do not correct",
    "dangers": "do not correct: gas",
    "dilute": "do not correct",
    "never": "cannot be corrected",
    "little": "too little",
}
SENTENCES: Final[Mapping[str, str]] = {
    "forbidden": "Never correct it: a batch outside its tolerance is thrown away. Make it anew.",
    "no titrant": "Do not correct: the formulation names no reagent for this side.",
    "dangers": "Do not correct: the reagent may set a toxic gas free from the batch.",
    "dilute": "Do not correct: this water buffers so little that air and glass move it more than "
    "any dose would hold.",
    "target": "Do not correct: the target lies outside the limits of use.",
}
