"""Write a memo as HTML: the paper page of the station, and one file that stands alone."""

from collections.abc import Mapping
from html import escape
from itertools import count
from typing import Literal

from server.figures.band import BandMark
from server.figures.strip_svg import strip_svg
from server.figures.to_svg import to_svg
from server.memo.blocks import (
    Block,
    Cell,
    Column,
    Facts,
    Figure,
    Findings,
    Heading,
    Items,
    MemoBook,
    Number,
    Paragraph,
    Span,
    Spans,
    StripFigure,
    Strong,
    Table,
    TitleBlock,
    Warned,
)
from server.memo.book import memo_book
from server.resources import folder
from server.station.station import Station
from server.studies.assess import assess
from server.studies.shapes import Severity
from server.units import View, display_unit, shown, shown_with_unit

Paper = Literal["a4", "letter"]
# the figures fill the text width: 178 mm of A4, 184 mm of Letter, at 96 px an inch
FIGURE_WIDTH: Mapping[Paper, float] = {"a4": 672.0, "letter": 695.0}
SEVERITY_CSS = {
    Severity.STOP: "stop",
    Severity.FAIL: "stop",
    Severity.NOT_CHECKED: "note",
    Severity.CAUTION: "warn",
    Severity.NOTE: "note",
}


class _Writer:
    """Writes blocks in one view; counts sections, tables and figures."""

    def __init__(self, view: View, paper: Paper) -> None:
        self.view = view
        self.width = FIGURE_WIDTH[paper]
        self.sections, self.tables, self.figures = count(1), count(1), count(1)

    def blocks(self, blocks: tuple[Block, ...]) -> str:
        return "\n".join(self.block(block) for block in blocks)

    def block(self, block: Block) -> str:
        if isinstance(block, Heading):
            return self._heading(block)
        if isinstance(block, Paragraph):
            css = "lead" if block.lead else "small soft" if block.small else ""
            return f"<p{_css(css)}>{self.spans(block.spans)}</p>"
        if isinstance(block, Facts):
            rows = "".join(
                f"<div><dt>{escape(name)}</dt><dd>{self.spans(spans)}</dd></div>"
                for name, spans in block.rows
            )
            return f'<dl class="facts">{rows}</dl>'
        if isinstance(block, Table):
            return self._table(block)
        if isinstance(block, Figure):
            drawn = to_svg(block.chart, self.view, width=self.width, scale=block.scale)
            return self._figure(block.chart.title, block.chart.caption, drawn)
        if isinstance(block, StripFigure):
            drawn = strip_svg(block.strip, self.view, block.title)
            return self._figure(block.title, block.caption, drawn)
        if isinstance(block, Findings):
            return self._findings(block)
        if isinstance(block, Items):
            tag = "ol" if block.numbered else "ul"
            items = "".join(f"<li>{self.spans(spans)}</li>" for spans in block.items)
            return f'<{tag} class="plain">{items}</{tag}>'
        if isinstance(block, Warned):
            items = "".join(f"<li>{self.spans(spans)}</li>" for spans in block.items)
            return (
                f'<div class="warned"><p class="warned-title">{escape(block.title)}</p>'
                f'<ul class="plain">{items}</ul></div>'
            )
        return '<div class="page-break"></div>'

    def spans(self, spans: Spans) -> str:
        return "".join(self.span(span) for span in spans)

    def span(self, span: Span) -> str:
        if isinstance(span, str):
            return escape(span)
        if isinstance(span, Strong):
            return f"<strong{_css('no' if span.bad else '')}>{escape(span.text)}</strong>"
        if isinstance(span, BandMark):
            return band_html(span)
        return self._data(
            span, shown_with_unit(span.value, span.dimension, self.view, span.decimals)
        )

    def _data(self, number: Number, text: str) -> str:
        if number.value is None or number.value != number.value:
            return "–"
        unit = display_unit(number.dimension, self.view).symbol
        plain = shown(number.value, number.dimension, self.view, number.decimals)
        return f'<data value="{plain}" data-unit="{escape(unit)}">{escape(text)}</data>'

    def _heading(self, block: Heading) -> str:
        if block.level == 2:
            number = next(self.sections)
            return f'<h2 id="section-{number}"><span>{number}</span>{escape(block.text)}</h2>'
        return f"<h3>{escape(block.text)}</h3>"

    def _table(self, table: Table) -> str:
        number = f"Table {next(self.tables)}. "
        heads = "".join(self._head(column) for column in table.columns)
        rows = "".join(
            "<tr>"
            + "".join(
                self._cell(cell, column, first=index == 0)
                for index, (cell, column) in enumerate(zip(row, table.columns, strict=True))
            )
            + "</tr>"
            for row in table.rows
        )
        notes = "".join(f'<p class="small soft">{escape(note)}</p>' for note in table.notes)
        # a table of few rows stays on one page; a long one breaks between rows and repeats
        # its head
        css = "keep" if len(table.rows) <= 12 and table.kind != "inputs" else "long"
        css += f" {table.kind}" if table.kind else ""
        caption = f"{number}{escape(table.caption)}"
        # a wide table scrolls on a narrow screen, so it can be reached by keyboard
        return (
            f'<div class="table {css}" tabindex="0" role="group" aria-label="{caption}">'
            f"<table><caption>{caption}</caption><thead><tr>{heads}</tr></thead>"
            f"<tbody>{rows}</tbody></table>{notes}</div>"
        )

    def _head(self, column: Column) -> str:
        unit = column.unit
        if column.dimension is not None:
            unit = display_unit(column.dimension, self.view).printed
        below = f'<span class="unit">{escape(unit)}</span>' if unit else ""
        css = "num" if column.dimension is not None else "wide" if column.wide else ""
        return f'<th scope="col"{_css(css)}>{escape(column.title)}{below}</th>'

    def _cell(self, cell: Cell, column: Column, *, first: bool) -> str:
        if isinstance(cell, str):
            inner = escape(cell)
        elif isinstance(cell, tuple):
            inner = self.spans(cell)
        elif column.dimension is None:
            if cell is not None:
                raise TypeError(f"column {column.title!r} has no dimension for {cell!r}")
            inner = "–"
        else:
            number = Number(cell, column.dimension, column.decimals)
            inner = self._data(
                number, shown(cell, column.dimension, self.view, column.decimals)
            )
        if first:
            return f'<th scope="row">{inner}</th>'
        return f"<td{_css('num' if column.dimension is not None else '')}>{inner}</td>"

    def _figure(self, title: str, caption: str, drawn: str) -> str:
        return (
            f"<figure><figcaption>Figure {next(self.figures)}. {escape(title)}"
            f"<small>{escape(caption)}</small></figcaption>{drawn}</figure>"
        )

    def _findings(self, block: Findings) -> str:
        if not block.items:
            return f"<p>{escape(block.none)}</p>"
        items = "".join(
            f'<li class="{SEVERITY_CSS[f.severity]}">'
            f'<span class="grade">{escape(f.grade)}</span>'
            f'<p>{escape(f.sentence)}</p><span class="basis">{escape(f.basis)}</span>'
            + (f'<p class="answer"><b>Answer:</b> {escape(f.answer)}</p>' if f.answer else "")
            + "</li>"
            for f in block.items
        )
        return f'<ol class="findings">{items}</ol>'


def _css(name: str) -> str:
    return f' class="{name}"' if name else ""


def band_html(mark: BandMark) -> str:
    """Return a band mark as HTML, as `templates/parts/band_mark.html` draws it."""
    drawn = ""
    if mark.dot is not None:
        region = ""
        if mark.low is not None and mark.high is not None:
            region = (
                f'<path class="por" d="M{mark.low} 6H{mark.high}"/>'
                f'<path class="tick" d="M{mark.low} 2V10M{mark.high} 2V10"/>'
            )
        dot = f'<circle class="dot" cx="{mark.dot}" cy="6" r="3.2"/>'
        if mark.past_axis:
            dot = '<path class="dot" d="M55 2.4L61.4 6L55 9.6Z"/>'
        drawn = (
            '<svg class="band" viewBox="0 0 62 12" width="62" height="12" aria-hidden="true">'
            f'<path class="line" d="M2 6H60"/>{region}{dot}</svg> '
        )
    word = f'<span class="word">{escape(mark.text)}</span>'
    return f'<span class="verdict {mark.css}">{drawn}{word}</span>'


def memo_body(book: MemoBook, view: View, paper: Paper) -> str:
    """Return the memo's own part of a page: one `main` element."""
    writer = _Writer(view, paper)
    return f'<main class="memo">{_title(book.head)}{writer.blocks(book.blocks)}</main>'


def _title(head: TitleBlock) -> str:
    right = "<br>".join(
        escape(line)
        for line in (
            f"Issue {head.issue}" if head.issue else "Draft, not issued",
            head.date or "no date of issue",
            f"Job {head.number}" if head.number else "",
            head.program,
            f"document {head.document}",
        )
        if line
    )
    names = "".join(
        f"<div><dt>{label}</dt><dd>{escape(name)}</dd></div>"
        for label, name in (
            ("Prepared", head.prepared),
            ("Checked", head.checked),
            ("Approved, seal", head.approved),
        )
    )
    client = f"<div>{escape(head.client)}</div>" if head.client else ""
    return (
        f'<header><div class="title"><div><h1>{escape(head.title)}</h1>'
        f'<div class="about">{escape(head.station)}</div>{client}</div>'
        f'<div class="small soft issue">{right}</div></div>'
        f'<dl class="sign">{names}</dl></header>'
    )


def page_css(head: TitleBlock, paper: Paper) -> str:
    """Return the stylesheet of the paper: its size, the running line, the page numbers.

    A running title must stand in the stylesheet itself: named strings do nothing in Chromium.
    """
    size = "A4" if paper == "a4" else "letter"
    parts = [head.station, f"Issue {head.issue}" if head.issue else "Draft", head.date]
    running = css_string(" · ".join(part for part in parts if part))
    font = '8.5pt "Segoe UI", "Noto Sans", Arial, "DejaVu Sans", sans-serif'
    look = f"font:{font};color:#4c555f"
    pages = '"page " counter(page) " of " counter(pages)'
    return (
        f"@page{{size:{size};margin:17mm 16mm 19mm;"
        f"@bottom-left{{content:{running};{look}}}"
        f"@bottom-right{{content:{pages};{look}}}}}"
    )


def css_string(text: str) -> str:
    """Return a text as a CSS string, every character that could end it escaped."""
    safe = "".join(c if c.isalnum() or c in " .,;:·-()/" else f"\\{ord(c):x} " for c in text)
    return f'"{safe}"'


def whole_page(book: MemoBook, view: View, paper: Paper, styles: str) -> str:
    """Return the memo as one HTML file that needs no other; `styles` goes in as it is."""
    return (
        '<!doctype html>\n<html lang="en"><head><meta charset="utf-8">'
        '<meta name="viewport" content="width=device-width, initial-scale=1">'
        f"<title>{escape(book.head.title)} · {escape(book.head.station)}</title>"
        f"<style>{styles}\n{page_css(book.head, paper)}</style></head>"
        f'<body class="paper">{memo_body(book, view, paper)}</body></html>\n'
    )


def memo_html(
    station: Station,
    view: View,
    paper: Paper,
    *,
    standalone: bool = True,
    document_hash: str = "",
) -> str:
    """Return the memo of a station as HTML.

    Parameters
    ----------
    station : Station
        The document.
    view : {"si", "us"}
        Units that are read.
    paper : {"a4", "letter"}
        Paper it is printed on.
    standalone : bool
        A whole page that needs no other file, or the memo's own part alone.
    document_hash : str
        Of the document's canonical bytes; computed when left out.
    """
    book = memo_book(station, assess(station, document_hash), view)
    if not standalone:
        return memo_body(book, view, paper)
    styles = (folder("static") / "memo.css").read_text(encoding="utf-8")
    return whole_page(book, view, paper, styles)
