"""What the index looks through: words as they are typed on a keyboard.

`js/panel_index.js` treats what is typed in the same way, so formulas are found with or without
subscripts and with any dot, or none, before their water.
"""

import unicodedata
from collections.abc import Iterable
from typing import Final

from bufferfolio.definitions import Family, Reagent


def searchable(words: Iterable[str]) -> str:
    """Return words as the index compares them, each once."""
    plain = (typed(word) for text in words for word in text.split())
    return " ".join(dict.fromkeys(word for word in plain if word))


def typed(word: str) -> str:
    """Return a word in lower case, without subscripts, true minus signs and hydrate dots."""
    return unicodedata.normalize("NFKC", word).lower().translate(PLAINER)


def family_words(family: Family) -> list[str]:
    """Return everything that a family is called, its species included."""
    forms = [text for form in family.species for text in (form.name, form.label)]
    return [family.label, family.key, *family.synonyms, *forms]


def reagent_words(reagent: Reagent) -> list[str]:
    """Return everything that a reagent is called."""
    return [reagent.label, reagent.formula, *reagent.synonyms, reagent.cas or ""]


PLAINER: Final = {ord("\N{MINUS SIGN}"): "-", **dict.fromkeys(map(ord, ".·•*⋅∙"))}
