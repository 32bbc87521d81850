"""All benchmarks as Markdown tables, by one command (a few minutes; needs the test extra):

python tests/benchmarks

Times are medians of five, ratios are taken within one run.
"""

from __future__ import annotations

import against_uniform_elements
import cost


def main() -> None:
    """Print every table."""
    print("## Against uniform quadratic triangles of a general-purpose library, sharp channel\n")
    print(against_uniform_elements.HEAD)
    for slenderness in (20.0, 100.0, 500.0):
        for row in against_uniform_elements.table(slenderness):
            print(row, flush=True)
    tables = {
        "FE against slenderness, accuracy 1e-5": cost.slenderness_table(),
        "FE against accuracy": cost.accuracy_table(),
        "Comparison against cells, accuracy 1e-4": cost.cells_table(),
        "Theory against walls": cost.walls_table(),
        "Stages of an open section": cost.shares_table("lipped_channel_floor_beam"),
        "Stages of a closed section": cost.shares_table("three_cell_wing_box"),
    }
    for title, rows in tables.items():
        print(f"\n## {title}\n")
        for row in rows:
            print(row, flush=True)


if __name__ == "__main__":
    main()
