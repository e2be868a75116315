"""A loaded document → the curves of the chosen layers, with an account in which nothing vanishes."""

from __future__ import annotations

import difflib
import fnmatch
from collections import Counter
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field

from ezdxf.document import Drawing as Document
from ezdxf.entities.dxfgfx import DXFGraphic

from edgetally.curves import Curve, Source
from edgetally.drawing.entities import ANNOTATION, UnreadError, curves_of, source_of
from edgetally.drawing.limits import MAX_CURVES
from edgetally.drawing.loading import Loaded
from edgetally.errors import DrawingError
from edgetally.findings import Finding
from edgetally.units import INSUNITS, INSUNITS_OTHER


@dataclass(frozen=True, slots=True)
class Skip:
    """An entity that was left out, and why."""

    source: Source
    reason: str
    annotation: bool


@dataclass(frozen=True, eq=False)
class Reading:
    """What the chosen layers gave. `read` = `used` + len(`skips`); `kinds` maps an entity kind to (read, used)."""

    layers: tuple[str, ...]
    curves: tuple[Curve, ...]
    skips: tuple[Skip, ...]
    read: int
    used: int
    kinds: dict[str, tuple[int, int]]
    elsewhere: int
    findings: tuple[Finding, ...] = field(default=())


class DrawingFile:
    """A loaded drawing, asked for its layers, its unit and its curves."""

    def __init__(self, loaded: Loaded) -> None:
        self._document: Document = loaded.document
        self.name = loaded.name
        self.sha256 = loaded.sha256
        self.dxf_version = str(loaded.document.dxfversion)
        self._by_layer: dict[str, list[DXFGraphic]] = {}
        self._spelling: dict[str, str] = {}
        for layer in loaded.document.layers:
            self._spelling.setdefault(layer.dxf.name.casefold(), layer.dxf.name)
        for entity in loaded.document.modelspace():
            name = entity.dxf.layer
            self._spelling.setdefault(name.casefold(), name)
            self._by_layer.setdefault(name.casefold(), []).append(entity)

    def header_unit(self) -> tuple[str | None, str]:
        """Return the unit that `$INSUNITS` names, None where no section is drawn in it, and the header's words."""
        code = int(self._document.header.get("$INSUNITS", 0) or 0)
        if code in INSUNITS:
            return INSUNITS[code], f"$INSUNITS = {code}"
        if code == 0:
            return None, "the header names no unit"
        return None, f"the header names {INSUNITS_OTHER.get(code, 'an unknown unit')} ($INSUNITS = {code})"

    def hidden(self, layer: str) -> str | None:
        """Return `off` or `frozen` where the layer is not visible, None where it is."""
        if layer not in self._document.layers:
            return None
        entry = self._document.layers.get(layer)
        return "frozen" if entry.is_frozen() else "off" if entry.is_off() else None

    def visible_layers(self) -> list[str]:
        """Return the visible layers that hold something in model space, in the order of the drawing."""
        names = [self._spelling[key] for key in self._spelling if key in self._by_layer]
        return [name for name in names if self.hidden(name) is None]

    def named_layers(self, patterns: Sequence[str]) -> tuple[list[str], list[Finding]]:
        """Return the visible layers that match the shell-style patterns, whatever the case, and the hidden ones as
        findings. Raises DrawingError for a pattern that matches no layer, or only hidden ones.
        """
        chosen: dict[str, None] = {}
        findings = []
        for pattern in patterns:
            matches = [name for key, name in self._spelling.items() if fnmatch.fnmatchcase(key, pattern.casefold())]
            if not matches:
                raise self._no_layer(pattern)
            seen = [name for name in matches if self.hidden(name) is None]
            for name in matches:
                state = self.hidden(name)
                if state is None:
                    continue
                count = len(self._by_layer.get(name.casefold(), []))
                message = f"layer {name} is {state}: {count} entities on it were not read; make it visible to use it"
                if not seen:
                    raise DrawingError(message, [Finding("layer-hidden", "error", message)])
                findings.append(Finding("layer-hidden", "warning" if count else "note", message))
            chosen.update(dict.fromkeys(seen))
        return list(chosen), findings

    def read(self, layers: Sequence[str]) -> Reading:
        """Turn every entity of model space on `layers` into curves or a skip.

        Raises DrawingError for an empty layer, and for an entity that must not be left out in silence.
        """
        keys = {name.casefold() for name in layers}
        entities = [e for key in self._by_layer if key in keys for e in self._by_layer[key]]
        if not entities:
            raise self._nothing_there(layers)
        curves: list[Curve] = []
        skips: list[Skip] = []
        read, used = Counter[str](), Counter[str]()
        for entity in entities:
            kind = entity.dxftype()
            read[kind] += 1
            try:
                made = _visible_curves(entity)
            except UnreadError as reason:
                skips.append(Skip(source_of(entity), str(reason), kind in ANNOTATION or bool(entity.dxf.invisible)))
                continue
            used[kind] += 1
            curves.extend(made)
            if len(curves) > MAX_CURVES:
                message = f"the layer holds more than {MAX_CURVES} curves, which are not read"
                raise DrawingError(message, [Finding("limit-reached", "error", message)])
        everything = sum(map(len, self._by_layer.values()))
        return Reading(
            tuple(layers),
            tuple(curves),
            tuple(skips),
            read.total(),
            used.total(),
            {kind: (read[kind], used[kind]) for kind in sorted(read)},
            everything - read.total(),
            tuple(_skip_findings(skips)),
        )

    def _no_layer(self, pattern: str) -> DrawingError:
        names = [self._spelling[k] for k in self._spelling if k in self._by_layer] or list(self._spelling.values())
        near = difflib.get_close_matches(pattern.casefold(), [n.casefold() for n in names], n=len(names), cutoff=0.0)
        ordered = list(dict.fromkeys([self._spelling[key] for key in near] + names))
        listed = ", ".join(ordered[:20]) + (f" and {len(ordered) - 20} more" if len(ordered) > 20 else "")
        message = f"the drawing has no layer {pattern}; those with something on them, nearest name first: {listed}"
        return DrawingError(message, [Finding("layer-missing", "error", message)])

    def _nothing_there(self, layers: Sequence[str]) -> DrawingError:
        named = ", ".join(layers) or "any visible layer"
        keys = {name.casefold() for name in layers}
        message = f"nothing is drawn on {'layer ' if layers else ''}{named} in model space"
        for layout in self._document.layouts:
            if layout.name != "Model":
                count = sum(1 for e in layout if not layers or e.dxf.layer.casefold() in keys)
                if count:
                    message += (
                        f"; the layout {layout.name} holds {count} entities there, but paper space is not read: move "
                        "the section to model space"
                    )
        return DrawingError(message, [Finding("layer-missing", "error", message)])


def _visible_curves(entity: DXFGraphic) -> list[Curve]:
    if entity.dxf.invisible:
        raise UnreadError("it is invisible")
    curves = curves_of(entity)
    made = [curve for curve in curves if curve.length > 0.0]
    if not made:
        raise UnreadError("it has no length")
    return made


def _skip_findings(skips: Iterable[Skip]) -> list[Finding]:
    """One finding for each kind and reason, so that a hundred texts are one line; the account lists every one."""
    groups: dict[tuple[str, str, bool], list[Skip]] = {}
    for skip in skips:
        groups.setdefault((skip.source.entity, skip.reason, skip.annotation), []).append(skip)
    findings = []
    for (kind, reason, annotation), group in groups.items():
        harmless = annotation or reason == "it has no length"
        what = f"{group[0].source}" if len(group) == 1 else f"{len(group)} {kind} entities"
        layers = ", ".join(dict.fromkeys(skip.source.layer for skip in group))
        message = f"{what} on layer {layers} left out: {reason}"
        handles = tuple(skip.source.handle for skip in group if skip.source.handle)
        findings.append(Finding("entity-skipped", "note" if harmless else "warning", message, handles=handles))
    return findings
