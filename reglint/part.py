"""Parts: data of bought components that specs name instead of repeating."""

from collections.abc import Iterator
from dataclasses import dataclass

from reglint.tree import Document, Mapping, Node, plain, section, sections


@dataclass(frozen=True, slots=True)
class Part:
    """One part: what its maker states, under the field names of its class."""

    name: str
    part_class: str
    title: str
    source: str
    #: Fields of this part, and those it shares with the others of its file.
    own: Mapping
    common: Mapping
    file: str

    def field(self, name: str) -> Node | None:
        """Return what is stated for a field of the part's class."""
        entry = self.own.entries.get(name) or self.common.entries.get(name)
        return entry.value if entry else None

    def field_names(self) -> Iterator[str]:
        """Yield the names of all fields stated."""
        yield from self.common.entries | self.own.entries


def read_parts(document: Document, file: str) -> Iterator[Part]:
    """Yield the parts of a document that its schema accepts."""
    texts = plain(document.root)
    common = section(document.root, "common")
    for name, own in sections(section(document.root, "parts")).items():
        yield Part(
            name=name,
            part_class=texts["class"],
            title=texts["title"],
            source=texts["source"].strip(),
            own=own,
            common=common,
            file=file,
        )
