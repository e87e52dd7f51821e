"""Lines of hand algebra, right and garbled, for trying whether the reader survives them."""

from __future__ import annotations

import random
import sys
import time

from derive.expressions.text import to_text
from derive.handcheck.read_line import read_line
from derive.handcheck.report import HandLine

PIECES = [
    *"ab_012.()+-*/^|=~,;:[]{}\\'\"<>!&$%@`\n\t \0\x1bé∥²³⁻₁ₑ·−–√βπωΩµ∞→…",
    *(
        "||",
        "**",
        "//",
        ":=",
        "~=",
        "==",
        "≈",
        "sqrt",
        "sqrt(",
        "1e",
        "1e9999",
        "R_E",
        "C_π",
        "s",
        "A_v(s)",
    ),
    *(
        r"\frac",
        r"\frac{a}{b}",
        r"\dfrac{",
        r"\sqrt",
        r"\sqrt[3]",
        r"\left(",
        r"\right)",
        r"\left.",
        r"\beta",
    ),
    *(
        r"\parallel",
        r"\cdot",
        r"\times",
        r"\approx",
        r"\,",
        r"\\",
        r"\mathrm{in}",
        r"R_{E}",
        r"_{\pi}",
        "_{",
        "^{",
    ),
    *(
        "}{",
        r"\text",
        r"\foo",
        r"\Omega",
        "4k7",
        "600 Ω",
        "^-",
        "^(1/2)",
        "v_b = ",
        " = ",
        "𝑅_𝐸",
        "\ud800",
        "\u202e",
    ),
    *(
        "__import__('os').system('true')",
        "eval(x)",
        "lambda: 0",
        "exec",
        "x.__class__",
        "f'{a}'",
        "#",
        "'''",
    ),
]
RIGHT = [
    "v_out/R_E = (v_b - v_out)*(g_m + 1/r_pi + s*C_pi)",
    "A_v = (1 + s·C_π/g_m)/(1 + b_1·s + b_2·s²)",
    r"\frac{v_{out}}{R_{E}} = \left(v_b - v_{out}\right)\left(g_m + \frac{1}{r_\pi} + sC_\pi\right)",
    r"Z_{in} \approx R_1 \parallel R_2 \parallel \left[r_\pi + (\beta + 1) R_E\right]",
    "K ~ -g_m*(R_C || R_L)/(1 + g_m*R_E)",
]
# What a reader of text has no business with.
FORBIDDEN = ("exec", "compile", "open", "os.", "subprocess.", "socket.", "import", "ctypes.", "shutil.")
_SLOWEST = 2.0  # seconds; hundreds of times what a line takes, so that a busy machine does not matter


def garbled(chance: random.Random) -> str:
    """Give a line: pieces at random, or a right line with some signs cut out, doubled, or put in."""
    if chance.random() < 0.3:
        return "".join(chance.choices(PIECES, k=chance.randint(0, 25)))
    text = chance.choice(RIGHT)
    for _ in range(chance.choice((1, 1, 1, 2, 4))):
        at = chance.randrange(len(text) + 1)
        end = min(len(text), at + chance.choice((0, 0, 1, 3, 6)))
        middle = chance.choice(["", text[at:end] * 2, chance.choice(PIECES)])
        text = text[:at] + middle + text[end:]
    return text


class Watch:
    """Notes what the interpreter is asked to do, while it is looking."""

    def __init__(self) -> None:
        self.looking = False
        self.seen: list[str] = []
        sys.addaudithook(self._note)

    def _note(self, event: str, arguments: tuple[object, ...]) -> None:
        if self.looking and event.startswith(FORBIDDEN):
            self.seen.append(f"{event} {arguments!r:.80}")

    def read(self, text: str) -> HandLine:
        """Read a line under watch, and assert all that is promised of any line."""
        self.seen.clear()
        began = time.perf_counter()
        self.looking = True
        try:
            line, left = read_line(1, "h.toml:1", text)
        finally:
            self.looking = False
        assert time.perf_counter() - began < _SLOWEST, text[:80]
        assert not self.seen, (text[:80], self.seen)
        hold_to_promise(line, text)
        assert line.fault is not None or left == line.left
        return line


def hold_to_promise(line: HandLine, text: str) -> None:
    """Assert that a line has both sides and all places, or one clear reason why not."""
    assert line.text in text
    if line.fault is None:
        assert line.left is not None
        assert line.right is not None
        assert all(0 <= span.start < span.end <= len(line.text) for _, span in line.spans)
        # What was read can be printed in the user's own language.
        assert to_text(line.left)
        assert to_text(line.right)
        return
    assert line.left is None
    assert line.right is None
    assert 0 <= line.fault.position <= len(line.text)
    assert line.fault.what
    assert line.fault.cure
    assert (line.fault.what + line.fault.cure).isprintable(), text[:80]
