"""pK over temperature, against published tables and equations; molar masses against IUPAC weights."""

import re

import numpy as np
import pytest
from published_tables import Row, assert_within, differences, rows_of
from recipes import shipped

from bufferfolio.temperature import pK_at


def shipped_pK(family: str, step: str, celsius: float) -> float:
    return float(pK_at(shipped().families[family].steps[int(step) - 1], np.array(273.15 + celsius)))


def test_show():
    for r in rows_of("pK_tables.csv"):
        c = shipped_pK(r["family"], r["step"], float(r["celsius"]))
        print(r["family"], r["step"], r["celsius"], r["value"], round(c-float(r["value"]), 4), r["source"][-30:])
    for r in rows_of("pK_equations.csv"):
        t = [float(r["low"]), 25.0, min(50., float(r["high"]))]
        def eq(T):
            T = T+273.15
            v = float(r["constant"])+float(r["inverse"])/T+float(r["linear"])*T+float(r["logarithm"])*np.log(T)+float(r["log10"])*np.log10(T)+float(r["inverse_square"])/T/T
            return {"pK": v, "log10 K": -v, "ln K": -v/np.log(10)}[r["gives"]]
        valid = shipped().families[r["family"]].steps[int(r["step"])-1].valid_temperature
        ts = [T for T in np.arange(0, 61, 5) if float(r["low"]) <= T <= float(r["high"]) and valid.low <= T+273.15+1e-6 <= valid.high+1e-5]
        d = [shipped_pK(r["family"], r["step"], T)-eq(T) for T in ts]
        w = int(np.argmax(np.abs(d)))
        print(r["family"], r["step"], r["name"], "check", round(eq(25)-float(r["value"]), 5), "max", round(d[w], 5), ts[w])
