"""Layers and line types of a document: which are visible, which draw an outline."""

from __future__ import annotations

import difflib
import fnmatch
from collections.abc import Sequence

from ezdxf.document import Drawing as Document
from ezdxf.lldxf.const import DXFError

from edgetally.errors import DrawingError
from edgetally.findings import Finding

# the broken line types that CAD programs deliver, by the beginnings of their names (common practice, no source)
_BROKEN_NAMES = ("center", "centre", "hidden", "phantom", "dash", "dot", "divide", "border", "acad_iso")

NEVER_PLOTTED = "defpoints"
"""The layer of dimension points, which no CAD program plots: it carries no outline unless it is asked for by name."""


class Layers:
    """The layer table of a document, by name whatever the case, as DXF is."""

    def __init__(self, document: Document) -> None:
        self._document = document
        self._spelling: dict[str, str] = {}
        self._state: dict[str, str | None] = {}
        self._line_type: dict[str, str] = {}
        for layer in document.layers:
            key = layer.dxf.name.casefold()
            self._spelling.setdefault(key, layer.dxf.name)
            self._state[key] = "frozen" if layer.is_frozen() else "off" if layer.is_off() else None
            self._line_type[key] = str(layer.dxf.get("linetype", "CONTINUOUS"))
        self._broken: dict[str, bool] = {}

    def spelled(self, name: str) -> str:
        """Return the name as the layer table, or the first entity, spells it."""
        return self._spelling.setdefault(name.casefold(), name)

    def hidden(self, name: str) -> str | None:
        """Return `off` or `frozen` where the layer is not visible, None where it is."""
        return self._state.get(name.casefold())

    def line_type_of(self, name: str) -> str:
        return self._line_type.get(name.casefold(), "CONTINUOUS")

    def is_broken(self, line_type: str) -> bool:
        """Tell whether a line type has gaps, as centre lines, hidden edges and phantom parts have, outlines not."""
        key = line_type.casefold()
        if key not in self._broken:
            self._broken[key] = self._has_gaps(line_type)
        return self._broken[key]

    def _has_gaps(self, line_type: str) -> bool:
        if line_type.casefold() in ("continuous", "bylayer", "byblock"):
            return False
        try:
            pattern = self._document.linetypes.get(line_type).pattern_tags.tags
        except (DXFError, AttributeError):  # named, but not defined in the file: then the name has to tell
            return line_type.casefold().startswith(_BROKEN_NAMES)
        return any(tag.code == 49 and tag.value < 0 for tag in pattern)

    def named(self, patterns: Sequence[str], used: Sequence[str]) -> tuple[list[str], list[tuple[str, str]]]:
        """Return the visible layers that match the shell-style patterns, and (layer, state) of hidden ones.

        `used` are the layers that carry something. Raises DrawingError for a pattern that matches no layer.
        """
        for name in used:
            self.spelled(name)
        seen: dict[str, None] = {}
        hidden: list[tuple[str, str]] = []
        for pattern in patterns:
            matches = [name for key, name in self._spelling.items() if fnmatch.fnmatchcase(key, pattern.casefold())]
            if not matches:
                raise self._no_layer(pattern, used)
            for name in matches:
                state = self.hidden(name)
                if state is None:
                    seen.setdefault(name)
                elif (name, state) not in hidden:
                    hidden.append((name, state))
        return list(seen), hidden

    def _no_layer(self, pattern: str, used: Sequence[str]) -> DrawingError:
        names = list(dict.fromkeys(self.spelled(name) for name in used)) or list(self._spelling.values())
        keys = {name.casefold(): name for name in names}
        near = difflib.get_close_matches(pattern.casefold(), keys, n=max(1, len(keys)), cutoff=0.0)
        ordered = list(dict.fromkeys([keys[key] for key in near] + names))
        listed = ", ".join(ordered[:20]) + (f" and {len(ordered) - 20} more" if len(ordered) > 20 else "")
        message = f"the drawing has no layer {pattern}; those with something on them, nearest name first: {listed}"
        return DrawingError(message, [Finding("layer-missing", "error", message)])
