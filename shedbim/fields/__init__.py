"""The kinds of fields a description is made of, below the roof forms, frames and all that has options."""

from shedbim.fields.kind import FieldError, Kind, Options, default, left_out, nearest, required
from shedbim.fields.lists import Groups, Labels, NumbersOr, Repeats
from shedbim.fields.scalars import (
    COLD_FORMED,
    ROLLED,
    Choice,
    Grade,
    Number,
    Quantity,
    Text,
    Whole,
    WordOr,
)
from shedbim.fields.sections import SHAPES, SectionOf
from shedbim.fields.unions import OneOf, table

__all__ = [
    "COLD_FORMED",
    "ROLLED",
    "SHAPES",
    "Choice",
    "FieldError",
    "Grade",
    "Groups",
    "Kind",
    "Labels",
    "Number",
    "NumbersOr",
    "OneOf",
    "Options",
    "Quantity",
    "Repeats",
    "SectionOf",
    "Text",
    "Whole",
    "WordOr",
    "default",
    "left_out",
    "nearest",
    "required",
    "table",
]
