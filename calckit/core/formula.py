"""A formula: the one declaration from which printed form, substituted form, value and slope are read.

Knows result symbol, expression text, source, domain and, for an empirical formula, the unit of each symbol. Must not
know lines, parts or how digits are chosen.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Any

from calckit.core.numbers import DUALS, FLOATS, Dual
from calckit.core.parser import parse
from calckit.core.record import Source

if TYPE_CHECKING:
    from calckit.core.nodes import Env


@dataclass(frozen=True, eq=False)
class Formula:
    """`result = text`, from `source`, valid where the relation `domain` holds.

    `units` makes it empirical: the unit of each symbol that has one, as (US, SI); the calculation's unit set picks
    one, whatever unit an input was typed in. `sets` names the (force, length) units, US and SI, in which a
    homogeneous formula is worked where the result's unit does not tell.

    >>> T_a = Formula("T_a", "C_t*h_n**x", Source("ASCE/SEI 7-16", "12.8.2.1", "12.8-7"),
    ...               units={"T_a": ("s", "s"), "h_n": ("ft", "m")})
    >>> round(T_a.value({"C_t": 0.028, "h_n": 62.0, "x": 0.8}), 4)
    0.7605
    """

    result: str
    text: str
    source: Source
    units: Mapping[str, tuple[str, str]] | None = None
    domain: str = ""
    sets: tuple[tuple[str, str], tuple[str, str]] | None = None
    _cache: dict[str, Any] = field(default_factory=dict, repr=False, compare=False)

    def set_of(self, system: str) -> tuple[str, str] | None:
        """The declared (force, length) units for the unit set "US" or "SI"."""
        return self.sets[system == "SI"] if self.sets else None

    @property
    def names(self) -> tuple[str, ...]:
        """The names in the expression, in order of appearance."""
        return parse(self.text).names

    @property
    def node(self) -> Any:
        """The layout tree, built at first use."""
        if "node" not in self._cache:
            from calckit.core.nodes import build

            self._cache["node"] = build(self.text)
        return self._cache["node"]

    def env(self, values: Mapping[str, Any], arithmetic: Any, rows: Sequence[str] = (), row: int | None = None) -> Env:
        """What `values` give the names, in one arithmetic."""
        from calckit.core.nodes import Env

        return Env(values, arithmetic, rows, row)

    def value(self, values: Mapping[str, Any], rows: Sequence[str] = (), row: int | None = None) -> float:
        """The value for numbers in the declared units (lists over `rows` where a name is a list)."""
        return float(self.node.value(self.env(values, FLOATS, rows, row)))

    def slope(
        self, values: Mapping[str, Any], name: str, side: int = 1, rows: Sequence[str] = (), row: int | None = None
    ) -> float:
        """The exact slope of the value with respect to `name`, from above (`side` 1) or below (-1).

        At a tie between branches the two differ. For a list, the slope is that of a common shift of its entries.

        >>> cap = Formula("C_s", "min(a, b)", Source("own"))
        >>> [cap.slope({"a": 1.0, "b": 1.0}, "a", side) for side in (1, -1)]
        [0.0, 1.0]
        """

        def dual(key: str, value: Any) -> Any:
            seed = float(side) if key == name else 0.0
            return [Dual(v, seed) for v in value] if isinstance(value, list | tuple) else Dual(value, seed)

        duals = {key: dual(key, value) for key, value in values.items()}
        return self.node.value(self.env(duals, DUALS, rows, row)).slope * side
