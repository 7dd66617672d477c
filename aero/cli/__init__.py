"""The command line: one file a command, imported only when it is called."""

from __future__ import annotations

import contextlib
import importlib
import os
import signal
import sys

import click

import aero
from aero.errors import InputError

COMMANDS = {
    "demo": "Survey the shipped example, from file to report.",
    "survey": "Survey a trajectory: regimes, crossings, drag, heating, report.",
    "point": "Tell everything known about one flight condition.",
    "air": "Show an atmosphere as a table or a figure.",
    "fly": "Fly an entry and write its trajectory.",
    "database": "Compute coefficients over a grid, for any flight simulation.",
}


class Commands(click.Group):
    """A group that knows its commands by name and imports one only when it runs."""

    def list_commands(self, ctx: click.Context) -> list[str]:  # noqa: ARG002 - click's signature
        """Return the command names in the order of the help page."""
        return list(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:  # noqa: ARG002
        """Import a command."""
        if cmd_name not in COMMANDS:
            return None
        command: click.Command = importlib.import_module(f"aero.cli.{cmd_name}").command
        return command

    def resolve_command(
        self, ctx: click.Context, args: list[str]
    ) -> tuple[str | None, click.Command | None, list[str]]:
        """Name the nearest command where one is unknown."""
        if args and args[0] not in COMMANDS and not args[0].startswith("-"):
            from aero.errors import choose

            try:
                choose(args[0], COMMANDS, "command")
            except InputError as error:
                raise click.UsageError(str(error), ctx) from None
        return super().resolve_command(ctx, args)

    def format_commands(self, ctx: click.Context, formatter: click.HelpFormatter) -> None:  # noqa: ARG002
        """List the commands without importing any."""
        with formatter.section("Commands"):
            formatter.write_dl(list(COMMANDS.items()))


@click.group(
    cls=Commands,
    context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100},
    epilog="Results are for screening: not a basis for sizing thermal protection, clearing debris casualty "
    "risk or a licence.",
)
@click.version_option(aero.__version__, prog_name="aero")
def group() -> None:
    """Gas regimes, drag and heating along a flight through thin air.

    Start with `aero demo`, or `aero point --altitude 100km --speed 7.5km/s --length 1m`.
    """


def main() -> None:
    """Run the command line: exit 0 done, 2 bad input, 1 a fault of ours."""
    for name in ("SIGTERM", "SIGHUP"):
        if hasattr(signal, name):
            # end like an interrupt at the keyboard, so that nothing half-written stays
            signal.signal(getattr(signal, name), lambda number, _frame: sys.exit(128 + number))
    try:
        # not click's own main(): it would answer a closed pipe before we can
        with group.make_context("aero", sys.argv[1:]) as context:
            group.invoke(context)
        sys.stdout.flush()
    except click.exceptions.Exit as stop:
        sys.exit(stop.exit_code)
    except click.exceptions.NoArgsIsHelpError as error:
        click.echo(error.format_message())
    except click.ClickException as error:
        sys.exit(_bad_input(_usage(error)))
    except InputError as error:
        code = _bad_input(str(error))
        sys.stdout.flush()
        # a reader that was stopped half-way may still have threads, which at an ordinary end abort the process
        os._exit(code)
    except (click.Abort, KeyboardInterrupt):
        _tell("stopped; nothing was written.")
        sys.exit(130)
    except BrokenPipeError:
        # The reader of a pipe has gone (`| head`): not an error; keep Python from complaining at exit.
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        sys.exit(0)
    except OSError as error:
        place = f"{error.filename}: " if error.filename else ""
        sys.exit(_bad_input(f"{place}{error.strerror or error}."))
    except Exception as error:
        if os.environ.get("AERO_TRACEBACK"):
            raise
        _tell(
            f"a fault of ours, not of your input: {type(error).__name__}: {error}\n"
            "Run again with AERO_TRACEBACK=1 in the environment and report what it prints."
        )
        sys.exit(1)


def _usage(error: click.ClickException) -> str:
    """Return what is wrong with a call, and where its help is."""
    text = error.format_message().rstrip(".")
    context = getattr(error, "ctx", None)
    return f"{text}; see {context.command_path if context else 'aero'} --help."


def _bad_input(text: str) -> int:
    _tell(text)
    return 2


def _tell(text: str) -> None:
    with contextlib.suppress(OSError):
        click.echo(f"aero: {text}", err=True)
