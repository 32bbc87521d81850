"""The section file of these tests, and the same full of words that a careless writer would run."""

from __future__ import annotations

import json

RAIL = """\
schema = 1
title = "Winch rail, plain channel"
units = "mm N"
[parameters]
t = 4
[materials.sheet]
E = 72000
nu = 0.33
[points]
a = [35, 0]
b = [0, 0]
c = [0, 80]
d = [35, 80]
[[walls]]
name = "lower flange"
path = ["a", "b"]
thickness = "t"
[[walls]]
name = "web"
path = ["b", "c"]
thickness = "t"
[[walls]]
name = "upper flange"
path = ["c", "d"]
thickness = "t"
[[loads]]
name = "pull"
shear = [0, -1200]
through = "b"
[[loads]]
name = "jerk"
shear = [300, -2100]
through = "c"
torque = 9000
[[probes]]
label = "rivets"
wall = "web"
at = 0.3
[[stated]]
quantity = "torsion_constant"
value = 3200
source = "data sheet"
[tolerances]
thickness = 0.04
dimension = 0.5
[document]
number = "WR-17"
issue = "B"
date = "2 March"
part = "winch rail"
prepared = "A. Nother"
intended_use = "Sizing of the winch rail of the cargo glider."
changes = [
  { issue = "A", date = "1 March", text = "first issue" },
  { issue = "B", date = "2 March", text = "jerk" },
]
"""

# Names may have 60 letters, so each of these is one.
MARKUP = "<script>window.ran=1</script><img src=x onerror=window.ran=2>"[:60]
TYPESET = '#panic("ran") $sum$ *bold* _it_ @ref <label> = head \\ ~ ` //'
TEX = "\\input{secret} \\write18{ls} {{7*7}} {% raw %} ${7*7} %n"
QUOTES = "\"double\" 'single' \u201ccurly\u201d </style></title> &lt;b&gt;"
RIGHT_TO_LEFT = "\u05e7\u05d5\u05e8\u05d4 \u0643\u0645\u0631\u0629"
NO_SHAPE = "\u6881"
LONG = "W" * 60
EVERY = (MARKUP, TYPESET, TEX, QUOTES, RIGHT_TO_LEFT, NO_SHAPE, LONG)


def quoted(text: str) -> str:
    """Text as TOML has it."""
    return json.dumps(text, ensure_ascii=False)


def hostile_file() -> str:
    """The winch rail with hostile words wherever a file may have words."""
    title = " ".join((MARKUP, TYPESET, NO_SHAPE, RIGHT_TO_LEFT, LONG))
    text = RAIL.replace('"Winch rail, plain channel"', quoted(title))
    text = text.replace('"lower flange"', quoted(MARKUP)).replace('"upper flange"', quoted(TYPESET))
    text = text.replace('"pull"', quoted(TEX)).replace('"jerk"', quoted(f"jerk {RIGHT_TO_LEFT}"), 1)
    text = text.replace('"rivets"', quoted(QUOTES)).replace('"data sheet"', quoted(MARKUP))
    text = text.replace('"WR-17"', quoted(LONG)).replace('"A. Nother"', quoted(TYPESET))
    text = text.replace(
        'issue = "A", date = "1 March"', f"issue = {quoted(LONG)}, date = {quoted(MARKUP + LONG)}"
    )
    text = text.replace('part = "winch rail"', f"part = {quoted(QUOTES)}\nrequirement = {quoted(LONG * 5)}")
    return text.replace('"first issue"', quoted(f"{MARKUP} {TYPESET} {LONG}"))
