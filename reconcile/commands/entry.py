"""The entry point: commands loaded when called, and every fault turned into an exit status."""

from __future__ import annotations

import os
import sys
import traceback
from collections.abc import Mapping, Sequence
from difflib import get_close_matches
from importlib import import_module
from typing import Any

import click

DONE, INTERNAL, PROBLEMS = 0, 1, 2
COMMANDS: Mapping[str, tuple[str, str]] = {  # name ─► module, what --help says
    "report": ("reconcile.commands.report", "The whole job: from runs to the finished report."),
    "check": ("reconcile.commands.check", "Read a campaign, say what is wrong or assumed, write nothing."),
    "lookup": ("reconcile.commands.lookup", "Every reference value held about a salt or ion, with source."),
    "demo": ("reconcile.commands.demo", "An invented campaign, from its tables to the finished report."),
}
_TRACEBACK = "RECONCILE_TRACEBACK"


class LazyGroup(click.Group):
    """A group that imports a command's module when that command is called, never for its help."""

    def list_commands(self, ctx: click.Context) -> list[str]:
        """Names in the order of COMMANDS."""
        return list(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:
        """Load one command."""
        if cmd_name not in COMMANDS:
            return None
        command: click.Command = import_module(COMMANDS[cmd_name][0]).command
        return command

    def resolve_command(
        self, ctx: click.Context, args: list[str]
    ) -> tuple[str | None, click.Command | None, list[str]]:
        """The command named first; with a suggestion where there is none of that name."""
        near = get_close_matches(args[0], COMMANDS, n=1)
        if args[0] not in COMMANDS and not args[0].startswith("-") and near:
            ctx.fail(f"No such command {args[0]!r}. Did you mean {near[0]}?")
        return super().resolve_command(ctx, args)

    def format_commands(self, ctx: click.Context, formatter: click.HelpFormatter) -> None:
        """List the commands without loading them."""
        with formatter.section("Commands"):
            formatter.write_dl([(name, text) for name, (_, text) in COMMANDS.items()])


def _print_versions(ctx: click.Context, _: click.Parameter, asked: bool) -> None:
    if asked and not ctx.resilient_parsing:
        from reconcile.commands.versions import versions

        click.echo(versions())
        ctx.exit()


@click.group(cls=LazyGroup, context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100})
@click.option("--traceback", is_flag=True, help=f"Print the full trace of an internal error (or set {_TRACEBACK}=1).")
@click.option(
    "--version", is_flag=True, is_eager=True, expose_value=False, callback=_print_versions,
    help="Print the versions that matter, and leave.",
)  # fmt: skip
@click.pass_obj
def cli(state: dict[str, Any], traceback: bool) -> None:
    """Solution calorimetry: from dissolution runs to standard enthalpies of solution, with uncertainty budgets.

    CAMPAIGN is a folder with runs.csv (and samples.csv, calorimeters.csv, campaign.toml where they are needed), or one
    table of runs. Exit status: 0 done, 2 the input or the command has problems, 1 anything else.
    """
    state["traceback"] = traceback


def main(arguments: Sequence[str] | None = None) -> int:
    """Run a command.

    Parameters
    ----------
    arguments : sequence of str, optional
        Those of the process by default.

    Returns
    -------
    status : int
        0 done (also with warnings), 2 the input or the command has problems, 1 anything else.
    """
    for stream in (sys.stdout, sys.stderr):
        if hasattr(stream, "reconfigure"):
            stream.reconfigure(errors="replace")  # a console that cannot print Δ prints ?
    state: dict[str, Any] = {"traceback": False}
    try:
        status = cli.main(args=arguments, prog_name="reconcile", standalone_mode=False, obj=state)
        sys.stdout.flush()
    except click.ClickException as fault:
        fault.show()
        return PROBLEMS
    except BrokenPipeError:  # the reader of our output has gone
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return INTERNAL
    except (click.Abort, KeyboardInterrupt):
        click.echo("Interrupted; nothing was written.", err=True)
        return INTERNAL
    except Exception as fault:
        if problems := _problems(fault):
            click.echo("\n".join(problems), err=True)
            return PROBLEMS
        _tell_internal(fault, state["traceback"] or os.environ.get(_TRACEBACK, "") not in ("", "0"))
        return INTERNAL
    return int(status or DONE)


def _problems(fault: Exception) -> list[str]:
    """The lines to print if the fault lies in what was given to us, else none."""
    from reconcile.campaign import CampaignError
    from reconcile.dilution import NothingToFit
    from reconcile.report import ReportError

    if isinstance(fault, CampaignError):
        number = len(fault.problems)
        return [str(fault), f"{number} problem{'' if number == 1 else 's'}; nothing was written."]
    if isinstance(fault, ReportError | NothingToFit):
        return [str(fault)]
    return []


def _tell_internal(fault: Exception, whole: bool) -> None:
    if whole:
        traceback.print_exception(fault)
    told = str(fault).strip().splitlines()
    click.echo(f"Internal error: {type(fault).__name__}{': ' + told[0] if told else ''}", err=True)
    click.echo(
        "This is a fault of reconcile, not of the campaign. The input is untouched and no report was changed. "
        "Please report it with what `reconcile --traceback …` prints.",
        err=True,
    )
