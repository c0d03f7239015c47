"""The project file: text and back, the digests, and the only code that writes one.

`*.gainwright` is UTF-8 JSON, format and version first, keys in a steady order, one value per line. A figure is stored
as typed, never converted. Unknown fields are kept and reported; what is wrong is refused with its place named.
"""

from __future__ import annotations

from .digests import digest, settings_digest
from .disk import read, write
from .errors import StoreError
from .migrations import FORMAT_VERSION
from .opening import from_text
from .text import FORMAT, MAX_BYTES, to_text

__all__ = [
    "FORMAT",
    "FORMAT_VERSION",
    "MAX_BYTES",
    "SUFFIX",
    "StoreError",
    "digest",
    "from_text",
    "read",
    "settings_digest",
    "to_text",
    "write",
]  # fmt: skip

SUFFIX = ".gainwright"
