"""Hostile texts and files: always the plain error, in bounded time and memory."""

from __future__ import annotations

import os
import subprocess
import sys
import time
import tracemalloc
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from spoiling import changed, faults

from shedbim.description import Description, read, read_text
from shedbim.description.nodes import DEEPEST, MOST_NODES
from shedbim.description.source import MOST_BYTES
from shedbim.errors import DescriptionError

_N = 250_000

#: Seconds and bytes that no text may cost: several times what the worst costs.
_LONGEST, _MOST_MEMORY = 5.0, 60e6

#: ru_maxrss is in bytes on macOS and in KiB elsewhere (getrusage manual pages).
_MAXRSS_UNIT = 1 if sys.platform == "darwin" else 1024

_LAUGHS = "a: &a [x, x]\n" + "".join(
    f"{b}: &{b} [*{a}, *{a}]\n" for a, b in zip("abcdefgh", "bcdefghi", strict=True)
)

HOSTILE = {
    "deep lists": "[" * _N,
    "deep groups": "{" * _N,
    "deep lists and groups": "[{" * (_N // 2),
    "deep blocks": "- " * (_N // 2),
    "deep keys": "? " * (_N // 2),
    "deep indents": "".join(" " * depth + "a:\n" for depth in range(700)),
    "many keys": "".join(f"k{number}: 1\n" for number in range(18_000)),
    "one key many times": "a: 1\n" * 18_000,
    "many items": "building: {spans: [" + "1 m," * 18_000 + "]}",
    "groups for lengths": "building: {bays: [" + "{a: 1}," * 6000 + "]}",
    "many labels": "building: {letters: [" + "A," * 18_000 + "]}",
    "many braced bays": "bracing: {bays: [" + "1," * 18_000 + "]}",
    "aliases that blow up": _LAUGHS,
    "many anchors": "".join(f"a{number}: &x{number} 1\n" for number in range(9000)),
    "many documents": "---\n" * 60_000,
    "many directives": "%FOO bar\n" * 20_000 + "---\na: 1",
    "a long number": "frames: {roof: {system: truss, panels: " + "9" * 100_000 + "}}",
    "very many repeats": "building: {spans: [999999 x 6 m, 99999999999999999999 x 6 m]}",
    "a repeat of many digits": 'building: {spans: ["' + "9" * 5000 + ' x 6 m"]}',
    "a long section": 'frames: {columns: {section: "' + "IPE 3" * 20_000 + '"}}',
    "a long kind": "building: {roof: {form: " + "gable" * 20_000 + "}}",
    "a long key": "building: {" + "eaves" * 200 + ": 1}",
    "a long flow key": "{" + "a " * (_N // 2) + ": 1}",
    "an endless string": 'a: "' + "x" * _N,
    "many quotes": "a: '" + "'" * _N,
    "many escapes": 'a: "' + "\\x41" * (_N // 4) + '"',
    "a letter beyond all": 'a: "\\UFFFFFFFF"',
    "half a letter": 'a: "\\uD800"',
    "long words": "a: " + "x " * (_N // 2),
    "a literal": "a: |\n" + " x\n" * (_N // 3),
    "blank lines": "\n" * _N,
    "comments": "#x\n" * (_N // 3),
    "a comment": "#" * _N,
    "tabs": "\t" * _N,
    "colons": ":" * _N,
    "dashes": "-" * _N,
    "stars": "*" * _N,
    "tags": "!" * _N,
    "an object": "!!python/object/apply:os.system [echo]",
    "too long": "#" * (MOST_BYTES + 1),
    "too long in bytes": "ä" * (MOST_BYTES // 2 + 1),
    "lone surrogates": "a: \ud800",
    "control characters": "".join(map(chr, range(32))),
    "direction marks": "a\u2028b: \u202e1\u2066",
}


@pytest.mark.parametrize("name", HOSTILE)
def test_a_hostile_text_is_refused_in_bounded_time(name: str) -> None:
    begin = time.perf_counter()
    found = faults(HOSTILE[name])
    str(DescriptionError(found)).encode()
    assert time.perf_counter() - begin < _LONGEST
    assert all(len(str(fault)) < 2000 for fault in found)


def test_hostile_texts_take_bounded_memory() -> None:
    """The peak of a fresh process that reads the most costly texts one after the other."""
    pytest.importorskip("resource", reason="peaks of memory are a thing of POSIX")
    names = [
        "many keys",
        "many items",
        "groups for lengths",
        "deep groups",
        "many documents",
        "aliases that blow up",
    ]
    program = (
        "import resource, test_description_hostile as t\n"
        "before = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss\n"
        f"for name in {names}: t.faults(t.HOSTILE[name])\n"
        "print(resource.getrusage(resource.RUSAGE_SELF).ru_maxrss - before)"
    )
    done = subprocess.run(
        [sys.executable, "-c", program], cwd=Path(__file__).parent, capture_output=True, text=True, check=True
    )
    assert int(done.stdout) * _MAXRSS_UNIT < _MOST_MEMORY


def test_a_file_of_100_mb_is_refused_unread(tmp_path: Path) -> None:
    path = tmp_path / "large.yaml"
    with path.open("wb") as stream:
        stream.truncate(100_000_000)
    begin = time.perf_counter()
    tracemalloc.start()
    with pytest.raises(DescriptionError, match="100000000 bytes"):
        read(path)
    _, peak = tracemalloc.get_traced_memory()
    tracemalloc.stop()
    assert time.perf_counter() - begin < 0.5
    assert peak < 1e6


@pytest.mark.skipif(not hasattr(os, "mkfifo"), reason="pipes with names are a thing of POSIX")
def test_a_pipe_or_a_device_does_not_hang_the_reading(tmp_path: Path) -> None:
    pipe = tmp_path / "pipe.yaml"
    os.mkfifo(pipe)
    for path in (pipe, Path(os.devnull)):
        with pytest.raises(DescriptionError, match="device or a pipe"):
            read(path)


def test_nesting_is_allowed_to_the_bound_and_no_further() -> None:
    deepest = "[" * DEEPEST + "]" * DEEPEST
    assert "group of fields" in faults(deepest)[0].message
    assert "deep" in faults(f"[{deepest}]")[0].message


def test_values_are_counted_to_the_bound_and_no_further() -> None:
    def text(count: int) -> str:
        return "[" + "a," * count + "]"

    assert "group of fields" in faults(text(MOST_NODES - 1))[0].message
    assert "more than" in faults(text(MOST_NODES))[0].message


def read_or_refused(text: str) -> None:
    """Reads a text; anything but a description or the plain error is a failure."""
    try:
        assert isinstance(read_text(text), Description)
    except DescriptionError as error:
        str(error).encode()


@settings(max_examples=100, deadline=None)
@given(st.text(max_size=200))
def test_any_text_is_read_or_refused(text: str) -> None:
    read_or_refused(text)


@settings(max_examples=150, deadline=None)
@given(st.text(alphabet="abx01 -:?,[]{}#&*!|>%@`\"'\\\n\t~<=.\u00e9", max_size=60))
def test_any_text_of_yaml_signs_is_read_or_refused(text: str) -> None:
    read_or_refused(text)


_SCRAPS = st.sampled_from(
    ["", " ", "\n", ":", "- ", "[", "]", "{}", "~", "6", "6 m", "nan", "gable", "IPE 300", "first", "1e99 m",
     "&a ", "*a", "? ", "null", "rule", "<<: ", "0 m", "-1", "#", '"', "'", "|\n", "2 x ", "1:0", "\x00",
     "\ud800", "deg", "00"]
)  # fmt: skip


@settings(max_examples=60, deadline=None)
@given(st.data())
def test_any_spoilt_specimen_is_read_or_refused(data: st.DataObject) -> None:
    text = changed(data.draw(st.sampled_from(["warren-gable", "rafters", "posted-flat"])))
    for _ in range(data.draw(st.integers(1, 4))):
        place = data.draw(st.integers(0, len(text)))
        cut = data.draw(st.integers(0, 12))
        text = text[:place] + data.draw(_SCRAPS) + text[place + cut :]
    read_or_refused(text)


@settings(max_examples=60, deadline=None)
@given(st.data())
def test_any_value_in_any_field_is_read_or_refused(data: st.DataObject) -> None:
    lines = changed(data.draw(st.sampled_from(["warren-gable", "howe-valleys", "feet"]))).splitlines()
    places = [
        number for number, line in enumerate(lines) if ": " in line and not line.lstrip().startswith("#")
    ]
    for _ in range(data.draw(st.integers(1, 3))):
        number = data.draw(st.sampled_from(places))
        key = lines[number].partition(":")[0]
        value = data.draw(
            st.one_of(_SCRAPS, st.text(max_size=20), st.integers().map(str), st.floats().map(str))
        )
        lines[number] = f"{key}: {value}"
    read_or_refused("\n".join(lines))
