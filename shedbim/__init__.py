"""One short text description of a steel shed in; an open BIM model and member schedules out.

The stages, one function each::

    description = shedbim.read("store.yaml")              # or DescriptionError with every fault
    shed = shedbim.expand_description(description)       # parts, pieces, assemblies, joints
    findings = shedbim.check(shed, description.checks.criteria)
    shedbim.write_schedules(shed, "outputs/store")        # or write_model, write_summary, write_outputs
    result = shedbim.build("store.yaml", "outputs/store")  # all of it

Nothing is imported before it is used, so that ``import shedbim`` is light.
"""

from __future__ import annotations

from importlib import import_module
from typing import TYPE_CHECKING, Any

from shedbim.errors import (
    ComparisonError,
    DescriptionError,
    Fault,
    ModelError,
    OutputError,
    RegisterError,
    ShedbimError,
    UnknownSection,
)
from shedbim.version import __version__

if TYPE_CHECKING:
    from shedbim.checks.checking import check
    from shedbim.checks.finding import Finding
    from shedbim.description import Description, read, read_text
    from shedbim.expand import expand as expand_description
    from shedbim.model.shed import Shed
    from shedbim.pipeline import (
        BuildResult,
        build,
        write_model,
        write_outputs,
        write_schedules,
        write_summary,
    )
    from shedbim.sections.catalogue import section
    from shedbim.sections.section import Section
    from shedbim.writers.imprint import Imprint

__all__ = [
    "BuildResult",
    "ComparisonError",
    "Description",
    "DescriptionError",
    "Fault",
    "Finding",
    "Imprint",
    "ModelError",
    "OutputError",
    "RegisterError",
    "Section",
    "Shed",
    "ShedbimError",
    "UnknownSection",
    "__version__",
    "build",
    "check",
    "expand_description",
    "read",
    "read_text",
    "section",
    "write_model",
    "write_outputs",
    "write_schedules",
    "write_summary",
]

#: Where each name that is imported late comes from: the module, and the name there where it is another.
#: ``expand`` cannot keep its name here: the package of that name takes it.
_LATE = {
    "BuildResult": ("shedbim.pipeline", "BuildResult"),
    "Description": ("shedbim.description", "Description"),
    "Finding": ("shedbim.checks.finding", "Finding"),
    "Imprint": ("shedbim.writers.imprint", "Imprint"),
    "Section": ("shedbim.sections.section", "Section"),
    "Shed": ("shedbim.model.shed", "Shed"),
    "build": ("shedbim.pipeline", "build"),
    "check": ("shedbim.checks.checking", "check"),
    "expand_description": ("shedbim.expand", "expand"),
    "read": ("shedbim.description", "read"),
    "read_text": ("shedbim.description", "read_text"),
    "section": ("shedbim.sections.catalogue", "section"),
    "write_model": ("shedbim.pipeline", "write_model"),
    "write_outputs": ("shedbim.pipeline", "write_outputs"),
    "write_schedules": ("shedbim.pipeline", "write_schedules"),
    "write_summary": ("shedbim.pipeline", "write_summary"),
}


def __getattr__(name: str) -> Any:
    if name not in _LATE:
        raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
    module, there = _LATE[name]
    value = getattr(import_module(module), there)
    globals()[name] = value
    return value


def __dir__() -> list[str]:
    return sorted({*globals(), *__all__})
