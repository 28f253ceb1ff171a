"""Pages of the cast and of small scenes, and what their cards must say of a piece."""

from __future__ import annotations

import colorsys
from collections import Counter
from collections.abc import Sequence
from functools import cache

import cast
import numpy as np
from picture_scenes import block, scene
from view_browser import Sight

from shedbim.model.bars import Bar
from shedbim.model.bolt_groups import BoltGroup
from shedbim.model.joints import At
from shedbim.model.plates import Plate
from shedbim.model.roles import Role
from shedbim.model.shapes import Shape
from shedbim.model.shed import Shed
from shedbim.sections.profiles import Flat, Hollow
from shedbim.writers.described import described
from shedbim.writers.imprint import Imprint
from shedbim.writers.pictures.extents import middle_line
from shedbim.writers.view.page import page

__all__ = [
    "BLOCKS",
    "assert_card_tells_of",
    "hue_of",
    "is_rounded",
    "keys_of",
    "number",
    "page_of",
    "page_text",
    "rows_of",
]

#: A solid bar and a tube stand upright, unequal; a cube lies apart from them.
BLOCKS = scene(
    ("solid", Role.COLUMN, Flat(300.0, 200.0), (0.0, 0.0, 0.0), (0.0, 0.0, 3000.0), (0.0, 1.0, 0.0)),
    (
        "tube",
        Role.POST,
        Hollow(400.0, 300.0, 40.0, 60.0, 20.0),
        (900.0, 0.0, 0.0),
        (900.0, 0.0, 2000.0),
        (0.0, 1.0, 0.0),
    ),
    block("cube", Role.RAFTER, 1700.0, 650.0, 1300.0),
)

_CELLS = """(rows) => [...document.querySelectorAll(rows)].map((row) =>
  [...row.children].map((cell) => cell.textContent))"""


def page_text(shed: Shed, **more: Sequence[object]) -> str:
    """The page of a shed."""
    return page(shed, Imprint(), **more)


@cache
def page_of(name: str) -> str:
    """The page of a specimen of the cast."""
    return page_text(cast.members_of(name))


def keys_of(shed: Shed, **wanted: str) -> list[str]:
    """Keys, sorted, of the pieces whose parts have a mark, a section or a role."""
    found = []
    for key, index in zip(shed.pieces.keys, shed.pieces.part, strict=True):
        part = shed.parts[index]
        has = {"mark": part.mark, "section": described(part.shape), "role": part.role.word}
        if all(has[name] == value for name, value in wanted.items()):
            found.append(key)
    return sorted(found)


def number(text: str) -> float:
    """The number a text begins with; thin spaces between thousands count as nothing."""
    return float(text.replace("\u202f", "").replace("\u2212", "-").split()[0])


def hue_of(colour: object) -> tuple[float, float]:
    """Hue and saturation, 0 to 1, of red, green and blue, 0 to 255."""
    red, green, blue = (float(value) / 255 for value in colour)
    hue, saturation, _ = colorsys.rgb_to_hsv(red, green, blue)
    return hue, saturation


def is_rounded(text: str, value: float, least: int = 2) -> bool:
    """Whether a text is a value rounded to as many decimals as it shows, ``least`` or more."""
    decimals = len(text.partition(".")[2])
    # A tie may fall either way.
    return decimals >= least and abs(number(text) - value) <= 0.5 * 10**-decimals + 1e-9 * abs(value)


def rows_of(sight: Sight, selector: str) -> list[list[str]]:
    """The texts of the cells of each row of a table, blanks made plain."""
    found = sight.ask(_CELLS, selector)
    return [[" ".join(cell.replace("\u202f", "").split()) for cell in row] for row in found]


def assert_card_tells_of(sight: Sight, shed: Shed, piece: int) -> None:
    """The card of the selection says of a piece what the model holds of it, and nothing else."""
    part = shed.parts[shed.pieces.part[piece]]
    assert sight.text("#piece-key") == shed.pieces.keys[piece]
    assert sight.text("#piece-mark").split() == [part.mark, *part.role.word.split()]
    pairs = dict(sight.ask(_CELLS, "#details-body .pairs > div"))
    assert (pairs["grade"], pairs.get("finish", "")) == (part.grade, part.finish)
    assert is_rounded(pairs["mass"].removesuffix(" kg"), part.shape.mass)
    assert number(pairs["pieces of this mark"]) == shed.quantities[shed.pieces.part[piece]]
    _assert_sizes(pairs, part.shape)
    place = shed.pieces.placement[piece]
    ends = middle_line(part.body) @ place[:, :3].T + place[:, 3]
    places = {"from, mm": ends[0], "to, mm": ends[1]}
    if not isinstance(part.shape, Bar):
        places = {"middle, mm": ends.mean(axis=0)}
    for name, end in places.items():
        shown = [number(word) for word in pairs[name].split(", ")]
        assert np.abs(np.subtract(shown, end)).max() <= 0.51, (name, shown, end)
    card = " ".join(sight.page.inner_text("#details-body").split())
    assert " ".join(_assembly_words(shed, piece)) in card
    lines = sight.ask("[...document.querySelectorAll('#piece-joints > li')].map((line) => line.innerText)")
    assert sorted(" ".join(line.split()) for line in lines) == sorted(_joint_lines(shed, piece))


def _assert_sizes(pairs: dict[str, str], shape: Shape) -> None:
    """The card says what a shape is and how large, holes, thickness and grip included, and has no more sizes."""

    def millimetres(name: str, value: float) -> None:
        assert is_rounded(pairs.pop(name).removesuffix(" mm"), value, 1)

    pairs = dict(pairs)
    if isinstance(shape, BoltGroup):
        fastener = shape.fastener
        assert pairs.pop("fastener") == fastener.designation
        counts = (pairs.pop(name) for name in ("in this group", "nuts each", "washers each"))
        assert [number(text) for text in counts] == [shape.count, fastener.nuts, sum(fastener.washers)]
        millimetres("grip", fastener.grip)
        if fastener.length:
            millimetres("length", fastener.length)
    else:
        assert number(pairs.pop("holes", "0")) == len(shape.holes)
        assert is_rounded(pairs.pop("surface").removesuffix(" m²"), shape.surface / 1e6)
        if isinstance(shape, Plate):
            assert pairs.pop("plate") == described(shape)
            millimetres("thickness", shape.thickness)
            sides = pairs.pop("cut from").removesuffix(" mm").split(" × ")
            assert all(is_rounded(side, value, 1) for side, value in zip(sides, shape.size, strict=True))
        else:
            assert pairs.pop("section") == described(shape)
            millimetres("length", shape.length)
    sizes = {"section", "plate", "fastener", "length", "thickness", "grip", "holes", "surface", "cut from"}
    assert not sizes & pairs.keys()


def _assembly_words(shed: Shed, piece: int) -> list[str]:
    """What stands under the heading of assemblies, from the innermost outwards."""
    words = ["Assembly"]
    index = shed.pieces.assembly[piece]
    if index < 0:
        return [*words, "none: a loose piece"]
    while index >= 0:
        kind = shed.assembly_types[shed.assemblies.type[index]]
        where = "in the shop" if kind.made == "shop" else "on site"
        words.append(f"{kind.mark} {shed.assemblies.keys[index]} made {where}")
        index = shed.assemblies.parent[index]
    return words


def _joint_lines(shed: Shed, piece: int) -> list[str]:
    """A line for each joint of a piece: where on it, what joint, how fastened; and key and mark of the others."""
    lines = []
    for run in shed.joints:
        for row, cell in np.argwhere(run.pieces == piece):
            words = [At(run.at[row, cell]).name.lower(), run.kind.word]
            if run.kind.fastening != "none":
                words.append(run.kind.fastening)
            for other in run.pieces[row]:
                if other != piece:
                    words += [shed.pieces.keys[other], shed.parts[shed.pieces.part[other]].mark]
            lines.append(" ".join(words + _with(shed, run.fittings[row] if run.fittings.size else ())))
        for row, cell in np.argwhere(run.fittings == piece):
            words = ["in", run.kind.word]
            if run.kind.fastening != "none":
                words.append(run.kind.fastening)
            for other in run.pieces[row]:
                words += [shed.pieces.keys[other], shed.parts[shed.pieces.part[other]].mark]
            lines.append(" ".join(words + _with(shed, np.delete(run.fittings[row], cell))))
    return lines


def _with(shed: Shed, fittings: Sequence[int]) -> list[str]:
    """The marks of fittings, each once with how many there are."""
    marks = Counter(shed.parts[shed.pieces.part[each]].mark for each in fittings)
    texts = [f"{count} × {mark}" if count > 1 else mark for mark, count in marks.items()]
    return ["with", ", ".join(texts)] if texts else []
