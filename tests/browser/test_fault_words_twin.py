"""The page's words for faults, held against Python's, extent by extent."""

from playwright.sync_api import Page

from bufferfolio.engine_data import setting_data, subject_data
from bufferfolio.fault_words import CHECKS, said
from bufferfolio.subjects import subject_of
from bufferfolio.substitutes import setting_of
from bufferfolio.suspects import KINDS, extent_at, suspects_of
from recipes import shipped

from .engine_scripts import ENGINE, ask, load, plain

ROOM = 298.15
SHARES = (0.0, 0.013, 0.37, 0.501, 0.8, 1.0)
SCRIPTS = (*ENGINE, "figure_ticks", "figures", "formatting", "fault_words")


def test_words_of_every_kind_and_extent(page: Page) -> None:
    """Every fourth formulation, and one with ammonia: suspects at several shares of a range."""
    load(page, SCRIPTS)
    kinds = set()
    for key in [*sorted(shipped().formulations)[::4], "ammonia-buffer"]:
        this = setting_of(subject_of(shipped().formulations[key], shipped()), shipped())
        suspects = suspects_of(this, ROOM)
        asked = [
            [plain(each), extent_at(each, share)]
            for each in suspects
            for share in (SHARES if not each.fixed else (0.0,))
        ]
        body = """(bf, [subject, asked]) => {
          const made = bf.subjects.subjectOf(subject);
          return asked.map(([each, extent]) => bf.fault_words.said(made, each, extent));
        }"""
        found = ask(page, body, [subject_data(this.subject), asked])
        expected = [
            said(this.subject, each, extent_at(each, share))
            for each in suspects
            for share in (SHARES if not each.fixed else (0.0,))
        ]
        assert found == expected, key
        kinds |= {each.kind for each in suspects}
    assert kinds == set(KINDS)
    assert ask(page, "(bf) => bf.fault_words.CHECKS", None) == plain(CHECKS)


def test_what_was_weighed_scales_what_may_be_mistaken_for_it(page: Page) -> None:
    """Twice the make-up in twice the water is the same solution, and has the same suspects."""
    scripts = (*SCRIPTS, "panel_fault_rows")
    load(page, scripts)
    this = setting_of(subject_of(shipped().formulations["tris-assay"], shipped()), shipped())
    data = {"subject": subject_data(this.subject), "field": {"setting": setting_data(this)}}
    body = """(bf, data) => {
      const subject = bf.subjects.subjectOf(data.subject);
      const { recipe } = subject;
      const twice = bf.weighing.times(recipe, 2);
      const stronger = bf.subjects.subjectOf(data.subject, 2);
      const readings = [{ temperature: 298.15, pH: 8.3, dilution: 1 }];
      const weights = (subject, recipe) => {
        const setting = bf.panel_fault_rows.settingOf({ data, subject, recipe });
        return bf.faults.diagnosed(setting, readings).explanations
          .map(({ words, predicted }) => [words, predicted[0]]).sort();
      };
      const parts = (recipe, factor) => recipe.parts.map((part) =>
        ({ ...part, amount: factor * part.amount }));
      return {
        recipe: weights(subject, null), twice: weights(subject, twice),
        stronger: weights(stronger, null),
        weighed: weights(subject, { ...recipe, parts: parts(recipe, 2) }),
      };
    }"""
    found = ask(page, body, data)
    same = [(words, round(pH, 6)) for words, pH in found["recipe"] if "overshoot" not in words]
    assert [(words, round(pH, 6)) for words, pH in found["twice"]] == same
    fixed_kinds = ("left out", "taken for", "too little", "twice as much", "interchanged")
    named = {words: pH for words, pH in found["weighed"] if any(k in words for k in fixed_kinds)}
    for words, pH in found["stronger"]:
        if words in named:
            assert abs(pH - named[words]) < 1e-6, words
    assert len(named) > 10
