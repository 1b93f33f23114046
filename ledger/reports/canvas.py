"""The canvas of every chart: house style, one drawing at a time, SVG that stands alone."""

import io
import re
import threading
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from typing import TYPE_CHECKING, Any
from xml.sax.saxutils import escape

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

BLUE, BLACK, GREY = "#0072B2", "#000000", "#595959"
LINE_HEIGHT = 0.062
"""The height of a line of text, as a part of the height of the axes."""

_WIDTH_INCHES, _HEIGHT_INCHES = 6.4, 3.7

_HOUSE_STYLE: Any = {
    "svg.fonttype": "none",
    "svg.hashsalt": "stintbook",
    "font.family": "sans-serif",
    "font.sans-serif": ["DejaVu Sans", "Arial", "Helvetica"],
    "font.size": 9.0,
    "axes.titlesize": 10.0,
    "axes.linewidth": 0.6,
    "axes.spines.top": False,
    "axes.spines.right": False,
    "text.parse_math": False,
    "axes.unicode_minus": False,
    "path.simplify": False,
}

# matplotlib keeps its settings for the whole process, so one chart is drawn at a time.
_drawing = threading.Lock()


@contextmanager
def opened(proof: str) -> Iterator[tuple["Figure", "Axes"]]:
    """Give a figure of the house style with one set of axes and the proof line under it."""
    import matplotlib
    from matplotlib.figure import Figure
    from matplotlib.ticker import FuncFormatter

    with _drawing, matplotlib.rc_context():
        matplotlib.rcdefaults()
        matplotlib.rcParams.update(_HOUSE_STYLE)
        figure = Figure(figsize=(_WIDTH_INCHES, _HEIGHT_INCHES))
        axes = figure.add_axes((0.115, 0.165, 0.70, 0.74))
        axes.yaxis.set_major_formatter(FuncFormatter(lambda value, _: f"{value:,.10g}"))
        axes.yaxis.grid(visible=True, color="#d9d9d9", linewidth=0.5)
        axes.set_axisbelow(True)
        figure.text(0.012, 0.02, proof, fontsize=8, color=GREY, gid="proof")
        yield figure, axes


def svg(figure: "Figure", *, title: str, description: str) -> str:
    """Return the figure as SVG that stands alone, with its title and description."""
    page = io.StringIO()
    nothing = dict.fromkeys(("Date", "Creator", "Format", "Type"))
    figure.savefig(page, format="svg", metadata=nothing)
    # The declaration and the document type point outside the file and say nothing here.
    drawn = page.getvalue()[page.getvalue().index("<svg ") :]
    drawn = re.sub(r"\s*<metadata>.*?</metadata>", "", drawn, count=1, flags=re.DOTALL)
    head, rest = drawn.split(">", 1)
    return (
        f'{head} role="img">\n <title>{escape(title)}</title>\n'
        f" <desc>{escape(description)}</desc>{rest}"
    )


def spread(places: Sequence[float], *, gap: float) -> list[float]:
    """Move heights, given from high to low, apart to at least a gap, and keep them on the axes."""
    kept: list[float] = []
    for place in places:
        kept.append(min([place, *(above - gap for above in kept[-1:])]))
    lift = max(0.0, -min(kept, default=0.0))
    return [place + lift for place in kept]
