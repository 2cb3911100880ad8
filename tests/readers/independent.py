"""Reads a package with libraries of other people: gerbonara, ezdxf, shapely (from PyPI).

Usage: independent.py PACKAGE-FOLDER
Prints one line for each file and "N passed, N failed"; exits with 1 when any failed, with 2 when there is nothing to read.
Held against one another: Gerber areas and extents against the DXF, drill hits against the DXF's circles, all against contents.json.
"""

import hashlib
import json
import sys
import warnings
import zipfile
from pathlib import Path

import ezdxf
from gerbonara import ExcellonFile, GerberFile
from gerbonara.graphic_primitives import ArcPoly, Circle, Line, Rectangle
from gerbonara.utils import MM
from shapely.geometry import LineString, Point, Polygon, box
from shapely.ops import unary_union

warnings.simplefilter("ignore")

# Both files hold the same integers; what remains is the reader's own double arithmetic, about 1e-12 relative.
AREA_TOLERANCE_MM2 = 1e-6
PLACE_TOLERANCE_MM = 1e-6

passed, failed = 0, 0


def report(name, faults, good):
    """One line for a file."""
    global passed, failed
    if faults:
        failed += 1
        print(f"FAILED {name}: " + "; ".join(faults))
    else:
        passed += 1
        print(f"passed {name}: {good}")


def shape_of(primitive):
    """A gerbonara primitive as a shapely geometry."""
    if isinstance(primitive, ArcPoly):
        if any(center is not None for center in primitive.arc_centers or []):
            raise ValueError("an arc in a region")
        return Polygon(primitive.outline)
    if isinstance(primitive, Circle):
        return Point(primitive.x, primitive.y).buffer(primitive.r, quad_segs=64)
    if isinstance(primitive, Rectangle):
        if primitive.rotation:
            raise ValueError("a turned rectangle")
        return box(primitive.x - primitive.w / 2, primitive.y - primitive.h / 2, primitive.x + primitive.w / 2, primitive.y + primitive.h / 2)
    if isinstance(primitive, Line):
        return LineString([(primitive.x1, primitive.y1), (primitive.x2, primitive.y2)])
    raise ValueError(f"unexpected {type(primitive).__name__}")


def image(path):
    """The dark area of a Gerber file, and the chain of its strokes: objects in order, clear ones cut out of what came before."""
    gerber = GerberFile.open(path)
    dark, strokes, faults = Polygon(), [], []
    if gerber.import_settings.unit is not MM:
        faults.append("unit is not mm")
    run = []
    for thing in gerber.objects:
        for primitive in thing.to_primitives(MM):
            part = shape_of(primitive)
            if isinstance(part, LineString):
                strokes.append(part)
                continue
            if not part.is_valid:
                faults.append("an invalid contour")
            if primitive.polarity_dark:
                run.append(part)
            else:
                dark = unary_union([dark, *run]).difference(part)
                run = []
    return unary_union([dark, *run]), strokes, faults, gerber


def drawing(path):
    """Rings by layer, circles by layer, and what an auditor says of a DXF file."""
    document = ezdxf.readfile(path)
    audit = document.audit()
    faults = [error.message for error in audit.errors] + [fix.message for fix in audit.fixes]
    if document.header["$INSUNITS"] != 4 or document.header["$MEASUREMENT"] != 1:
        faults.append("unit is not mm")
    rings, circles = {}, {}
    for entity in document.modelspace():
        layer = entity.dxf.layer
        if entity.dxftype() == "LWPOLYLINE":
            if not entity.closed:
                faults.append(f"an open polyline on {layer}")
            rings.setdefault(layer, []).append(Polygon([(x, y) for x, y in entity.get_points("xy")]))
        elif entity.dxftype() == "CIRCLE":
            circles.setdefault(layer, []).append((entity.dxf.center.x, entity.dxf.center.y, 2 * entity.dxf.radius))
        elif layer != "NOTES":
            faults.append(f"{entity.dxftype()} on {layer}")
    return rings, circles, faults, len(document.modelspace())


def copper_of(rings, layer):
    """The copper of a DXF layer: larger shapes first, each with its own voids, so that islands within voids survive."""
    voids = rings.get(f"{layer}_VOID", [])
    area = Polygon()
    for outer in sorted(rings.get(layer, []), key=lambda ring: -ring.area):
        holes = [void for void in voids if outer.contains(void.representative_point())]
        # A void inside a shape that lies in a void of this one belongs to that shape: it is cut there.
        area = area.union(outer.difference(unary_union(holes)) if holes else outer)
    return area


def main(folder):
    """Reads every file; gives the exit status."""
    contents = json.loads((folder / "contents.json").read_text())
    files = {entry["file"]: entry for entry in contents["files"]}
    rings, circles = {}, {}
    for name in files:
        if name.endswith(".dxf"):
            rings, circles, faults, count = drawing(folder / name)
            report(name, faults, f"{count} entities, audit clean")
    edge = None
    for name in files:
        if name.endswith("-profile.gbr"):
            _, strokes, faults, _ = image(folder / name)
            ends = [point for stroke in strokes for point in (stroke.coords[0], stroke.coords[-1])]
            if any(ends.count(end) != 2 for end in ends):
                faults.append("the edge is not closed")
            edge = unary_union(strokes).bounds if strokes else None
            if edge is None or edge != unary_union(rings.get("BOARD_OUTLINE", [Polygon()])).bounds:
                faults.append(f"edge {edge} differs from the DXF")
            report(name, faults, f"{edge} mm")
    for name, entry in files.items():
        path = folder / name
        data = path.read_bytes()
        if hashlib.sha256(data).hexdigest() != entry["sha256"] or len(data) != entry["bytes"]:
            report(name, ["length or checksum differ from contents.json"], "")
        elif name.endswith(".gbr") and not name.endswith("-profile.gbr"):
            area, _, faults, gerber = image(path)
            if gerber.file_attrs.get(".SameCoordinates") not in (contents["same_coordinates"], (contents["same_coordinates"],), [contents["same_coordinates"]]):
                faults.append(f"SameCoordinates is {gerber.file_attrs.get('.SameCoordinates')}")
            if area.is_empty:
                faults.append("holds nothing")
            good = f"{area.area:.6f} mm2 in {len(getattr(area, 'geoms', [area]))} islands"
            layer = "L1_TOP_COPPER" if "-copper-l1-" in name else "L2_BOT_COPPER" if "-copper-l2-" in name else None
            if layer:
                drawn = copper_of(rings, layer)
                if abs(drawn.area - area.area) > AREA_TOLERANCE_MM2 or area.symmetric_difference(drawn).area > AREA_TOLERANCE_MM2:
                    faults.append(f"area {area.area} mm2 differs from the DXF's {drawn.area}")
                if any(abs(a - b) > PLACE_TOLERANCE_MM for a, b in zip(area.bounds, drawn.bounds)):
                    faults.append(f"reaches {area.bounds}, the DXF {drawn.bounds}")
            if edge and layer and not box(*edge).buffer(PLACE_TOLERANCE_MM).covers(area):
                faults.append("reaches out of the board")
            report(name, faults, good)
        elif name.endswith(".drl"):
            drill = ExcellonFile.open(path)
            hits = sorted((round(o.x, 6), round(o.y, 6), round(o.tool.diameter, 6)) for o in drill.objects)
            layer = "DRILL_NPTH" if name.endswith("-unplated.drl") else "DRILL_PTH"
            drawn = sorted((round(x, 6), round(y, 6), round(d, 6)) for x, y, d in circles.get(layer, []))
            report(name, [] if hits == drawn and hits else [f"{len(hits)} holes differ from the DXF's {len(drawn)}"], f"{len(hits)} holes")
        elif name.endswith(".zip"):
            with zipfile.ZipFile(path) as archive:
                faults = [] if archive.testzip() is None else ["a damaged entry"]
                wanted = sorted(n for n, e in files.items() if e["for_board_house"] and n != name)
                if sorted(archive.namelist()) != wanted:
                    faults.append("does not hold the files for the board house")
                faults += [f"{n} differs" for n in archive.namelist() if archive.read(n) != (folder / n).read_bytes()]
            report(name, faults, f"{len(wanted)} files")
        elif name.endswith(".txt"):
            lines = data.decode("ascii").splitlines()
            wide = [line for line in lines if len(line) > 100]
            report(name, [f"{len(wide)} lines wider than 100"] if wide else [], f"{len(lines)} lines of plain text")
    print(f"{passed} passed, {failed} failed")
    return 0 if failed == 0 and passed > 0 else 1


if __name__ == "__main__":
    if len(sys.argv) != 2 or not (Path(sys.argv[1]) / "contents.json").is_file():
        print(__doc__)
        sys.exit(2)
    sys.exit(main(Path(sys.argv[1])))
