"""reconcile demo: an invented campaign, from its tables to the finished report."""

from __future__ import annotations

from pathlib import Path

import click

from reconcile.commands import options


@click.command("demo")
@options.out("reports/demo")
@options.files
def command(out: Path | None, files: str | None) -> None:
    """Write an invented campaign and its report.

    Every run in it is invented, with faults planted for the report to find. The campaign itself goes into the folder
    campaign below the report's: a pattern for one's own.
    """
    words = options.words(files)
    from reconcile.commands.progress import steps
    from reconcile.commands.told import summary

    folder = out or Path("reports") / "demo"
    with steps(8) as begin:
        begin("loading")
        from reconcile import analyse, read_campaign, write_report
        from reconcile.campaign import write_campaign
        from reconcile.simulation import demo

        begin("inventing")
        write_campaign(folder / "campaign", *demo(), replace=True)
        begin("reading")
        checked = read_campaign(folder / "campaign")
        begin("analysing")
        analysis = analyse(checked)
        written = write_report(analysis, folder, words, lambda word: begin(f"writing {word}"))
    click.echo("An invented campaign: no number of it was measured.")
    click.echo(summary(analysis, written))
