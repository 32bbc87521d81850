"""Where a section stands to an envelope, in words."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

from rich.text import Text

from crosscheck.family.validity import Standing, Word
from crosscheck.faults import one_line
from crosscheck.reports.family_screen import name_of

STYLES: dict[Word, str] = {
    "outside": "bold red",
    "at the edge": "bold yellow",
    "inside": "green",
    "not covered": "dim",
}


def standing_lines(path: str, found: Sequence[Standing]) -> Iterator[Text]:
    """A line for each word, outside first; those not covered by their reason."""
    yield Text(f"Envelope {one_line(path, 200)}, not extrapolated:")
    for word, style in STYLES.items():
        those = [each for each in found if each.word == word]
        if word == "not covered":
            for reason in dict.fromkeys(each.reason for each in those):
                names = [name_of(each.name, each.load) for each in those if each.reason == reason]
                yield Text(one_line(f"  not covered ({len(names)}): {reason}", 300), style=style)
        elif those:
            names = [name_of(each.name, each.load) for each in those]
            number = "1 quantity" if len(names) == 1 else f"{len(names)} quantities"
            told = ", ".join(names) if word != "inside" else number
            yield Text(one_line(f"  {word}: {told}", 500), style=style)
