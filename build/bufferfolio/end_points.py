"""Where a measured curve is steepest: its end points, from the points alone.

The first derivative is largest there and the second is zero. Readings scatter and volumes are
unevenly spaced, so that differences of neighbours will not do: between the flat parts on both sides
the points are smoothed by

    V = Ve + a 10^pH − b 10^−pH

which is how a curve passes an equivalence point: what is left of the sample falls tenfold a pH,
what is in excess of the titrant rises tenfold. By its derivatives it is steepest at Ve itself.
"""

import math
from dataclasses import dataclass
from typing import Final

import numpy as np
from numpy.typing import NDArray

from bufferfolio.measured import Points
from bufferfolio.temperature import LN10
from bufferfolio.water import FloatArray

FEWEST: Final = 6  # points that are smoothed: three numbers, and some to spare
REACH: Final = 0.4  # of the way from the end point to the flattest part, in pH, that is smoothed
CONTRAST: Final = 2.0  # how much steeper than both sides an end point has to be
CERTAIN: Final = 5.0  # standard errors by which it has to be so: thousands of places are compared
STEEP: Final = 0.1  # of a peak's slope: where the curve may be steep again
STEADY: Final = 0.25  # of the mean slope: the standard error of slopes among which peaks are sought
ROUNDS: Final = 8  # times that window and weights follow the end point
SETTLED: Final = 1e-9  # of its volume
LEAST_NOISE: Final = 1e-4  # pH; nobody reads better
GAP_SHARE: Final = 0.05  # of the gap between points that it lies in: how far smoothing may lead
MODEL_SHARE: Final = 1e-3  # of the volume: dilution and activity, which the smoothing leaves out


@dataclass(frozen=True, slots=True, kw_only=True)
class EndPoint:
    """A place where the curve is steepest."""

    volume: float  # m3
    standard_error: float  # m3
    pH: float
    slope: float  # pH per m3, of the smoothed curve
    window: int  # points that were smoothed


@dataclass(frozen=True, slots=True)
class _Curve:
    """Points with one reading a volume, turned so that the curve rises."""

    volume: FloatArray
    pH: FloatArray
    sign: float  # −1 where it was turned
    noise: float  # pH


@dataclass(frozen=True, slots=True)
class _Peak:
    """A steep part between two flat ones, by position among the slopes."""

    at: int
    low: int  # flattest before
    high: int  # flattest after


def end_points(points: Points) -> tuple[EndPoint, ...]:
    """Return the end points of a measured curve in the order of addition.

    Shapes: points n; result a tuple.
    Units: m3.
    Raises: nothing; without enough points, or without an end point, the result is empty.
    Source: weighted least squares; the smoothing is the project's own (see the module).
    """
    curve = _curve(points)
    if curve.volume.size <= FEWEST:
        return ()
    middles, slopes, errors = _slopes(curve, _width(curve))
    found = []
    for peak in _peaks(slopes, errors, _mean_slope(curve)):
        end_point = _refined(curve, middles, peak)
        if end_point is not None and curve.sign * end_point.slope > _mean_slope(curve):
            found.append(end_point)
    return tuple(sorted(found, key=lambda each: each.volume))


def _curve(points: Points) -> _Curve:
    volume, where = np.unique(points.volume, return_inverse=True)
    counts = np.bincount(where, minlength=volume.size)
    pH = np.bincount(where, weights=points.pH, minlength=volume.size) / np.maximum(counts, 1)
    sign = 1.0 if not pH.size or pH[-1] >= pH[0] else -1.0
    return _Curve(volume, sign * pH, sign, noise_of(volume, pH))


def noise_of(volume: FloatArray, pH: FloatArray) -> float:
    """Return the standard deviation of readings about a smooth curve.

    Shapes: volume and pH n, volumes rising; result scalar.
    Units: volume m3; result pH.
    Raises: nothing; without five points the result is zero.
    Source: each reading against the cubic through its four neighbours; the median of the misses, so
        that the steep parts do not count.
    """
    misses = []
    for at in range(2, volume.size - 2):
        near = (at - 2, at - 1, at + 1, at + 2)
        weights = [
            math.prod(
                (volume[at] - volume[other]) / (volume[one] - volume[other])
                for other in near
                if other != one
            )
            for one in near
        ]
        between = sum(w * pH[one] for w, one in zip(weights, near, strict=True))
        misses.append(abs(pH[at] - between) / math.sqrt(1.0 + sum(w * w for w in weights)))
    return 1.4826 * float(np.median(misses)) if misses else 0.0


def _slopes(curve: _Curve, width: int) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Return middles, slopes and their standard errors over windows of `width` points."""
    middles, slopes, errors = [], [], []
    for start in range(curve.volume.size - width + 1):
        volume, pH = curve.volume[start : start + width], curve.pH[start : start + width]
        middle = float(np.mean(volume))
        squares = float(np.sum((volume - middle) ** 2))
        middles.append(middle)
        slopes.append(float(np.sum((volume - middle) * (pH - np.mean(pH)))) / squares)
        errors.append(curve.noise / math.sqrt(squares))
    return np.array(middles), np.array(slopes), np.array(errors)


def _mean_slope(curve: _Curve) -> float:
    rise, span = np.max(curve.pH) - np.min(curve.pH), curve.volume[-1] - curve.volume[0]
    return float(rise / span)


def _width(curve: _Curve) -> int:
    """Return how many points a slope needs to be steady."""
    count = curve.volume.size
    rise = _mean_slope(curve) * float(curve.volume[-1] - curve.volume[0])
    wanted = curve.noise * (count - 1) / (STEADY * rise) if rise > 0.0 else 0.0
    width = 2
    while width * (width * width - 1) / 12.0 < wanted * wanted and width < count // 4:
        width += 1
    return width


def _peaks(slopes: FloatArray, errors: FloatArray, mean: float) -> list[_Peak]:
    """Return the steep parts, steepest first, one between any two flat parts."""
    found: list[_Peak] = []
    for at in np.argsort(-slopes, kind="stable").tolist():
        if not slopes[at] > mean:
            break
        if any(peak.low < at < peak.high for peak in found):
            continue
        low = _flattest(slopes, errors, at, range(at - 1, -1, -1))
        high = _flattest(slopes, errors, at, range(at + 1, slopes.size))
        if low is not None and high is not None:
            found.append(_Peak(at, low, high))
    return found


def _flattest(slopes: FloatArray, errors: FloatArray, at: int, side: range) -> int | None:
    """Return the flattest place on one side before the curve is steep again.

    None where it does not fall to half of the peak's slope, beyond doubt.
    """
    found = None
    for other in side:
        steep = slopes[at] if found is None else CONTRAST * slopes[found] + STEEP * slopes[at]
        doubt = CERTAIN * math.hypot(errors[at], CONTRAST * errors[other])
        if slopes[other] - steep > doubt:
            break
        falls = slopes[at] - CONTRAST * slopes[other] > doubt
        if falls and (found is None or slopes[other] < slopes[found]):
            found = other
    return found


def _refined(curve: _Curve, middles: FloatArray, peak: _Peak) -> EndPoint | None:
    """Return the end point of a steep part, the window following it.

    It begins half-way, in pH, between the flat parts: where slopes are largest may lie all of a
    window's points on one side of the jump.
    """
    places = middles[[peak.low, peak.high]]
    low, high = (float(each) for each in np.interp(places, curve.volume, curve.pH))
    pH = 0.5 * (low + high)
    about, found = _crossing(curve, float(places[0]), float(places[1]), pH), None
    for _ in range(ROUNDS):
        ends = pH + REACH * (low - pH), pH + REACH * (high - pH)
        following = _through(curve, _window(curve, about, *ends), pH)
        if following is None:
            break
        found, moved = following, abs(following.volume - about)
        about, pH = found.volume, min(max(curve.sign * found.pH, low), high)
        if moved < SETTLED * about:
            break
    return found


def _crossing(curve: _Curve, start: float, stop: float, pH: float) -> float:
    """Return the volume between two at which the readings first pass one."""
    inside = (curve.volume >= start) & (curve.volume <= stop)
    volume, readings = curve.volume[inside], curve.pH[inside]
    after = int(np.argmax(readings > pH))
    if after == 0:
        return 0.5 * (start + stop)
    share = (pH - readings[after - 1]) / (readings[after] - readings[after - 1])
    return float(volume[after - 1] + share * (volume[after] - volume[after - 1]))


def _window(curve: _Curve, about: float, low: float, high: float) -> NDArray[np.intp]:
    """Return the points between two readings about a volume, at least a few."""
    inside = (curve.pH > low) & (curve.pH < high)
    after = int(np.searchsorted(curve.volume, about))
    # As many on either side: a smoothing of one side says nothing of the other.
    start = min(max(after - FEWEST // 2, 0), curve.volume.size - FEWEST)
    stop = start + FEWEST - 1
    while start > 0 and inside[start - 1]:
        start -= 1
    while stop < curve.volume.size - 1 and inside[stop + 1]:
        stop += 1
    return np.arange(start, stop + 1)


def _through(curve: _Curve, window: NDArray[np.intp], about: float) -> EndPoint | None:
    """Return where the smoothing of a window is steepest; None where it does not rise."""
    volume, pH = curve.volume[window], curve.pH[window]
    up, down = 10.0 ** (pH - about), 10.0 ** (about - pH)
    columns = np.array([np.ones_like(pH), up, -down])
    noise = max(curve.noise, LEAST_NOISE)
    weights = np.ones_like(pH)
    for _ in range(ROUNDS):
        scaled = columns * weights
        inverse = np.linalg.inv(scaled @ scaled.T)
        centre, a, b = (float(each) for each in inverse @ (scaled @ (volume * weights)))
        if not (a > 0.0 and b > 0.0):
            return None
        # Readings scatter, and a volume is the more uncertain the flatter the curve.
        weights = 1.0 / (LN10 * noise * (a * up + b * down))
    scaled = columns * weights
    inverse = np.linalg.inv(scaled @ scaled.T)
    misses = (volume - centre - a * up + b * down) * weights
    scatter = max(float(np.sum(misses**2)) / (len(window) - 3), 1.0)
    after = int(np.clip(np.searchsorted(volume, centre), 1, len(window) - 1))
    gap = float(volume[after] - volume[after - 1])
    doubts = math.sqrt(inverse[0, 0] * scatter), MODEL_SHARE * centre, GAP_SHARE * gap
    return EndPoint(
        volume=centre,
        standard_error=math.hypot(*doubts),
        pH=curve.sign * (about + 0.5 * math.log10(b / a)),
        slope=curve.sign / (2.0 * LN10 * math.sqrt(a * b)),
        window=len(window),
    )
