"""The command line: `settlepoint …`. Nothing slow is imported before a command runs."""

from __future__ import annotations

import io
import sys
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import TYPE_CHECKING, Any

import click

from axis.errors import CannotWrite, InputError, SettlepointError

if TYPE_CHECKING:
    from axis.study import Study

DEMO_AXIS = "carriage.toml"

PASS, FAIL, WRONG_INPUT, INTERNAL, INTERRUPTED = 0, 1, 2, 3, 130

FILE = click.argument("file", type=click.Path(path_type=Path))
CATALOGUE = click.option("--catalogue", type=click.Path(path_type=Path), help="Folder with catalogue tables.")
JSON = click.option("--json", "as_json", is_flag=True, help="Write one JSON object to standard output, nothing else.")
SEED = click.option("--seed", type=int, default=None, help="Seed of the search (default 1).")
RUNS = click.option(
    "--runs", type=click.IntRange(min=100), default=None, help="Budget of the search, simulated cycles."
)


def _version(context: click.Context, parameter: click.Parameter, asked: bool) -> None:
    if asked:
        from axis.sheet.shown import tool_version

        click.echo(f"settlepoint {tool_version()}")
        context.exit()


@click.group(context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 110})
@click.option(
    "--version",
    is_flag=True,
    is_eager=True,
    expose_value=False,
    callback=_version,
    help="Show the version and exit.",
)
def commands() -> None:
    """Size and tune a positioning axis before it exists.

    Example: settlepoint demo
    """


@commands.command()
@click.argument("folder", type=click.Path(path_type=Path), default=Path("settlepoint-demo"))
@SEED
@RUNS
def demo(folder: Path, seed: int | None, runs: int | None) -> int:
    """Do the whole job on a shipped axis of invented data: size, tune, check, write axis file and settings sheet.

    Example: settlepoint demo
    """
    from axis.files.catalogue import shipped_folder
    from axis.files.write import make_folder, replace_file, save_loops
    from axis.sheet.render import render
    from axis.sheet.terminal import check_text, size_text, tune_text
    from axis.study import load
    from axis.study import size as size_study

    make_folder(folder)
    file = folder / DEMO_AXIS
    replace_file(file, (shipped_folder() / DEMO_AXIS).read_bytes())
    study = size_study(load(file))
    click.echo(size_text(study))
    with _progress() as progress:
        study = _tuned(study, seed, runs, progress)
    click.echo(tune_text(study))
    click.echo(check_text(study))
    written = [file]
    if study.tuned is not None:
        save_loops(file, study.document, study.tuned.loops)
    for ending in (".pdf", ".json"):
        written.append(folder / f"settings-sheet{ending}")
        replace_file(written[-1], render(study, ending, None))
    click.echo("\n".join(f"wrote {path}" for path in written))
    return _code(study)


@commands.command()
@click.argument("file", type=click.Path(path_type=Path))
def new(file: Path) -> int:
    """Write a commented axis file to start from; an existing file is left alone.

    Example: settlepoint new my-axis.toml
    """
    from axis.files.template import template
    from axis.files.write import replace_file

    if file.exists():
        raise CannotWrite(f"{file} exists and is left as it is; name another file")
    replace_file(file, template().encode())
    click.echo(f"wrote {file}; next: settlepoint size {file}")
    return PASS


@commands.command()
@FILE
@CATALOGUE
@JSON
def size(file: Path, catalogue: Path | None, as_json: bool) -> int:
    """Demand, checks of motor, drive and transmission, verdict.

    Example: settlepoint size my-axis.toml
    """
    from axis.sheet.as_json import size_json
    from axis.sheet.terminal import size_text
    from axis.study import load
    from axis.study import size as size_study

    study = size_study(load(file, catalogue))
    _print(study, as_json, size_json, size_text)
    return _code(study)


@commands.command()
@FILE
@CATALOGUE
@JSON
@SEED
@RUNS
@click.option("--write", is_flag=True, help="Put the settings into [loops] of the file; comments and order stay.")
def tune(file: Path, catalogue: Path | None, as_json: bool, seed: int | None, runs: int | None, write: bool) -> int:
    """Design the loops, search settings on the simulation, verify them at every corner.

    Example: settlepoint tune my-axis.toml --write
    """
    from axis.files.write import refuse_unwritable, save_loops
    from axis.sheet.as_json import tune_json
    from axis.sheet.terminal import check_text, tune_text
    from axis.study import load

    loaded = load(file, catalogue)
    if write:
        refuse_unwritable(file)
    with _progress() as progress:
        study = _tuned(loaded, seed, runs, progress)
    _print(study, as_json, tune_json, lambda tuned: f"{tune_text(tuned)}\n{check_text(tuned)}")
    if write and study.tuned is not None:
        save_loops(file, study.document, study.tuned.loops)
        click.echo(f"wrote [loops] into {file}", err=as_json)
    return _code(study)


@commands.command()
@FILE
@CATALOGUE
@JSON
def check(file: Path, catalogue: Path | None, as_json: bool) -> int:
    """Simulate every move at every corner with the [loops] in the file.

    Example: settlepoint check my-axis.toml
    """
    from axis.sheet.as_json import check_json
    from axis.sheet.terminal import check_text
    from axis.study import check as check_study
    from axis.study import load

    with _progress() as progress:
        study = check_study(load(file, catalogue), progress)
    _print(study, as_json, check_json, check_text)
    return _code(study)


@commands.command()
@FILE
@CATALOGUE
@click.option("-o", "--output", type=click.Path(path_type=Path), required=True, help="Sheet to write: .pdf or .json.")
@click.option("--date", default=None, help="Date to print on the sheet; none is printed when left out.")
def sheet(file: Path, catalogue: Path | None, output: Path, date: str | None) -> int:
    """Size and check the axis as its file stands and write the settings sheet.

    Example: settlepoint sheet my-axis.toml -o my-axis.pdf
    """
    from axis.files.write import refuse_unwritable, replace_file
    from axis.sheet.render import ENDINGS, render
    from axis.study import check as check_study
    from axis.study import load
    from axis.study import size as size_study

    if output.suffix.lower() not in ENDINGS:
        raise click.BadParameter(f"'{output}' must end in {' or '.join(ENDINGS)}", param_hint="-o")
    if output.exists() and file.exists() and output.samefile(file):
        raise click.BadParameter(f"'{output}' is the axis file itself; name another file", param_hint="-o")
    refuse_unwritable(output)
    with _progress() as progress:
        study = check_study(size_study(load(file, catalogue)), progress)
    replace_file(output, render(study, output.suffix.lower(), date))
    click.echo(f"wrote {output}; verdict: {study.verdict}")
    return _code(study)


@commands.command()
@click.option("--port", type=click.IntRange(1024, 65535), default=None, help="Port on this machine.")
@click.option("--no-browser", is_flag=True, help="Start the server without opening a browser.")
def app(port: int | None, no_browser: bool) -> int:
    """Open the front end in the browser; it listens on this machine only.

    Example: settlepoint app
    """
    from axis.screens.launch import launch

    return launch(port, not no_browser)


def _tuned(study: Study, seed: int | None, runs: int | None, progress: Callable[[float, str], None]) -> Study:
    from axis.study import DEFAULT_RUNS, DEFAULT_SEED
    from axis.study import tune as tune_study

    return tune_study(study, DEFAULT_SEED if seed is None else seed, DEFAULT_RUNS if runs is None else runs, progress)


def _code(study: Study) -> int:
    return PASS if study.verdict == "pass" else FAIL


def _print(
    study: Study, as_json: bool, to_json: Callable[[Study], dict[str, Any]], to_text: Callable[[Study], str]
) -> None:
    if as_json:
        import json

        click.echo(json.dumps(to_json(study), allow_nan=False, indent=1))
    else:
        click.echo(to_text(study))


@contextmanager
def _progress() -> Iterator[Callable[[float, str], None]]:
    """A progress line on standard error; silent where nobody watches."""
    if not sys.stderr.isatty():
        yield lambda share, best: None
        return
    from rich.console import Console
    from rich.progress import BarColumn, Progress, TextColumn, TimeElapsedColumn

    columns = (
        BarColumn(),
        TextColumn("{task.percentage:>3.0f} %"),
        TimeElapsedColumn(),
        TextColumn("{task.description}"),
    )
    with Progress(*columns, console=Console(stderr=True), transient=True) as bar:
        task = bar.add_task("starting", total=1.0)
        yield lambda share, best: bar.update(task, completed=share, description=best)


def main(arguments: list[str] | None = None) -> None:
    """Run one command; errors are sentences on standard error, the exit code tells what happened."""
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, io.TextIOWrapper):
            stream.reconfigure(errors="replace")  # a terminal or pipe of few characters still gets the figures
    sys.exit(run(arguments))


def run(arguments: list[str] | None = None) -> int:
    """Run one command and return its exit code."""
    try:
        return int(commands.main(args=arguments, prog_name="settlepoint", standalone_mode=False) or PASS)
    except click.ClickException as error:
        error.show()
        return WRONG_INPUT
    except (KeyboardInterrupt, click.Abort):
        click.echo("interrupted; nothing half-written is left", err=True)
        return INTERRUPTED
    except InputError as error:
        for problem in error.problems:
            click.echo(str(problem), err=True)
        return WRONG_INPUT
    except CannotWrite as error:
        click.echo(str(error), err=True)
        return INTERNAL
    except SettlepointError as error:
        click.echo(str(error), err=True)
        return FAIL
    except BrokenPipeError:
        return INTERNAL
    except Exception as error:  # the last fence: a user never sees a traceback
        click.echo(f"internal error, please report it with the axis file: {type(error).__name__}: {error}", err=True)
        return INTERNAL
