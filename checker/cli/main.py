"""Entry of `stageproof`: finds the command, and turns every way to fail into a status and one line."""

from __future__ import annotations

import os
import sys
from collections.abc import Sequence
from importlib import import_module

import click

import checker
from checker.cli.complain import complain
from checker.cli.process import few_searches, leave, one_thread
from checker.cli.status import CLEAN, FAILED, INTERRUPTED, UNUSABLE
from checker.trouble import InputTrouble

COMMANDS = {
    "check": "checker.cli.check",
    "specs": "checker.cli.specs",
    "why": "checker.cli.why",
    "compare": "checker.cli.compare",
    "intent": "checker.cli.intent",
    "rules": "checker.cli.rules",
    "parts": "checker.cli.parts",
}
"""Command to the module that holds it as `command`, in the order of `--help`; imported on use."""

DEBUG = "STAGEPROOF_DEBUG"
"""Environment variable that does what `--debug` does."""


class LazyGroup(click.Group):
    """A group that imports a command's module when it is asked for."""

    def list_commands(self, ctx: click.Context) -> list[str]:  # noqa: ARG002 - click's signature
        return list(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:  # noqa: ARG002
        if cmd_name not in COMMANDS:
            return None
        command: click.Command = import_module(COMMANDS[cmd_name]).command
        return command


@click.group(cls=LazyGroup, context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100})
@click.version_option(checker.__version__, message="%(prog)s %(version)s")
@click.option("--debug", is_flag=True, help=f"Show the traceback of an internal failure (or set {DEBUG}).")
@click.pass_obj
def stageproof(settings: dict[str, bool], debug: bool) -> None:
    """Check the discrete transistor stages of a schematic from its netlist.

    Exit status: 0 nothing found at or above the gate, 1 something found or too little checked, 2 unusable
    input or call, 3 internal failure.
    """
    settings["debug"] = debug or settings["debug"]


def main(arguments: Sequence[str] | None = None) -> None:
    """Run the command line and leave the process with its status."""
    one_thread()
    few_searches()
    leave(run(sys.argv[1:] if arguments is None else arguments))


def run(arguments: Sequence[str]) -> int:
    """Run the command line; its exit status. Nothing is raised but SystemExit by a signal handler."""
    settings = {"debug": bool(os.environ.get(DEBUG))}
    try:
        status = stageproof.main(list(arguments), "stageproof", standalone_mode=False, obj=settings)
    except click.exceptions.NoArgsIsHelpError as asked:
        click.echo(asked.format_message(), err=True)
        return UNUSABLE
    except click.ClickException as problem:
        return _unusable(f"{problem.format_message()}{_help_hint(problem)}")
    except InputTrouble as problem:
        return _unusable(str(problem))
    except (click.Abort, KeyboardInterrupt):
        return INTERRUPTED
    except Exception as problem:
        return _failed(problem, settings["debug"])
    return status if isinstance(status, int) else CLEAN


def _unusable(message: str) -> int:
    complain(message)
    return UNUSABLE


def _help_hint(problem: click.ClickException) -> str:
    context = problem.ctx if isinstance(problem, click.UsageError) else None
    return f" Try: {context.command_path} --help" if context else ""


def _failed(problem: Exception, debug: bool) -> int:
    if debug:
        import traceback  # costs start-up time and is needed only here

        click.echo("".join(traceback.format_exception(problem)), err=True, nl=False)
    hint = "" if debug else "; --debug before the command shows where"
    complain(f"internal failure, {type(problem).__name__}: {problem}{hint}")
    return FAILED
