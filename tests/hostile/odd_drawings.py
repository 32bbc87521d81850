"""Drawings and meshes that an outline names: DXF, STEP, triangle meshes."""

from __future__ import annotations

import os

from drawn import (
    ELSEWHERE,
    LAUGHS,
    SQUARE,
    TRIANGLE,
    block,
    compressed_bomb,
    drawing_bomb,
    dxf,
    insert,
    line,
    obj,
    square,
    step,
    vtu,
)
from trial import Content, Trial, outlined


def drawing(name: str, file: str, content: Content, status: int, *words: str, **keys: str) -> Trial:
    """A section file that names a drawing."""
    text = outlined(file=f'"{file}"', **keys)
    return Trial(name, {"given.toml": text, file: content}, status, words)


def named(name: str, file: str, *words: str, **files: Content) -> Trial:
    """A drawing named as it must not be."""
    return Trial(name, {"given.toml": outlined(file=f'"{file}"'), **files}, 2, words)


def traced(name: str, file: str, content: Content, status: int, *words: str) -> Trial:
    """A drawing given to idealise."""
    return Trial(name, {file: content}, status, words, ("idealise", file, "--out", "out"))


PLACES = (
    named("drawing above the folder", "../secret.dxf", "in the section file's folder or below it"),
    named("drawing by its full path", "/etc/passwd", "in the section file's folder or below it"),
    named("drawing by way of a link", "part.dxf", "in the section file's folder or below it",
          **{"part.dxf": lambda path: path.symlink_to("../secret.csv")}),
    named("drawing in a linked folder", "sub/secret.dxf", "outline.file", sub=lambda path: path.symlink_to("..")),
    named("drawing that is a pipe", "part.dxf", "outline.file", **{"part.dxf": os.mkfifo}),
    named("drawing that is a device", "part.dxf", "outline.file", **{"part.dxf": lambda path: path.symlink_to("/dev/zero")}),
    named("drawing of another kind", "part.dwg", "a file that ends in .dxf"),
    named("drawing not there", "part.dxf", "a file that is there"),
    named("drawing with escape codes", "\\u001b[2J.dxf", "outline.file"),
    drawing("drawing in a folder below", "sub/part.dxf", dxf(square()), 0, "2400.0"),
)  # fmt: skip

DXF = (
    drawing("plain drawing", "part.dxf", dxf(square()), 0, "2400.0"),
    drawing("drawing without unit", "part.dxf", dxf(square(), unit=0), 2, "drawing_unit"),
    drawing("drawing in parsecs", "part.dxf", dxf(square(), unit=20), 2, "$INSUNITS 20"),
    drawing("empty drawing", "part.dxf", "", 2, "part.dxf"),
    drawing("no drawing", "part.dxf", "hello\n" * 100, 2, "part.dxf"),
    drawing("binary drawing cut short", "part.dxf", b"AutoCAD Binary DXF\r\n\x1a\x00\x00\x00", 2, "outline.file"),
    drawing("drawing of random bytes", "part.dxf", bytes(range(256)) * 40, 2, "part.dxf"),
    drawing("drawing cut short", "part.dxf", dxf(square())[:-80], 2, "outline.file"),
    drawing("drawing without entities", "part.dxf", dxf(), 2, "no line, arc or curve"),
    drawing("drawing of one line", "part.dxf", dxf(line(*SQUARE[:2])), 2, "outline"),
    drawing("open drawing", "part.dxf", dxf(square()[:-60]), 2, "outline"),
    drawing("drawing with text for a number", "part.dxf", dxf(line(("x", 0), (1, 1))), 2, "outline"),
    drawing("drawing with nan", "part.dxf", dxf(line(("nan", 0), (1, 1)), square()), 2, "outline"),
    drawing("drawing with infinity", "part.dxf", dxf(line(("1e400", 0), (1, 1)), square()), 2, "outline"),
    drawing("drawing at two heights", "part.dxf", dxf(square(), line((5, 5), (6, 6), 9.0)), 2, "different heights"),
    drawing("solid body", "part.dxf", dxf("0\n3DFACE\n8\n0\n10\n0\n20\n0\n30\n0\n11\n1\n21\n0\n31\n0\n12\n1\n22\n1\n32\n0\n13\n0\n23\n1\n33\n0\n"), 2, "3DFACE"),
    drawing("circle of radius 0", "part.dxf", dxf("0\nCIRCLE\n8\n0\n10\n0\n20\n0\n30\n0\n40\n0\n"), 2, "circle of radius 0"),
    drawing("circle of radius 1e300", "part.dxf", dxf("0\nCIRCLE\n8\n0\n10\n0\n20\n0\n30\n0\n40\n1e300\n"), 2, "outline"),
    drawing("block of itself", "part.dxf", dxf(insert("b"), blocks=block("b", square(), insert("b"))), 2, "outline.file"),
    drawing("block of nothing", "part.dxf", dxf(insert("absent"), square()), 2, "absent"),
    drawing("blocks of blocks of blocks", "part.dxf", drawing_bomb(), 2, "blocks"),
    drawing("block a milliard times", "part.dxf", dxf(insert("b", 32000, 32000), blocks=block("b", square())), 2, "entities"),
    drawing("60,000 entities", "part.dxf", dxf(*(line((i, 0), (i + 1, 0)) for i in range(60_000))), 2, "entities"),
    drawing("layer that is not there", "part.dxf", dxf(square()), 2, "layers of the drawing", layers='["nowhere"]'),
    drawing("layers as a number", "part.dxf", dxf(square()), 2, "outline.layers", layers="5"),
    drawing("gap wider than the part", "part.dxf", dxf(square()), 2, "outline", gap="1e6"),
    traced("drawing without walls", "part.dxf", dxf(square()), 1, "walls"),
    traced("nothing to trace", "part.dxf", "", 2, "part.dxf"),
    Trial("tracing of a section without outline", {"a.toml": 'units = "mm N"\n'}, 2, ("walls are found in an outline",),
          ("idealise", "a.toml")),
)  # fmt: skip

STEP = (
    drawing("empty STEP", "part.step", "", 2, "part.step"),
    drawing("STEP of random bytes", "part.step", bytes(range(256)) * 40, 2, "part.step"),
    drawing("STEP without shapes", "part.step", step(), 2, "part.step"),
    drawing("STEP cut short", "part.stp", step()[:120], 2, "part.stp"),
    drawing("STEP that refers to nothing", "part.step", step("#1=ADVANCED_FACE('',(#2),#3,.T.);\n"), 2, "part.step"),
    drawing("STEP that refers to itself", "part.step", step("#1=SHELL_BASED_SURFACE_MODEL('',(#1));\n"), 2, "part.step"),
    drawing("STEP with deep brackets", "part.step", step("#1=" + "(" * 50_000 + ";\n"), 2, "part.step"),
)  # fmt: skip

MESHES = (
    drawing("one triangle", "part.vtu", vtu(TRIANGLE), 0, "1200.0"),
    drawing("mesh of a square", "part.obj", obj(), 0, "2400.0"),
    drawing("empty mesh", "part.vtu", "", 2, "part.vtu"),
    drawing("mesh of random bytes", "part.msh", bytes(range(256)) * 40, 2, "part.msh"),
    drawing("entities that laugh", "part.vtu", vtu(TRIANGLE.replace("0 1 2", "&a12;"), before=LAUGHS), 2, "part.vtu"),
    drawing("entity from elsewhere", "part.vtu", vtu(TRIANGLE.replace("0 1 2", "&s;"), before=ELSEWHERE), 2, "part.vtu"),
    drawing("points that grow", "part.vtu", compressed_bomb, 2, "part.vtu"),
    drawing("more points than stated", "part.vtu", vtu(TRIANGLE, points=2), 2, "part.vtu"),
    drawing("points by the milliard", "part.msh",
            "$MeshFormat\n2.2 0 8\n$EndMeshFormat\n$Nodes\n99999999999\n1 0 0 0\n$EndNodes\n", 2, "part.msh"),
    drawing("corner that is not there", "part.obj", obj("f 1 2 9\n"), 2, "part.obj"),
    drawing("corner numbered -1", "part.vtu", vtu(TRIANGLE.replace("0 1 2", "0 1 -5")), 2, "part.vtu"),
    drawing("triangle without area", "part.obj", obj("f 1 1 2\n"), 2, "outline.file"),
    drawing("triangles that overlap", "part.obj", obj("f 1 2 3\nf 1 2 4\n"), 2, "overlap"),
    drawing("triangle twice", "part.obj", obj("f 1 2 3\nf 1 2 3\n"), 2, "overlap"),
    drawing("mesh that is not flat", "part.obj", "v 0 0 0\nv 60 0 0\nv 60 40 9\nf 1 2 3\n", 2, "not flat"),
    drawing("mesh with nan", "part.obj", "v 0 0 0\nv 60 nan 0\nv 60 40 0\nf 1 2 3\n", 2, "part.obj"),
    drawing("mesh of quadrilaterals", "part.obj", obj("f 1 2 3 4\n"), 2, "cells of the kind quad"),
    drawing("mesh that touches itself", "part.obj",
            "v 0 0 0\nv 9 0 0\nv 0 9 0\nv -9 0 0\nv 0 -9 0\nf 1 2 3\nf 1 4 5\n", 2, "touches itself"),
    drawing("mesh that brings another file", "part.inp",
            "*NODE\n1, 0, 0, 0\n2, 60, 0, 0\n3, 60, 40, 0\n*INCLUDE, INPUT=../secret.csv\n*ELEMENT, TYPE=CPS3\n1, 1, 2, 3\n",
            2, "INCLUDE"),
    drawing("unit of a STEP", "part.step", step(), 2, "left out with a file that ends in .step", drawing_unit='"mm"'),
)  # fmt: skip

DRAWINGS = (*PLACES, *DXF, *STEP, *MESHES)
