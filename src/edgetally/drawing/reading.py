"""A loaded document → the curves of the chosen layers, with an account in which nothing vanishes."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from functools import cached_property

from ezdxf.document import Drawing as Document

from edgetally.curves import Curve, Source
from edgetally.drawing.blocks import Blocks, Leaf
from edgetally.drawing.dimensions import DimensionRow, dimension_findings, dimensions_of
from edgetally.drawing.entities import ANNOTATION, UnreadError, curves_of, is_fitted, source_of
from edgetally.drawing.hatches import boundary_of
from edgetally.drawing.labels import labels_of
from edgetally.drawing.layers import NEVER_PLOTTED, Layers
from edgetally.drawing.lettering import Lettering, lettering_of
from edgetally.drawing.limits import MAX_CURVES
from edgetally.drawing.loading import Loaded
from edgetally.errors import DrawingError
from edgetally.findings import Finding
from edgetally.units import INSUNITS, INSUNITS_OTHER

LEVEL = 1e-9
"""Heights below this are 0: the rounding of 9 decimals in a file."""


@dataclass(frozen=True, slots=True)
class Skip:
    """An entity that was left out, and why; `harmless` where no outline can miss it."""

    source: Source
    reason: str
    harmless: bool


@dataclass(frozen=True, eq=False)
class Reading:
    """What the chosen layers gave. `read` = `used` + len(`skips`); `kinds` maps an entity kind to (read, used).

    An entity inside a block counts once for each place in which it is seen. `hatches` are boundaries that were not
    needed as a source, for comparison.
    """

    layers: tuple[str, ...]
    curves: tuple[Curve, ...]
    skips: tuple[Skip, ...]
    read: int
    used: int
    kinds: dict[str, tuple[int, int]]
    elsewhere: int
    hatches: tuple[tuple[Source, tuple[Curve, ...]], ...] = field(default=())
    from_hatches: bool = False
    findings: tuple[Finding, ...] = field(default=())


def by_hatches(found: Reading | DrawingError) -> bool:
    """Tell whether a layer's outline comes from hatches alone."""
    return isinstance(found, Reading) and found.from_hatches


class DrawingFile:
    """A loaded drawing, asked for its layers, its unit and its curves."""

    def __init__(self, loaded: Loaded) -> None:
        self.document: Document = loaded.document
        self.name = loaded.name
        self.sha256 = loaded.sha256
        self.dxf_version = loaded.version or str(loaded.document.dxfversion)
        self.layers = Layers(self.document)
        self.blocks = Blocks(self.document, self.layers)
        self._used = self.blocks.layers_in_use()

    def labels(self) -> list[tuple[str, complex]]:
        """Return the short texts of model space with their places."""
        return [(label.words, label.at) for label in labels_of(self.lettering)]

    @cached_property
    def lettering(self) -> list[Lettering]:
        """The visible texts of model space."""
        return lettering_of(self.document, self.layers)

    def dimension_findings(self, scale: float) -> list[Finding]:
        """Return what the dimensions of the drawing say against the scale taken."""
        return dimension_findings(self.dimensions, scale)

    @cached_property
    def dimensions(self) -> tuple[DimensionRow, ...]:
        """The visible dimensions of lengths in model space."""
        return tuple(dimensions_of(self.document, self.layers))

    def header_unit(self) -> tuple[str | None, str]:
        """Return the unit that `$INSUNITS` names, None where no section is drawn in it, and the header's words."""
        code = int(self.document.header.get("$INSUNITS", 0) or 0)
        if code in INSUNITS:
            return INSUNITS[code], f"$INSUNITS = {code}"
        if code == 0:
            return None, "the header names no unit"
        return None, f"the header names {INSUNITS_OTHER.get(code, 'an unknown unit')} ($INSUNITS = {code})"

    def visible_layers(self) -> list[str]:
        """Return the visible layers that show something, in the order of the drawing."""
        return [name for name in self._used if self.layers.hidden(name) is None and name.casefold() != NEVER_PLOTTED]

    def hidden_layers(self) -> dict[str, str]:
        """Return the layers that hold something but are off or frozen, with their state."""
        states = {name: self.layers.hidden(name) for name in self._used}
        return {name: state for name, state in states.items() if state is not None}

    def named_layers(self, patterns: Sequence[str]) -> tuple[list[str], list[Finding]]:
        """Return the visible layers that match the shell-style patterns, whatever the case, and the hidden ones as
        findings. Raises DrawingError for a pattern that matches no layer, or where only hidden ones match.
        """
        seen, hidden = self.layers.named(patterns, list(self._used))
        findings = []
        for name, state in hidden:
            count = self._used.get(name, 0)
            message = f"layer {name} is {state}: {count} entities on it were not read; make it visible to use it"
            findings.append(Finding("layer-hidden", "warning" if count and seen else "note", message))
        if not seen:
            message = "\n".join(f.message for f in findings)
            raise DrawingError(message, [Finding("layer-hidden", "error", message)])
        return seen, findings

    def read(self, layers: Sequence[str]) -> Reading:
        """Turn every entity seen on `layers` into curves or a skip, block references opened.

        Raises DrawingError for an empty layer, and for an entity that must not be left out in silence.
        """
        wanted = frozenset(name.casefold() for name in layers)
        account = _Account(self.layers)
        elsewhere = 0
        for leaf in self.blocks.leaves(wanted):
            if leaf.layer.casefold() in wanted:
                account.take(leaf)
            elif not leaf.block:
                elsewhere += 1
        if not account.read:
            raise self._nothing_there(layers)
        return account.reading(tuple(layers), elsewhere)

    def read_each(self) -> dict[str, Reading | DrawingError]:
        """Read every visible layer by itself, in one walk: what it gave, or why it is refused."""
        names = {name.casefold(): name for name in self.visible_layers()}
        accounts = {key: _Account(self.layers) for key in names}
        refused: dict[str, DrawingError] = {}
        for leaf in self.blocks.leaves(frozenset(names)):
            key = leaf.layer.casefold()
            if key in accounts and key not in refused:
                try:
                    accounts[key].take(leaf)
                except DrawingError as error:
                    refused[key] = error
        return {
            name: refused[key] if key in refused else accounts[key].reading((name,), 0)
            for key, name in names.items()
            if key in refused or accounts[key].read
        }

    def _nothing_there(self, layers: Sequence[str]) -> DrawingError:
        named = ", ".join(layers) or "any visible layer"
        keys = {name.casefold() for name in layers}
        message = f"nothing is drawn on {'layer ' if layers else ''}{named} in model space"
        others = [name for name in self.visible_layers() if name.casefold() not in keys]
        if layers and others:
            message += (
                f"; something is on {', '.join(others[:12])}{' …' if len(others) > 12 else ''}: name it with --layer"
            )
        for layout in self.document.layouts:
            if layout.name != "Model":
                count = sum(1 for e in layout if not layers or e.dxf.layer.casefold() in keys)
                if count:
                    message += (
                        f"; the layout {layout.name} holds {count} entities there, but paper space is not read: move "
                        "the section to model space"
                    )
        return DrawingError(message, [Finding("layer-missing", "error", message)])


class _Account:
    """Gathers curves and skips, so that each entity ends as one or the other."""

    def __init__(self, layers: Layers) -> None:
        self._layers = layers
        self.read, self.used = Counter[str](), Counter[str]()
        self._curves: list[Curve] = []
        self._skips: list[Skip] = []
        self._hatches: list[tuple[Leaf, list[Curve]]] = []
        self._fitted: list[Source] = []
        self._heights: dict[float, Source] = {}

    def take(self, leaf: Leaf) -> None:
        kind = leaf.entity.dxftype()
        self.read[kind] += 1
        try:
            made = self._curves_of(leaf)
        except UnreadError as reason:
            harmless = kind in ANNOTATION or leaf.hidden is not None or str(reason) == NO_LENGTH
            self._skips.append(Skip(source_of(leaf), str(reason), harmless))
            return
        if kind in ("HATCH", "MPOLYGON"):  # decided when all is read: it counts only where nothing else does
            self._hatches.append((leaf, made))
            return
        self.used[kind] += 1
        self._curves.extend(made)
        if is_fitted(leaf.entity):
            self._fitted.append(source_of(leaf))
        height = _height(leaf)
        if abs(height) > LEVEL:
            self._heights.setdefault(height, source_of(leaf))
        if len(self._curves) > MAX_CURVES:
            message = f"the layer holds more than {MAX_CURVES} curves, which are not read: export the section alone"
            raise DrawingError(message, [Finding("limit-reached", "error", message)])

    def _curves_of(self, leaf: Leaf) -> list[Curve]:
        if leaf.refusal is not None:
            raise leaf.refusal
        if leaf.hidden is not None or leaf.reason is not None:
            raise UnreadError(leaf.hidden or leaf.reason)
        kind = leaf.entity.dxftype()
        if kind not in ANNOTATION and kind not in ("HATCH", "MPOLYGON") and self._layers.is_broken(leaf.line_type):
            raise UnreadError(f"its line type {leaf.line_type} has gaps: an outline is drawn in full lines")
        if kind in ("HATCH", "MPOLYGON"):
            return boundary_of(leaf)
        made = [curve for curve in curves_of(leaf) if curve.length > 0.0]
        if not made:
            raise UnreadError(NO_LENGTH)
        return made

    def reading(self, layers: tuple[str, ...], elsewhere: int) -> Reading:
        compared: list[tuple[Source, tuple[Curve, ...]]] = []
        findings: list[Finding] = []
        if self._curves:
            for leaf, curves in self._hatches:
                source = source_of(leaf)
                self._skips.append(Skip(source, "other curves carry the outline; its boundary is compared", True))
                compared.append((source, tuple(curves)))
        else:
            for leaf, curves in self._hatches:
                self.used[leaf.entity.dxftype()] += 1
                self._curves.extend(curves)
            if self._hatches:
                text = "the outline was taken from the boundary of hatches: nothing else is drawn on the layer"
                handles = tuple(source_of(leaf).handle for leaf, _ in self._hatches)
                findings.append(Finding("hatch-used", "warning", text, handles=handles))
        findings += _skip_findings(self._skips)
        for source in self._fitted:
            text = f"{source} is given by fit points only: the curve through them was computed here, as a cubic spline"
            findings.append(Finding("spline-fitted", "warning", text, handles=(source.handle,)))
        if self._heights:
            low, high = min(self._heights), max(self._heights)
            text = f"entities lie at heights z = {low:g} to {high:g}; they were taken as drawn in one plane"
            handles = tuple(s.handle for s in self._heights.values())
            findings.append(Finding("not-planar", "note", text, handles=handles))
        return Reading(
            layers,
            tuple(self._curves),
            tuple(self._skips),
            self.read.total(),
            self.used.total(),
            {kind: (self.read[kind], self.used[kind]) for kind in sorted(self.read)},
            elsewhere,
            tuple(compared),
            bool(self._hatches and not compared),
            tuple(findings),
        )


NO_LENGTH = "it has no length"


def _height(leaf: Leaf) -> float:
    """Return the height z of an entity in its own block, 0 where it has none."""
    dxf = leaf.entity.dxf
    for name in ("start", "center"):
        if dxf.hasattr(name):
            return float(dxf.get(name)[2])
    elevation = dxf.get("elevation", 0.0) if dxf.is_supported("elevation") else 0.0
    return float(elevation if isinstance(elevation, int | float) else elevation[2])


def _skip_findings(skips: Iterable[Skip]) -> list[Finding]:
    """One finding for each kind and reason, so that a hundred texts are one line; the account lists every one."""
    groups: dict[tuple[str, str, bool], list[Skip]] = {}
    for skip in skips:
        groups.setdefault((skip.source.entity, skip.reason, skip.harmless), []).append(skip)
    findings = []
    for (kind, reason, harmless), group in groups.items():
        what = f"{group[0].source}" if len(group) == 1 else f"{len(group)} {kind} entities"
        layers = ", ".join(dict.fromkeys(skip.source.layer for skip in group))
        message = f"{what} on layer {layers} left out: {reason}"
        handles = tuple(skip.source.handle for skip in group if skip.source.handle)
        findings.append(Finding("entity-skipped", "note" if harmless else "warning", message, handles=handles))
    return findings
