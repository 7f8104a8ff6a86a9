"""The text cells of a notebook: Markdown with math to the neutral blocks that both writers print.

Knows Markdown and how typed LaTeX becomes MathML and a drawing. Must not know HTML or Typst. The text is the user's:
HTML in it is shown as typed, addresses and pictures are named and never fetched, math that cannot be set is shown as
its LaTeX source.
"""

from __future__ import annotations

import re
from typing import Any

_Token = dict[str, Any]
_ENTITY = re.compile(r"&(?:#\d{1,7}|#[xX][0-9a-fA-F]{1,6}|[A-Za-z][A-Za-z0-9]*);")

_INLINE_MATH = (
    r"\$\$(?P<display_math>(?:[^$\\]|\\[\s\S])+?)\$\$"
    r"|\$(?![\s$])(?P<inline_math_text>(?:[^$\\]|\\[\s\S])+?)(?<!\s)\$(?!\d)"
)
_BLOCK_MATH = (
    r"^ {0,3}\$\$(?P<math_dollars>(?:[^$\\]|\\[\s\S])+?)\$\$[ \t]*(?:\n|$)"
    r"|^ {0,3}(?P<math_environment>\\begin\{(?P<math_name>(?:align|equation|gather|multline)\*?)\}[\s\S]+?"
    r"\\end\{(?P=math_name)\})[ \t]*(?:\n|$)"
)
