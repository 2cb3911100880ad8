"""Reads a package with libraries of other people: gerbonara, ezdxf, shapely, pypdf (from PyPI).

Usage: independent.py PACKAGE-FOLDER
Prints one line for each file and "N passed, N failed"; exits with 1 when any failed, with 2 when there is nothing to read.
Held against one another: Gerber areas and extents against the DXF, drill hits against the DXF's circles, all against contents.json.
"""

import hashlib
import json
import re
import sys
import warnings
import zipfile
from pathlib import Path

import ezdxf
from gerbonara import ExcellonFile, GerberFile
from gerbonara.graphic_primitives import ArcPoly, Circle, Line, Rectangle
from gerbonara.ipc356 import Netlist
from gerbonara.utils import MM
from pypdf import PdfReader
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


# The published JSON schema of the Gerber job file (revision 2023.06): the keys there are, and no other.
JOB_KEYS = {
    "": {"Header", "GeneralSpecs", "DesignRules", "FilesAttributes", "MaterialStackup"},
    "Header": {"GenerationSoftware", "CreationDate", "Comment"},
    "GeneralSpecs": {
        "ProjectId", "Owner", "Size", "LayerNumber", "BoardThickness", "IPC-2221-Type", "IPC-600-Class", "Standard", "ImpedanceControlled",
        "UL_Logo", "Fabricator_Logo", "Fabricator_Datecode", "ViaProtection", "HolePlatingThickness", "HalogenFree", "Press-fit",
        "HeatSinkPaste", "EdgePlating", "Castellated", "EdgeConnector", "EdgeConnectorBevelled", "HardGoldArea", "RoHS", "Finish", "Foil",
        "Substrates", "Material_Tg", "ITAR", "ElectricalTest", "Notes",
    },
    "DesignRules": {
        "Layers", "PadToPad", "PadToTrack", "PadToRegion", "TrackToTrack", "TrackToRegion", "RegionToRegion", "MinLineWidth", "MinRing",
        "MinClearanceToProfile", "Notes",
    },
    "FilesAttributes": {"Path", "FileFunction", "FilePolarity", "FileFormat"},
    "MaterialStackup": {
        "Type", "Thickness", "Color", "DielectricConstant", "LossTangent", "Conductivity", "Tg", "Material", "Name", "Note", "Substacks",
    },
}


def job_file(name, job, files, edge):
    """Keys by the schema, size by the profile, stack by the thickness, files by the package."""
    faults = [f"key {key}" for key in set(job) - JOB_KEYS[""]]
    for block, value in job.items():
        for entry in value if isinstance(value, list) else [value]:
            faults += [f"{block} has no key {key}" for key in set(entry) - JOB_KEYS.get(block, set())]
    general = job["GeneralSpecs"]
    if edge and any(abs(a - b) > PLACE_TOLERANCE_MM for a, b in zip((general["Size"]["X"], general["Size"]["Y"]), (edge[2] - edge[0], edge[3] - edge[1]))):
        faults.append(f"size {general['Size']} differs from the profile {edge}")
    coppers = [entry for entry in job["MaterialStackup"] if entry["Type"] == "Copper"]
    if len(coppers) != general["LayerNumber"]:
        faults.append(f"{len(coppers)} coppers in the stack, {general['LayerNumber']} layers")
    listed = {entry["Path"] for entry in job["FilesAttributes"]}
    if listed != {n for n in files if n.endswith((".gbr", ".drl"))}:
        faults.append("does not list the layer files")
    report(name, faults, f"{len(listed)} files, {len(coppers)} copper layers, {general['BoardThickness']} mm")


def netlist(name, path, lines):
    """Fixed columns, and read by gerbonara; every net at two places or more."""
    faults = [f"line of {len(line)} columns" for line in lines if len(line) > 80]
    tests = [line for line in lines if line[:3] in ("317", "327", "367")]
    for line in tests:
        if line[38] != "A" or line[41] != "X" or line[49] != "Y" or not line[42:49].lstrip("+-").isdigit() or not line[50:57].lstrip("+-").isdigit():
            faults.append(f"columns are wrong: {line}")
    read = Netlist.open(path)
    if len(read.test_records) != len(tests):
        faults.append(f"gerbonara reads {len(read.test_records)} of {len(tests)} records")
    nets = {}
    for line in tests:
        nets[line[3:17].strip()] = nets.get(line[3:17].strip(), 0) + 1
    faults += [f"{net} is tested at one place" for net, count in nets.items() if count < 2 and net not in ("N/C",)]
    report(name, faults, f"{len(tests)} test points of {len(nets)} nets")


def paper(name, path, note, contents):
    """Page size, fonts, and that every controlled feature of the note stands in the drawing with its value and tolerance."""
    reader = PdfReader(path)
    faults = []
    # ISO 216 A4 and ANSI A, landscape, points.
    sizes = [(841.89, 595.28), (792.0, 612.0)]
    for page in reader.pages:
        found = (float(page.mediabox.width), float(page.mediabox.height))
        if not any(abs(found[0] - w) < 0.1 and abs(found[1] - h) < 0.1 for w, h in sizes):
            faults.append(f"page of {found} points")
        fonts = {font.get_object()["/BaseFont"] for font in page["/Resources"]["/Font"].values()}
        if fonts - {"/Helvetica", "/Helvetica-Bold"}:
            faults.append(f"fonts {fonts}")
    text = "\n".join(page.extract_text() for page in reader.pages)
    first = reader.pages[0].extract_text()
    for wanted in ("REVISION", "SCALE", "UNITS", "GRAIN", "PART NUMBER", "SECTION OF THE STACK", "DRILL TABLE", "NOTES"):
        if wanted not in text:
            faults.append(f"{wanted} is not in the text")
    rows = re.findall(r"^  (\d+) +(.+?) +(\d+\.\d{4}) +\+/-(\d+\.\d+) +(width|gap|length|size) ", note, re.M)
    for number, feature, nominal, tolerance, kind in rows:
        if f"{kind} {nominal} \xb1{tolerance}" not in first and len(rows) < 60:
            faults.append(f"{feature} {nominal} is not called out")
    report(name, faults, f"{len(reader.pages)} pages, {len(rows)} controlled features called out")


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
            copper = re.search(r"-copper-l(\d)-(top|inner|bottom)\.gbr$", name)
            layer = f"L{copper[1]}_{ {'top': 'TOP', 'inner': 'INNER', 'bottom': 'BOT'}[copper[2]]}_COPPER" if copper else None
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
            # Slots are strokes here, and no circles in the DXF.
            hits = sorted((round(o.x, 6), round(o.y, 6), round(o.tool.diameter, 6)) for o in drill.objects if hasattr(o, "x"))
            layer = "DRILL_NPTH" if name.endswith("-unplated.drl") else "DRILL_PTH"
            drawn = sorted((round(x, 6), round(y, 6), round(d, 6)) for x, y, d in circles.get(layer, []))
            report(name, [] if hits == drawn and list(drill.objects) else [f"{len(hits)} holes differ from the DXF's {len(drawn)}"], f"{len(hits)} holes")
        elif name.endswith(".zip"):
            with zipfile.ZipFile(path) as archive:
                faults = [] if archive.testzip() is None else ["a damaged entry"]
                wanted = sorted(n for n, e in files.items() if e["for_board_house"] and n != name)
                if sorted(archive.namelist()) != wanted:
                    faults.append("does not hold the files for the board house")
                faults += [f"{n} differs" for n in archive.namelist() if archive.read(n) != (folder / n).read_bytes()]
            report(name, faults, f"{len(wanted)} files")
        elif name.endswith(".gbrjob"):
            job_file(name, json.loads(data), files, edge)
        elif name.endswith(".ipc"):
            netlist(name, path, data.decode("ascii").splitlines())
        elif name.endswith(".pdf"):
            note = (folder / name.replace(".pdf", ".txt")).read_text()
            paper(name, path, note, contents)
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
