"""One line for each set of files that was written."""

from __future__ import annotations

import click

from develop.job.pipeline import Outcome

__all__ = ["report"]


def report(outcome: Outcome, folder: str) -> int:
    """Say what was written and what its checks found; 0 when all hold, else 1."""
    wrote = f"{outcome.mark}: wrote {', '.join(outcome.files)} in {folder}"
    if max(outcome.sheets, default=1) > 1:
        wrote += f"; {sum(outcome.sheets)} large sheets in the PDF, to be laid together"
    if outcome.pages:
        count = sum(outcome.pages)
        wrote += f"; {count} tiled page{'s' if count != 1 else ''} of {outcome.paper}"
    for warning in outcome.warnings:
        click.echo(f"{outcome.mark}: warning: {warning}", err=True)
    if outcome.arcs:
        wrote += f"; {outcome.arcs} arcs in the DXF, within {outcome.deviation:.4f} mm of the curve"
    failed = outcome.failed
    if not failed:
        count = len(outcome.checks)
        click.echo(f"{wrote}; {'the check holds' if count == 1 else f'all {count} checks hold'}")
        return 0
    which = "; ".join(
        f"{each.name}: expected {each.expected:.10g}, got {each.got:.10g}, "
        f"limit {each.limit:g} {each.unit}".rstrip()
        for each in failed
    )
    click.echo(f"{wrote}; DO NOT CUT, {len(failed)} of {len(outcome.checks)} checks do not hold: {which}")
    return 1
