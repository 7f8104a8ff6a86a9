"""Showing lines below the cell that wrote them.

Knows the output forms a notebook takes: plain text, Markdown, LaTeX for a single formula, and the record's own; and how
a display is replaced by itself with a mark. Must not know how a line came about, nor when it is marked.
"""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from dataclasses import asdict, replace
from typing import Any

from calckit import units
from calckit.core.record import MIME, TO_BE_CONFIRMED, Line, Table
from calckit.core.settings import current


def in_notebook() -> bool:
    """Whether what is shown is seen or kept: not in a plain script, nor in a run whose outputs nobody keeps."""
    try:
        from IPython import get_ipython
    except ImportError:
        return False
    return get_ipython() is not None and current().outputs


def show(lines: Sequence[Line], tables: Sequence[Table], notices: Sequence[str], display_id: str) -> dict[str, Any]:
    """Display lines and tables in a notebook; returns the forms shown, none of them in a plain script."""
    in_tables = {id_ for table in tables for id_ in table.lines}
    lines = [line for line in lines if not (line.kind == "given" and line.id in in_tables)]
    if not in_notebook() or not (lines or tables or notices):
        return {}
    from IPython.display import display

    data = bundle(lines, tables, notices)
    display(data, raw=True, display_id=display_id)  # type: ignore[no-untyped-call]
    return data


def show_again(data: Mapping[str, Any], mark: str, display_id: str) -> None:
    """Put the forms shown earlier in place of themselves, below `mark`; a blank mark leaves them as they were."""
    from IPython.display import update_display

    update_display(marked(data, mark) if mark else dict(data), raw=True, display_id=display_id)  # type: ignore[no-untyped-call]


def marked(data: Mapping[str, Any], mark: str) -> dict[str, Any]:
    """The forms shown earlier below a mark; LaTeX, which holds a formula alone, is left out."""
    return {
        "text/plain": f"{mark}\n{data['text/plain']}",
        "text/markdown": f"**{escaped(mark)}**\n\n{data['text/markdown']}",
        MIME: data[MIME],
    }


def bundle(lines: Sequence[Line], tables: Sequence[Table], notices: Sequence[str]) -> dict[str, Any]:
    """The output forms of these lines; number and section are given at issue only."""
    data: dict[str, Any] = {
        "text/plain": "\n".join([*(plain(line) for line in lines), *(_plain_table(t) for t in tables), *notices]),
        "text/markdown": "\n\n".join(
            [
                *(_markdown(line) for line in lines),
                *(_markdown_table(t) for t in tables),
                *(escaped(n) for n in notices),
            ]
        ),
        MIME: {
            "lines": [asdict(replace(line, n=0, section="")) for line in lines],
            "tables": [asdict(table) for table in tables],
        },
    }
    if len(lines) == 1 and not tables and not notices and lines[0].forms:
        data["text/latex"] = f"$\\displaystyle {_latex(lines[0])}$"
    return data


def plain(line: Line) -> str:
    """A line as text: symbol, formula, substitution, result, source."""
    head = f"{line.id}  {line.meaning}"
    value = _shown(line)
    if line.kind == "check":
        relation = "; ".join(line.forms.get("plain", []))
        body = f"{relation}  {line.verdict}" + (f" (missing: {line.missing})" if line.missing else "")
    elif line.forms:
        symbolic, substituted = line.forms["plain"]
        body = f"{line.typeset['plain']} = {symbolic} = {substituted} = {value}"
    else:
        body = " ".join(
            part for part in (f"{line.typeset['plain']} = {value}" if line.typeset else value, line.text) if part
        )
    return "\n    ".join(part for part in (head, body, *_tail(line)) if part)


def _shown(line: Line) -> str:
    if not isinstance(line.shown, list):
        return line.shown
    if not line.row:
        return ", ".join(line.shown)
    return f"{line.shown[line.rows.index(line.row)]} {units.shown(line.unit)}".rstrip() + f" at {line.row}"


def _tail(line: Line) -> list[str]:
    tail = [line.detail] if line.detail else []
    if line.override:
        kit = line.computed.shown if line.computed else ""
        tail.append(f"override: {line.override.shown} in place of {kit}; {line.override.reason} ({line.override.by})")
    tail += [
        f"{item.equation}: {item.shown}{', governs' if item.governs else ''} ({item.reason})"
        for item in line.candidates
    ]
    if line.margin:
        tail.append(f"margin: {line.margin.shown} {line.margin.to}")
    if line.source:
        mark = line.source.confirmed or (TO_BE_CONFIRMED if line.source.standard else "")
        tail.append(f"{line.source.text()}" + (f" - {mark}" if mark else ""))
    tail += [("open item: " if flag.open else "flag: ") + flag.text for flag in line.flags]
    return tail


def _latex(line: Line) -> str:
    symbolic, substituted = line.forms["latex"]
    if line.kind == "check":
        return rf"\begin{{aligned}}&{symbolic}\\&{substituted}\end{{aligned}}"
    shown = _text_latex(_shown(line))
    return rf"\begin{{aligned}}{line.typeset['latex']} &= {symbolic}\\&= {substituted}\\&= {shown}\end{{aligned}}"


def _text_latex(text: str) -> str:
    return r"\text{" + re.sub(r"([#$%&_{}])", r"\\\1", text.replace("\\", "/")) + "}"


def _markdown(line: Line) -> str:
    head = f"**{escaped(f'{line.part}: {line.meaning}' if line.part else line.meaning)}**"
    value = _shown(line)
    if line.forms:
        body = f"$\\displaystyle {_latex(line)}$"
    elif line.typeset:
        body = f"${line.typeset['latex']}$ = {escaped(value)}"
    else:
        body = escaped(value)
    words = [
        line.verdict or "",
        f"missing: {line.missing}" if line.missing else "",
        line.text if not line.forms else "",
    ]
    parts = [head, body, " ".join(escaped(word) for word in words if word), *(escaped(text) for text in _tail(line))]
    return (
        "  \n".join(part for part in parts if part) if not line.forms else "\n\n".join(part for part in parts if part)
    )


def escaped(text: str) -> str:
    """User text as Markdown text, never as markup."""
    return re.sub(r"([\\`*_{}\[\]<>()#+!|$~-])", r"\\\1", text)


def _grid(table: Table) -> tuple[list[str], list[list[str]]]:
    heads = [f"{c.typeset['plain']} [{units.shown(c.unit)}]" if c.unit else c.typeset["plain"] for c in table.columns]
    return [table.head, *heads], [[name, *cells] for name, cells in zip(table.rows, table.shown, strict=True)]


def _plain_table(table: Table) -> str:
    head, rows = _grid(table)
    widths = [max(len(row[i]) for row in [head, *rows]) for i in range(len(head))]
    return "\n".join("  ".join(cell.rjust(w) for cell, w in zip(row, widths, strict=True)) for row in [head, *rows])


def _markdown_table(table: Table) -> str:
    head, rows = _grid(table)
    lines = [head, ["---:"] * len(head), *rows]
    return "\n".join(
        "| " + " | ".join(cell if row is lines[1] else escaped(cell) for cell in row) + " |" for row in lines
    )
