"""Terms of the trade as data: structures, lithologies, contacts, gaps, indicators, fossils, codes, headings.

`vocabulary(name)` gives one vocabulary, `lexicon(*names)` finds terms in running shorthand, `code_table(name)`
gives a table of facies codes. Everything is read from `data/*.toml`, checked when loaded and kept.
"""

from logkit.vocabulary.ambiguity import Ambiguity, Meaning, ambiguities
from logkit.vocabulary.codes import CodeTable, FaciesCode, code_table, code_tables
from logkit.vocabulary.phrases import Lexicon, Piece, lexicon
from logkit.vocabulary.terms import FILES, Term, Vocabulary, vocabulary
from logkit.vocabulary.words import normal

VOCABULARIES = tuple(FILES)
"""Names of all vocabularies."""

__all__ = [
    "VOCABULARIES", "Ambiguity", "CodeTable", "FaciesCode", "Lexicon", "Meaning", "Piece", "Term", "Vocabulary",
    "ambiguities", "code_table", "code_tables", "lexicon", "normal", "vocabulary",
]  # fmt: skip
