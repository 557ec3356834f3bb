"""The documents say what the program does today."""

from __future__ import annotations

import importlib.util
import re
import shlex
import sys
from pathlib import Path

import pytest

from develop.cli.main import main
from develop.pieces import KINDS, kind_of
from develop.pieces.reference import kinds_page

ROOT = Path(__file__).resolve().parent.parent
DOCS = ROOT / "docs"
PAGES = [ROOT / "README.md", ROOT / "DEVELOPERS.md", *sorted(DOCS.glob("*.md"))]


def figure(name: str):
    spec = importlib.util.spec_from_file_location(f"figure_{name}", DOCS / "figures" / f"{name}.py")
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    sys.modules[spec.name] = module
    spec.loader.exec_module(module)
    return module


def test_the_reference_page_is_made_from_the_declarations() -> None:
    assert (DOCS / "kinds.md").read_text(encoding="utf-8") == kinds_page()


def test_the_accuracy_page_shows_what_its_script_finds() -> None:
    text = (DOCS / "accuracy.md").read_text(encoding="utf-8")
    assert figure("accuracy").page(text) == text


def test_the_accuracy_page_tells_the_truth_about_its_methods() -> None:
    # Stepping n chords round a circle of diameter 400 loses girth by elementary geometry.
    from math import pi, sin

    for miss in figure("accuracy").misses((12, 24, 96)):
        n = miss.divisions
        assert miss.short_b == pytest.approx(400 * pi - n * 400 * sin(pi / n), rel=1e-9)
        assert miss.short_a > 0


def test_the_page_of_touching_edges_shows_what_its_script_finds() -> None:
    from math import cos, pi, sin, sqrt, tan

    text = (DOCS / "touching.md").read_text(encoding="utf-8")
    assert figure("touching").page(text) == text
    # By elementary geometry: half the wall times tan(mitre); along the joint's normal; summed over four joints;
    # 2 t sin(mitre); and a saddle's depth from bore to mid-thickness.
    mitre, radius = pi / 16, 1921 / (2 * pi)
    away = sum(12 * sin(mitre) * cos((2 * k + 1) * mitre) for k in range(4))
    saddle = sqrt(radius**2 - 127**2) - sqrt(radius**2 - 131.75**2)
    found = [float(value) for _, value in figure("touching").costs()]
    expected = [6 * tan(mitre), 12 * sin(mitre), away, 24 * sin(mitre), saddle]
    assert found == pytest.approx(expected, abs=0.05)
    assert found[:2] + found[3:] == pytest.approx(expected[:2] + expected[3:], abs=0.006)


def test_the_allowances_page_shows_what_its_script_finds() -> None:
    text = (DOCS / "allowances.md").read_text(encoding="utf-8")
    assert figure("allowances").page(text) == text


def test_the_page_of_thickness_shows_what_its_script_finds() -> None:
    text = (DOCS / "thickness.md").read_text(encoding="utf-8")
    assert figure("thickness").page(text) == text


def test_the_page_of_thickness_tells_the_truth() -> None:
    # Steiner, right cones in thick plate, and the handbook's 0.64 T for a bend, by elementary geometry.
    from math import hypot, pi

    from scipy.special import ellipe

    def girth(width: float, height: float) -> float:
        return 2.0 * width * float(ellipe(1.0 - (height / width) ** 2))

    ellipse, lean = girth(600.0, 300.0), 700.0 / hypot(700.0, 750.0)
    expected = [
        -10.0 * pi,
        girth(610.0, 310.0) - ellipse - 10.0 * pi,
        girth(650.8, 350.8) - ellipse - 50.8 * pi,
        -16.0 * pi * lean,
        16.0 * pi * (1.0 - lean),
        -16.0 * pi / lean,
        16.0 * pi * (1.0 - 1.0 / lean),
        4.0 * 2.0 * (pi / 4.0 - 0.64),
        2.0 * pi * 1.3,
        2.0 * pi * 50.0 * 750.0 / 700.0,
    ]
    # The slightly leaning sheet of a slip joint is a hundredth of a micron off.
    assert [out for _, _, out in figure("thickness").rows()] == pytest.approx(expected, abs=1e-5)


@pytest.mark.parametrize(
    "name", ["accuracy", "allowances", "directions", "demo", "pages", "parts", "touching"]
)
def test_every_figure_is_made_by_its_script(name: str, tmp_path: Path) -> None:
    file = tmp_path / "figure.png"
    figure(name).plot(file)
    assert file.read_bytes().startswith(b"\x89PNG")


@pytest.mark.parametrize("page", PAGES, ids=lambda page: page.name)
def test_links_and_pictures_lead_somewhere(page: Path) -> None:
    for target in re.findall(r"\]\(([^)#]+)\)", page.read_text(encoding="utf-8")):
        assert (page.parent / target).exists(), target


def commands(page: Path) -> list[str]:
    """Commands of `develop` in the page's shell blocks, continued lines joined."""
    found = []
    for block in re.findall(r"```sh\n(.*?)```", page.read_text(encoding="utf-8"), re.DOTALL):
        for line in block.replace("\\\n", " ").splitlines():
            at = re.search(r"(?:^|&& |\.venv/bin/)develop (?=[a-z])(.*)$", line)
            if at and not line.startswith("#"):
                found.append(at[1])
    return found


@pytest.mark.parametrize("page", PAGES, ids=lambda page: page.name)
def test_every_command_of_the_documents_runs(page: Path, tmp_path: Path, monkeypatch) -> None:
    monkeypatch.chdir(tmp_path)
    (tmp_path / "patterns").symlink_to(ROOT / "patterns")
    for command in commands(page):
        words = [word.split("#")[0] for word in shlex.split(command, comments=True)]
        assert main(words) == 0, command


def test_the_readme_has_commands_to_run() -> None:
    assert len(commands(ROOT / "README.md")) >= 2


@pytest.mark.parametrize("kind", sorted(KINDS))
def test_every_kind_has_an_example_that_runs(kind: str, tmp_path: Path, monkeypatch) -> None:
    from develop.pieces.reference import command_line, job_text

    monkeypatch.chdir(tmp_path)
    words = shlex.split(command_line(kind_of(kind)))
    assert main([*words[1:], "--formats", "json"]) == 0
    (tmp_path / "job.toml").write_text(job_text(kind_of(kind)), encoding="utf-8")
    assert main(["job", "job.toml", "-o", "again", "--formats", "json"]) == 0
    (first,) = (tmp_path / "out").iterdir()
    assert first.read_bytes() == (tmp_path / "again" / first.name).read_bytes()


def test_the_job_file_page_shows_a_job_that_reads(tmp_path: Path) -> None:
    from develop.job.file import read_job

    text = (DOCS / "job_file.md").read_text(encoding="utf-8")
    (block,) = re.findall(r"```toml\n(.*?)```", text, re.DOTALL)
    file = tmp_path / "plant.toml"
    file.write_text(block, encoding="utf-8")
    assert [placed.piece.mark for placed in read_job(str(file)).pieces] == ["T1", "S1"]


def test_the_page_of_checks_names_every_check() -> None:
    from develop.checks import check
    from develop.pieces.fields import read_piece

    piece, _ = read_piece(kind_of("transition"), kind_of("transition").example)
    built = piece.build()
    page = (DOCS / "checks.md").read_text(encoding="utf-8").lower()
    for each in check(built.patterns[0], built.solid):
        words = each.name.split(",")[0].replace("edge at END A", "edge").replace("edge at END B", "edge")
        assert words.split(" against")[0].lower() in page, each.name


def test_the_page_of_tables_says_what_the_tables_say() -> None:
    from develop.tables.bend_allowance import bend_rules, neutral_line
    from develop.tables.gauges import SERIES, thicknesses
    from develop.tables.materials import materials
    from develop.tables.rules import shipped

    text = (DOCS / "materials.md").read_text(encoding="utf-8")
    for series, written in SERIES.items():
        figures = " | ".join(
            f"{thicknesses(series)[number] * 25.4 + 1e-9:.3f}" for number in ("16", "20", "24")
        )
        assert re.search(rf"^\| `{written}` \| [^|]+ \| {re.escape(figures)} \|", text, re.MULTILINE), series
    for material in materials().values():
        assert f"{material.density:.0f}" in text
    for name in (*shipped().seams, *shipped().edges):
        assert re.search(rf"`{name}[ `]", text), name
    for name, rule in bend_rules().items():
        assert f"| `{name}` |" in text
        if not rule.steps:
            line = f"{rule.per_radius:g} R + {rule.per_thickness:g} T | {neutral_line(name, radius=1, thickness=1):.3f}"
            assert line in text


def test_the_shop_rules_of_the_page_of_tables_are_read(tmp_path: Path) -> None:
    from develop.job.file import read_rules
    from develop.tables.seams import edge_of, seam_of

    text = (DOCS / "materials.md").read_text(encoding="utf-8")
    (block,) = re.findall(r"```toml\n(.*?)```", text, re.DOTALL)
    file = tmp_path / "shop.toml"
    file.write_text(block, encoding="utf-8")
    rules = read_rules(str(file))
    # 1.5 × 6 + 2 × 0.8, and 1.2 × 10 + 0.5.
    assert seam_of("grooved 6", thickness=0.8, rules=rules).left == pytest.approx(10.6, rel=1e-14)
    assert edge_of("bead 10", rules=rules).allowance == 12.5
