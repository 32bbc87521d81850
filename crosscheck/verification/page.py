"""The evidence as one self-contained HTML page: failures first, every row with its source and margin."""

from __future__ import annotations

import math

from crosscheck.comparison.provenance import PACKAGES, installed_version
from crosscheck.verification.charts import order_chart, share_chart
from crosscheck.verification.check import CheckOutcome
from crosscheck.verification.evidence import FIRM, by_source, groups, headline, known, obtained_counts
from crosscheck.verification.judging import RowOutcome
from crosscheck.verification.reference import OBTAINED_WORDS
from crosscheck.verification.row_file import printed_half_unit
from crosscheck.verification.statements import COMMON_CAUSES, DOMAIN_OF_USE, HOW_TO_REDO
from crosscheck.verification.suite import SuiteResult

DIFFERENCES = "known differences"


def page_bytes(result: SuiteResult) -> bytes:
    """The page; it needs nothing beside itself."""
    from jinja2 import Environment, PackageLoader, StrictUndefined

    environment = Environment(
        loader=PackageLoader("crosscheck.verification", "."),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    environment.filters.update(
        number=number, rough=rough, share=share_text, bar=bar_width, row_name=row_name, is_formula=is_formula
    )
    rows = result.rows
    agreeing = [row for row in rows if not known(row)]
    checks = [o for o in result.outcomes if not isinstance(o, RowOutcome) and o.group != "coverage"]
    counts = obtained_counts(rows)
    page = environment.get_template("page.html.jinja").render(
        result=result,
        headline=headline(result),
        version=installed_version("crosscheck"),
        packages={name: installed_version(name) for name in PACKAGES},
        groups=groups(result),
        failures=sorted(result.failures, key=lambda o: -_held(o)),
        obtained=[(way, count, OBTAINED_WORDS[way]) for way, count in counts.items()],
        firm=sum(counts.get(way, 0) for way in FIRM),
        row_count=len({row_name(row) for row in rows}),
        sources=by_source(rows),
        share_chart=share_chart(by_source(agreeing)) if agreeing else "",
        order_charts=[c for o in checks if o.series and (c := order_chart(o.name, o.series))],
        differences=[row for row in rows if row.group == DIFFERENCES],
        known=[row for row in rows if known(row)],
        checks=checks,
        domain=DOMAIN_OF_USE,
        causes=COMMON_CAUSES,
        redo=HOW_TO_REDO,
    )
    return page.encode()


def number(value: float) -> str:
    """Six significant digits, as a person writes them."""
    if not math.isfinite(value):
        return "none"
    text = f"{value:.6g}"
    mantissa, _, power = text.partition("e")
    return f"{mantissa}e{int(power)}" if power else text


def rough(value: float) -> str:
    """Two significant digits, for differences and error bars."""
    return number(float(f"{value:.1e}")) if math.isfinite(value) else "none"


def row_name(row: RowOutcome) -> str:
    """The row's name without its side, which has a column of its own."""
    return row.name.removesuffix(f" ({row.side})")


def is_formula(printed: str) -> bool:
    """Whether a reference is arithmetic rather than a number."""
    return printed_half_unit(printed) is None


def share_text(outcome: CheckOutcome) -> str:
    """Share of the tolerance used."""
    share = outcome.share
    if not math.isfinite(share):
        return "-"
    if share > 10.0:
        return f"{share:.3g} times"
    if share >= 0.095:
        return f"{100 * share:.0f} %"
    return f"{100 * share:.1g} %" if share >= 1e-5 else "0"


def bar_width(outcome: CheckOutcome) -> int:
    """The share as a bar, per cent of its track."""
    return round(100 * min(_held(outcome), 1.0))


def _held(outcome: CheckOutcome) -> float:
    return outcome.share if math.isfinite(outcome.share) else 1e9
