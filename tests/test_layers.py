"""The shape of the project: who may import whom, how long a module may be, and what belongs together."""

from __future__ import annotations

import ast
import json
import os
import shutil
import subprocess
import sys
import tomllib
from pathlib import Path
from typing import Any

import pytest

from app.bench.pictures import PICTURES
from feedlib.parts import KINDS
from feedlib.plan_file import parse_plan
from tests.feedlib.plan_documents import ONE_PORT, part, plan_document

ROOT = Path(__file__).parent.parent
MODULES = sorted([*(ROOT / "app").rglob("*.py"), *(ROOT / "feedlib").rglob("*.py")])
PROJECT = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))
MOST_LINES = 400
TOP_LEVEL = {"README.md", "DEVELOPERS.md", "pyproject.toml", "app", "feedlib", "tests", "assets"}

LAYERS, PURE, NO_PLOTS = (contract["name"] for contract in PROJECT["tool"]["importlinter"]["contracts"])


def name_of(module: Path) -> str:
    """A module's path inside the project."""
    return module.relative_to(ROOT).as_posix()


def lint(folder: Path) -> subprocess.CompletedProcess[str]:
    """Check the import contracts of the project in a folder."""
    command = [sys.executable, "-c", "from importlinter.cli import lint_imports_command as run; run()", "--no-cache"]
    environment = {**os.environ, "COLUMNS": "200"}
    return subprocess.run(command, cwd=folder, env=environment, capture_output=True, text=True, timeout=120)


def test_the_import_contracts_hold() -> None:
    """As written in pyproject.toml."""
    done = lint(ROOT)
    assert done.returncode == 0, done.stdout + done.stderr
    assert "Contracts: 3 kept, 0 broken." in done.stdout


@pytest.mark.parametrize(
    ("module", "line", "broken"),
    [
        ("feedlib/conventions.py", "import PySide6", PURE),
        ("feedlib/conventions.py", "import matplotlib.figure", PURE),
        ("feedlib/conventions.py", "import app.editing.edits", LAYERS),
        ("app/editing/edits.py", "from PySide6.QtCore import QObject", PURE),
        ("app/editing/edits.py", "import app.look", LAYERS),
        ("app/store.py", "import app.bench.scene", LAYERS),
        ("app/bench/scene.py", "import app.panels.card", LAYERS),
        ("app/panels/card.py", "import app.plots.row", LAYERS),
        ("app/panels/card.py", "import matplotlib", NO_PLOTS),
        ("app/window.py", "import matplotlib.figure", NO_PLOTS),
        ("app/plots/figure.py", "import skrf", NO_PLOTS),
    ],
)
def test_a_forbidden_import_is_noticed(tmp_path: Path, module: str, line: str, broken: str) -> None:
    """A copy of the project with one import too many breaks the contract that forbids it."""
    for package in ("app", "feedlib"):
        shutil.copytree(ROOT / package, tmp_path / package, ignore=shutil.ignore_patterns("__pycache__"))
    shutil.copy(ROOT / "pyproject.toml", tmp_path)
    with (tmp_path / module).open("a", encoding="utf-8") as file:
        file.write(f"\n\ndef late() -> None:\n    {line}\n")
    done = lint(tmp_path)
    assert done.returncode == 1, done.stdout + done.stderr
    assert f"{broken} BROKEN" in done.stdout


def test_every_module_has_its_layer() -> None:
    """A module directly under app/ that no layer names would be free to import anything."""
    (layers,) = (c["layers"] for c in PROJECT["tool"]["importlinter"]["contracts"] if c["type"] == "layers")
    named = {name.strip() for layer in layers for name in layer.split("|")}
    there = {f"app.{path.stem}" for path in (ROOT / "app").iterdir() if path.suffix == ".py" or path.is_dir()}
    assert there - {"app.__init__", "app.__pycache__"} | {"feedlib"} == named


def test_every_package_is_installed() -> None:
    """setuptools is given the packages by name; one that is left out is missing once installed."""
    packages = {".".join(path.parent.relative_to(ROOT).parts) for path in MODULES if path.name == "__init__.py"}
    assert {*packages, "feedlib.assets"} == set(PROJECT["tool"]["setuptools"]["packages"])


def test_what_needs_no_screen_loads_neither_qt_nor_plots() -> None:
    """In a process of its own, where no other test has imported anything."""
    script = "\n".join(
        [
            "import sys, feedlib, app.editing.edits, app.cli",
            "heavy = {'PySide6', 'shiboken6', 'matplotlib', 'skrf', 'scipy', 'pandas'}",
            "print(sorted(heavy & {name.partition('.')[0] for name in sys.modules}))",
        ]
    )
    done = subprocess.run([sys.executable, "-c", script], cwd=ROOT, capture_output=True, text=True, timeout=60)
    assert (done.stdout, done.stderr) == ("[]\n", "")


def test_no_module_is_too_long() -> None:
    """A longer one holds more than one thing."""
    lines = {name_of(m): len(m.read_text(encoding="utf-8").splitlines()) for m in MODULES}
    assert len(lines) > 50
    assert {name: count for name, count in lines.items() if count > MOST_LINES} == {}


def public_definitions(module: Path) -> list[ast.FunctionDef | ast.ClassDef]:
    """The functions and classes of a module whose names do not begin with an underscore."""
    tree = ast.parse(module.read_text(encoding="utf-8"))
    return [n for n in tree.body if isinstance(n, ast.FunctionDef | ast.ClassDef) and not n.name.startswith("_")]


def test_every_module_says_what_it_is_for() -> None:
    """In the program and in feedlib."""
    assert [name_of(m) for m in MODULES if not ast.get_docstring(ast.parse(m.read_text(encoding="utf-8")))] == []


def test_everything_public_in_feedlib_has_a_docstring() -> None:
    """Functions and classes."""
    found = [(m, node) for m in MODULES if m.is_relative_to(ROOT / "feedlib") for node in public_definitions(m)]
    assert len(found) > 100
    assert [f"{name_of(module)}: {node.name}" for module, node in found if not ast.get_docstring(node)] == []


def test_every_kind_of_part_has_a_picture() -> None:
    """feedlib may not know Qt, so there are two tables."""
    assert set(PICTURES) == set(KINDS)


def s_file(ports: int) -> dict[str, str]:
    """A measured part of so many ports in which nothing passes."""
    row = " ".join(["0 0"] * ports)
    rows = [row] * ports if ports > 2 else [" ".join([row] * ports)]
    return {"name": f"x.s{ports}p", "text": "\n".join(["# MHz S RI R 50", f"100 {rows[0]}", *rows[1:], ""])}


PICTURED: list[tuple[str, dict[str, Any], int]] = [
    ("radio", {}, 1),
    ("antenna", {}, 1),
    ("antenna", {"impedance": {"touchstone": ONE_PORT}}, 1),
    ("coax", {}, 2),
    ("coax", {"length_m": 0}, 2),
    ("coax", {"length_m": 3000}, 2),
    ("tee", {}, 3),
    ("tee", {"ports": 9}, 9),
    ("splitter", {}, 3),
    ("splitter", {"outputs": 8}, 9),
    ("splitter", {"form": "resistive", "outputs": 4}, 5),
    ("splitter", {"form": "branch_line"}, 4),
    ("splitter", {"form": "rat_race"}, 4),
    ("lumped", {}, 2),
    ("lumped", {"place": "shunt"}, 2),
    ("pad", {}, 2),
    ("transformer", {}, 2),
    ("load", {}, 1),
    ("measured", {"touchstone": s_file(1)}, 1),
    ("measured", {"touchstone": s_file(2)}, 2),
    ("measured", {"touchstone": s_file(5)}, 5),
]
"""Kind, fields besides the least that it needs, and how many ports that makes."""


@pytest.mark.usefixtures("qapp")
@pytest.mark.parametrize(("kind", "fields", "ports"), PICTURED)
def test_a_picture_has_one_anchor_for_each_port(kind: str, fields: dict[str, Any], ports: int) -> None:
    """At places of their own, outside or on the edge of the body, so that a join can be pulled from each."""
    plan = parse_plan(json.dumps(plan_document(part(kind, **fields))).encode())
    (placed,) = plan.parts
    picture = PICTURES[kind]
    anchors = picture.ports(placed, plan)
    assert len(anchors) == placed.part.ports == ports
    assert len({(at.x(), at.y()) for at in anchors}) == ports
    inside = picture.body(placed, plan).adjusted(1, 1, -1, -1)
    assert not [at for at in anchors if inside.contains(at)]


def test_the_pictures_of_all_kinds_were_asked_for() -> None:
    """The cases above name every kind that there is."""
    assert {kind for kind, *_ in PICTURED} == set(KINDS)


def top_level() -> set[str]:
    """What a person sees who lists the checkout; what git ignores does not belong to it."""
    listed = ["git", "ls-files", "--cached", "--others", "--exclude-standard"]
    try:
        done = subprocess.run(listed, cwd=ROOT, capture_output=True, text=True, timeout=60, check=True)
    except (OSError, subprocess.CalledProcessError):
        made = (".egg-info", "__pycache__", "build", "dist")
        names = [name for name in os.listdir(ROOT) if not name.endswith(made)]
    else:
        names = [line.partition("/")[0] for line in done.stdout.splitlines()]
    return {name for name in names if not name.startswith(".")}


def test_the_top_level_holds_what_is_agreed_and_nothing_else() -> None:
    """Files of tools begin with a dot."""
    assert top_level() == TOP_LEVEL
