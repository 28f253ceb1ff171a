"""A picture as SVG bytes (SVG 1.1, W3C): polygons, lines and real text on white; no script, style or link."""

from __future__ import annotations

import re
from collections.abc import Iterable
from html import escape

import numpy as np
from numpy.typing import NDArray

from shedbim.writers.pictures.annotations import INK, PAPER, Annotation, Balloon, Stroke, Words
from shedbim.writers.pictures.composition import Composition
from shedbim.writers.pictures.letters import width as width_of
from shedbim.writers.pictures.overlay import CHAIN, HALO_WEIGHT
from shedbim.writers.pictures.vectors import vectors

__all__ = ["svg_picture"]

Floats = NDArray[np.float64]

#: Geometry is written in whole tenths of a pixel, which is shorter than decimals and as fine as anyone sees.
_FINE = 10
#: Faces are drawn this much larger all round, pixels, so that no white shows between neighbours.
_SEAL = 0.6
#: Width of edges, pixels: as on the canvas of a PNG picture.
_EDGE = 0.6
#: A capital's share of the size of a sans-serif font (value from memory).
_CAPITAL_SHARE = 0.72
#: Texts of this many letters or more are set to the width that was kept free for them.
_SET_LETTERS = 3
#: What XML 1.0 cannot hold.
_NOT_XML = re.compile("[^\t\n\r\u0020-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")


def svg_picture(composition: Composition) -> bytes:
    """Give the SVG file of a picture."""
    wide, high = composition.width, composition.height
    seen = vectors(composition.shot)
    lines = [
        f'<svg xmlns="http://www.w3.org/2000/svg" width="{wide}" height="{high}" viewBox="0 0 {wide} {high}" '
        'role="img">',
        f"<title>{_text(composition.caption or 'steel shed')}</title>",
        f'<rect width="{wide}" height="{high}" fill="{_colour(PAPER)}"/>',
        f'<g transform="scale({1 / _FINE:g})" fill="none">',
    ]
    for (colour, width), ends in seen.bars.items():
        lines.append(
            f'<path stroke="{_colour(colour)}" stroke-width="{width * _FINE:g}" d="{_lines(ends)}"/>'
        )
    lines.append(f'<g stroke-width="{_SEAL * _FINE:g}" stroke-linejoin="round" fill-rule="evenodd">')
    for colour, polygons in sorted(seen.faces.items()):
        data = "".join(_polygon(points) for points in polygons)
        lines.append(f'<path fill="{_colour(colour)}" stroke="{_colour(colour)}" d="{data}"/>')
    lines.append("</g>")
    lines.append(f'<g stroke="{_colour(INK)}" stroke-width="{_EDGE * _FINE:g}" stroke-linecap="round">')
    for strength, ends in seen.edges.items():
        lines.append(f'<path stroke-opacity="{strength:g}" d="{_lines(ends)}"/>')
    lines += ["</g>", "</g>", *_written(composition.annotations), "</svg>", ""]
    return "\n".join(lines).encode()


def _polygon(points: Floats) -> str:
    """Path data of a closed polygon (n, 2); a line for one that is too thin to have an area."""
    whole = np.rint(points * _FINE).astype(np.int64)
    steps = np.diff(whole, axis=0)
    steps = steps[steps.any(axis=1)]
    start = f"M{whole[0, 0]} {whole[0, 1]}"
    if len(steps) < 2:
        return f"{start}l{_numbers(steps[0].tolist())}" if np.abs(steps).max(initial=0) >= _FINE else ""
    return f"{start}l{_numbers(steps.ravel().tolist())}z"


def _lines(ends: Floats) -> str:
    """Path data of lines (n, 4)."""
    whole = np.rint(ends * _FINE).astype(np.int64)
    whole[:, 2:] -= whole[:, :2]
    return "".join(f"M{x} {y}l{_numbers([dx, dy])}" for x, y, dx, dy in whole.tolist())


def _numbers(values: list[int]) -> str:
    """Numbers of path data: a minus sign separates as well as a space does."""
    return "".join(str(value) if value < 0 or not at else f" {value}" for at, value in enumerate(values))


def _written(annotations: Iterable[Annotation]) -> list[str]:
    """What is written over the picture, in its order."""
    lines = []
    for each in annotations:
        if isinstance(each, Stroke):
            lines.append(_stroke(each))
        elif isinstance(each, Words):
            lines.append(_words(each))
        else:
            lines += _balloon(each)
    return lines


def _stroke(stroke: Stroke) -> str:
    """A line; one without length is a dot."""
    if (stroke.x1, stroke.y1) == (stroke.x2, stroke.y2):
        place = f'cx="{stroke.x1:.1f}" cy="{stroke.y1:.1f}" r="{stroke.width / 2:.1f}"'
        return f'<circle {place} fill="{_colour(stroke.colour)}"/>'
    dashes = " ".join(f"{step * stroke.width:.1f}" for step in CHAIN)
    chain = f' stroke-dasharray="{dashes}"' if stroke.chain else ""
    return (
        f'<path stroke="{_colour(stroke.colour)}" stroke-width="{stroke.width:.2f}"{chain} '
        f'd="M{stroke.x1:.1f} {stroke.y1:.1f}L{stroke.x2:.1f} {stroke.y2:.1f}"/>'
    )


def _words(words: Words) -> str:
    """A text round its middle."""
    setting = ""
    if len(words.text) >= _SET_LETTERS:
        wide = width_of(words.text, words.capital)
        setting = f' textLength="{wide:.1f}" lengthAdjust="spacingAndGlyphs"'
    halo = ""
    if words.halo:
        halo = (
            f' stroke="{_colour(PAPER)}" stroke-width="{HALO_WEIGHT * words.capital:.1f}" '
            'stroke-linejoin="round" paint-order="stroke"'
        )
    return (
        f'<text x="{words.x:.1f}" y="{words.y + words.capital / 2:.1f}" fill="{_colour(words.colour)}" '
        f'font-family="sans-serif" font-size="{words.capital / _CAPITAL_SHARE:.1f}" text-anchor="middle"'
        f"{setting}{halo}>{_text(words.text)}</text>"
    )


def _balloon(balloon: Balloon) -> list[str]:
    """The frame and the label of a grid line."""
    left, top, right, bottom = balloon.rectangle
    frame = (
        f'<rect x="{left:.1f}" y="{top:.1f}" width="{right - left:.1f}" height="{bottom - top:.1f}" '
        f'rx="{balloon.radius:.1f}" fill="{_colour(PAPER)}" stroke="{_colour(INK)}" '
        f'stroke-width="{0.1 * balloon.capital:.1f}"/>'
    )
    return [frame, _words(Words(balloon.x, balloon.y, balloon.text, balloon.capital))]


def _text(text: str) -> str:
    """Text as XML data, whatever it holds."""
    return escape(_NOT_XML.sub("\ufffd", text))


def _colour(colour: int) -> str:
    """#rrggbb."""
    return f"#{colour:06x}"
