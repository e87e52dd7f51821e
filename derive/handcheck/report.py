"""The nouns of hand algebra: the lines as they were written, and what came of each.

A place in a line is the way to it through the written trees: 0 for the left side or 1 for the right one,
then the number of the operand at every step, in the order of `derive.expressions.walk.children_of`.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from derive.approximate.register import Errors, Worst
from derive.expressions.tree import Equation, Expression
from derive.readable.form import Definition

Way = tuple[int, ...]
Relation = Literal["=", "~"]


@dataclass(frozen=True, slots=True)
class Span:
    """From the sign at `start` to that before `end`, counted from 0 in the line's own text."""

    start: int
    end: int


@dataclass(frozen=True, slots=True)
class Unreadable:
    """Why a line could not be read: where in its text, what is wrong, and the cure."""

    position: int
    what: str
    cure: str


@dataclass(frozen=True, slots=True)
class HandLine:
    """One claim of a hand derivation.

    `number` counts the lines from 1 and `where` says the line of the file ("follower.toml:12"); `text` is the
    claim as it was typed, without its remark. `left` and `right` are None where it could not be read, and
    `fault` then says why. `spans` holds where each place of the written trees stands in `text`.
    """

    number: int
    where: str
    text: str
    relation: Relation = "="
    left: Expression | None = None
    right: Expression | None = None
    spans: tuple[tuple[Way, Span], ...] = ()
    remark: str = ""
    fault: Unreadable | None = None

    def span(self, way: Way) -> Span | None:
        """Give where a place stands in the text: its own span, or that of the nearest one around it."""
        known = dict(self.spans)
        while way and way not in known:
            way = way[:-1]
        return known.get(way)


@dataclass(frozen=True, slots=True)
class HandTie:
    """A tie between parts under which the lines are to hold: g_m2 = g_m1."""

    where: str
    text: str
    left: Expression
    right: Expression


@dataclass(frozen=True, slots=True)
class HandDefinition:
    """A name of the user's own and what it stands for: R_Sp = R_S || r_pi."""

    where: str
    name: str
    text: str
    meaning: Expression


@dataclass(frozen=True, slots=True)
class HandFile:
    """A hand derivation as it was read; `topology` is the file that it belongs to, as written.

    `band` is "" where the file names none.
    """

    file: str
    text: str
    topology: str
    find: str
    band: str
    lines: tuple[HandLine, ...]
    given: tuple[HandTie, ...] = ()
    define: tuple[HandDefinition, ...] = ()
    title: str = ""


EditKind = Literal[
    "sign",
    "dropped term",
    "extra term",
    "dropped factor",
    "extra factor",
    "one more",
    "parallel for series",
    "inverted",
    "swapped",
    "other symbol",
    "other node",
    "missing resistance",
    "exponent",
    "number",
    "bracket",
]


@dataclass(frozen=True, slots=True)
class Edit:
    """One change to a line that makes it true, proved as the line itself was tried.

    `way` leads to the place in the line as written; there `before` becomes `after` (None where a term or factor is
    taken away or put in). `line` is the whole line after the change, and `says` tells the change in words:
    "write beta + 1 for beta". Where lines above are wrong, `makes` may be "follow": with the change the line
    follows from them as they are written, though it is still as wrong as they are.
    """

    kind: EditKind
    way: Way
    before: Expression | None
    after: Expression | None
    line: Equation
    says: str
    makes: Literal["true", "follow"] = "true"


@dataclass(frozen=True, slots=True)
class DimensionRemark:
    """A place where unlike things are added or set equal, and what they are: "Ω and no unit are added"."""

    way: Way
    says: str


@dataclass(frozen=True, slots=True)
class Neglected:
    """A term that an approximate line leaves out, the one that it is small against, and their ratio.

    `of` says where it stood: "coefficient of s in the denominator". `ratio` is None where a value is open.
    """

    of: str
    term: Expression
    against: Expression
    ratio: float | None


@dataclass(frozen=True, slots=True)
class Pricing:
    """What an approximate line is off by.

    `relative` is the error of a line without s at the nominal values, (right − left)/left, as fraction; `errors`
    are those of one with s, over the range, with poles and zeros. `worst` holds the worst over the corners of the
    tolerances, which `corners` tells in words; `limits` says which limits of the budget are broken, () where none.
    `definitions` are those of words that the neglected terms are written with.
    """

    relative: float | None
    errors: Errors | None
    worst: Worst | None
    corners: str
    limits: tuple[str, ...]
    neglected: tuple[Neglected, ...] = ()
    definitions: tuple[Definition, ...] = ()


Outcome = Literal[
    "true",  # and it follows from what stands above it in one move
    "leap",  # true of the circuit, not from the line above
    "definition",  # gives a new name; nothing to be judged
    "within",  # an approximation within the budget
    "beyond",  # an approximation that costs more than the budget allows
    "mistake",  # wrong, and the mistake is in this line
    "carried",  # wrong, but it follows from wrong lines above
    "unread",  # could not be read
    "refused",  # could be read, but names something that is not there
    "undecided",  # could not be decided; `why` says what was in the way
]


@dataclass(frozen=True, slots=True)
class LineVerdict:
    """What came of one line.

    `why` is a sentence for the reader and `cure` what would mend the line, "" where none is known; `proof` says how
    it was decided, with the bound. `finding` tells how the sides differ: "the right side is too small by R_E".
    `ratio` is right over left and `difference` right minus left, both without node voltages or other unknowns and
    readable, None where they would not be short. `definitions` are those of the words in them. `sources` are the
    numbers of the lines that it follows from: for one carried forward the wrong ones come first. `way` is the place
    to point at, () for the whole line. `edits` are ranked, the likeliest first.
    """

    line: HandLine
    outcome: Outcome
    why: str
    cure: str = ""
    proof: str = ""
    finding: str = ""
    ratio: Expression | None = None
    difference: Expression | None = None
    definitions: tuple[Definition, ...] = ()
    sources: tuple[int, ...] = ()
    way: Way = ()
    edits: tuple[Edit, ...] = ()
    dimensions: tuple[DimensionRemark, ...] = ()
    pricing: Pricing | None = None

    @property
    def passed(self) -> bool | None:
        """Whether the line stands; None where it was not judged."""
        if self.outcome in ("true", "leap", "definition", "within"):
            return True
        return False if self.outcome in ("mistake", "carried", "beyond") else None


@dataclass(frozen=True, slots=True)
class HandReport:
    """The verdicts on a hand derivation, a line each, in order.

    `find`, `band` and `file` say of which result; `refused_ties` are the ties of `given` that could not be imposed and
    `refused_definitions` the definitions that could not be used, each with the reason.
    """

    file: str
    topology: str
    find: str
    band: str
    verdicts: tuple[LineVerdict, ...]
    given: tuple[HandTie, ...] = ()
    define: tuple[HandDefinition, ...] = ()
    refused_ties: tuple[tuple[HandTie, str], ...] = ()
    refused_definitions: tuple[tuple[HandDefinition, str], ...] = ()
    title: str = ""

    @property
    def passed(self) -> bool:
        """Whether every line was judged and stands."""
        return not self.refused_ties and all(verdict.passed for verdict in self.verdicts)

    @property
    def first_mistake(self) -> LineVerdict | None:
        """The first line with a mistake of its own, None where there is none."""
        return next((v for v in self.verdicts if v.outcome == "mistake"), None)
