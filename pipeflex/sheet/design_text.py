"""The design text that a page carries, and how it is read back."""

from html.parser import HTMLParser
from typing import Final

from pipeflex.errors import Fault, InputError, MissingInput

DESIGN_ID: Final = "design"


class _Reader(HTMLParser):
    def __init__(self) -> None:
        super().__init__(convert_charrefs=True)
        self.depth = 0
        self.found: list[list[str]] = []

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        if tag == "pre" and ("id", DESIGN_ID) in attrs:
            self.depth += 1
            self.found.append([])

    def handle_endtag(self, tag: str) -> None:
        if tag == "pre" and self.depth:
            self.depth -= 1

    def handle_data(self, data: str) -> None:
        if self.depth:
            self.found[-1].append(data)


def read_design(html: str) -> str:
    """The design text out of a page written by `Sheet.write`.

    Raises
    ------
    MissingInput
        The page carries no design.
    InputError
        It carries more than one.
    """
    reader = _Reader()
    reader.feed(html)
    reader.close()
    texts = ["".join(parts) for parts in reader.found]
    if not texts or not texts[0].strip():
        raise MissingInput(Fault("page", "no design text", allowed="a sheet that carries its design"))
    if len(texts) > 1:
        raise InputError(Fault("page", f"{len(texts)} design texts", allowed="a page with one design"))
    return texts[0]
