"""Files that the hostile drawings and meshes are made of."""

from __future__ import annotations

import struct
import zlib
from base64 import b64encode
from pathlib import Path
from typing import Any

SQUARE = ((0, 0), (60, 0), (60, 40), (0, 40))


def dxf(*entities: str, blocks: str = "", unit: int = 4) -> str:
    """A minimal DXF of release 12, with a stated unit."""
    head = f"0\nSECTION\n2\nHEADER\n9\n$ACADVER\n1\nAC1009\n9\n$INSUNITS\n70\n{unit}\n0\nENDSEC\n"
    block = f"0\nSECTION\n2\nBLOCKS\n{blocks}0\nENDSEC\n" if blocks else ""
    return f"{head}{block}0\nSECTION\n2\nENTITIES\n{''.join(entities)}0\nENDSEC\n0\nEOF\n"


def line(a: tuple[Any, Any], b: tuple[Any, Any], z: float = 0.0) -> str:
    return f"0\nLINE\n8\n0\n10\n{a[0]}\n20\n{a[1]}\n30\n{z}\n11\n{b[0]}\n21\n{b[1]}\n31\n{z}\n"


def square() -> str:
    return "".join(line(a, b) for a, b in zip(SQUARE, (*SQUARE[1:], SQUARE[0]), strict=True))


def insert(name: str, columns: int = 1, rows: int = 1) -> str:
    return f"0\nINSERT\n8\n0\n2\n{name}\n10\n0\n20\n0\n30\n0\n70\n{columns}\n71\n{rows}\n44\n1\n45\n1\n"


def block(name: str, *entities: str) -> str:
    head = f"0\nBLOCK\n8\n0\n2\n{name}\n70\n0\n10\n0\n20\n0\n30\n0\n3\n{name}\n"
    return f"{head}{''.join(entities)}0\nENDBLK\n8\n0\n"


def drawing_bomb() -> str:
    """Blocks of ten blocks of ten blocks ...: ten milliard inserts in a few kilobytes."""
    blocks = "".join(block(f"b{k}", insert(f"b{k + 1}") * 10) for k in range(10)) + block("b10")
    return dxf(insert("b0"), blocks=blocks)


def vtu(arrays: str, attributes: str = "", points: int = 3, cells: int = 1, before: str = "") -> str:
    return (
        f'<?xml version="1.0"?>{before}<VTKFile type="UnstructuredGrid" version="1.0" byte_order="LittleEndian" '
        f'header_type="UInt64"{attributes}><UnstructuredGrid><Piece NumberOfPoints="{points}" '
        f'NumberOfCells="{cells}">{arrays}</Piece></UnstructuredGrid></VTKFile>'
    )


TRIANGLE = (
    '<Points><DataArray type="Float64" Name="Points" NumberOfComponents="3" format="ascii">0 0 0 60 0 0 60 40 0</DataArray></Points>'
    '<Cells><DataArray type="Int64" Name="connectivity" format="ascii">0 1 2</DataArray>'
    '<DataArray type="Int64" Name="offsets" format="ascii">3</DataArray>'
    '<DataArray type="Int64" Name="types" format="ascii">5</DataArray></Cells>'
)
LAUGHS = "<!DOCTYPE v [<!ENTITY a0 'ha'>" + "".join(
    f"<!ENTITY a{k + 1} '{f'&a{k};' * 10}'>" for k in range(12)
) + "]>"  # fmt: skip
ELSEWHERE = "<!DOCTYPE v [<!ENTITY s SYSTEM 'file:../secret.csv'>]>"


def compressed_bomb(path: Path, size: int = 200 << 20) -> None:
    """A VTU whose points grow from 200 kB to 200 MB."""
    packer = zlib.compressobj(9)
    piece = bytes(1 << 20)
    packed = b"".join(packer.compress(piece) for _ in range(size >> 20)) + packer.flush()
    head = struct.pack("<4Q", 1, size, size, len(packed))
    text = (b64encode(head) + b64encode(packed)).decode()
    points = (
        '<Points><DataArray type="Float64" Name="Points" NumberOfComponents="3" format="binary">'
        f"{text}</DataArray></Points>"
    )
    cells = TRIANGLE[TRIANGLE.index("<Cells>") :]
    path.write_text(vtu(points + cells, ' compressor="vtkZLibDataCompressor"', size // 24))


def obj(faces: str = "f 1 2 3\nf 1 3 4\n", z: float = 0.0) -> str:
    return "".join(f"v {x} {y} {z}\n" for x, y in SQUARE) + faces


def step(body: str = "") -> str:
    return (
        "ISO-10303-21;\nHEADER;\nFILE_DESCRIPTION((''),'2;1');\nFILE_NAME('','',(''),(''),'','','');\n"
        f"FILE_SCHEMA(('AUTOMOTIVE_DESIGN'));\nENDSEC;\nDATA;\n{body}ENDSEC;\nEND-ISO-10303-21;\n"
    )
