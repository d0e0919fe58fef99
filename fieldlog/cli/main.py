"""The `ergbook` command. Commands are imported only when they are called: numbers take a second to load."""

from __future__ import annotations

import importlib
import sys
from typing import Any, Final

import click

from fieldlog import __version__
from fieldlog.errors import Refusal

COMMANDS: Final = {
    "check": "fieldlog.cli.check:check",
    "compare": "fieldlog.cli.compare:compare",
    "demo": "fieldlog.cli.demo:demo",
    "export": "fieldlog.cli.export:export",
    "import": "fieldlog.cli.import_:import_",
    "migration": "fieldlog.cli.migration:migration",
    "serve": "fieldlog.cli.serve:serve",
    "stats": "fieldlog.cli.stats:stats",
    "surveys": "fieldlog.cli.surveys:surveys",
}


class _Lazy(click.Group):
    """A group whose commands are looked up by name and imported when needed."""

    def list_commands(self, ctx: click.Context) -> list[str]:
        return sorted(COMMANDS)

    def get_command(self, ctx: click.Context, cmd_name: str) -> click.Command | None:
        target = COMMANDS.get(cmd_name)
        if target is None:
            return None
        module, name = target.split(":")
        command: click.Command = getattr(importlib.import_module(module), name)
        return command


@click.group(cls=_Lazy, context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100})
@click.version_option(__version__, prog_name="ergbook")
def cli() -> None:
    """Field notebook and statistics desk for dune and desert surveys."""


def main(arguments: list[str] | None = None) -> Any:
    """Run a command. Exit codes: 0 done, 1 the work failed, 2 the input or the options are wrong."""
    try:
        code = cli.main(args=arguments, prog_name="ergbook", standalone_mode=False)
    except click.exceptions.Abort:
        sys.exit(1)
    except click.exceptions.NoArgsIsHelpError as error:
        error.show()
        sys.exit(2)
    except click.UsageError as error:
        called = error.ctx.command_path if error.ctx else "ergbook"
        _say(f"{error.format_message().rstrip('.')}. Try '{called} --help'")
        sys.exit(2)
    except click.ClickException as error:
        _say(error.format_message())
        sys.exit(1)
    except Refusal as refusal:
        _say(str(refusal))
        sys.exit(1 if isinstance(refusal, OSError) else 2)
    except OSError as error:
        _say(str(error))
        sys.exit(1)
    sys.exit(code if isinstance(code, int) else 0)


def _say(error: str) -> None:
    """An error is one line."""
    click.echo(f"ergbook: {' '.join(error.split())}", err=True)


if __name__ == "__main__":
    main()
