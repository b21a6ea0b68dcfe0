"""Messages to the person at the terminal, on standard error."""

from __future__ import annotations

import click

from checker.report.clean import clean


def complain(message: str) -> None:
    """One line, whatever characters the message holds."""
    click.echo(f"stageproof: {clean(message)}", err=True)
