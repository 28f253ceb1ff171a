"""What a schema knows of the entities this writer uses, and an entity's text from attributes given by name.

A table is a JSON object: entity name to its attributes in order, each with ``?`` behind it where it may be
left out and ``*`` before it where the schema derives it. The tables are drawn from the published schemas; a
test holds them against those.
"""

from __future__ import annotations

import json
from collections.abc import Mapping, Set
from dataclasses import dataclass
from functools import cache, cached_property
from importlib.resources import files

from shedbim.errors import ModelError
from shedbim.writers.ifc.text import NONE

__all__ = ["SCHEMAS", "Entity", "Schema", "schema"]

#: The schemas a model can be written in, as FILE_SCHEMA names them.
SCHEMAS = ("IFC4", "IFC4X3_ADD2", "IFC2X3")


@dataclass(frozen=True)
class Entity:
    """One class of entities: its name and its attributes in order, spelled as in the table."""

    name: str
    attributes: tuple[str, ...]

    @cached_property
    def _defaults(self) -> dict[str, str]:
        """What stands for each attribute that is not given, in order."""
        return {spelled.strip("?*"): "*" if spelled[0] == "*" else NONE for spelled in self.attributes}

    @cached_property
    def _mandatory(self) -> frozenset[str]:
        """The attributes that must be given."""
        return frozenset(a for a in self.attributes if a[0] != "*" and a[-1] != "?")

    @cached_property
    def _layouts(self) -> dict[tuple[str, ...], str]:
        """The checked ``%`` format for each choice of attributes met so far."""
        return {}

    def text(self, given: Mapping[str, str]) -> str:
        """Give ``IFCENTITY(...)`` with the attributes in order.

        Raises:
            ModelError: for an attribute the entity does not have, or a mandatory one not given.
        """
        names = tuple(given)
        if names not in self._layouts:
            self._layouts[names] = self._layout(given.keys())
        if NONE in given.values():
            self._check({name for name, value in given.items() if value != NONE})
        return self._layouts[names] % given

    def _layout(self, names: Set[str]) -> str:
        """Give the ``%`` format that takes these attributes by name; errors as ``text``."""
        self._check(names)
        values = [f"%({name})s" if name in names else default for name, default in self._defaults.items()]
        return f"{self.name.upper()}({','.join(values)})"

    def _check(self, names: Set[str]) -> None:
        """Refuse attributes the entity does not have, and the lack of mandatory ones."""
        wrong = [f"no attribute {name}" for name in sorted(names - self._defaults.keys())]
        wrong += [f"needs {name}" for name in sorted(self._mandatory - names)]
        if wrong:
            raise ModelError(f"{self.name}: {'; '.join(wrong)}")


@dataclass(frozen=True)
class Schema:
    """One schema: its name and its entities by name."""

    name: str
    entities: Mapping[str, Entity]

    @property
    def is_first(self) -> bool:
        """Whether this is IFC2X3, in which a shape has one owner and materials know no profiles."""
        return self.name == "IFC2X3"

    def has(self, entity: str, attribute: str) -> bool:
        """Whether an entity of the table has an attribute."""
        return attribute in {spelled.strip("?*") for spelled in self.entities[entity].attributes}

    def text(self, entity: str, given: Mapping[str, str]) -> str:
        """Give the text of an entity; see ``Entity.text``.

        Raises:
            ModelError: also for an entity the table does not hold.
        """
        if entity not in self.entities:
            raise ModelError(f"no entity {entity} in the table of {self.name}")
        return self.entities[entity].text(given)


@cache
def schema(name: str) -> Schema:
    """Give a schema by the name FILE_SCHEMA uses.

    Raises:
        ModelError: for any other name.
    """
    if name not in SCHEMAS:
        raise ModelError(f"no schema {name!r}; allowed: {', '.join(SCHEMAS)}")
    table = json.loads(files(__package__).joinpath(f"{name}.json").read_text(encoding="utf-8"))
    return Schema(name, {entity: Entity(entity, tuple(line.split())) for entity, line in table.items()})
