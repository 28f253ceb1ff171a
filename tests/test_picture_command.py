"""``shedbim picture``: the ending of the file decides its form, and what is refused is refused in plain words."""

from __future__ import annotations

from pathlib import Path
from xml.etree import ElementTree

import pytest
from cast import text_of
from picture_scenes import decoded
from typer.testing import CliRunner, Result

from shedbim.cli.commands import app


@pytest.fixture
def store(tmp_path: Path) -> Path:
    path = tmp_path / "store.yaml"
    path.write_text(text_of("lean"), encoding="utf-8")
    return path


def run(*words: str | Path) -> Result:
    return CliRunner().invoke(app, ["picture", *map(str, words), "--width", "240", "--height", "150"])


@pytest.mark.parametrize("ending", ["png", "PNG"])
def test_png_by_its_ending(store: Path, tmp_path: Path, ending: str) -> None:
    target = tmp_path / f"frame.{ending}"
    result = run(store, "--view", "frame", "--of", "1", "--out", target)
    assert result.exit_code == 0, result.output
    assert decoded(target.read_bytes()).shape == (150, 240, 3)


def test_svg_by_its_ending_with_keys_highlight_and_no_caption(store: Path, tmp_path: Path) -> None:
    plain, asked = tmp_path / "plain.svg", tmp_path / "asked.svg"
    assert run(store, "--view", "frame", "--of", "1", "--out", plain).exit_code == 0
    options = ["--labels", "keys", "--highlight", "1/column/A", "--highlight", "1/column/B", "--no-caption"]
    result = run(store, "--view", "frame", "--of", "1", "--out", asked, *options)
    assert result.exit_code == 0, result.output
    texts = [
        [each.text or "" for each in ElementTree.parse(path).iter("{http://www.w3.org/2000/svg}text")]
        for path in (plain, asked)
    ]
    assert [text for text in texts[0] if "frame 1" in text]
    assert not [text for text in texts[1] if "frame 1" in text]
    assert "1/column/A" in texts[1]
    assert "1/column/A" not in texts[0]


@pytest.mark.parametrize(
    ("options", "code", "told"),
    [
        (["--out", "frame.jpg"], 3, "ends in .png or .svg, not 'frame.jpg'"),
        (["--out", "frame"], 3, "ends in .png or .svg, not 'frame'"),
        (["--labels", "names"], 2, "none, grid, marks, keys"),
        (["--highlight", "1/colum/A"], 2, "nearest: 1/column/A"),
        (["--view", "frame", "--of", "9"], 2, "no numbered line '9'"),
    ],
)
def test_what_is_refused_is_told_and_nothing_is_written(
    store: Path, monkeypatch: pytest.MonkeyPatch, options: list[str], code: int, told: str
) -> None:
    monkeypatch.chdir(store.parent)
    result = run(store, *options)
    assert result.exit_code == code
    assert told in result.output
    assert [path.name for path in store.parent.iterdir()] == ["store.yaml"]
