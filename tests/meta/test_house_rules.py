"""Rules of the house that a machine can see: sizes, words, docstrings, and lists that must agree with registries."""

from __future__ import annotations

import ast
import re
import subprocess
import sys
import tomllib
from collections.abc import Iterator
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[2]
SOURCES = sorted((ROOT / "stresscheck").rglob("*.py"))
TESTS = sorted((ROOT / "tests").rglob("*.py"))
TEXTS = [*SOURCES, *TESTS, *sorted(ROOT.glob("*.md")), *sorted((ROOT / "ratings").rglob("*.*")),
         *sorted((ROOT / "examples").rglob("*.*"))]  # fmt: skip
LONGEST_FILE, LONGEST_FUNCTION = 400, 50
HEAVY = ("numpy", "pint", "pydantic", "rich")
# Words that no output, document or comment of the project may use of a circuit or of itself.
CLEARING = re.compile(r"\b(is safe|are safe|safe to|compliant|complies with|is permitted|passes the)\b", re.IGNORECASE)
OUT_OF_PLACE = re.compile(
    "|".join([r"\btran" + r"scripts?\b", "lec" + "ture notes", "course " + "material", "/wo" + "rk/", "/tm" + "p/"]),
    re.IGNORECASE,
)


def _name(path: Path) -> str:
    return str(path.relative_to(ROOT))


@pytest.mark.parametrize("path", [*SOURCES, *TESTS], ids=_name)
def test_file_is_short_enough_to_take_in_at_one_sitting(path: Path) -> None:
    assert len(path.read_text(encoding="utf-8").splitlines()) <= LONGEST_FILE


def _functions(path: Path) -> Iterator[ast.FunctionDef]:
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.FunctionDef):
            yield node


@pytest.mark.parametrize("path", SOURCES, ids=_name)
def test_functions_are_short(path: Path) -> None:
    long = [(f.name, f.end_lineno - f.lineno) for f in _functions(path) if f.end_lineno - f.lineno > LONGEST_FUNCTION]
    assert long == []


@pytest.mark.parametrize("path", SOURCES, ids=_name)
def test_public_functions_and_modules_have_docstrings(path: Path) -> None:
    tree = ast.parse(path.read_text(encoding="utf-8"))
    assert ast.get_docstring(tree), "module"
    for node in tree.body:
        if isinstance(node, (ast.FunctionDef, ast.ClassDef)) and not node.name.startswith("_"):
            # Rating tables say by their keys what they are.
            if node.name.endswith("Rating") or path.name == "parts.py":
                continue
            assert ast.get_docstring(node), node.name


@pytest.mark.parametrize("path", TEXTS, ids=_name)
def test_text_speaks_of_the_project_alone_and_clears_nothing(path: Path) -> None:
    text = path.read_text(encoding="utf-8")
    assert not OUT_OF_PLACE.search(text)
    if path in SOURCES or path.suffix in (".toml", ".md"):
        assert not CLEARING.search(text)


def test_readme_lists_every_format_of_the_registry() -> None:
    from stresscheck.report.formats import FORMATS

    readme = (ROOT / "README.md").read_text(encoding="utf-8")
    table = readme.split("Formats of `review`:")[1].split("\n\n")[1]
    listed = re.findall(r"^\| `(\w+)` \|", table, re.MULTILINE)
    assert listed == list(FORMATS)


def test_readme_lists_every_command() -> None:
    readme = (ROOT / "README.md").read_text(encoding="utf-8")
    table = readme.split("## Commands")[1].split("Formats of")[0]
    listed = set(re.findall(r"^\| `(\w+)` \|", table, re.MULTILINE))
    text = subprocess.run(
        [sys.executable, "-m", "stresscheck", "--help"], capture_output=True, text=True, check=True
    ).stdout
    assert "..." not in text.split("Commands:")[1], "a line of the list of commands is cut"
    shown = {name for name in listed if re.search(rf"^\s*{name}\b", text, re.MULTILINE)}
    assert shown == listed
    commands = {p.stem for p in (ROOT / "stresscheck" / "cli").glob("*_command.py")}
    assert {c.removesuffix("_command") for c in commands} == listed


def test_readme_has_exactly_two_marked_commands_and_ci_runs_them() -> None:
    readme = (ROOT / "README.md").read_text(encoding="utf-8")
    assert re.findall(r"<!-- command: (\w+) -->", readme) == ["review", "tests"]
    script = (ROOT / ".ci" / "run").read_text(encoding="utf-8")
    assert "command_of tests" in script
    assert "command_of review" in script


def test_readme_commands_stop_at_the_first_failure() -> None:
    readme = (ROOT / "README.md").read_text(encoding="utf-8")
    for block in re.findall(r"<!-- command: \w+ -->\n```sh\n(.*?)```", readme, re.DOTALL):
        assert not re.search(r"[|;]", block), "a pipe or a semicolon would hide a failure"


def test_shelves_of_the_command_are_the_library_s() -> None:
    from stresscheck.cli.library_command import SHELVES as NAMED
    from stresscheck.report.library_table import SHELVES

    assert tuple(SHELVES) == NAMED


def test_import_contracts_are_kept() -> None:
    done = subprocess.run(
        [sys.executable, "-c", "from importlinter.cli import lint_imports_command as c; c()", "--no-cache"],
        cwd=ROOT, capture_output=True, text=True, check=False,
    )  # fmt: skip
    assert done.returncode == 0, done.stdout + done.stderr


def test_readme_verdict_words_are_the_code_s() -> None:
    from stresscheck.findings.finding import VERDICTS

    readme = (ROOT / "README.md").read_text(encoding="utf-8")
    table = readme.split("| verdict of a finding |")[1].split("\n\n")[0]
    assert re.findall(r"^\| `([\w-]+)` \|", table, re.MULTILINE) == list(VERDICTS)


@pytest.mark.parametrize("argument", ["--version", "--help"])
def test_short_answers_import_nothing_heavy(argument: str) -> None:
    code = (
        "import sys; sys.argv = ['stresscheck', sys.argv[1]]\n"
        "from stresscheck.cli import run\n"
        "try: run()\nexcept SystemExit: pass\n"
        f"print([m for m in {HEAVY!r} if m in sys.modules], file=sys.stderr)"
    )
    done = subprocess.run([sys.executable, "-c", code, argument], capture_output=True, text=True, check=True)
    assert done.stderr.strip().splitlines()[-1] == "[]"


def test_package_import_is_light() -> None:
    code = f"import sys, stresscheck; print([m for m in {(*HEAVY, 'typer')!r} if m in sys.modules])"
    assert subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True).stdout == "[]\n"


def test_version_is_the_same_everywhere() -> None:
    import stresscheck

    project = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))["project"]
    assert project["version"] == stresscheck.__version__
