"""A design note as one self-contained HTML file with interactive figures.

Nothing is fetched: styles, scripts and figures are inside, and a content policy keeps the browser
from running or loading anything else. Every text is escaped here.
"""

from __future__ import annotations

import base64
import hashlib
import json
from collections.abc import Iterable
from html import escape
from importlib import resources
from typing import Any

from rheo.report.document import (
    LONGEST_PLACE,
    Answer,
    Block,
    Cautions,
    Facts,
    Figure,
    Note,
    Paragraph,
    SignOff,
    Table,
)
from rheo.report.palette import LIGHT
from rheo.report.scripts import pieces
from rheo.report.text import breakable, clean, one_line

_DRAW = """
for (const figure of document.querySelectorAll("figure[data-figure]")) {
  const drawn = JSON.parse(document.getElementById(figure.dataset.figure).textContent);
  Plotly.newPlot(figure.querySelector(".plot"), drawn.data, drawn.layout, {
    responsive: true, displaylogo: false,
    modeBarButtonsToRemove: ["lasso2d", "select2d", "autoScale2d"],
  });
}
"""


def note_as_html(note: Note, interactive: bool = True) -> str:
    """Return a note as the text of an HTML file.

    Parameters
    ----------
    note : Note
        What to write.
    interactive : bool
        Whether the figures can be looked into; else they are those of the PDF, and the text is
        some thirty times shorter.

    Returns
    -------
    str
        The same for the same note; it opens without a network.
    """
    policy = "default-src 'none'; style-src 'unsafe-inline'; img-src data: blob:"
    scripts = ""
    writers = _WRITERS | ({} if interactive else {Figure: _drawing})
    if interactive:
        from plotly.offline import get_plotlyjs

        library = get_plotlyjs()
        policy += f"; script-src {_hash_source(library)} {_hash_source(_DRAW)}"
        scripts = f"<script>{library}</script>\n<script>{_DRAW}</script>\n"
    style = resources.files("rheo.report").joinpath("note.css").read_text("utf-8")
    colours = "".join(
        f"--{name}: {getattr(LIGHT, name)};"
        for name in (
            "background", "surface", "ink", "muted", "rule", "accent", "warning", "bad", "strip",
        )
    )  # fmt: skip
    title = _text(note.title)
    parts = [
        '<!DOCTYPE html>\n<html lang="en">\n<head>\n<meta charset="utf-8">\n',
        f'<meta http-equiv="Content-Security-Policy" content="{escape(policy)}">\n',
        '<meta name="viewport" content="width=device-width, initial-scale=1">\n',
        f"<title>{escape(clean(note.title))}</title>\n",
        f"<style>:root {{{colours}}}\n{style}</style>\n</head>\n<body>\n",
        '<main>\n<header class="top">\n<div class="kicker">Design note</div>\n',
        f'<h1 dir="auto">{title}</h1>\n',
    ]
    if note.subtitle:
        parts.append(f'<p class="subtitle" dir="auto">{_text(note.subtitle)}</p>\n')
    parts.append("</header>\n")
    number = 0
    for section in note.sections:
        parts.append("<section>\n")
        if section.title:
            number += 1
            parts.append(f"<h2>{number}&ensp;{_text(section.title)}</h2>\n")
        parts += [writers[type(block)](block) for block in section.blocks]
        parts.append("</section>\n")
    parts.append(
        f"<footer>rheo {_text(note.version)}, content {note.content_hash}, "
        f"{note.date.isoformat()}</footer>\n</main>\n"
        f"{scripts}</body>\n</html>\n"
    )
    return "".join(parts)


def _hash_source(script: str) -> str:
    digest = hashlib.sha256(script.encode("utf-8")).digest()
    return f"'sha256-{base64.b64encode(digest).decode('ascii')}'"


_TAGS = {"sub": ("<sub>", "</sub>"), "super": ("<sup>", "</sup>"), "": ("", "")}


def _text(value: str) -> str:
    """Escape a text; symbols get their scripts, and long words places to break at."""
    whole = "".join(
        escape(part).join(_TAGS[script]) for part, script in pieces(breakable(clean(value)))
    )
    return whole.replace("\u200b", "<wbr>")


def _paragraph(block: Paragraph) -> str:
    kind = f' class="{block.kind}"' if block.kind else ""
    return f'<p{kind} dir="auto">{_text(block.text)}</p>\n'


def _facts(block: Facts) -> str:
    rows = "".join(
        f'<dt>{_text(name)}</dt><dd dir="auto">{_text(value)}</dd>\n' for name, value in block.rows
    )
    return f'<dl class="facts">\n{rows}</dl>\n'


def _answer(block: Answer) -> str:
    cells = "".join(
        f'<div><div class="name">{_text(name)}</div><div class="value">{_text(value)}</div>'
        f'<div class="remark">{_text(remark)}</div></div>\n'
        for name, value, remark in block.cells
    )
    return f'<div class="answer">\n{cells}</div>\n'


def _cells(tag: str, cells: Iterable[str], numeric: tuple[int, ...]) -> str:
    return "".join(
        f'<{tag}{" class=n" if i in numeric else ""} dir="auto">{_text(cell)}</{tag}>'
        for i, cell in enumerate(cells)
    )


def _table(block: Table) -> str:
    caption = f"<caption>{_text(block.caption)}</caption>" if block.caption else ""
    states = block.states or ("",) * len(block.rows)
    rows = "".join(
        f"<tr{f' class={state}' if state else ''}>{_cells('td', row, block.numeric)}</tr>\n"
        for row, state in zip(block.rows, states, strict=True)
    )
    head = _cells("th", block.head, block.numeric)
    return (
        f'<div class="scroll"><table>{caption}<thead><tr>{head}</tr></thead>\n'
        f"<tbody>\n{rows}</tbody></table></div>\n"
    )


def _for_script(data: Any) -> str:
    """Return JSON that cannot end the script element it stands in."""
    text = data if isinstance(data, str) else json.dumps(data, ensure_ascii=True)
    return text.replace("<", "\\u003c").replace("\u2028", "\\u2028").replace("\u2029", "\\u2029")


def _figure(block: Figure) -> str:
    picture = block.picture
    key = escape(f"figure-{picture.key}")
    plot = picture.plotly().to_json()
    caption = clean(block.caption or picture.description)
    return (
        f'<figure data-figure="{key}"><div class="plot" role="img" aria-label="{escape(caption)}" '
        f'style="min-height:{picture.height:.0f}px"></div>\n'
        f"<figcaption><b>{_text(picture.title)}.</b> {_text(caption)}</figcaption>\n"
        f'<script type="application/json" id="{key}">{_for_script(plot)}</script></figure>\n'
    )


def _drawing(block: Figure) -> str:
    picture = block.picture
    caption = clean(block.caption or picture.description)
    return (
        f'<figure><div class="plot">{picture.svg()}</div>\n'
        f"<figcaption><b>{_text(picture.title)}.</b> {_text(caption)}</figcaption></figure>\n"
    )


def _cautions(block: Cautions) -> str:
    rows = []
    for one in block.cautions:
        place = _text(one_line(one.place, LONGEST_PLACE))
        named = f"<b>{place}:</b> " if place else ""
        rows.append(
            f'<div class="caution" dir="auto">{named}{_text(one.sentence)} '
            f'<span class="advice">{_text(one.advice)}</span></div>\n'
        )
    return "".join(rows)


def _sign_off(block: SignOff) -> str:
    rows = "".join(
        f'<tr><td>{_text(role)}</td><td dir="auto">{_text(one_line(name, LONGEST_PLACE))}</td>'
        "<td></td><td></td></tr>\n"
        for role, name in zip(block.roles, block.names, strict=True)
    )
    head = "<tr><th></th><th>Name</th><th>Signature</th><th>Date</th></tr>"
    return f'<table class="signoff"><thead>{head}</thead><tbody>\n{rows}</tbody></table>\n'


_WRITERS: dict[type[Block], Any] = {
    Paragraph: _paragraph,
    Facts: _facts,
    Answer: _answer,
    Table: _table,
    Figure: _figure,
    Cautions: _cautions,
    SignOff: _sign_off,
}
