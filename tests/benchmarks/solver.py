#!/usr/bin/env python3
"""How fast the solver is beside root finders: `python tests/benchmarks/solver.py [--quick]`.

Ratios are taken within one run, the contestants turn by turn, and the median of the turns counts:
on the clock, where a second processor helps this solver alone, and in processor time, which other
programs on the machine disturb less. What is required is meant for the clock of a machine at rest.

The general ways find the pH of balanced charge by one array function, every mixture at once
(`find_root`) or one by one (`brentq`), and the ionic strength in an outer loop that begins at the
ideal solution and ends when it changes by less than 1e-10. They are compared as one would write
them first; told for information is what they gain by care: mixtures that leave the loop on their
own, the nearly straight logarithm of the ratio of charges, brackets that narrow about the last
answer, and plain numbers in place of numpy's.
"""

import argparse
import subprocess
import sys
import time
import tracemalloc
from collections.abc import Callable
from pathlib import Path
from statistics import median

import numpy as np
from scipy.optimize import brentq
from scipy.optimize.elementwise import find_root

sys.path.insert(0, str(Path(__file__).resolve().parents[1]))

from bufferfolio.activity import MODELS
from bufferfolio.equilibrium import solve
from bufferfolio.speciation import Mixture
from bufferfolio.temperature import Constants
from solutions import CHLORIDE, SODIUM, constants_of, made_up_family, mixture_of

DAVIES = MODELS["davies"]
TOLERANCE = 1e-10  # relative change of ionic strength
TOLERANCES = {"xatol": 1e-300, "xrtol": 1e-12, "fatol": 1e-300, "frtol": 1e-300}
LOWEST, HIGHEST = -2.0, 16.0  # pH between which every answer lies
AGREEMENT = 1e-8  # in pH, between all ways
AT_LEAST_FIND_ROOT, AT_LEAST_BRENTQ = 20.0, 1000.0
MOST_MEMORY = 1e9  # bytes at a million points
STEEPEST = 1.5  # how much dearer a point of a million may be than a point of ten thousand

PHOSPHORIC = made_up_family("phosphoric", 0, [2.148, 7.198, 12.35])
SIX = (
    PHOSPHORIC,
    made_up_family("citric", 0, [3.128, 4.761, 6.396]),
    made_up_family("glycine", 1, [2.351, 9.780]),
    made_up_family("acetic", 0, [4.756]),
    made_up_family("ammonium", 1, [9.245]),
    made_up_family("carbonic", 0, [6.352, 10.329]),
)


def phosphate(count: int) -> Mixture:
    """Random phosphate mixtures: 1e-5 to 0.3 mol/kg, 0 to 4 equivalents of strong base."""
    random = np.random.default_rng(1)
    total = 10.0 ** random.uniform(-5.0, np.log10(0.3), count)
    return mixture_of([(PHOSPHORIC, total)], [(SODIUM, total * random.uniform(0.0, 4.0, count))])


def six_families(count: int) -> Mixture:
    """Random mixtures of six families with a strong acid or base, 1e-4 to 0.1 mol/kg each."""
    random = np.random.default_rng(2)
    amounts = 10.0 ** random.uniform(-4.0, -1.0, (8, count))
    inside = list(zip(SIX, amounts[:6], strict=True))
    return mixture_of(inside, [(SODIUM, amounts[6]), (CHLORIDE, amounts[7])])


def charges_of(
    pH: np.ndarray,
    term: np.ndarray,
    hydroxide: np.ndarray,
    plus: np.ndarray,
    minus: np.ndarray,
    *rows: np.ndarray,
    charges: tuple[tuple[int, int], ...],
) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Return positive charge, negative charge, and Σ z² m of what is not a strong ion.

    `rows` are, family by family, the total and then K1, K1 K2 …; `term` is D of log γ = −z² D.
    """
    h, g = 10.0**-pH, 10.0**term
    hydrogen, hydroxyl = h * g, hydroxide / h * g
    plus, minus, squares = plus + hydrogen, minus + hydroxyl, hydrogen + hydroxyl
    powers = [1.0, 1.0 / h]
    g4 = g**4
    gammas = {0: 1.0, 1: g, 2: g4, 3: g4 * g4 * g}
    start = 0
    for charge, steps in charges:
        total, products = rows[start], rows[start + 1 : start + 1 + steps]
        start += 1 + steps
        while len(powers) <= steps:
            powers.append(powers[-1] * powers[1])
        shares = [gammas[abs(charge)] * powers[0]]
        for lost, product in enumerate(products, start=1):
            shares.append(product * powers[lost] * gammas[abs(charge - lost)])
        scale = total / sum(shares)
        for lost, share in enumerate(shares):
            z = charge - lost
            if z > 0:
                plus = plus + z * share * scale
            elif z < 0:
                minus = minus - z * share * scale
            squares = squares + z * z * share * scale
    return plus, minus, squares


def rows_of(mixture: Mixture, constants: Constants) -> tuple[list[np.ndarray], dict[str, object]]:
    """Return what `charges_of` takes after pH and term."""
    net = mixture.strong_charge
    rows = [10.0**-constants.pKw, np.maximum(net, 0.0), np.maximum(-net, 0.0)]
    for total, pK in zip(mixture.totals, constants.pK, strict=True):
        rows += [total, *(10.0 ** -np.cumsum(pK, axis=0))]
    charges = tuple((family.charge, len(family.steps)) for family in mixture.families)
    return rows, {"charges": charges}


def by_find_root(mixture: Mixture, constants: Constants, *, careful: bool = False) -> np.ndarray:
    """All mixtures at once, until the ionic strength of the last one stands still.

    With `careful`, each mixture leaves the loop on its own, the logarithm of the ratio of charges
    is brought to zero, and a bracket reaches as far about the last answer as that had moved.
    """
    rows, options = rows_of(mixture, constants)
    n = mixture.totals.shape[1]
    strong, coefficient = mixture.strong_strength, constants.debye_huckel
    pH, strength = np.full(n, 7.0), np.zeros(n)
    active, reach = np.arange(n), np.full(n, 9.0)

    def residual(pH: np.ndarray, term: np.ndarray, *rows: np.ndarray) -> np.ndarray:
        plus, minus, _ = charges_of(pH, term, *rows, **options)
        return np.log(minus / plus) if careful else minus - plus

    for _ in range(200):
        here = [row[active] for row in rows]
        term, _ = DAVIES.long_range(coefficient[active], strength[active])
        low, high = np.full(active.size, LOWEST), np.full(active.size, HIGHEST)
        if careful:
            near, far = pH[active] - reach[active], pH[active] + reach[active]
            low = np.where(residual(near, term, *here) < 0.0, near, low)
            high = np.where(residual(far, term, *here) > 0.0, far, high)
        found = find_root(residual, (low, high), args=(term, *here), tolerances=TOLERANCES).x
        _, _, squares = charges_of(found, term, *here, **options)
        following = 0.5 * (strong[active] + squares)
        moving = np.abs(following - strength[active]) > TOLERANCE * following
        reach[active] = np.abs(found - pH[active]) + 1e-9
        pH[active], strength[active] = found, following
        if not moving.any():
            return pH
        active = active[moving] if careful else active
    raise RuntimeError("the outer loop does not end")


def by_brentq(
    mixture: Mixture, constants: Constants, count: int, *, careful: bool = False
) -> np.ndarray:
    """One mixture after the other; with `careful`, in plain numbers."""
    rows, options = rows_of(mixture, constants)
    number = float if careful else np.float64
    result = np.empty(count)
    for k in range(count):
        here = [number(row[k]) for row in rows]
        strong, coefficient = (
            number(mixture.strong_strength[k]),
            number(constants.debye_huckel[k]),
        )
        strength, last = number(0.0), np.inf
        while abs(strength - last) > TOLERANCE * strength:
            last = strength
            root = strength**0.5
            term = coefficient * (root / (1.0 + root) - 0.3 * strength)

            def residual(pH: float, term: float = term, here: list[float] = here) -> float:
                plus, minus, _ = charges_of(number(pH), term, *here, **options)
                return minus - plus

            result[k] = brentq(residual, LOWEST, HIGHEST, xtol=1e-12)
            strength = 0.5 * (strong + charges_of(number(result[k]), term, *here, **options)[2])
    return result


def tell(text: str) -> None:
    """Write a line at once."""
    sys.stdout.write(text + "\n")
    sys.stdout.flush()


def timed(work: Callable[[], np.ndarray]) -> tuple[float, float, np.ndarray]:
    """Return how long some work took on the clock and in processor time, and its result."""
    clock, processor = time.perf_counter(), time.process_time()
    result = work()
    return time.perf_counter() - clock, time.process_time() - processor, result


def compare(name: str, mixture: Mixture, turns: int, singles: int) -> tuple[float, float]:
    """Tell the ratios for one set of mixtures; return both that are required."""
    constants = constants_of(mixture)
    count = mixture.totals.shape[1]
    ways: dict[str, tuple[int, Callable[[], np.ndarray]]] = {
        "this solver": (count, lambda: solve(mixture, constants, DAVIES).pH),
        "find_root": (count, lambda: by_find_root(mixture, constants)),
        "find_root, with care": (count, lambda: by_find_root(mixture, constants, careful=True)),
        "brentq": (singles, lambda: by_brentq(mixture, constants, singles)),
        "brentq, with care": (
            singles,
            lambda: by_brentq(mixture, constants, singles, careful=True),
        ),
    }
    pH = ways["this solver"][1]()  # the first call pays for imports
    taken: dict[str, list[tuple[float, float]]] = {way: [] for way in ways}
    for _ in range(turns):
        for way, (points, work) in ways.items():
            clock, processor, found = timed(work)
            taken[way].append((clock / points, processor / points))
            assert np.max(np.abs(found - pH[:points])) < AGREEMENT
    tell(f"{name}: {count:,} mixtures, {singles} of them one by one")
    ratios = {}
    for way in ways:
        turn_by_turn = list(zip(taken["this solver"], taken[way], strict=True))
        clock, processor = (
            median(theirs[k] / ours[k] for ours, theirs in turn_by_turn) for k in (0, 1)
        )
        ratios[way] = clock
        rate = 1.0 / median(seconds for seconds, _ in taken[way])
        tell(f"  {way:22}{rate:12,.0f} a second   {clock:8,.1f} clock {processor:8,.1f} processor")
    return ratios["find_root"], ratios["brentq"]


def growth(sizes: tuple[int, ...]) -> float:
    """Tell seconds against points; return how much dearer the last points are than 1e4 ones."""
    each = {}
    for size in sizes:
        mixture = phosphate(size)
        constants = constants_of(mixture)
        turns = 7 if size <= 100_000 else 3
        each[size] = median(
            timed(lambda m=mixture, c=constants: solve(m, c, DAVIES).pH)[0] / size
            for _ in range(turns)
        )
        tell(f"  {size:9,} points  {each[size] * size:8.4f} s  {each[size] * 1e6:6.2f} µs a point")
    return each[sizes[-1]] / each[10_000]


def memory(points: int) -> float:
    """Return the most bytes that a fresh process held while it solved that many points."""
    command = [sys.executable, __file__, "--solve", str(points)]
    return float(subprocess.run(command, check=True, capture_output=True, text=True).stdout)


def solve_and_tell(points: int) -> None:
    """Solve, and tell the largest resident size of this process; on Windows, of its arrays."""
    if sys.platform == "win32":
        tracemalloc.start()
    mixture = phosphate(points)
    solve(mixture, constants_of(mixture), DAVIES)
    if sys.platform == "win32":
        tell(str(tracemalloc.get_traced_memory()[1]))
    else:
        import resource  # not there on Windows

        most = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
        tell(str(most * (1 if sys.platform == "darwin" else 1024)))


def main() -> int:
    """Run everything and return 1 where a requirement is missed."""
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("--quick", action="store_true", help="fewer turns and points")
    parser.add_argument("--solve", type=int, help=argparse.SUPPRESS)
    chosen = parser.parse_args()
    if chosen.solve:
        solve_and_tell(chosen.solve)
        return 0
    turns, one_by_one = (3, 60) if chosen.quick else (5, 300)
    ratios = [
        compare("one family (phosphate)", phosphate(40_000), turns, one_by_one),
        compare("six families", six_families(40_000), turns, one_by_one // 3),
    ]
    tell("time against points")
    sizes = (1_000, 10_000, 100_000) if chosen.quick else (1_000, 10_000, 100_000, 1_000_000)
    steepness = growth(sizes)
    largest = memory(sizes[-1])
    tell(f"  the last points cost {steepness:.2f} of those among 10,000 (at most {STEEPEST})")
    tell(f"  memory at {sizes[-1]:,} points: {largest / 1e6:,.0f} MB (at most 1,000)")
    array_ratios, single_ratios = zip(*ratios, strict=True)
    missed = [
        *("find_root" for ratio in array_ratios if ratio < AT_LEAST_FIND_ROOT),
        *("brentq" for ratio in single_ratios if ratio < AT_LEAST_BRENTQ),
        *(["growth"] if steepness > STEEPEST else []),
        *(["memory"] if largest > MOST_MEMORY else []),
    ]
    tell(
        f"required: find_root {AT_LEAST_FIND_ROOT:.0f}, brentq {AT_LEAST_BRENTQ:,.0f}, on the clock"
    )
    tell("missed: " + ", ".join(missed) if missed else "every requirement is met")
    return 1 if missed else 0


if __name__ == "__main__":
    raise SystemExit(main())
