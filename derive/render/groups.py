"""The sections of a sheet, numbered, each heading together with what must not be parted from it."""

from __future__ import annotations

from dataclasses import dataclass

from derive.sheet.document import (
    Block,
    Display,
    Folded,
    Maths,
    Paragraph,
    Section,
    SourceText,
    Table,
)

SHORT_TABLE = 8  # rows: a longer one may begin at the foot of a page and go on


@dataclass(frozen=True, slots=True)
class Heading:
    """A section's title with its number."""

    number: str
    title: str
    level: int
    about: Maths | None = None

    @property
    def anchor(self) -> str:
        """The identifier in the page: "section-8-2"."""
        return f"section-{self.number.replace('.', '-')}"


@dataclass(frozen=True, slots=True)
class Group:
    """Headings, the blocks that must not be parted from them, and the blocks that follow.

    One that `folds` is shown by a screen when asked to.
    """

    headings: tuple[Heading, ...]
    kept: tuple[Block, ...]
    rest: tuple[Block, ...]
    folds: bool = False


def groups(sections: tuple[Section, ...]) -> list[Group]:
    """Return the sections numbered, each heading kept with what it stands over.

    A section without blocks lends its heading to the next one, so that no heading ends a page.
    """
    made: list[Group] = []
    waiting: list[Heading] = []
    main = part = 0
    for section in sections:
        if section.level == 1:
            main, part = main + 1, 0
        else:
            part += 1
        number = f"{main}" if section.level == 1 else f"{main}.{part}"
        waiting.append(Heading(number, section.title, section.level + 1, section.about))
        if section.blocks:
            kept = _kept(section.blocks)
            blocks = section.blocks[:kept], section.blocks[kept:]
            made.append(Group(tuple(waiting), *blocks, section.folds))
            waiting = []
    if waiting:
        made.append(Group(tuple(waiting), (), ()))
    return made


def _kept(blocks: tuple[Block, ...]) -> int:
    """Count the blocks that stay on one page with the heading over them.

    Words that lead to a formula are kept with it; a long table may begin at the foot of a page.
    """
    match blocks:
        case (Paragraph(), Display(), *_):
            return 2
        case (Paragraph(), Paragraph(), Display(), *_):
            return 3
        case (Paragraph(), Table(_, _, rows), *_) if len(rows) <= SHORT_TABLE:
            return 2
        case (Table(_, _, rows), *_) if len(rows) > SHORT_TABLE:
            return 0
        case (SourceText(text), *_) if text.count("\n") > SHORT_TABLE:
            return 0
        case (Folded(), *_):
            return 0
        case _:
            return 1
