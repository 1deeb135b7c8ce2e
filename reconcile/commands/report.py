"""reconcile report: the whole job."""

from __future__ import annotations

from pathlib import Path

import click

from reconcile.commands import options


@click.command("report")
@options.campaign
@options.out("reports/NAME OF THE CAMPAIGN")
@options.files
def command(campaign: tuple[Path, ...], out: Path | None, files: str | None) -> None:
    """Read CAMPAIGN, analyse it and write the report.

    Former files of the same names are replaced once all new ones are
    complete; others in the folder are left alone.
    """
    words = options.words(files)
    from reconcile.commands.progress import steps
    from reconcile.commands.told import summary

    with steps(7) as begin:
        begin("loading")
        from reconcile import analyse, read_campaign, write_report

        begin("reading")
        checked = read_campaign(list(campaign) if len(campaign) > 1 else campaign[0])
        begin("analysing")
        analysis = analyse(checked)
        folder = out or Path("reports") / stem(campaign[0])
        written = write_report(analysis, folder, words, lambda word: begin(f"writing {word}"))
    click.echo(summary(analysis, written))


def stem(campaign: Path) -> str:
    """Name of the report's folder after that of the campaign."""
    whole = campaign.resolve()
    return (whole.name if whole.is_dir() else whole.stem) or "campaign"
