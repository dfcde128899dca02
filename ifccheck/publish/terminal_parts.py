"""The few pieces that everything said on the terminal is made of."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from rich.box import SIMPLE_HEAD
from rich.cells import cell_len
from rich.console import Console, Group
from rich.table import Table
from rich.text import Text

from ifccheck.publish.quantities import typographic
from ifccheck.publish.words import printable

CAUTION = (
    "An aid for a licensed engineer: local codes and professional judgement govern; the results"
    " rest on the assumptions listed in the summary."
)
SHORT = "bold red"

_PLAIN = str.maketrans({"·": "*", "²": "2", "³": "3", "–": "-", "×": "x", "−": "-"})

Cell = str | Text


class Terminal:
    """What can be shown on a console: its width, and whether it knows raised dots and powers."""

    def __init__(self, console: Console) -> None:
        self.width = console.width
        self.typeset = _encodes("·²³–×", console.encoding)

    def text(self, words: str, style: str = "") -> Text:
        """Words of strangers: no control characters, and nothing in them is markup."""
        shown = typographic(words) if self.typeset else words.translate(_PLAIN)
        return Text(printable(shown), style=style, overflow="fold")

    def table(
        self, columns: Sequence[str], rows: Iterable[Sequence[Cell]], title: str = ""
    ) -> Table:
        """A plain table within the width: words fold, nothing is left out.

        A column whose name starts with ``>`` is set to the right.
        """
        return self._tables(columns, [(title, rows)])[0]

    def tables(
        self, columns: Sequence[str], titled: Iterable[tuple[str, Iterable[Sequence[Cell]]]]
    ) -> Group:
        """Tables with the same columns, each as wide in all of them."""
        return Group(*self._tables(columns, titled))

    def _tables(
        self, columns: Sequence[str], titled: Iterable[tuple[str, Iterable[Sequence[Cell]]]]
    ) -> list[Table]:
        filled = [(title, [self._cells(row) for row in rows]) for title, rows in titled]
        heads = [self.text(name.lstrip(">")) for name in columns]
        everything = [heads, *(row for _, rows in filled for row in rows)]
        widths = column_widths(everything, self.width - 2 * len(columns))
        return [self._table(columns, heads, widths, title, rows) for title, rows in filled]

    def _cells(self, row: Sequence[Cell]) -> list[Text]:
        return [self.text(cell) if isinstance(cell, str) else cell for cell in row]

    def _table(
        self,
        columns: Sequence[str],
        heads: Sequence[Text],
        widths: Sequence[int],
        title: str,
        rows: Iterable[Sequence[Text]],
    ) -> Table:
        table = Table(
            box=SIMPLE_HEAD, title=self.text(title) if title else None, title_justify="left",
            title_style="bold", pad_edge=False, padding=(0, 1, 0, 0),
        )  # fmt: skip
        for name, head, width in zip(columns, heads, widths, strict=True):
            justify = "right" if name.startswith(">") else "left"
            table.add_column(head, justify=justify, width=width, overflow="fold")  # type: ignore[arg-type]
        for row in rows:
            table.add_row(*row)
        return table


def _encodes(text: str, encoding: str) -> bool:
    try:
        text.encode(encoding)
    except UnicodeEncodeError:
        return False
    return True


def column_widths(rows: Sequence[Sequence[Text]], room: int) -> list[int]:
    """Return a width for each column, together not more than the room.

    Each has at least its longest word where there is room for that, so that no word is cut;
    what is left goes to the columns that would still fold.
    """
    columns = list(zip(*rows, strict=True))
    wanted = [max(1, *(_longest(cell.plain.split("\n")) for cell in column)) for column in columns]
    least = [
        min(max(1, *(_longest(cell.plain.split()) for cell in column)), max(room, 1))
        for column in columns
    ]
    if sum(wanted) <= room:
        return wanted
    while sum(least) > max(room, len(least)):
        least[least.index(max(least))] -= 1
    while (left := room - sum(least)) > 0:
        folding = [i for i, width in enumerate(least) if width < wanted[i]]
        for i in folding:
            least[i] += min(max(left // len(folding), 1), wanted[i] - least[i], room - sum(least))
    return least


def _longest(words: Iterable[str]) -> int:
    return max(map(cell_len, words), default=0)
