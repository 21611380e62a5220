"""Text from files made safe to print: no control or direction-changing characters."""

import unicodedata

#: Control, format (which holds the bidirectional ones), surrogate, private, line and paragraph.
_UNSAFE = frozenset(("Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"))


def printable(text: str) -> str:
    """Return the text with every character that could disturb a terminal replaced by ``�``."""
    if text.isascii() and text.isprintable():
        return text
    return "".join("�" if unicodedata.category(each) in _UNSAFE else each for each in text)
