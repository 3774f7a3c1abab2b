"""The house rules that a machine can check."""

import ast
import re
import shutil
import subprocess
import sys
import tomllib
from collections.abc import Iterator
from importlib.metadata import PackageNotFoundError, version
from pathlib import Path
from typing import Any

import pytest

from docstring_rule import faults

ROOT = Path(__file__).parents[1]
PROJECT: dict[str, Any] = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))
SHOWN = {"README.md", "DEVELOPERS.md", "pyproject.toml", "Dockerfile", "service", "schemas", "tests"}
PACKAGES = ("service", "schemas")
MADE = re.compile(r"build|dist|.*\.egg-info|\.coverage.*")  # .gitignore has them too
TEXT = {".py", ".md", ".toml", ".json", ".csv", ".txt", ".yaml", ".yml", ".html", ".css", ".js", ".conf", ".svg", ""}

# In halves, so that this file does not hold them.
FOREIGN_WORDS = [
    a + b
    for a, b in (
        ("lec", "tures?"),
        ("lec", "turers?"),
        ("stu", "dents?(?!'s t)"),  # the distribution is no person
        ("home", "work"),
        ("profes", "sors?"),
        ("tran", "scripts?"),
        ("(?<!of )(?<!in the )cou", "rses?"),
        ("sylla", "bus"),
    )
]
HOSTS = [
    a + b for a, b in (("pypi", r"\.org"), ("python", r"hosted\.org"), ("deb", r"\.debian\.org"), ("npm", r"js\.org"))
]
PATHS = [a + b for a, b in (("/wo", "rk/"), ("/opt/", "fm"), ("/roo", "t/"), ("/home/", r"\w"))]


def files() -> Iterator[Path]:
    """Yield every file of the project, made ones left out."""
    dotfiles = {path.name for path in ROOT.glob(".*") if path.is_file() and not MADE.fullmatch(path.name)}
    tops = [ROOT / name for name in SHOWN | dotfiles | {".ci"} if (ROOT / name).exists()]
    for top in tops:
        for path in [top] if top.is_file() else top.rglob("*"):
            if path.is_file() and "__pycache__" not in path.parts:
                yield path


def modules(folder: str) -> Iterator[Path]:
    """Yield the modules of a folder that are imported; scripts that make tables are not."""
    yield from (path for path in (ROOT / folder).rglob("*.py") if not path.name.startswith("make_"))


def test_the_top_level_holds_the_shown_names_and_dotfiles_only() -> None:
    found = {path.name for path in ROOT.iterdir() if not path.name.startswith(".") and not MADE.fullmatch(path.name)}
    assert found <= SHOWN


@pytest.mark.parametrize("patterns", [FOREIGN_WORDS, HOSTS, PATHS], ids=["words", "hosts", "paths"])
def test_no_file_speaks_of_where_it_was_made(patterns: list[str]) -> None:
    start, end = (r"(?<![\w.])", "") if patterns is PATHS else (r"\b", r"\b")
    forbidden = re.compile(f"{start}(?:{'|'.join(patterns)}){end}", re.IGNORECASE)
    found = [
        f"{path.relative_to(ROOT)}:{number}: {line.strip()[:100]}"
        for path in files()
        if path.suffix in TEXT
        for number, line in enumerate(path.read_text(encoding="utf-8").splitlines(), 1)
        if forbidden.search(line)
    ]
    assert not found, "\n".join(found)


def test_no_module_is_longer_than_a_reader_holds() -> None:
    long = {path: len(path.read_text(encoding="utf-8").splitlines()) for top in PACKAGES for path in modules(top)}
    # About 300 lines is the rule; a tenth more is about.
    assert {str(path.relative_to(ROOT)): lines for path, lines in long.items() if lines > 330} == {}


# Docstrings of physics


PLUMBING = {"values", "tabulated", "per_sample"}
"""Modules that carry numbers about and know no physics: a sentence a function does."""


def used_elsewhere(folder: str) -> dict[str, set[str]]:
    """Return, by module, the names that modules of other rooms import from it."""
    names: dict[str, set[str]] = {}
    for path in modules("service"):
        room = ".".join(path.relative_to(ROOT).parent.parts)
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            if isinstance(node, ast.ImportFrom) and node.module and node.module.startswith(folder):
                home = node.module if _is_room(node.module) else node.module.rpartition(".")[0]
                if home != room:
                    names.setdefault(node.module, set()).update(alias.name for alias in node.names)
    return names


def _is_room(module: str) -> bool:
    return ROOT.joinpath(*module.split(".")).is_dir()


def described_methods() -> set[str]:
    """Return the methods that the abstract classes of physics describe for all that implement them."""
    return {
        method.name
        for path in modules("service/physics")
        for node in ast.parse(path.read_text(encoding="utf-8")).body
        if isinstance(node, ast.ClassDef) and any(ast.unparse(base) in ("ABC", "Protocol") for base in node.bases)
        for method in node.body
        if isinstance(method, ast.FunctionDef) and ast.get_docstring(method)
    }


def test_physics_says_what_it_takes_and_returns_and_in_which_unit() -> None:
    used, described = used_elsewhere("service.physics"), described_methods()
    found = []
    for path in sorted(modules("service/physics")):
        module = ".".join(path.relative_to(ROOT).with_suffix("").parts)
        names = set() if path.stem in PLUMBING else used.get(module, set())
        found += [f"{module}: {fault}" for fault in faults(path.read_text(encoding="utf-8"), names, described)]
    assert not found, "\n".join(found)


GOOD = '''
def occupation(energy, temperature) -> float:
    r"""Return the occupation.

    Parameters
    ----------
    energy : float or ndarray, shape (N,)
        Energy above the chemical potential [J].
    temperature : float
        Temperature, above 0 [K].

    Returns
    -------
    float or ndarray, shape (N,)
        Mean occupation of a state, in [0, 1] [1].
    """
'''


def test_the_docstring_rule_passes_a_good_one() -> None:
    assert faults(GOOD, {"occupation"}, ()) == []


@pytest.mark.parametrize(
    ("before", "after", "fault"),
    [
        ("[J].", "[eV].", "[eV] is not in the list of SI units"),
        (" [K].", ".", "no unit in brackets"),
        ("    temperature : float\n        Temperature, above 0 [K].\n", "", "parameter temperature is not described"),
        ("energy : float", "enregy : float", "enregy is no parameter"),
        ("    Returns\n    -------\n", "", "no section Returns"),
        (GOOD[GOOD.index('    r"""') :], "    ...\n", "no docstring"),
    ],
)
def test_the_docstring_rule_finds(before: str, after: str, fault: str) -> None:
    assert before in GOOD
    assert any(fault in found for found in faults(GOOD.replace(before, after), {"occupation"}, ()))


def test_a_function_of_its_own_room_may_do_with_a_sentence() -> None:
    source = 'def step(x) -> float:\n    """Return the next guess."""\n'
    assert faults(source, (), ()) == []
    assert faults(source, {"step"}, ()) == ["step: parameter x is not described", "step: no section Returns"]


def test_a_method_that_returns_numbers_names_their_unit() -> None:
    source = 'class Gas:\n    """A gas."""\n\n    def energy(self) -> Values:\n        """Return the energy{}."""\n'
    assert faults(source.format(" [J]"), (), ()) == []
    assert faults(source.format(""), (), ()) == ["Gas.energy: returns numbers, and names no SI unit"]


# Imports


def test_physics_imports_numpy_special_functions_and_optimisers_alone() -> None:
    allowed = re.compile(r"service\.physics(\.|$)|numpy(\.|$)|scipy\.(special|optimize)(\.|$)")
    found = []
    for path in modules("service/physics"):
        for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
            names = [alias.name for alias in node.names] if isinstance(node, ast.Import) else []
            if isinstance(node, ast.ImportFrom):
                module = node.module or ""
                names = [f"scipy.{alias.name}" for alias in node.names] if module == "scipy" else [module]
            found += [
                f"{path.relative_to(ROOT)}: {name}"
                for name in names
                if name.partition(".")[0] not in sys.stdlib_module_names and not allowed.match(name)
            ]
    assert not found


def lint_imports(folder: Path) -> subprocess.CompletedProcess[str]:
    """Run the import contracts in a folder."""
    program = "from importlinter.cli import lint_imports_command; lint_imports_command(['--no-cache'])"
    return subprocess.run([sys.executable, "-c", program], cwd=folder, capture_output=True, text=True, timeout=60)


def test_the_imports_keep_the_rules() -> None:
    pytest.importorskip("importlinter")
    result = lint_imports(ROOT)
    assert result.returncode == 0, result.stdout


@pytest.mark.parametrize(
    ("module", "line"),
    [
        ("service/physics/bands.py", "import service.calculators.sample"),
        ("service/calculators/sample.py", "import schemas.units"),
        ("service/physics/constants.py", "import flask"),
        ("schemas/units.py", "import service.physics.constants"),
        ("service/physics/values.py", "import service.physics.bands"),
    ],
)
def test_an_import_against_the_rules_is_found(module: str, line: str, tmp_path: Path) -> None:
    pytest.importorskip("importlinter")
    for name in PACKAGES:
        shutil.copytree(ROOT / name, tmp_path / name, ignore=shutil.ignore_patterns("__pycache__"))
    shutil.copy(ROOT / "pyproject.toml", tmp_path)
    with (tmp_path / module).open("a", encoding="utf-8") as file:
        file.write(f"\n{line}\n")
    result = lint_imports(tmp_path)
    assert result.returncode != 0
    assert "BROKEN" in result.stdout


# The distribution


def test_the_installed_version_is_the_one_in_pyproject() -> None:
    try:
        installed = version("fillmark")
    except PackageNotFoundError:
        pytest.skip("fillmark is not installed here")
    assert installed == PROJECT["project"]["version"]


def test_every_data_file_is_declared_for_the_wheel() -> None:
    declared = PROJECT["tool"]["setuptools"]["package-data"]
    found = [
        str(path.relative_to(ROOT))
        for package in PACKAGES
        for path in (ROOT / package).rglob("*")
        if path.is_file() and path.suffix not in (".py", ".pyc", ".md") and "deploy" not in path.parts
        if not any(path.match(pattern) for pattern in declared.get(".".join(path.parent.relative_to(ROOT).parts), []))
    ]
    assert not found


def test_every_package_has_an_init_file() -> None:
    folders = {path.parent for package in PACKAGES for path in (ROOT / package).rglob("*.py")}
    assert [str(folder.relative_to(ROOT)) for folder in folders if not (folder / "__init__.py").exists()] == []


@pytest.mark.parametrize(
    ("name", "stated"),
    [
        ("requirements.txt", PROJECT["project"]["dependencies"]),
        ("build-requirements.txt", PROJECT["build-system"]["requires"]),
    ],
)
def test_the_image_pins_every_dependency_within_its_bounds(name: str, stated: list[str]) -> None:
    requirements = pytest.importorskip("packaging.requirements")
    text = (ROOT / "service/deploy" / name).read_text(encoding="utf-8")
    assert "://" not in text
    pins = dict(re.findall(r"^([a-z0-9-]+)==(\S+) \\\n    --hash=sha256:", text, re.MULTILINE))
    assert len(pins) == len(re.findall(r"^[a-z]", text, re.MULTILINE))
    for line in stated:
        requirement = requirements.Requirement(line)
        assert requirement.specifier.contains(pins[requirement.name]), line


def test_the_image_says_the_version_of_the_project() -> None:
    assert f"\nARG VERSION={PROJECT['project']['version']}\n" in (ROOT / "Dockerfile").read_text(encoding="utf-8")


def test_pre_commit_runs_what_ci_runs() -> None:
    hooks = re.findall(r"^ +entry: (.+)$", (ROOT / ".pre-commit-config.yaml").read_text(encoding="utf-8"), re.MULTILINE)
    script = (ROOT / ".ci/run").read_text(encoding="utf-8")
    assert hooks
    assert [hook for hook in hooks if hook not in script] == []
