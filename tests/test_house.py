"""The house rules: imports run downward, and starting up loads nothing heavy."""

import ast
import subprocess
import sys
from pathlib import Path

import pytest

import netsize

ROOT = Path(netsize.__file__).parent

# Packages on one floor do not import each other, except where ALLOWED says so.
FLOORS = {
    "errors": 0,
    "citations": 0,
    "numerics": 0,
    "reported": 1,
    "effect_sizes": 1,
    "synthesis": 2,
    "sizing": 2,
    "planning": 3,
    "rehearsal": 3,
    "presentation": 4,
    "cli": 5,
}
ALLOWED = {("effect_sizes", "reported"), ("numerics", "errors"), ("rehearsal", "planning")}


def _room(module: str) -> str:
    parts = module.split(".")
    return parts[1] if len(parts) > 1 else "netsize"


def _imports(path: Path) -> list[str]:
    found = []
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.ImportFrom) and node.module and node.level == 0:
            found.append(node.module)
            if node.module == "netsize":
                found.extend(f"netsize.{alias.name}" for alias in node.names)
        elif isinstance(node, ast.Import):
            found.extend(alias.name for alias in node.names)
    return [name for name in found if name.split(".")[0] == "netsize"]


def _rooms() -> list[Path]:
    return sorted(p for p in ROOT.rglob("*.py") if p.parent != ROOT or p.stem in FLOORS)


@pytest.mark.parametrize("path", _rooms(), ids=lambda p: str(p.relative_to(ROOT)))
def test_imports_run_downward(path):
    here = path.relative_to(ROOT).parts[0].removesuffix(".py")
    for name in _imports(path):
        there = _room(name)
        if there == here or there not in FLOORS:
            continue
        downward = FLOORS[there] < FLOORS[here]
        assert downward or (here, there) in ALLOWED, f"{path.name} imports {name}"


def test_every_room_has_a_floor():
    rooms = {p.name for p in ROOT.iterdir() if p.is_dir() and p.name[0] not in "._"}
    assert rooms <= set(FLOORS)


@pytest.mark.parametrize(
    "start",
    ["import netsize", "import netsize.cli.main as m; m.main(['--help'])"],
    ids=["import", "help"],
)
def test_starting_up_loads_nothing_heavy(start):
    code = (
        f"import sys\n{start}\n"
        "heavy = ('pandas', 'matplotlib', 'statsmodels', 'scipy.stats')\n"
        "print([m for m in heavy if m in sys.modules], file=sys.stderr)"
    )
    run = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert run.stderr.strip() == "[]"


def test_public_names_resolve():
    for name in netsize.__all__:
        assert getattr(netsize, name) is not None
