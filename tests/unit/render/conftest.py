# ruff: noqa: E501 (formulas and steps are read best on one line each)
"""A sheet written by hand that holds every kind of block, and what is hard to set."""

import json
from fractions import Fraction

import pytest

from derive.expressions.tree import (
    ONE,
    ZERO,
    Elided,
    Equation,
    Expression,
    Name,
    Negative,
    Number,
    Parallel,
    Power,
    Product,
    Quotient,
    Root,
    Sum,
)
from derive.sheet.document import (
    Column,
    Display,
    Field,
    Mark,
    Maths,
    Matrix,
    Paragraph,
    Reference,
    Section,
    Sheet,
    SourceText,
    Table,
    Text,
)

TITLE = "Emitter follower <script>alert(1)</script> & Ω-Stufe für Größe"
TOPOLOGY = '[sheet]\ntitle = "Follower </script><b>"\n\n[parts]\nR_S = { resistor = "600 Ω" }\n'
LEDGER = json.dumps({"ledger": 1, "topology": {"text": TOPOLOGY}, "µ": "</script>"}, indent=1) + "\n"


def n(name: str) -> Name:
    return Name(name)


def p(*names: str | Expression) -> Expression:
    factors = tuple(Name(x) if isinstance(x, str) else x for x in names)
    return factors[0] if len(factors) == 1 else Product(factors)


def plus(*terms: Expression) -> Sum:
    return Sum(terms)


def over(above: Expression, below: Expression) -> Quotient:
    return Quotient(above, below)


S = n("s")
V_B, V_E, V_SRC = n("v_b"), n("v_e"), n("V_src")
G_PI = plus(over(ONE, n("r_pi")), p("s", "C_pi"))


def long_sum(count: int) -> Sum:
    """Give a sum of so many different terms of three factors, some of them negative."""
    terms = []
    for i in range(count):
        term = p(f"R_{i + 1}", "g_m", f"C_{count - i}")
        terms.append(Negative(term) if i % 7 == 3 else term)
    return Sum(tuple(terms))


KCL_B = Equation(
    ZERO,
    plus(
        over(plus(V_B, Negative(V_SRC)), n("R_S")),
        p(plus(V_B, Negative(V_E)), G_PI),
        p("s", "C_mu", "v_b"),
    ),
)
KCL_E = Equation(
    ZERO,
    plus(
        over(V_E, n("R_E")),
        Negative(p("g_m", plus(V_B, Negative(V_E)))),
        Negative(p(plus(V_B, Negative(V_E)), G_PI)),
    ),
)
BRACKET = plus(
    p("R_E", "R_S", "C_mu"), p("R_S", "r_pi", "C_mu"), p("R_E", "r_pi", "C_pi"),
    p("R_S", "r_pi", "C_pi"), p("g_m", "R_E", "R_S", "r_pi", "C_mu"),
)  # fmt: skip
DENOMINATOR = plus(
    n("R_E"), n("R_S"), n("r_pi"), p("g_m", "R_E", "r_pi"), p(S, BRACKET),
    p(Power(S, 2), "R_E", "R_S", "r_pi", "C_mu", "C_pi"),
)  # fmt: skip
LONG_RATIO = Equation(
    over(n("V_e"), V_SRC),
    over(plus(n("R_E"), p("g_m", "R_E", "r_pi"), p("s", "R_E", "r_pi", "C_pi")), DENOMINATOR),
)
RESULT = Equation(
    over(n("V_e"), V_SRC),
    over(
        plus(ONE, p(S, over(n("C_pi"), n("g_m")))),
        plus(
            ONE,
            p(
                S,
                plus(
                    p(Parallel((n("R_S"), plus(n("r_pi"), p(plus(ONE, n("beta")), "R_E")))), "C_mu"),
                    p(over(plus(n("R_S"), n("R_E")), plus(ONE, p("g_m", "R_E"))), "C_pi"),
                ),
            ),
            p(Power(S, 2), over(p("R_S", "R_E", "C_pi", "C_mu"), plus(ONE, p("g_m", "R_E")))),
        ),
    ),
)
A_1 = Equation(
    n("a_1"),
    plus(
        p(Parallel((n("R_S"), plus(n("r_pi"), p(plus(ONE, n("beta")), "R_E")))), "C_mu"),
        p(Parallel((n("r_pi"), over(plus(n("R_S"), n("R_E")), plus(ONE, p("g_m", "R_E"))))), "C_pi"),
    ),
)
POLES = Equation(
    n("p_1"),
    Negative(
        over(
            Number(Fraction(2)),
            plus(n("a_1"), Root(plus(Power(n("a_1"), 2), Negative(p(Number(Fraction(4)), "a_2"))))),
        )
    ),
)
SMALL_MATRIX = Matrix(
    rows=(
        (
            plus(over(ONE, n("R_S")), over(ONE, n("r_pi")), p(S, plus(n("C_mu"), n("C_pi")))),
            Negative(G_PI),
        ),
        (
            Negative(plus(n("g_m"), over(ONE, n("r_pi")), p("s", "C_pi"))),
            plus(over(ONE, n("R_E")), n("g_m"), G_PI),
        ),
    ),
    unknowns=(V_B, V_E),
    right=(over(V_SRC, n("R_S")), ZERO),
)
WIDE_MATRIX = Matrix(
    rows=tuple(
        tuple(
            plus(over(ONE, n(f"R_{i}{j}")), over(ONE, n("r_pi")), p(S, plus(n(f"C_{i}"), n(f"C_{j}"))))
            if (i + j) % 3
            else ZERO
            for j in range(1, 7)
        )
        for i in range(1, 7)
    ),
    unknowns=tuple(n(f"v_{i}") for i in range(1, 7)),
    right=(over(V_SRC, n("R_S")), ZERO, ZERO, ZERO, ZERO, ZERO),
)


def words(*parts: str | Expression | Equation | Reference | Mark) -> tuple[object, ...]:
    made = []
    for part in parts:
        if isinstance(part, str):
            made.append(Text(part))
        elif isinstance(part, Reference | Mark):
            made.append(part)
        else:
            made.append(Maths(part))
    return tuple(made)


def ref(number: int) -> Reference:
    return Reference(f"eq {number}", str(number))


def step(
    number: int, content: Equation | Expression | Matrix, *reason: object, boxed: bool = False
) -> Display:
    return Display(content, words(*reason), str(number), f"eq {number}", boxed)


def elements_table() -> Table:
    heads = ("Part", "Kind", "Between", "Symbol", "Value", "Note")
    rows = [
        ("R_S", "resistor", "gen, x", n("R_S"), "600 Ω", "source"),
        ("Q1", "bipolar", "b, e, c", n("r_pi"), "3.90 kΩ", "β/g_m"),
        ("C_mu", "capacitor", "b, gnd", n("C_mu"), "1.00 pF", "collector at signal ground"),
        (
            "a_very_long_part_name_without_any_break_at_all",
            "resistor",
            "e, gnd",
            n("R_E"),
            "2.00 kΩ",
            "load",
        ),
        ("G_1", "transconductance", "gnd, e", p("g_m", plus(V_B, Negative(V_E))), "38.5 mS", "größer"),
    ]
    return Table(
        "Parts as read",
        tuple(Column(words(h), numeric=h == "Value") for h in heads),
        tuple(tuple(words(cell) for cell in row) for row in rows),
    )


def checks_table(count: int) -> Table:
    passed = [True, False, None]
    says = ["pass", "fail", "not checked"]
    rows = tuple(
        (
            words(f"substitution {i + 1}"),
            words("random values in a prime field, ", over(p("r_pi", "C_pi"), plus(ONE, n("beta")))),
            words(f"{i / 7:.4f}"),
            words(Mark(passed[i % 3], says[i % 3])),
        )
        for i in range(count)
    )
    heads = (("Check", False), ("Method", False), ("Residual", True), ("Result", False))
    return Table("Checks", tuple(Column(words(h), num) for h, num in heads), rows)


def example_sheet() -> Sheet:
    """Build the sheet; every call gives an equal one."""
    sections = (
        Section(
            "What is asked",
            (
                Paragraph(words("Find ", Equation(n("A_v"), over(n("v_out"), n("V_s"))), " of the follower driven from ", n("R_S"), ", with its poles and its zero in terms of the parts, and say where the simple form may be used. Worte mit Umlauten: größer, weiß; naïve façade; Ω, µ, π.")),
                Paragraph(words("r_o is taken as infinite: V_A is not given."), tone="note"),
                elements_table(),
            ),
        ),
        Section(
            "Nodal equations",
            (
                Paragraph(words("The unknowns are ", V_B, " and ", V_E, "; every current is written as leaving its node.")),
                step(1, KCL_B, "Kirchhoff's current law at node b: currents leaving through ", n("R_S"), ", ", n("r_pi"), ", ", n("C_pi"), " and ", n("C_mu"), "."),
                step(2, KCL_E, "The same at node e: the controlled source ", p("g_m", plus(V_B, Negative(V_E))), " enters the node."),
                step(3, SMALL_MATRIX, ref(1), " and ", ref(2), " collected; the matrix is not symmetric because of ", n("g_m"), "."),
            ),
        ),
        Section("Elimination", ()),
        Section(
            "Steps",
            (
                step(4, LONG_RATIO, ref(1), " put into ", ref(2), ", cleared of fractions. No term has been dropped."),
                step(5, Equation(p("D_0"), DENOMINATOR), "The denominator of ", ref(4), ", collected in powers of ", S, ", where ", plus(p("R_E", "R_S", "C_mu"), p("R_S", "r_pi", "C_mu"), p("R_E", "r_pi", "C_pi"), p("R_S", "r_pi", "C_pi")), " multiplies it."),
                step(6, A_1, "Each capacitor times the resistance that it sees with the other one open."),
                step(7, POLES, "Closed form, pivot ", plus(n("g_m"), over(ONE, n("R_E"))), " non-zero."),
            ),
            level=2,
        ),
        Section(
            "Result",
            (
                Paragraph(words("For ", n("beta"), " much larger than one the response of the follower is")),
                step(8, RESULT, "Use below the transit frequency. Coefficients are checked in the next section.", boxed=True),
                Paragraph(words("Check 2 failed: the residual is not zero. Do not use ", ref(8), "."), tone="alarm"),
            ),
        ),
        Section("Large forms", (
            step(9, Equation(n("b_3"), long_sum(60)), "Sixty terms, printed in full."),
            step(10, Equation(n("H"), over(long_sum(20), plus(long_sum(9), n("R_x")))), "A long fraction, broken above and below its bar."),
            step(11, WIDE_MATRIX, "The matrix of six nodes."),
            step(12, Equation(n("N"), plus(p("R_1", "C_1"), Elided(412, "ledger, result 1"))), "The rest stands in the ledger."),
            step(13, Equation(n("b_2"), p(plus(*long_sum(5).terms, over(p("R_a"), n("R_b"))), plus(n("R_a"), n("R_b")), Power(plus(n("C_a"), *long_sum(8).terms), 2))), "Long factors."),
            Display(Equation(n("x_long_name_of_a_node"), Root(long_sum(8)))),
        )),
        Section("Checks", (checks_table(40),)),
        Section("Source", (SourceText(TOPOLOGY),)),
    )  # fmt: skip
    return Sheet(
        title=TITLE,
        fields=(
            Field("Number", "RG-310-04"),
            Field("Revision", "B"),
            Field("Prepared", "J. Example"),
            Field("Checked", "Ö. Prüfer"),
            Field("Date", "2 January 2026"),
            Field(
                "Notes", "Small-signal model about the operating point; spreading resistance left out."
            ),
        ),
        passed=False,
        failures=("A_v in band high: substitution 2 <b>", "Z_out: asymptote at s → ∞"),
        sections=sections,
        topology_name="follower.toml",
        topology_text=TOPOLOGY,
        ledger_name="follower.json",
        ledger_text=LEDGER,
    )


@pytest.fixture(scope="session")
def sheet() -> Sheet:
    return example_sheet()
