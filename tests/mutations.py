from dataclasses import dataclass
@dataclass(frozen=True)
class Mutation:
    rows: tuple[str, ...]; file: str; old: str; new: str; tests: tuple[str, ...]
ALL: list[Mutation] = []
