"""A package small enough to render in a test and rich enough to show every block: an invented transfer line."""

from __future__ import annotations

from functools import cache

from calcpack.formulas import criteria, fittings, liquid, pipe_flow, pump, suction
from calcpack.ledger import Citation, Entry, Ledger, settle_digits
from calcpack.ledger import entry as origin
from calcpack.project.model import Document, Person, RevisionNote, SourceDocument
from calcpack.report.content import CoverContent, OpenItem, PackageContent, Preliminary
from calcpack.sheets.content import (
    Column,
    Derivation,
    Facts,
    Figure,
    Listing,
    Prose,
    Ref,
    Row,
    Section,
    Sheet,
    Table,
    Verdicts,
)
from calcpack.values import CONFIRMED, LOOKED_UP, SUPPLIED, UNCONFIRMED, Value

FLOWS = {"1": 101.73, "2": 93.27, "3": 103.76, "4": 97.21, "5": 100.87}  # m3/h, invented cases
CASES = {
    "1": "1 normal level, new, clean, 15 °C", "2": "2 minimum level, aged, dirty, 15 °C",
    "3": "3 maximum level, new, clean, 15 °C", "4": "4 minimum level, new pipe, dirty strainer, 20 °C",
    "5": "5 normal level, 5 °C",
}  # fmt: skip
LINES = {"L-101": ("suction line", 9.5, 202.72), "L-102": ("pump discharge", 6.0, 154.05),
         "L-103": ("rising main", 685.0, 154.05)}  # fmt: skip
FITTINGS = (("45° bend", 8, 16.0), ("90° long-radius elbow", 6, 14.0), ("gate valve", 1, 8.0),
            ("swing check valve, angled seat", 1, 100.0), ("butterfly valve", 2, 45.0))  # fmt: skip
SVG = (
    '<svg xmlns="http://www.w3.org/2000/svg" width="170mm" height="85mm" viewBox="0 0 400 200" '
    'font-family="CP Sans" font-size="7">'
    '<path d="M40 170H380M40 170V20" stroke="#000" fill="none"/><path d="M40 140Q200 130 380 30" stroke="#000" '
    'fill="none" stroke-width="1.5"/><text x="200" y="192">Q / (m³/h)</text><text x="60" y="30">H / m</text></svg>'
)


def value(text: str, kind: str, si: float, source: str = "", status: str = CONFIRMED, locator: str = "") -> Value:
    """An input as the project reader would hand it over."""
    return Value(si, kind, text, source, locator, status, file="system.yaml", line=12)


def book(ledger: Ledger) -> None:
    """Book site, liquid, three lines in five cases, the pump, and a check of every verdict."""
    ledger.given("site/g", value("9.80665 m/s²", "acceleration", 9.80665, "STANDARD-GRAVITY", SUPPLIED), "g",
                 "Acceleration of gravity")
    ledger.given("site/z", value("85 m", "elevation", 85.0, "survey LK-SUR-002"), "z", "Site elevation")
    ledger.apply("site/p_atm", liquid.ATMOSPHERE, z="site/z")
    for symbol, text, kind, si in (("rho", "999.1 kg/m³", "density", 999.1), ("mu", "1.1376 mPa·s",
                                   "dynamic_viscosity", 1.1376e-3), ("p_v", "1705.7 Pa", "absolute_pressure", 1705.7)):
        ledger.given(f"liquid/{symbol}@normal", value(text, kind, si, "IAPWS-IF97", LOOKED_UP, "15 °C"), symbol,
                     {"rho": "Density", "mu": "Dynamic viscosity", "p_v": "Vapour pressure"}[symbol])
    ledger.given("fittings/eps_T", value("0.0457 mm", "roughness", 4.57e-5, "TP410", LOOKED_UP), "eps_T",
                 "Roughness of clean steel (fittings)")
    for tag in LINES:
        _book_line(ledger, tag)
    _book_checks(ledger)


def _book_line(ledger: Ledger, tag: str) -> None:
    _, length, bore = LINES[tag]
    isometric = f"isometric LK-ISO-{tag[-3:]} rev C"
    ledger.given(f"{tag}/L", value(f"{length} m", "length", length, isometric), "L", "Length")
    ledger.given(f"{tag}/D_o", value(f"{bore + 14.22:.2f} mm", "diameter", bore * 1e-3 + 0.01422, "B36.10M", LOOKED_UP),
                 "D_o", "Outside diameter")
    ledger.given(f"{tag}/t", value("7.11 mm", "diameter", 0.00711, "B36.10M", LOOKED_UP), "t", "Wall thickness")
    ledger.given(f"{tag}/eps@new", value("0.0457 mm", "roughness", 4.57e-5, "TP410", SUPPLIED), "eps", "Roughness, new")
    ledger.given(f"{tag}/eps@aged", value("0.15 mm", "roughness", 1.5e-4, "client brief", UNCONFIRMED), "eps",
                 "Roughness, aged")
    ledger.apply(f"{tag}/D", pipe_flow.BORE, D_o=f"{tag}/D_o", t=f"{tag}/t")
    ledger.apply(f"{tag}/A", pipe_flow.AREA, D=f"{tag}/D")
    ledger.apply(f"{tag}/f_T", fittings.FULLY_TURBULENT, eps_T="fittings/eps_T", D=f"{tag}/D")
    counts, coefficients = [], []
    for place, (title, count, factor) in enumerate(FITTINGS, start=1):
        counts.append(ledger.given(f"{tag}/N_{place}", value(str(count), "count", float(count)), f"N_{place}",
                                   f"Number of {title}"))
        ledger.given(f"{tag}/n_{place}", value(f"{factor:g}", "dimensionless", factor, "TP410", LOOKED_UP), "n",
                     f"{title}: n")
        coefficients.append(ledger.apply(f"{tag}/K_{place}", fittings.COEFFICIENT, title=title, symbol=f"K_{place}",
                                         n=f"{tag}/n_{place}", f_T=f"{tag}/f_T"))
    ledger.apply(f"{tag}/K", fittings.SUM_K, n=counts, K_i=coefficients)
    for case, flow in FLOWS.items():
        _book_case(ledger, tag, case, flow / 3600)


def _book_case(ledger: Ledger, tag: str, case: str, flow: float) -> None:
    ledger.found(f"{tag}/Q@{case}", flow, "Q", "Flow", "flow", source="CONTINUITY", locator="network solution",
                 residual=2.3e-15, case=case)
    ledger.apply(f"{tag}/V@{case}", pipe_flow.VELOCITY, case=case, Q=f"{tag}/Q@{case}", A=f"{tag}/A")
    reynolds = ledger.apply(f"{tag}/Re@{case}", pipe_flow.REYNOLDS, case=case, rho="liquid/rho@normal",
                            V=f"{tag}/V@{case}", D=f"{tag}/D", mu="liquid/mu@normal")
    roughness = ledger[f"{tag}/eps@{'aged' if case == '2' else 'new'}"]
    factor = pipe_flow.friction_factor(roughness.value / ledger[f"{tag}/D"].value, reynolds.value)
    ledger.solved(f"{tag}/f@{case}", pipe_flow.COLEBROOK, factor, case=case, eps=roughness, D=f"{tag}/D", Re=reynolds)
    ledger.apply(f"{tag}/h_f@{case}", pipe_flow.FRICTION_HEAD, case=case, f=f"{tag}/f@{case}", L=f"{tag}/L",
                 D=f"{tag}/D", V=f"{tag}/V@{case}", g="site/g")
    ledger.apply(f"{tag}/h_m@{case}", fittings.LOCAL_HEAD, case=case, K=f"{tag}/K", V=f"{tag}/V@{case}", g="site/g")
    ledger.apply(f"{tag}/h_L@{case}", fittings.LINE_HEAD_PIPE, case=case, h_f=f"{tag}/h_f@{case}",
                 h_m=f"{tag}/h_m@{case}")


def _book_checks(ledger: Ledger) -> None:
    ledger.given("P-101/z", value("9.20 m", "elevation", 9.2, "plot plan LK-PLT-001"), "z_p", "Shaft elevation")
    ledger.given("TK-101/z@min", value("10.60 m", "elevation", 10.6, "tank drawing LK-TK-101"), "z_s", "Lowest level")
    ledger.given("TK-101/p_g", value("0 kPa", "gauge_pressure", 0.0, "open tank"), "p_g", "Gas pressure")
    available = ledger.apply(
        "P-101/NPSHA@2", suction.NPSH_AVAILABLE, case="2", p_atm="site/p_atm", p_g="TK-101/p_g",
        p_v="liquid/p_v@normal", rho="liquid/rho@normal", g="site/g", z_s="TK-101/z@min", z_p="P-101/z",
        h_s="L-101/h_L@2",
    )
    required = ledger.given("P-101/NPSHR@2", value("3.00 m", "head", 3.0, "curve of the invented pump"), "NPSHR",
                            "NPSH required")
    ratio = ledger.apply("P-101/r@2", suction.NPSH_RATIO, case="2", NPSHA=available, NPSHR=required)
    least = ledger.given("limits/npsh", value("1.3", "ratio", 1.3, "HI-9.6.1", SUPPLIED), "r_min", "Least NPSH ratio")
    _check(ledger, "npsh-ratio/P-101", "NPSH ratio of P-101", ratio, least, origin.AT_LEAST, origin.MET)
    ledger.given("P-101/n", value("2950 rpm", "rotational_speed", 2950 * 3.141592653589793 / 30, "data sheet"), "n",
                 "Speed")
    ledger.apply("P-101/S@2", pump.SUCTION_SPECIFIC_SPEED, case="2", n="P-101/n", Q="L-101/Q@2", NPSHR=required)
    fastest = ledger.given("limits/velocity", value("3.0 m/s", "velocity", 3.0, "client standard"), "V_lim",
                           "Greatest velocity")
    _check(ledger, "velocity/L-103", "Velocity in the rising main", ledger["L-103/V@3"], fastest, origin.AT_MOST,
           origin.MET)
    slow = ledger.given("limits/velocity-check", value("1.42 m/s", "velocity", 1.42, "TP410", LOOKED_UP), "V_min",
                        "Velocity that opens the check valve fully")
    _check(ledger, "check-valve/L-102", "Check valve fully open", ledger["L-102/V@1"], slow, origin.AT_LEAST,
           origin.MET_WITH_WARNING, warning="case 2 runs at {L-102/V@2}, below the limit; the disc may flutter")
    low = ledger.given("limits/loss", value("8.0 m", "head", 8.0, "client standard", UNCONFIRMED), "h_lim",
                       "Greatest loss of the main")
    _check(ledger, "loss/L-103", "Friction head of the rising main", ledger["L-103/h_f@2"], low, origin.AT_MOST,
           origin.NOT_MET)
    ledger.not_decided("check/surge", "Surge of the rising main", origin.REFER, "stop within the reflection time")
    ledger.not_decided("check/sump", "Submergence of the intake", origin.NOT_CHECKED, "no intake geometry is given")
    ledger.not_decided("check/viscosity", "Viscosity correction", origin.OUT_OF_RANGE, "outside the published chart")
    ledger.chosen("P-101/motor", "22 kW, two poles", "Motor", reason="next rating above {P-101/r@2} times the load",
                  source="IEC60072")
    ledger.series("curve/system@1", "System curve, case 1", "H", "head", [(0.0, 33.1), (0.0333, 47.6)],
                  points_kind="flow")


def _check(ledger: Ledger, key: str, title: str, have: Entry, limit: Entry, comparison: str, verdict: str,
           warning: str = "") -> None:
    maker = criteria.margin_below if comparison == origin.AT_MOST else criteria.margin_above
    margin = ledger.apply(f"check/{key}/m", maker(have.kind), case=have.case, x=have, x_lim=limit)
    ledger.check(f"check/{key}", title, value=have, limit=limit, comparison=comparison, margin=margin, verdict=verdict,
                 citation=limit.citation if limit.citation.key else Citation(text=limit.citation.text),
                 warning=warning)


def sheets(ledger: Ledger) -> tuple[Sheet, ...]:
    """Seven sheets with every kind of block; one is left out."""
    sump = Sheet("sump", "Intake and sump", omitted="the project has no sump")
    return (_verdict_sheet(ledger), _inputs(ledger), sump, _losses(), _suction(), _curve(), _references(),
            _listing())


def _verdict_sheet(ledger: Ledger) -> Sheet:
    ids = tuple(entry.id for entry in ledger.of_origin(origin.CHECK))
    return Sheet("verdict", "Verdict", (Section("verdict", "Criteria", (
        Prose("The rising main loses {L-103/h_f@2} by friction in case 2, NPSH available is {P-101/NPSHA@2}."),
        Verdicts(ids, "every criterion with its governing case"),
    )),))


def _inputs(ledger: Ledger) -> Sheet:
    given = ledger.of_origin(origin.GIVEN, origin.ASSUMED, origin.LOOKED_UP)
    rows = tuple(Row((Ref(one.id, "title"), Ref(one.id, "symbol"), Ref(one.id, "quantity"), Ref(one.id, "source"),
                      Ref(one.id, "status"), Ref(one.id, "used"))) for one in given)
    columns = (Column("input", width=2.6), Column("symbol", width=0.8), Column("value", width=1.4),
               Column("source", width=2.4), Column("status", width=1.2), Column("used in", width=1.6))
    facts = Facts((("Site elevation", Ref("site/z", "quantity")),
                   ("Atmospheric pressure", Ref("site/p_atm", "quantity")), ("Liquid", "clear water")))
    return Sheet("inputs", "Inputs and assumptions", (
        Section("basis", "Site and liquid", (facts, Derivation(("site/p_atm",)),
                                             Prose("Measured pressure is to replace this estimate.", "note"))),
        Section("inputs", "Register", (Table("all inputs", columns, rows, "Looked-up values name table or property "
                                             "formulation."),)),
    ))  # fmt: skip


def _losses() -> Sheet:
    sections = []
    for tag, (title, _, _) in LINES.items():
        once = tuple(f"{tag}/{symbol}" for symbol in ("D", "A", "f_T", "K_1", "K_2", "K_3", "K_4", "K_5", "K"))
        full = tuple(f"{tag}/{symbol}@2" for symbol in ("Q", "V", "Re", "f", "h_f", "h_m", "h_L"))
        named = (("Q", "flow", "Q"), ("V", "velocity", "V"), ("Re", "reynolds_number", "Re"),
                 ("f", "friction_factor", "f"), ("h_f", "head", "h_f"), ("h_m", "head", "h_m"), ("h_L", "head", "h_L"))
        columns = (Column("case", width=3.4),
                   *(Column("", symbol, kind, derived=f"{tag}/{key}@2") for symbol, kind, key in named))
        rows = tuple(Row((name, *(Ref(f"{tag}/{key}@{case}") for _, _, key in named)),
                         mark="governs" if case == "2" else "") for case, name in CASES.items())
        sections.append(Section(f"losses-{tag}", f"{tag} {title}", (
            Prose("Derived in full for the case of the greatest loss of this line; the other cases follow as a table "
                  "under the same numbers."),
            Derivation(once + full, governing=(f"{tag}/h_f@2", f"{tag}/h_m@2", f"{tag}/h_L@2")),
            Table(f"{tag}, all cases", columns, rows),
        )))  # fmt: skip
    return Sheet("losses", "Losses by line", tuple(sections))


def _suction() -> Sheet:
    margins = tuple(f"check/{key}/m" for key in ("npsh-ratio/P-101", "velocity/L-103", "check-valve/L-102",
                                                 "loss/L-103"))
    return Sheet("npsh", "Net positive suction head", (Section("npsh", "P-101", (
        Derivation(("P-101/NPSHA@2", "P-101/r@2", "P-101/S@2", "P-101/motor", "check/npsh-ratio/P-101"),
                   governing=("P-101/NPSHA@2",)),
        Prose("Net positive suction head is a loss calculation, not a test: the maker's curve decides.", "caution"),
    )), Section("margins", "Margins", (Derivation(margins),))))


def _curve() -> Sheet:
    return Sheet("system_curve", "System curve", (Section("curve", "Case 1", (
        Derivation(("curve/system@1",)),
        Figure("curve", "System curve of case 1, {L-103/Q@1} at the duty point",
               "Curve of head over flow through {L-103/Q@1}"),
        Figure("curve", "The same, a whole page", "Curve of head over flow", full_page=True),
    )),))


def _references() -> Sheet:
    rows = (("TP410", "Flow of fluids through valves, fittings and pipe"), ("B36.10M", "Welded and seamless pipe"),
            ("HI-DATABOOK", "Engineering data book"))
    return Sheet("references", "References", (Section("references", "Sources", (
        Table("sources", (Column("key"), Column("title", width=4.0)), tuple(Row(row) for row in rows)),)),))


def _listing() -> Sheet:
    text = "\n".join(f"  L-{number}: {{length: 9.5 m, roughness: 0.0457 mm}}" for number in range(101, 140))
    return Sheet("appendix", "Inputs as read", (Section("files", "Files", (Listing("system.yaml", text),)),))


def document(status: str = "for review") -> Document:
    """Title-block data of the invented project."""
    return Document("Larkmere settled-water transfer (invented)", "Transfer pumps P-101A/B: hydraulic calculation",
                    "LK-210-CAL-001", "calculation", "Larkmere Water (invented)", "B", status, "2026-11-30",
                    contract="LK-210", location="Larkmere works")


def content(ledger: Ledger, *, draft: bool = False, preliminary: Preliminary | None = None) -> PackageContent:
    """The whole package around the sample sheets."""
    cover = CoverContent(
        people=(Person("originator", "A. Example", "Example Engineers (invented)"), Person("checker", "B. Example"),
                Person("approver", "C. Example"),
                Person("responsible engineer", "D. Example", licence="licence 00000")),
        revisions=(RevisionNote("A", "2026-10-02", "first issue for comment"),
                   RevisionNote("B", "2026-11-30", "rising main rerouted, roughness of aged pipe raised")),
        documents=(SourceDocument("LK-ISO-103", "isometric of the rising main", "C", "2026-09-14"),),
        purpose="Shows that the transfer pumps deliver the required flow in every operating case, and what they need.",
        open_items=tuple(OpenItem(f"A-{count:02}", "aged roughness {L-103/eps@aged} is unconfirmed", "L-103/eps@aged")
                         for count in range(1, 10)),
        register="inputs", scope=("covered: sheets of this document", "excluded: electrical and structural design"),
        preliminary=preliminary,
    )  # fmt: skip
    return PackageContent(document("draft" if draft else "for review"), cover, sheets(ledger), "calcpack 0.1.0",
                          "7c1e 09ab 44d2", draft)


@cache
def ledger(system: str = "SI") -> Ledger:
    """The booked ledger with settled digits; do not change it."""
    made = Ledger(system)
    book(made)
    settle_digits(made)
    return made
