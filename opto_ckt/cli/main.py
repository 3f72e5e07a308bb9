"""The program: its commands, how it ends, and what of an error the user sees.

Exit codes: 0 done, every requirement met · 1 values exist, a requirement fails · 2 usage · 3 bad design or part file ·
4 no values exist · 5 outside program missing or failed · 70 fault of this program · 74 output cannot be written ·
130 interrupted.
"""

from __future__ import annotations

import gc
import os
import sys
from collections.abc import Mapping, Sequence
from importlib import import_module
from typing import NoReturn

import click

from opto_ckt import __version__
from opto_ckt.cli.streams import discard, prepare
from opto_ckt.errors import InfeasibleError, OptoCktError

COMMANDS: Mapping[str, str] = {
    "size": "Size a circuit, check it at its corners, print what was found.",
    "netlist": "SPICE decks of a sized circuit.",
    "bom": "Bill of materials of one design or several together.",
    "schematic": "Schematic of a sized circuit as SVG.",
    "crosscheck": "Run the decks in a simulator beside the prediction.",
    "formula": "Symbolic model and sizing relations of a circuit.",
    "circuits": "List the circuits, with -v their figures.",
    "parts": "List the parts of part files.",
    "start": "Write a design file or a part record to fill in.",
    "completion": "Script that completes commands in a shell.",
}
"""Each command lives in the module of this package that has its name, and is loaded when it is called."""

INTERNAL, NO_OUTPUT, INTERRUPTED = 70, 74, 130
DEBUG = "OPTO_CKT_DEBUG"
EPILOG = """\
\b
DESIGN is a design file (TOML); - reads it from standard input.
`opto-ckt start tia > my.toml` writes one to begin from.

\b
Exit codes:
  0   done, every requirement met     4    no values exist
  1   values exist, a requirement     5    outside program missing or failed
      is missed at its worst corner   70   fault of this program
  2   wrong usage                     74   output cannot be written
  3   bad design or part file         130  interrupted

\b
NO_COLOR switches colour off; OPTO_CKT_DEBUG=1 shows where a fault arose.
"""


class LazyGroup(click.Group):
    """Commands that are imported one at a time, when they are called."""

    def list_commands(self, ctx: click.Context) -> list[str]:
        """Names in the order of the table."""
        return list(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:
        """Import the one that is wanted."""
        if cmd_name not in COMMANDS:
            return None
        command: click.Command = import_module(f"opto_ckt.cli.{cmd_name}").command
        return command

    def format_commands(self, ctx: click.Context, formatter: click.HelpFormatter) -> None:
        """List the commands without importing any."""
        with formatter.section("Commands"):
            formatter.write_dl(list(COMMANDS.items()))

    def resolve_command(
        self, ctx: click.Context, args: list[str]
    ) -> tuple[str | None, click.Command | None, list[str]]:
        """Refuse an unknown command with the one that was probably meant."""
        if args[0] not in COMMANDS and not args[0].startswith("-"):
            from opto_ckt.cli.suggestions import meant  # loaded for this message alone

            hint = meant(args[0], COMMANDS) or f"; there are {', '.join(COMMANDS)}"
            ctx.fail(f"there is no command '{args[0]}'{hint}")
        return super().resolve_command(ctx, args)


@click.group(
    cls=LazyGroup, epilog=EPILOG, context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100}
)
@click.version_option(__version__, message="opto-ckt %(version)s")
def program() -> None:
    """Size LED and laser drivers and photodiode receivers from data sheets, exactly and at their corners."""


def main(arguments: Sequence[str] | None = None) -> NoReturn:
    """Run one command line and end the process with its exit code."""
    gc.disable()  # a short run: collecting while modules load costs a tenth of it and frees next to nothing
    os.environ.setdefault("PYDANTIC_DISABLE_PLUGINS", "__all__")  # looking for them reads every installed package
    os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")  # no matrix here is worth a second thread
    prepare()
    try:
        code = _run(arguments)
        _flush()
    except KeyboardInterrupt:
        code = INTERRUPTED
    except OSError as error:
        code = _no_output(error)
    sys.exit(code)


def _run(arguments: Sequence[str] | None) -> int:
    try:
        return int(program.main(args=arguments, prog_name="opto-ckt", standalone_mode=False) or 0)
    except click.Abort:
        return INTERRUPTED
    except click.ClickException as error:
        error.show()
        return 2
    except OptoCktError as error:
        _say(_told(error))
        return error.exit_code
    except OSError:
        raise
    except Exception as error:
        if os.environ.get(DEBUG, "") not in ("", "0"):
            raise
        _say(f"opto-ckt: fault of this program, not of the design: {type(error).__name__}; {DEBUG}=1 shows where")
        return INTERNAL


def _told(error: OptoCktError) -> str:
    if isinstance(error, InfeasibleError) and error.remedies:
        ways = [f"  {way}" for way in error.remedies]
        return "\n".join([f"No values exist: {error.reason}.", "Any one of these would do:", *ways])
    return str(error)


def _say(text: str) -> None:
    click.echo(text, err=True)


def _flush() -> None:
    for stream in (sys.stdout, sys.stderr):
        if stream is not None:
            stream.flush()


def _no_output(error: OSError) -> int:
    discard(sys.stdout)
    if not isinstance(error, BrokenPipeError):
        _say(f"opto-ckt: output cannot be written: {error.strerror or error}")
    return NO_OUTPUT
