"""The shell: read what was typed, call one function, print, and end with the right code."""

from __future__ import annotations

import os
import sys
from collections.abc import Sequence
from importlib import import_module
from pathlib import Path
from typing import TYPE_CHECKING, Any

import click

from tenkpc import __version__, templates
from tenkpc.errors import ComputationError, InputError, suggestion

if TYPE_CHECKING:
    from tenkpc.detector.detector import Detector
    from tenkpc.forecast.forecast import Forecast
    from tenkpc.source.burst import Burst

BURST = "ordinary-collapse"
DISTANCE = "10 kpc"
CONVERSIONS = ("adiabatic", "equilibrated", "unconverted")
ORDERINGS = ("inverted", "normal")
FILES = ("burst", "detector")
LISTS = ("bursts", "detectors", "interactions", "materials")


class Shell(click.Group):
    """A group of commands that turns our errors into plain lines and exit codes."""

    def invoke(self, context: click.Context) -> Any:
        """Run a command; 2 is for what was typed or read, 1 for a computation that failed."""
        try:
            return super().invoke(context)
        except InputError as error:
            click.echo(str(error), err=True)
            context.exit(2)
        except ComputationError as error:
            click.echo(str(error), err=True)
            context.exit(1)

    def resolve_command(
        self, context: click.Context, args: list[str]
    ) -> tuple[str | None, click.Command | None, list[str]]:
        """Find a command, or name the nearest one."""
        if args and args[0] not in self.commands and not args[0].startswith("-"):
            hint = suggestion(args[0], self.commands)
            message = f"no command is called {args[0]!r}{hint}"
            raise click.UsageError(message, context)
        return super().resolve_command(context, args)


@click.group(cls=Shell, context_settings={"help_option_names": ["-h", "--help"]})
@click.version_option(__version__, prog_name="tenkpc")
def main() -> None:
    """Forecast what a detector records when a core-collapse supernova goes off nearby."""


@main.command()
@click.argument("detector")
@click.option("--burst", default=BURST, show_default=True, help="A preset or a burst file.")
@click.option("--distance", default=DISTANCE, show_default=True, help="With its unit.")
@click.option(
    "--conversion",
    type=click.Choice(CONVERSIONS),
    default="adiabatic",
    show_default=True,
    help="What happens to the flavours in the star.",
)
@click.option(
    "--ordering",
    type=click.Choice(ORDERINGS),
    default="normal",
    show_default=True,
    help="Of the neutrino masses, for adiabatic conversion.",
)
@click.option("--only", "only", multiple=True, metavar="KEY", help="Only these interactions.")
@click.option("--between", nargs=2, metavar="T1 T2", help="Only this window after bounce.")
@click.option("--json", "as_json", is_flag=True, help="Print numbers and inputs as JSON.")
@click.option(
    "--out",
    metavar="FILE",
    help="Write to FILE instead: .txt, .html, .md or .tex the page, .json all, .csv the counts.",
)
def forecast(
    detector: str,
    burst: str,
    distance: str,
    conversion: str,
    ordering: str,
    only: tuple[str, ...],
    between: tuple[str, str] | None,
    as_json: bool,
    out: str | None,
) -> None:
    """Count what DETECTOR, a file or a name of the gallery, records of a burst."""
    from tenkpc.forecast.forecast import Forecast
    from tenkpc.propagation.conversion import parse

    described = _detector(detector)
    made = Forecast(
        described,
        _burst(burst),
        distance=distance,
        conversion=parse(conversion, ordering),
        interactions=_only(only, described),
    )
    if between:
        made = made.within(time=between)
    if out is not None:
        _write(Path(out), _as_file(made, Path(out)), "--out")
    else:
        click.echo(made.to_json() if as_json else repr(made))


@main.command()
@click.argument("file")
@click.option("--json", "as_json", is_flag=True, help="Print what was found as JSON.")
def check(file: str, as_json: bool) -> None:
    """Check FILE, a detector or burst file, and say what it describes."""
    from tenkpc import textfiles

    text = textfiles.read_text(file)
    if "component" in textfiles.document(text, file):
        words = str(_load("tenkpc.source.burst", "Burst").load(file).summary())
    else:
        words = _load("tenkpc.detector.detector", "Detector").load(file).describe()
    if as_json:
        import json

        words = json.dumps({"file": file, "problems": 0, "description": words.splitlines()})
    click.echo(words)


@main.command()
@click.argument("kind", type=click.Choice(FILES))
@click.argument("file")
@click.option("--medium", type=click.Choice(templates.MEDIA), help="What a detector sees by.")
def new(kind: str, file: str, medium: str | None) -> None:
    """Write FILE to begin with: a valid detector or burst, every key explained."""
    place = Path(file)
    if place.exists():
        message = f"{file}: there is such a file already, and it is left as it is"
        raise InputError(message)
    if medium and kind != "detector":
        message = f"--medium: only a detector has one, not a {kind}"
        raise InputError(message)
    text = templates.detector(medium or templates.MEDIA[0])
    if kind == "burst":
        text = templates.burst()
    _write(place, text, "FILE")
    click.echo(f"{file}: written; tenkpc check {file} says what it describes")


@main.command("list")
@click.argument("what", type=click.Choice(LISTS))
@click.argument("name", required=False)
@click.option("--checks", "with_checks", is_flag=True, help="Interactions against measurements.")
@click.option("--json", "as_json", is_flag=True, help="Print the list as JSON.")
def list_(what: str, name: str | None, with_checks: bool, as_json: bool) -> None:
    """List what comes with the package, or say all about one NAME."""
    from tenkpc.show import catalogue, checks

    if with_checks:
        if what != "interactions":
            message = f"--checks: only interactions are held against measurements, not {what}"
            raise InputError(message)
        click.echo(checks.as_json(name) if as_json else checks.as_text(name))
        return
    click.echo(catalogue.as_json(what, name) if as_json else catalogue.as_text(what, name))


def _load(module: str, name: str) -> Any:
    return getattr(import_module(module), name)


def _is_path(name: str) -> bool:
    return name.endswith(".toml") or os.sep in name or Path(name).is_file()


def _detector(name: str) -> Detector:
    """Load a detector file, or take a detector of the gallery."""
    kind = _load("tenkpc.detector.detector", "Detector")
    made: Detector = kind.load(name) if _is_path(name) else kind.gallery(name)
    return made


def _burst(name: str) -> Burst:
    """Load a burst file, or take a preset."""
    kind = _load("tenkpc.source.burst", "Burst")
    made: Burst = kind.load(name) if _is_path(name) else kind.preset(name)
    return made


def _only(keys: Sequence[str], detector: Detector) -> dict[str, bool]:
    """Switch every interaction off but the named ones; none named leaves all as they are."""
    if not keys:
        return {}
    for key in keys:
        detector.reaction(key)
    return {key: False for key in detector.reactions if key not in keys}


def _as_file(made: Forecast, path: Path) -> str:
    from tenkpc import rendering
    from tenkpc.forecast import page

    match path.suffix:
        case ".txt":
            return repr(made) + "\n"
        case ".html":
            head = '<!doctype html><meta charset="utf-8"><title>tenkpc</title>'
            return head + rendering.html(page.results(made)) + "\n"
        case ".md":
            return made.to_markdown()
        case ".tex":
            return made.to_latex()
        case ".json":
            return made.to_json() + "\n"
        case ".csv":
            lines = (f"# {line}".rstrip() for line in made.explain().splitlines())
            return "\n".join([*lines, made.counts.to_csv()])
        case _:
            message = (
                "--out: expected a name that ends in .txt, .html, .md, .tex, .json or .csv; "
                f"found {path}"
            )
            raise InputError(message)


def _write(path: Path, text: str, argument: str) -> None:
    """Write a file so that it is there whole or not at all."""
    import tempfile

    try:
        handle, name = tempfile.mkstemp(dir=path.parent, prefix=f".{path.name}.")
        with os.fdopen(handle, "w", encoding="utf-8") as file:
            file.write(text)
        Path(name).chmod(0o644)
        Path(name).replace(path)
    except OSError as error:
        message = f"{argument}: cannot write {path}: {error.strerror or error}"
        raise InputError(message) from None


if __name__ == "__main__":
    sys.exit(main())
