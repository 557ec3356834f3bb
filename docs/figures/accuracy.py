"""How far hand methods are off on the demo's transition T2: the table and the plot of docs/accuracy.md.

    python docs/figures/accuracy.py

writes docs/accuracy.png and the table inside docs/accuracy.md. Each method gets the best chance: its
pattern is laid on the exact one as well as a rigid shape can be before the miss is measured.
"""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

import numpy as np

from develop.quadrature import Array
from develop.sections.ellipse import Ellipse
from develop.solid import Frame, Rim
from develop.surfaces.band import Band

DOCS = Path(__file__).resolve().parent.parent
START, END = "<!-- table: figures/accuracy.py -->", "<!-- end of table -->"


@dataclass(frozen=True)
class Miss:
    """What one method costs at n divisions [mm]: girths too short, pattern points out by at most."""

    divisions: int
    short_a: float
    short_b: float
    right_pairs: float
    equal_parts: float


def band() -> Band:
    """The demo's T2 on its inside: ellipse 600 x 300 to round 400, 450 long, flush at the bottom."""
    return Band(
        Rim(Ellipse(width=600.0, height=300.0), Frame.square()),
        Rim(Ellipse(width=400.0, height=400.0), Frame.square(at=(0.0, 50.0, 450.0))),
    )


def triangulated(a: Array, b: Array) -> tuple[Array, Array]:
    """The flat of n strips between points a and b (n + 1, 3), laid out by three lengths at a time [mm]."""

    def gap(p: Array, q: Array) -> Array:
        return np.asarray(np.linalg.norm(p - q, axis=1))

    ruling, base, cap = gap(a, b), gap(a[1:], a[:-1]), gap(b[1:], b[:-1])
    diagonal = gap(a[1:], b[:-1])

    def corner(near: Array, far: Array, other: Array) -> Array:
        cosine = (near**2 + far**2 - other**2) / (2.0 * near * far)
        return np.asarray(np.arccos(np.clip(cosine, -1.0, 1.0)))

    # Two triangles a strip: a_i b_i a_(i+1) and b_i a_(i+1) b_(i+1); their angles at b add up.
    at_b = corner(ruling[:-1], diagonal, base)
    at_a = corner(diagonal, ruling[1:], cap)
    flat_a, flat_b = [np.zeros(2)], [np.array([0.0, ruling[0]])]
    heading = 0.5 * np.pi
    for i in range(len(base)):
        # Direction from b_i back to a_(i+1), then from a_(i+1) on to b_(i+1).
        back = heading + np.pi + at_b[i]
        a_next = flat_b[-1] + diagonal[i] * np.array([np.cos(back), np.sin(back)])
        heading = back - np.pi - at_a[i]
        flat_a.append(a_next)
        flat_b.append(a_next + ruling[i + 1] * np.array([np.cos(heading), np.sin(heading)]))
    return np.array(flat_a), np.array(flat_b)


def out_by(points: Array, exact: Array) -> float:
    """Largest distance [mm] of points (n, 2) from exact ones after the best rigid fit (Kabsch)."""
    p, q = points - points.mean(axis=0), exact - exact.mean(axis=0)
    u, _, vt = np.linalg.svd(p.T @ q)
    fit = u @ np.diag([1.0, np.sign(np.linalg.det(u @ vt))]) @ vt
    return float(np.linalg.norm(p @ fit - q, axis=1).max())


def misses(divisions: tuple[int, ...]) -> list[Miss]:
    """What 12-point stepping and plain triangulation cost, for each number of divisions."""
    surface = band()
    a, b = surface.rim_a, surface.rim_b
    seam = float(a.section.at_direction(np.array([1.5 * np.pi]))[0])
    sheet = surface.sheet(seam)
    found = []
    for n in divisions:
        share = np.arange(n + 1) / n
        u_a = seam + a.section.at_arc(a.section.girth * share)
        # Both seams lie on the symmetry line at the bottom, so equal parts start there at both ends.
        u_b = seam + b.section.at_arc(b.section.girth * share)
        wrapped_a = np.where(share == 1.0, seam, u_a)
        lines = sheet.lines(sheet.from_a(wrapped_a))
        last = sheet.lines(sheet.ends[np.array([-1])])
        exact_a, exact_b = lines.a.copy(), lines.b.copy()
        exact_a[-1], exact_b[-1] = last.a[0], last.b[0]
        points_a = a.place(*a.section.point(u_a).T)
        feet = b.place(*b.section.point(surface.foot(u_a)).T)
        points_b = b.place(*b.section.point(u_b).T)
        exact = np.vstack([exact_a, exact_b])
        right = out_by(np.vstack(triangulated(points_a, feet)), exact)

        equal_a, equal_b = triangulated(points_a, points_b)
        at_b = sheet.lines(sheet.from_b(np.where(share == 1.0, seam, u_b))).b
        at_b[-1] = last.b[0]
        equal = out_by(np.vstack([equal_a, equal_b]), np.vstack([exact_a, at_b]))

        def stepped(points: Array) -> float:
            return float(np.linalg.norm(np.diff(points, axis=0), axis=1).sum())

        found.append(
            Miss(
                n,
                a.section.girth - stepped(points_a),
                b.section.girth - stepped(points_b),
                right,
                equal,
            )
        )
    return found


def table() -> str:
    """The table of docs/accuracy.md."""
    rows = [
        "| divisions | END A's edge short by | END B's edge short by "
        "| out by, best pairing | out by, equal parts |",
        "|---|---|---|---|---|",
    ]
    rows += [
        f"| {m.divisions} | {m.short_a:.2f} mm | {m.short_b:.2f} mm | {m.right_pairs:.2f} mm "
        f"| {m.equal_parts:.2f} mm |"
        for m in misses((12, 24, 96))
    ]
    return "\n".join(rows)


def page(text: str) -> str:
    """The page with its table made anew."""
    head, rest = text.split(START)
    _, tail = rest.split(END)
    return f"{head}{START}\n{table()}\n{END}{tail}"


def plot(file: Path) -> None:
    """Draw the misses against the number of divisions."""
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    counts = (6, 12, 24, 48, 96, 192, 384, 768, 1536)
    found = misses(counts)
    figure = Figure(figsize=(7.2, 4.4), dpi=110)
    FigureCanvasAgg(figure)
    axes = figure.add_subplot()
    for label, style, values in (
        ("triangulated, equal parts of both ends", "k-o", [m.equal_parts for m in found]),
        ("triangulated, best pairing of points", "k--s", [m.right_pairs for m in found]),
        ("END A's edge short, stepped with dividers", "k:^", [m.short_a for m in found]),
    ):
        axes.loglog(counts, values, style, label=label, markersize=5, linewidth=1.2)
    axes.axhline(0.5, color="0.6", linewidth=0.8)
    axes.text(counts[0], 0.55, "0.5 mm, a scriber's line", fontsize=8, color="0.35")
    axes.set_xticks(counts, [str(n) for n in counts])
    axes.set_yticks([0.001, 0.01, 0.1, 1, 10, 100], ["0.001", "0.01", "0.1", "1", "10", "100"])
    axes.minorticks_off()
    axes.set_xlabel("divisions round the girth")
    axes.set_ylabel("out by [mm]")
    axes.set_title("Ellipse 600 x 300 to round 400, 450 long, flush at the bottom", fontsize=10)
    axes.grid(True, which="major", color="0.9")
    axes.legend(fontsize=8, frameon=False)
    figure.tight_layout()
    figure.savefig(file, metadata={"Software": None})


def main() -> None:
    """Make the page's table and plot anew."""
    file = DOCS / "accuracy.md"
    file.write_text(page(file.read_text(encoding="utf-8")), encoding="utf-8")
    plot(DOCS / "accuracy.png")


if __name__ == "__main__":
    main()
