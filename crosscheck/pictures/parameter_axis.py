"""The axis of a parameter that varies."""

from __future__ import annotations

import numpy as np
from matplotlib.axes import Axes
from matplotlib.ticker import FuncFormatter, LogLocator, MaxNLocator, NullFormatter, NullLocator

from crosscheck.family.ranges import Range


def scale_axis(axes: Axes, varied: Range, which: str) -> None:
    """Limits and ticks of the axis of a parameter."""
    axis = axes.xaxis if which == "x" else axes.yaxis
    limits = (varied.low, varied.high)
    scale = "log" if varied.scale == "log" and varied.low > 0 else "linear"
    if which == "x":
        axes.set_xscale(scale)
        axes.set_xlim(limits)
    else:
        axes.set_yscale(scale)
        axes.set_ylim(limits)
    if scale == "log":
        decades = np.log10(varied.high / varied.low)
        subs = (1.0, 2.0, 5.0) if decades < 4 else (1.0,)
        axis.set_major_locator(LogLocator(10, subs=subs))
        axis.set_minor_locator(NullLocator())
        axis.set_minor_formatter(NullFormatter())
    else:
        axis.set_major_locator(MaxNLocator(7, steps=[1, 2, 2.5, 5, 10]))
    axis.set_major_formatter(FuncFormatter(lambda value, _: f"{value:g}"))
