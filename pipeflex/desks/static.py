"""A picture that outlives the kernel.

Widgets show nothing in a notebook that is reopened, not trusted, or exported.  A folded image in an output
of its own does: an SVG in a data address, with its text, and no script.
"""

from __future__ import annotations

import base64
import html

from IPython.display import DisplayHandle


def escaped(text: object) -> str:
    """Text as data for HTML: between tags and inside quoted attributes."""
    return html.escape(str(text), quote=True)


def folded_image(svg: str, alt: str, title: str) -> str:
    """HTML of an SVG as an image under a fold line.

    Parameters
    ----------
    svg : str
        A whole SVG document.
    alt : str
        What the image shows, for those who cannot see it.
    title : str
        Text of the fold line.
    """
    data = base64.b64encode(svg.encode()).decode()
    return (
        f"<details><summary>{escaped(title)}</summary>"
        f'<img alt="{escaped(alt)}" style="max-width:100%" src="data:image/svg+xml;base64,{data}"></details>'
    )


class StaticCopy:
    """The folded image in an output of its own; each later `show` replaces it in place.

    Parameters
    ----------
    title : str
        Text of the fold line.
    """

    def __init__(self, title: str = "Static copy of this picture") -> None:
        self.title = title
        self._handle: DisplayHandle | None = None

    def show(self, svg: str, alt: str) -> None:
        """Show a new image; the first call makes the output, in the cell that runs."""
        bundle = {"text/html": folded_image(svg, alt, self.title), "text/plain": alt}
        if self._handle is None:
            self._handle = DisplayHandle()  # type: ignore[no-untyped-call]
            self._handle.display(bundle, raw=True)  # type: ignore[no-untyped-call]
        else:
            self._handle.update(bundle, raw=True)  # type: ignore[no-untyped-call]
