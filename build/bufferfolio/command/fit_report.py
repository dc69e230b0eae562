"""What `bufferfolio fit` prints: for people, and as JSON."""

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Final

from bufferfolio.command.console import table
from bufferfolio.definitions import Formulation, Titrant
from bufferfolio.end_points import EndPoint
from bufferfolio.fit_words import (
    gran_words,
    quantity_name,
    quantity_unit,
    scatter_words,
    verdict_words,
    with_error,
)
from bufferfolio.fitting import Estimate, Fit
from bufferfolio.formatting import fixed, plain, signed, significant
from bufferfolio.gran import GranLine
from bufferfolio.measured import Points
from bufferfolio.measured_layout import UNITS, Layout
from bufferfolio.water import ZERO_CELSIUS


@dataclass(frozen=True, slots=True, kw_only=True)
class Findings:
    """Everything that one titration tells."""

    formulation: Formulation
    titrant: Titrant
    sample: str  # as typed; "" for the whole make-up
    points: Points
    layout: Layout
    end_points: tuple[EndPoint, ...]
    gran_lines: tuple[GranLine, ...]
    fit: Fit


def as_text(found: Findings) -> Iterator[str]:
    """Yield the lines that people read."""
    result, points, unit = found.fit, found.points, found.layout.unit
    celsius = result.experiment.temperature - ZERO_CELSIUS
    sample = found.sample or "the whole make-up"
    yield f"{found.formulation.title}, revision {found.formulation.revision}"
    yield f"sample: {sample}, {celsius:.4g} °C; titrant: {found.titrant.label}"
    stated = "" if found.layout.unit_stated else f" (taken to be in {unit})"
    yield f"{points.pH.size} points; volumes to {_in(unit, float(points.volume.max()))}{stated}"
    yield ""
    rows = [_row(each, result) for each in result.estimates]
    yield table(HEAD, rows, right=frozenset({1, 2, 4}))
    if len(rows) > 1:
        yield from ("", "correlation", *_correlations(result))
    chi_squared = significant(result.reduced_chi_squared, 3)
    yield f"\nreduced chi-squared {chi_squared}: {scatter_words(result)}"
    yield verdict_words(result)
    yield from ("", "end points", *(_end_point(each, unit) for each in found.end_points))
    yield from (_gran(each, found, unit) for each in found.gran_lines)
    if not found.end_points:
        yield "  none shows"


def _row(estimate: Estimate, result: Fit) -> list[str]:
    value, error = with_error(estimate.value, estimate.standard_error)
    return [
        quantity_name(estimate.free, result.experiment),
        value,
        error,
        quantity_unit(estimate.free),
        plain(estimate.recipe),
    ]


def _correlations(result: Fit) -> Iterator[str]:
    keys = [each.free.key for each in result.estimates]
    for at, key in enumerate(keys):
        for before in range(at):
            value = signed(float(result.correlation[at, before]), 3)
            yield f"  {keys[before]}, {key}: {value}"


def _in(unit: str, volume: float, figures: int = 4) -> str:
    return f"{plain(volume / UNITS[unit], figures)} {unit}"


def _end_point(each: EndPoint, unit: str) -> str:
    value, error = with_error(each.volume / UNITS[unit], each.standard_error / UNITS[unit])
    smoothed = f"{each.window} points smoothed"
    return f"  steepest at {value} ± {error} {unit}, pH {fixed(each.pH, 2)} ({smoothed})"


def _gran(line: GranLine, found: Findings, unit: str) -> str:
    value, error = with_error(line.volume / UNITS[unit], line.standard_error / UNITS[unit])
    what = gran_words(line, found.fit.experiment)
    return f"  Gran, {line.side}: {value} ± {error} {unit} ({what}, {line.x.size} points)"


def as_json(found: Findings) -> dict[str, object]:
    """Return what --json prints; the keys are explained in DEVELOPERS.md. null: not known."""
    result = found.fit
    return {
        "formulation": found.formulation.key,
        "titrant": found.titrant.label,
        "temperature_celsius": _number(result.experiment.temperature - ZERO_CELSIUS),
        "points": int(found.points.pH.size),
        "estimates": [_estimate_data(each) for each in result.estimates],
        "correlation": [_numbers(row) for row in result.correlation.tolist()],
        "reduced_chi_squared": _number(result.reduced_chi_squared),
        "freedom": result.freedom,
        "precision": {"pH": result.precision.pH, "volume_m3": _number(result.precision.volume)},
        "verdict": {"kind": result.verdict.kind, "words": verdict_words(result)},
        "end_points": [_end_point_data(each) for each in found.end_points],
        "gran": [_gran_data(each) for each in found.gran_lines],
        "volumes_m3": _numbers(found.points.volume.tolist()),
        "predicted": _numbers(result.predicted.tolist()),
        "residuals": _numbers(result.residuals.tolist()),
    }


def _estimate_data(each: Estimate) -> dict[str, object]:
    return {
        "quantity": each.free.key,
        "value": _number(each.value),
        "standard_error": _number(each.standard_error),
        "unit": quantity_unit(each.free),
        "recipe": _number(each.recipe),
        "bounds": [_number(each.low), _number(each.high)],
    }


def _end_point_data(each: EndPoint) -> dict[str, object]:
    return {
        "volume_m3": _number(each.volume),
        "standard_error_m3": _number(each.standard_error),
        "pH": _number(each.pH),
        "points_smoothed": each.window,
    }


def _gran_data(each: GranLine) -> dict[str, object]:
    return {
        "side": each.side,
        "kind": each.kind,
        "family": each.family or None,
        "step": each.step + 1 if each.kind == "weak" else None,
        "volume_m3": _number(each.volume),
        "standard_error_m3": _number(each.standard_error),
        "points": int(each.x.size),
    }


def _numbers(values: Sequence[float]) -> list[float | None]:
    return [_number(value) for value in values]


def _number(value: float) -> float | None:
    return float(f"{value:.12g}") if math.isfinite(value) else None


HEAD: Final = ("quantity", "value", "standard error", "unit", "recipe")
