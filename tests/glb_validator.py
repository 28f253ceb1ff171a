"""Runs the published validator of the format, npm package gltf-validator, over files."""

from __future__ import annotations

import json
import os
import shutil
import subprocess
from pathlib import Path
from typing import Any, NoReturn

import pytest

__all__ = ["reports"]

_PACKAGE = "gltf-validator@2.0.0-dev.3.10"
_SCRIPT = """
const { validateBytes } = require(process.argv[1]);
const { readFileSync } = require("fs");
(async () => {
  const found = {};
  for (const path of process.argv.slice(2)) {
    found[path] = await validateBytes(new Uint8Array(readFileSync(path)), { maxIssues: 0, format: "glb" });
  }
  console.log(JSON.stringify(found));
})();
"""


def reports(paths: list[Path], folder: Path) -> dict[Path, dict[str, Any]]:
    """The validator's report on each file; the package is installed into ``folder`` the first time."""
    node, npm = shutil.which("node"), shutil.which("npm")
    if not node or not npm:
        _cannot("node and npm are not installed")
    package = folder / "node_modules" / "gltf-validator"
    if not package.exists():
        options = ["--no-save", "--no-audit", "--no-fund", "--ignore-scripts", "--no-package-lock"]
        made = _run([npm, "install", "--prefix", str(folder), *options, _PACKAGE])
        if made.returncode:
            _cannot(f"npm could not install {_PACKAGE}: {made.stderr.strip()[-300:]}")
    ran = _run([node, "-e", _SCRIPT, str(package), *map(str, paths)])
    assert ran.returncode == 0, ran.stderr
    found = json.loads(ran.stdout)
    return {path: found[str(path)] for path in paths}


def _run(command: list[str]) -> subprocess.CompletedProcess[str]:
    return subprocess.run(command, capture_output=True, text=True, encoding="utf-8", check=False, timeout=120)


def _cannot(reason: str) -> NoReturn:
    """Skip on somebody's own machine; fail where the whole suite must run."""
    text = f"the published glTF validator was not run: {reason}"
    if os.environ.get("CI"):
        pytest.fail(text)
    pytest.skip(text)
