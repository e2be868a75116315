"""Model space with its block references opened: every entity once for each place in which it is seen.

A **leaf** is an entity at one such place. On layer "0" inside a block an entity takes the layer of the reference, and
what is BYBLOCK takes the reference's (DXF reference, BLOCK). Sizes are computed before anything is opened.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace

from ezdxf.document import Drawing as Document
from ezdxf.entities.dxfgfx import DXFGraphic
from ezdxf.layouts.blocklayout import BlockLayout
from ezdxf.xclip import XClip

from edgetally.drawing.layers import Layers
from edgetally.drawing.limits import MAX_DEPTH, MAX_LEAVES
from edgetally.drawing.placement import IDENTITY, Placement, insert_placements
from edgetally.errors import DrawingError
from edgetally.findings import Finding

XREF_FLAGS = 4 | 8 | 16  # an external reference, an overlay, a block that depends on one


@dataclass(frozen=True, slots=True)
class Leaf:
    """An entity, the layer and line type in force, where its plane lies, the block it stands in ("" for none).

    `hidden` says why it is not seen, None where it is. A block reference is a leaf itself only where it cannot be
    opened; `reason` then says why, or `refusal` where it must not be left out.
    """

    entity: DXFGraphic
    layer: str
    line_type: str
    placement: Placement
    block: str
    hidden: str | None
    reason: str | None = None
    refusal: DrawingError | None = None


class Blocks:
    """The block definitions of a document: what they hold, how much, on which layers.

    Raises DrawingError, before anything is opened, where a block holds itself, blocks are nested too deep, or more
    entities than the limit would come out.
    """

    def __init__(self, document: Document, layers: Layers) -> None:
        self._document = document
        self._layers = layers
        self._size: dict[str, int] = {}
        self._reach: dict[str, frozenset[str]] = {}
        total = sum(self._size_of_entity(entity, ()) for entity in document.modelspace())
        if total > MAX_LEAVES:
            message = (
                f"the block references of the drawing open to {total:.4g} entities, more than {MAX_LEAVES} are not "
                "read: reduce the arrays or the nesting"
            )
            raise DrawingError(message, [Finding("limit-reached", "error", message)])

    def leaves(self, wanted: frozenset[str]) -> Iterator[Leaf]:
        """Yield the leaves of model space; references without anything on a `wanted` layer (casefolded) stay shut.

        A reference that is clipped (XCLIP) or tilted out of the plane is a leaf with a refusal on each layer it shows.
        """
        for entity in self._document.modelspace():
            yield from self._open(entity, wanted, _Frame())

    def layers_in_use(self) -> dict[str, int]:
        """Return the effective layers, as spelled, of model space and of all that its references hold; the number of
        entities directly on each."""
        used: dict[str, int] = {}
        for entity in self._document.modelspace():
            name = self._layers.spelled(entity.dxf.layer)
            used[name] = used.get(name, 0) + 1
            if entity.dxftype() == "INSERT":
                for key in self.reach(str(entity.dxf.get("name", "")), entity.dxf.layer):
                    used.setdefault(self._layers.spelled(key), 0)
        return used

    def counts(self) -> dict[str, int]:
        """Return the number of entities in each block that a reference in model space, or in such a block, shows."""
        shown: dict[str, int] = {}
        pending = [e for e in self._document.modelspace() if e.dxftype() == "INSERT"]
        while pending:
            name = str(pending.pop().dxf.get("name", ""))
            if name not in shown and name in self._document.blocks:
                inside = list(self._document.blocks.get(name))
                shown[name] = len(inside)
                pending += [e for e in inside if e.dxftype() == "INSERT"]
        return dict(sorted(shown.items()))

    def reach(self, block: str, layer: str) -> frozenset[str]:
        """Return the layers, casefolded, on which a reference on `layer` to `block` shows something."""
        inside = self._layers_inside(block.casefold(), ())
        return frozenset(layer.casefold() if key == "0" else key for key in inside)

    def _layers_inside(self, block: str, path: tuple[str, ...]) -> frozenset[str]:
        if block in self._reach:
            return self._reach[block]
        found: set[str] = set()
        if block not in path and block in self._document.blocks:
            for entity in self._document.blocks.get(block):
                key = entity.dxf.layer.casefold()
                found.add(key)
                if entity.dxftype() == "INSERT":
                    inner = self._layers_inside(str(entity.dxf.get("name", "")).casefold(), (*path, block))
                    found |= {key if inside == "0" else inside for inside in inner}
        self._reach[block] = frozenset(found)
        return self._reach[block]

    def _size_of_entity(self, entity: DXFGraphic, path: tuple[str, ...]) -> int:
        if entity.dxftype() != "INSERT":
            return 1
        rows, columns = int(entity.dxf.get("row_count", 1)), int(entity.dxf.get("column_count", 1))
        return max(1, rows) * max(1, columns) * self._size_of(str(entity.dxf.get("name", "")), path)

    def _size_of(self, name: str, path: tuple[str, ...]) -> int:
        block = name.casefold()
        if block in path:
            message = f"block {name} contains itself, through {' > '.join((*path, block))}; mend it in a CAD program"
            raise DrawingError(message, [Finding("entity-unreadable", "error", message)])
        if len(path) >= MAX_DEPTH:
            message = f"blocks are nested more than {MAX_DEPTH} deep, at {name}; explode some of them"
            raise DrawingError(message, [Finding("limit-reached", "error", message)])
        if block not in self._size:
            inside = self._document.blocks.get(name) if name in self._document.blocks else ()
            self._size[block] = 1 + sum(self._size_of_entity(entity, (*path, block)) for entity in inside)
        return self._size[block]

    def _open(self, entity: DXFGraphic, wanted: frozenset[str], frame: _Frame) -> Iterator[Leaf]:
        """Yield the leaves of one entity that stands in `frame`."""
        frame = self._inherited(entity, frame)
        if entity.dxftype() != "INSERT":
            yield frame.leaf(entity)
            return
        for attribute in getattr(entity, "attribs", ()):
            yield frame.leaf(attribute)
        name = str(entity.dxf.get("name", ""))
        definition = self._document.blocks.get(name) if name in self._document.blocks else None
        if definition is None or (_is_external(definition) and len(definition) == 0):
            yield frame.leaf(entity, f"the external reference {name} is not in the file: bind it, and export again")
            return
        shown = self.reach(name, frame.layer) & wanted
        if not shown:
            return
        where = f"INSERT #{entity.dxf.handle} of block {name} on layer {frame.layer}"
        if frame.hidden is None and XClip(entity).has_clipping_path:  # type: ignore[arg-type]
            message = f"{where} is clipped, so that only a part of the block is shown: explode and trim it"
            yield from self._refused(entity, frame, shown, "entity-unreadable", message)
            return
        base = definition.block.dxf.get("base_point", (0, 0, 0)) if definition.block is not None else (0, 0, 0)
        places = insert_placements(entity, complex(base[0], base[1]))
        if places is None:
            message = f"{where} lies outside the plane of the drawing; flatten the drawing, or move it to another layer"
            yield from self._refused(entity, frame, shown, "not-planar", message)
            return
        for place in places:
            inside = replace(frame, placement=frame.placement.after(place), block=name)
            for inner in definition:
                yield from self._open(inner, wanted, inside)

    def _refused(
        self, entity: DXFGraphic, frame: _Frame, shown: frozenset[str], code: str, message: str
    ) -> Iterator[Leaf]:
        refusal = DrawingError(message, [Finding(code, "error", message, handles=(entity.dxf.handle,))])
        for layer in sorted(shown):
            yield replace(frame.leaf(entity), layer=self._layers.spelled(layer), refusal=refusal)

    def _inherited(self, entity: DXFGraphic, frame: _Frame) -> _Frame:
        """Return the frame with the entity's own layer, line type and visibility in force."""
        layer = entity.dxf.layer
        if frame.block and layer == "0":
            layer = frame.layer
        line_type = str(entity.dxf.get("linetype", "BYLAYER"))
        if line_type.casefold() == "byblock":
            line_type = frame.line_type if frame.block else "CONTINUOUS"
        elif line_type.casefold() == "bylayer":
            line_type = self._layers.line_type_of(layer)
        hidden = frame.hidden
        if hidden is None and entity.dxf.get("invisible", 0):
            hidden = "it is invisible" if entity.dxftype() != "INSERT" else "its block reference is invisible"
        if hidden is None and entity.dxftype() == "INSERT" and self._layers.hidden(layer) == "frozen":
            hidden = f"its block reference is on the frozen layer {layer}"
        return replace(frame, layer=layer, line_type=line_type, hidden=hidden)


@dataclass(frozen=True, slots=True)
class _Frame:
    """What an entity inherits from the block reference around it; of model space by default."""

    placement: Placement = IDENTITY
    block: str = ""
    layer: str = ""
    line_type: str = "CONTINUOUS"
    hidden: str | None = None

    def leaf(self, entity: DXFGraphic, reason: str | None = None) -> Leaf:
        return Leaf(entity, self.layer, self.line_type, self.placement, self.block, self.hidden, reason)


def _is_external(definition: BlockLayout) -> bool:
    return definition.block is not None and bool(definition.block.dxf.get("flags", 0) & XREF_FLAGS)
