"""What is written over a picture: strokes, words and balloons, in pixels from the upper left corner.

A picture is written over in the order of the list; a halo is white round words, so that they can be read on
whatever lies below.
"""

from __future__ import annotations

from dataclasses import dataclass

from shedbim.writers.pictures.letters import width

__all__ = ["INK", "PAPER", "QUIET", "Annotation", "Balloon", "Rectangle", "Stroke", "Words", "capital_height"]

#: Colours 0xRRGGBB: of words and balloons, of what should stay in the background, of paper.
INK, QUIET, PAPER = 0x202830, 0x7C8894, 0xFFFFFF
#: Left, top, right and bottom, pixels.
Rectangle = tuple[float, float, float, float]


@dataclass(frozen=True)
class Stroke:
    """A straight line with round ends; one without length is a dot. Widths in pixels."""

    x1: float
    y1: float
    x2: float
    y2: float
    width: float
    colour: int = INK
    chain: bool = False  #: long dashes and dots, as grid lines are drawn


@dataclass(frozen=True)
class Words:
    """Words round a middle.

    Attributes:
        x: of the middle.
        y: of the middle of the capitals.
        text: any text, one line.
        capital: height of a capital.
        colour: of the letters.
        halo: whether white surrounds them.
    """

    x: float
    y: float
    text: str
    capital: float
    colour: int = INK
    halo: bool = False

    @property
    def rectangle(self) -> Rectangle:
        """What the words cover, with a little air."""
        half, air = width(self.text, self.capital) / 2, 0.35 * self.capital
        return (
            self.x - half - air,
            self.y - 0.9 * self.capital,
            self.x + half + air,
            self.y + 0.9 * self.capital,
        )


@dataclass(frozen=True)
class Balloon:
    """A grid label: words in a circle, or in a longer round-ended frame where they need it."""

    x: float
    y: float
    text: str
    capital: float

    @property
    def radius(self) -> float:
        """Half its height."""
        return 1.25 * self.capital

    @property
    def half(self) -> float:
        """Half its width."""
        return max(self.radius, width(self.text, self.capital) / 2 + 0.4 * self.capital)

    @property
    def rectangle(self) -> Rectangle:
        """What it covers."""
        return self.x - self.half, self.y - self.radius, self.x + self.half, self.y + self.radius


Annotation = Stroke | Words | Balloon


def capital_height(wide: int, high: int) -> float:
    """Give the height of capitals that can be read on a picture of that size, pixels."""
    return min(max(0.0072 * min(wide, 1.6 * high), 5.5), 36.0)
