"""The command line put together: a row for each command, whose options and help are in the module of its kind."""

from __future__ import annotations

from collections.abc import Callable

import typer

from shedbim.cli import building_commands, issuing_commands, lookup_commands
from shedbim.cli.guard import EXIT_CODES
from shedbim.cli.speech import say
from shedbim.version import __version__

__all__ = ["app"]

_CODES = "\n".join(f"  {code:<5}{meaning}" for code, meaning in EXIT_CODES)

app = typer.Typer(
    name="shedbim",
    help=f"""One short text description of a steel shed in; an open BIM model and member schedules out.

\b
Begin with a preset, change it, build it:
  shedbim new store.yaml --preset seed-store
  shedbim build store.yaml
  shedbim check store.yaml
  shedbim picture store.yaml
  shedbim watch store.yaml

\b
Then look up what you can write there:
  shedbim fields            every field, what it allows, its default
  shedbim sections IPE      the sections of a family
  shedbim build --help      the outputs and their options

\b
Exit codes:
{_CODES}
""",
    no_args_is_help=True,
    add_completion=False,
    rich_markup_mode=None,
    pretty_exceptions_enable=False,
    context_settings={"help_option_names": ["-h", "--help"]},
)

register_app = typer.Typer(
    help="""Check, repair or merge the register that `shedbim issue` writes.

\b
Examples:
  shedbim register check store.register
  shedbim register repair store.register
  shedbim register merge ours.register theirs.register --out store.register
""",
    no_args_is_help=True,
    rich_markup_mode=None,
    context_settings={"help_option_names": ["-h", "--help"]},
)

_Rows = tuple[tuple[str, Callable[..., None], str], ...]

#: Name, function and short help of each command, in the order in which help lists them.
_COMMANDS: _Rows = (
    ("build", building_commands.build, "Build the model and the schedules."),
    ("check", building_commands.check, "Check whether the shed is sound to hand over."),
    ("issue", issuing_commands.issue, "Write down what stands now as issued."),
    ("compare", issuing_commands.compare, "Say what changed between two states of a building."),
    ("watch", building_commands.watch, "Build again whenever the description is saved."),
    ("picture", building_commands.picture, "Draw a picture of the shed."),
    ("sections", lookup_commands.sections, "Look up sections."),
    ("fields", lookup_commands.fields, "List what a description can say."),
    ("schema", lookup_commands.schema, "Print the JSON Schema of a description."),
    ("new", lookup_commands.new, "Begin a description from a preset."),
    ("presets", lookup_commands.presets, "List the presets."),
    ("summary-keys", lookup_commands.summary_keys, "Explain the keys of summary.json."),
)
_REGISTER_COMMANDS: _Rows = (
    ("check", issuing_commands.register_check, "Say whether a register is whole, and what it holds."),
    ("repair", issuing_commands.register_repair, "Write what is whole of a damaged register."),
    ("merge", issuing_commands.register_merge, "Make one register of two."),
)

for _app, _rows in ((app, _COMMANDS), (register_app, _REGISTER_COMMANDS)):
    for _name, _function, _short in _rows:
        _app.command(_name, short_help=_short)(_function)
app.add_typer(register_app, name="register", short_help="Check, repair or merge a register.")


def _version(wanted: bool) -> None:
    if wanted:
        say(__version__)
        raise typer.Exit


@app.callback()
def _shedbim(
    version: bool = typer.Option(
        False, "--version", callback=_version, is_eager=True, help="Show the version."
    ),
) -> None:
    pass
