"""Options from a file: `edgetally.toml` beside the drawing or in a folder above it, or the one given with --config.

A key is the long name of an option. Keys at the top hold for every command, those in a table, as [sheet], for that
command, which they then decide. What stands on the command line decides over both.
"""

from __future__ import annotations

import datetime
import difflib
import functools
import os
import tomllib
from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any, TypeVar

import click
from click.core import ParameterSource

from edgetally.errors import UsageError

if TYPE_CHECKING:
    from edgetally.results import OptionsFile

Command = TypeVar("Command", bound=Callable[..., Any])

NAME = "edgetally.toml"
AGREED = ("as_json", "as_csv", "symbols")
"""Options that hold for a command as a whole: the files of several drawings must agree on them."""
EXCLUDING = (
    ("each", "together", "pick"), ("as_json", "as_csv"), ("material", "layer"), ("material", "density"),
    ("material", "each"), ("material", "pick"),
)  # fmt: skip
"""Options that contradict each other: one from a stronger place puts the others from a weaker one out of force."""
_NOT_IN_FILES = ("config", "no_config", "help")
_META = "edgetally.options_files"

_OPTIONS = [
    click.option(
        "--config",
        type=click.Path(),
        metavar="FILE",
        help=f"Take options from FILE; without it from {NAME} beside the drawing or in the nearest folder above it.",
    ),
    click.option("--no-config", is_flag=True, help=f"Take no options from any {NAME}."),
]


@dataclass(frozen=True, slots=True)
class _Known:
    """An option of some command: its name in a file, and what click makes of it."""

    key: str
    option: click.Option


@dataclass(frozen=True, eq=False)
class _Settings:
    """What a file says to one command: values by the parameter's name, and the keys they came under."""

    shown: str
    values: dict[str, Any]
    keys: dict[str, str]


def config_options(command: Command) -> Command:
    """Add --config and --no-config, and let the command see the options of the file as if they had been given.

    Where drawings are worked on one by one, what their files do not agree on is left to `with_options_file`, drawing by
    drawing; two that are compared must agree on everything.
    """

    @functools.wraps(command)
    def seen(*args: Any, **given: Any) -> Any:
        for own in ("config", "no_config"):
            given.pop(own, None)
        one_by_one = "drawings" in given
        drawings = given["drawings"] if one_by_one else [given[k] for k in ("drawing", "old", "new") if k in given]
        return command(*args, **_agreed(drawings or (None,), given, one_by_one=one_by_one))

    made: Any = seen
    for option in reversed(_OPTIONS):
        made = option(made)
    return made  # type: ignore[no-any-return]


def with_options_file(drawing: str | None, options: Mapping[str, Any]) -> tuple[dict[str, Any], OptionsFile | None]:
    """Return the options with those that the drawing's file sets, and which file set which; None without a file.

    Raises UsageError for a file that cannot be read, an unknown key or a value of the wrong kind.
    """
    context = click.get_current_context(silent=True)
    settings = None if context is None else _settings(context, drawing)
    if context is None or settings is None:
        return dict(options), None
    from edgetally.results import OptionsFile

    found = _in_force(context, settings)
    keys = tuple(settings.keys[name] for name in found)
    return {**options, **found}, OptionsFile(settings.shown, keys) if keys else None


def _agreed(drawings: Iterable[str | None], given: dict[str, Any], *, one_by_one: bool) -> dict[str, Any]:
    context = click.get_current_context()
    each = [(s, _in_force(context, s) if s else {}) for s in (_settings(context, d) for d in drawings)]
    merged = dict(given)
    first = each[0][1]
    for name in dict.fromkeys(name for _, values in each for name in values):
        if all(name in values and values[name] == first.get(name) for _, values in each):
            merged[name] = first[name]
        elif name in AGREED or not one_by_one:
            files = ", ".join(dict.fromkeys(settings.shown for settings, _ in each if settings))
            key = next(settings.keys[name] for settings, values in each if settings and name in values)
            raise UsageError(f"the drawings do not agree on {key}, by {files}: give it on the command line")
    return merged


def _in_force(context: click.Context, settings: _Settings) -> dict[str, Any]:
    """Return what of a file is not decided on the command line."""
    typed = {
        name: value
        for name, value in context.params.items()
        if context.get_parameter_source(name) is ParameterSource.COMMANDLINE
    }
    return _weaker(settings.values, typed)


def _weaker(below: Mapping[str, Any], above: Mapping[str, Any]) -> dict[str, Any]:
    """Return what of `below` neither stands in `above` nor contradicts it."""
    out = {name for group in EXCLUDING if any(above.get(name) for name in group) for name in group}
    return {name: value for name, value in below.items() if name not in above and name not in out}


# ---------------------------------------------------------------------- files


def _settings(context: click.Context, drawing: str | None) -> _Settings | None:
    """Return what the file that applies to a drawing says to the command at hand; each file is read once."""
    named, none = context.params.get("config"), context.params.get("no_config")
    if named is not None and none:
        raise UsageError("--config and --no-config contradict each other: give one of them")
    path = named if named is not None else None if none else _nearest(drawing)
    if path is None:
        return None
    known: dict[str, _Settings] = context.meta.setdefault(_META, {})
    if path not in known:
        shown = path if named is not None else os.path.relpath(path, os.path.dirname(os.path.abspath(str(drawing))))
        known[path] = _read(context, path, shown)
    return known[path]


def _nearest(drawing: str | None) -> str | None:
    """Return the file beside a drawing or in the nearest folder above it; standard input has no folder."""
    if drawing is None or drawing == "-":
        return None
    folder = Path(os.path.abspath(drawing)).parent
    places = (str(above / NAME) for above in (folder, *folder.parents))
    return next((place for place in places if os.path.isfile(place)), None)


def _read(context: click.Context, path: str, shown: str) -> _Settings:
    try:
        with open(path, "rb") as file:
            tables = tomllib.load(file)
    except OSError as error:
        raise UsageError(f"{path} cannot be read: {error.strerror or error}") from None
    except (tomllib.TOMLDecodeError, UnicodeDecodeError) as error:
        raise UsageError(f"{path} is not a file of options in TOML: {error}") from None
    root = context.find_root().command
    commands = root.commands if isinstance(root, click.Group) else {}
    each = {name: _known(command) for name, command in commands.items()}
    here = context.command.name or ""
    known = {option.key: option for own in each.values() for option in own.values()}
    own_keys = each.get(here, {})
    top: dict[str, Any] = {}
    for key, value in tables.items():
        if isinstance(value, dict) and key in each:
            continue
        found = _found(path, key, known, "", tuple(each), value)
        made = _made(path, key, found.option, value)
        if found.key in own_keys:
            # the same key may be another kind of option elsewhere: this command's own counts
            mine = own_keys[found.key].option
            top[mine.name or ""] = made if mine is found.option else _made(path, key, mine, value)
    own: dict[str, Any] = {}
    for name, table in tables.items():
        if isinstance(table, dict):
            for key, value in table.items():
                found = _found(path, key, each[name], f" in [{name}]", (), value)
                made = _made(path, f"[{name}] {key}", found.option, value)
                if name == here:
                    own[found.option.name or ""] = made
    values = {**_weaker(top, own), **own}
    keys = {option.option.name or "": option.key.replace("_", "-") for option in own_keys.values()}
    return _Settings(shown, values, keys)


def _known(command: click.Command) -> dict[str, _Known]:
    """Return the options of a command by their long names, with underscores."""
    found = {}
    for option in command.params:
        if isinstance(option, click.Option):
            for word in option.opts:
                if word.startswith("--") and option.name not in _NOT_IN_FILES:
                    key = _plain(word)
                    found[key] = _Known(key, option)
    return found


def _plain(key: str) -> str:
    return key.lstrip("-").replace("-", "_").lower()


def _found(path: str, key: str, known: Mapping[str, _Known], where: str, tables: tuple[str, ...], value: Any) -> _Known:
    found = known.get(_plain(key))
    if found is None or isinstance(value, dict):
        what = "table" if isinstance(value, dict) else "option"
        names = list(tables) if isinstance(value, dict) else [k.replace("_", "-") for k in known]
        near = difflib.get_close_matches(_plain(key).replace("_", "-"), names, n=1, cutoff=0.0)
        best = f"; the nearest known one is {near[0]}" if near else ""
        raise UsageError(f"{path}: the {what} {key!r}{where} is not known{best}")
    if isinstance(found.option.type, click.Path):
        raise UsageError(f"{path}: {key}{where} names a file of its own: give it on the command line")
    return found


def _made(path: str, key: str, option: click.Option, value: Any) -> Any:
    """Return a value of the file as click would hand it over. Raises UsageError where it is of the wrong kind."""
    if option.multiple:
        return tuple(_one(path, key, option, one) for one in (value if isinstance(value, list) else [value]))
    return _one(path, key, option, value)


def _one(path: str, key: str, option: click.Option, value: Any) -> Any:
    number = isinstance(value, int | float) and not isinstance(value, bool)
    if option.is_flag:
        expected, fits = "true or false", isinstance(value, bool)
    elif isinstance(option.type, click.types.FloatParamType | click.types.IntParamType):
        expected, fits = "a number", number
    else:
        expected, fits = "a text", number or isinstance(value, str | datetime.date)
    if not fits:
        several = ", or a list of them" if option.multiple else ""
        raise UsageError(f"{path}: {key} must be {expected}{several}, not {_written(value)}")
    if option.is_flag:
        return value
    plain = value if isinstance(option.type, click.types.FloatParamType) else str(value)
    try:
        return option.type.convert(plain, option, None)
    except click.BadParameter as error:
        raise UsageError(f"{path}: {key} = {_written(value)}: {error.message}") from None


def _written(value: Any) -> str:
    """A value as a file of options spells it."""
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, dict | list):
        return "a table" if isinstance(value, dict) else "a list"
    return repr(value) if isinstance(value, str) else str(value)
