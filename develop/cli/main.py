"""The command `develop`: its commands by name, and how every error ends.

Nothing here imports more than click: the help of the whole costs little more than click itself.

Exit codes: 0 done; 1 written, but a check does not hold; 2 bad input; 3 could not write;
70 a defect of the program; 130 stopped by the user; 141 the reader of the output went away.
"""

from __future__ import annotations

import os
import sys
from collections.abc import Sequence

import click

from develop.pieces import KINDS

__all__ = ["commands", "main", "run"]

_OTHERS = {
    "job": "every piece of a job file",
    "girth": "girth and area of a section, and the points that divide the girth equally",
    "printer-test": "a page to print and measure, for a printer that is not true",
    "kinds": "the kinds of piece, their fields, units, defaults, an example that runs",
}
# Set to anything, it shows a defect of the program as a traceback.
_TRACEBACK = "DEVELOP_TRACEBACK"
# Set by a shell that asks what may come next.
_COMPLETION = "_DEVELOP_COMPLETE"

_HELP = """Unroll round, elliptical and oblique duct and pipe into flat patterns at full size.

Every pattern is checked before it is written: read what the checks say. They prove the pattern
against the dimensions given, not the dimensions.
"""


class _Commands(click.Group):
    """Commands that are imported when they are used; their summaries are known without."""

    def list_commands(self, ctx: click.Context) -> list[str]:
        return [*KINDS, *_OTHERS]

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:
        if cmd_name in KINDS:
            from develop.cli.piece import piece_command

            return piece_command(cmd_name)
        if cmd_name in _OTHERS:
            from importlib import import_module

            module = import_module(f"develop.cli.{cmd_name.replace('-', '_')}")
            command: click.Command = module.command(_OTHERS[cmd_name])
            return command
        return None

    def resolve_command(
        self, ctx: click.Context, args: list[str]
    ) -> tuple[str | None, click.Command | None, list[str]]:
        if args[0] not in KINDS and args[0] not in _OTHERS and not ctx.resilient_parsing:
            raise click.UsageError(_no_such(args[0], self.list_commands(ctx)))
        return super().resolve_command(ctx, args)

    def format_commands(self, ctx: click.Context, formatter: click.HelpFormatter) -> None:
        with formatter.section("One piece"):
            formatter.write_dl([(name, summary) for name, (_, _, summary) in KINDS.items()])
        with formatter.section("More"):
            formatter.write_dl(list(_OTHERS.items()))


def _no_such(given: str, names: Sequence[str]) -> str:
    from develop.wording import listed, near_miss, shown

    what = "option" if given.startswith("-") else "command"
    hint = near_miss(given, names)
    allowed = "see develop --help" if what == "option" else listed(names)
    return f"{shown(given)}: no such {what}{hint}; allowed: {allowed}"


commands = _Commands(
    name="develop",
    help=_HELP,
    epilog="develop COMMAND --help tells the rest. Exit codes: 0 done; 1 written, but a check does not "
    "hold; 2 bad input; 3 could not write.",
    options_metavar="",
    subcommand_metavar="COMMAND [OPTIONS]",
    context_settings={"max_content_width": 100},
)


def main(arguments: Sequence[str] | None = None) -> int:
    """Run a command line, without the program's name; the exit code. Never raises but for a developer."""
    for stream in (sys.stdout, sys.stderr):
        reconfigure = getattr(stream, "reconfigure", None)
        if reconfigure is not None:
            reconfigure(errors="backslashreplace")
    if _COMPLETION in os.environ:
        commands.main(prog_name="develop")  # answers the shell and exits
    try:
        code = _invoked(list(sys.argv[1:] if arguments is None else arguments))
        sys.stdout.flush()
    except Exception as error:
        return _ended(error)
    except KeyboardInterrupt:
        click.echo("stopped", err=True)
        return 130
    return code


def _invoked(arguments: list[str]) -> int:
    """What click's own `main` does, without its ways of ending."""
    try:
        if arguments[:1] == ["--"]:
            del arguments[0]
        with commands.make_context("develop", arguments) as context:
            code = commands.invoke(context)
    except click.exceptions.Exit as ended:
        return ended.exit_code
    return code if isinstance(code, int) else 0


def run() -> None:
    """The console script."""
    sys.exit(main())


def _let_go_of_output() -> None:
    """Python would complain once more when it closes a broken stream at its end."""
    os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())


def _ended(error: Exception) -> int:
    """Say what went wrong, and the exit code for it."""
    from develop.errors import DevelopError

    if isinstance(error, DevelopError):
        click.echo(str(error), err=True)
        return error.exit_code
    if isinstance(error, click.exceptions.NoArgsIsHelpError):
        click.echo(error.format_message(), err=True)
        return 2
    if isinstance(error, click.exceptions.NoSuchOption):
        click.echo(_no_such(error.option_name, ["--help"]), err=True)
        return 2
    if isinstance(error, click.ClickException):
        click.echo(error.format_message(), err=True)
        return 2
    if isinstance(error, BrokenPipeError):
        _let_go_of_output()
        return 141
    if isinstance(error, OSError) and not error.filename:
        click.echo(f"the output could not be written: {error.strerror}", err=True)
        _let_go_of_output()
        return 3
    if os.environ.get(_TRACEBACK):
        raise error
    click.echo(
        f"This is a defect of the program, not of your input: {type(error).__name__}: {error}. "
        f"Nothing was written for this piece. Please report it with the command and the job file; "
        f"{_TRACEBACK}=1 shows more.".replace("\n", " "),
        err=True,
    )
    return 70
