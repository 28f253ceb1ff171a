"""The page: template, style, scripts and data put together, with the policy that allows nothing else."""

from __future__ import annotations

import re
from base64 import b64encode
from collections.abc import Sequence
from hashlib import sha256
from html import escape
from importlib.resources import files
from typing import BinaryIO

from shedbim.model.shed import Shed
from shedbim.writers.imprint import CAUTIONS, Imprint
from shedbim.writers.view.columns import packed
from shedbim.writers.view.shown import ShownChange, ShownFinding
from shedbim.writers.view.tables import columns, texts

__all__ = ["SCRIPTS", "page", "write"]

#: The scripts in the order in which they use one another; together they are one function of the page.
SCRIPTS = (
    "vectors.js",
    "words.js",
    "data.js",
    "solids.js",
    "colours.js",
    "state.js",
    "camera.js",
    "shaders.js",
    "instances.js",
    "renderer.js",
    "picking.js",
    "stage.js",
    "labels.js",
    "input.js",
    "measure.js",
    "cuts.js",
    "tree.js",
    "table.js",
    "details.js",
    "search.js",
    "findings.js",
    "handle.js",
    "page.js",
)


def write(
    shed: Shed,
    sink: BinaryIO,
    imprint: Imprint,
    *,
    findings: Sequence[ShownFinding] = (),
    changes: Sequence[ShownChange] = (),
) -> None:
    """Write the page of a shed to a binary sink; see ``page``."""
    sink.write(page(shed, imprint, findings=findings, changes=changes).encode())


def page(
    shed: Shed,
    imprint: Imprint,
    *,
    findings: Sequence[ShownFinding] = (),
    changes: Sequence[ShownChange] = (),
) -> str:
    """Give the page as text.

    What a user typed is in the compressed data, where no markup can be, and escaped in title and heading.

    Args:
        shed: the building.
        imprint: where the page comes from.
        findings: listed and flown to; the list is hidden when there are none.
        changes: pieces can be coloured by them when there are any.
    """
    script = _script()
    style = _resource("page.css")
    policy = (
        f"default-src 'none'; script-src {_hash(script)}; style-src {_hash(style)}; img-src data:; "
        "base-uri 'none'; form-action 'none'"
    )
    project = shed.project
    values = {
        "policy": escape(policy),
        "title": escape(project.name),
        "job": escape(" · ".join(word for word in (project.number, project.revision) if word)),
        "cautions": "".join(f"<li>{escape(sentence)}</li>" for sentence in CAUTIONS),
        "notes": "".join(f"<li>{escape(sentence)}</li>" for sentence in shed.notes),
        "caution": escape(CAUTIONS[0]),
        "style": style,
        "data": packed(texts(shed, imprint, findings, changes), columns(shed)),
        "script": script,
    }
    # All places are filled in one pass, so that what is filled in is never searched for places again.
    return re.sub(r"\{\{(\w+)\}\}", lambda found: values[found[1]], _resource("page.html"))


def _script() -> str:
    """All scripts as one strict function, so that none of their names is seen from outside."""
    body = "".join(_resource(name) for name in SCRIPTS)
    return f"(() => {{\n'use strict';\n{body}}})();\n"


def _resource(name: str) -> str:
    """The text of a file beside this one, with line feeds alone: a page is hashed as browsers read it."""
    return files(__package__).joinpath(name).read_text(encoding="utf-8").replace("\r\n", "\n")


def _hash(text: str) -> str:
    """The source expression that allows this very text in a content security policy."""
    return f"'sha256-{b64encode(sha256(text.encode()).digest()).decode('ascii')}'"
