"""The schema tables as the library's copies of the published schemas have them; run it to write them anew."""

from __future__ import annotations

import json
import re
from pathlib import Path

import ifcopenshell.ifcopenshell_wrapper as wrapper

import shedbim.writers.ifc
from shedbim.writers.ifc.classes import BARS, CLASSES
from shedbim.writers.ifc.schema import SCHEMAS

FOLDER = Path(shedbim.writers.ifc.__file__).parent


def entities_used() -> list[str]:
    """Give the names of entities that the writer's sources hold, types of elements included."""
    source = "".join(path.read_text(encoding="utf-8") for path in sorted(FOLDER.glob("*.py")))
    names = set(re.findall(r'"(Ifc[A-Za-z0-9]+)"', source))
    names |= {f"IfcQuantity{kind}" for kind in ("Length", "Area", "Volume", "Weight", "Count")}
    names |= {row.entity + "Type" for row in (*CLASSES.values(), *BARS.values())}
    return sorted(names)


def table(schema: str) -> dict[str, str]:
    """Give the table of a schema: those of the entities used that it has."""
    declarations = {each.name(): each for each in wrapper.schema_by_name(schema).entities()}
    result = {}
    for name in entities_used():
        if name in declarations:
            pairs = zip(declarations[name].all_attributes(), declarations[name].derived(), strict=True)
            spelled = [
                ("*" if derived else "") + a.name() + ("?" if a.optional() else "") for a, derived in pairs
            ]
            result[name] = " ".join(text.rstrip("?") if text[0] == "*" else text for text in spelled)
    return result


if __name__ == "__main__":
    for each in SCHEMAS:
        text = json.dumps(table(each), indent=0) + "\n"
        (FOLDER / f"{each}.json").write_text(text, encoding="utf-8")
