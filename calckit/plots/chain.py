"""Drawing of what a result rests on: a box for each line, inputs above, the result last, an arrow for each use.

Knows how boxes are stacked and how arrows are led past them. Must not know what the lines say or how they came about.
"""

from __future__ import annotations

import heapq
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from re import fullmatch

from matplotlib.lines import Line2D
from matplotlib.patches import Circle, Patch, Polygon, Rectangle

from calckit.plots.arguments import Reader
from calckit.plots.style import DASHED, HEAVY, LINE, PITCH, THIN, WIDTH, Drawing, letter, sheet, typeset, width_of

MOST = 30
"""Lines drawn at most, the nearest to the result."""

_EDGE, _GAP = 0.1, 0.08
_BOX, _BETWEEN, _PORT = 0.18, 0.06, 0.08
_HIGHEST = 7.0
_NAME, _VALUE = 1.9, 1.5
_TRACK = 0.16
_HEAD, _DOT = (0.08, 0.028), 0.018
_LISTED = 4


@dataclass
class _Box:
    """A line to draw: what it says, where it stands, and the boxes it takes from."""

    number: int
    name: str
    value: str
    needs: list[_Box] = field(default_factory=list)
    folded: list[int] = field(default_factory=list)
    top: float = 0.0
    last: int = -1
    row: int = 0
    track: int = 0

    @property
    def ports(self) -> int:
        """How many arrows meet the box."""
        return len(self.needs) + (self.last >= 0)

    @property
    def height(self) -> float:
        """High enough for every arrow."""
        return max(_BOX, self.ports * _PORT)

    def port(self, place: int) -> float:
        """The height of the `place`-th arrow from the top; the one that leaves is the lowest."""
        return self.top - self.height * (place + 0.5) / self.ports


def dependency(
    lines: Mapping[str, tuple[int, str, str]], edges: Sequence[tuple[str, str]], *, result: str
) -> Drawing:
    """The lines a result rests on, as boxes with number, symbol and value, and arrows from each to those that use it.

    Arguments: `lines`, by id and in document order, the number, the symbol or title, and the printed value; `edges`,
    pairs of ids, an input and the line that uses it; `result`, the id drawn last. All three are what
    `Calc.dependency` returns. Of more than 30 lines the nearest to the result are drawn; the drawing names what feeds
    them and says how many are left out. A dot marks where an arrow leaves a line that leads on; lines that cross
    without a dot do not meet. Raises InputError listing every bad argument.

    >>> lines = {"V": (1, "V", "100 kip"), "X.V_h": (2, "X.V_h", "50 kip")}
    >>> drawing = dependency(lines, [("V", "X.V_h")], result="X.V_h")
    >>> [text.get_text() for text in drawing.texts]
    ['1', '$V$', '100 kip', '2', 'X: $V_{h}$', '50 kip']
    """
    read = Reader("plots.dependency")
    needs = _needs(read, lines, edges, result)
    order = _order(read, list(lines), needs)
    read.done()
    near = _nearest(result, needs)
    count = min(len(near), MOST)
    while True:
        boxes = _boxes(lines, order, needs, set(near[:count]))
        height = sum(box.height + _BETWEEN for box in boxes)
        if height <= _HIGHEST or count == 1:
            break
        count -= 1
    left_out = len(near) - count
    foot = 0.1 + (1.5 * PITCH if left_out else 0)
    with sheet(WIDTH, foot + height + 0.1) as drawing:
        _Stack(drawing, boxes, foot + height).draw()
        if left_out:
            text = f"{left_out} of {len(near)} lines, further from the result, are not drawn."
            letter(drawing, _EDGE, 0.12, text)
    return drawing


def _needs(
    read: Reader, lines: Mapping[str, tuple[int, str, str]], edges: Sequence[tuple[str, str]], result: str
) -> dict[str, list[str]]:
    """For each line the lines it takes from."""
    for id_, (_, name, value) in lines.items():
        read.words(**{f"lines[{id_!r}]": name + value})
    unknown = [id_ for id_ in dict.fromkeys((result, *(end for edge in edges for end in edge))) if id_ not in lines]
    if unknown:
        read.fault("lines", "every line that result and edges name", f"none for {', '.join(unknown)}", "add the lines")
        read.done()
    found: dict[str, list[str]] = {id_: [] for id_ in lines}
    for giver, user in dict.fromkeys(edges):
        found[user].append(giver)
    return found


def _order(read: Reader, ids: Sequence[str], needs: Mapping[str, Sequence[str]]) -> list[str]:
    """Every line after those it takes from, otherwise in document order."""
    place = {id_: n for n, id_ in enumerate(ids)}
    waiting = {id_: len(needs[id_]) for id_ in ids}
    ready = [place[id_] for id_ in ids if not waiting[id_]]
    order: list[str] = []
    while ready:
        order.append(ids[heapq.heappop(ready)])
        for user in (id_ for id_ in ids if order[-1] in needs[id_]):
            waiting[user] -= 1
            if not waiting[user]:
                heapq.heappush(ready, place[user])
    if len(order) < len(ids):
        circle = ", ".join(id_ for id_ in ids if id_ not in order)
        read.fault("edges", "lines that do not rest on themselves", circle, "leave out the edge that leads back")
    return order


def _nearest(result: str, needs: Mapping[str, Sequence[str]]) -> list[str]:
    """The result and all it rests on, by the number of steps to the result."""
    near = {result: None}
    ahead = [result]
    for id_ in ahead:
        ahead += [giver for giver in needs[id_] if giver not in near]
        near |= dict.fromkeys(needs[id_])
    return list(near)


def _boxes(
    lines: Mapping[str, tuple[int, str, str]], order: Sequence[str], needs: Mapping[str, Sequence[str]], kept: set[str]
) -> list[_Box]:
    made: dict[str, _Box] = {}
    for id_ in (id_ for id_ in order if id_ in kept):
        box = made[id_] = _Box(*lines[id_], row=len(made))
        box.needs = [made[giver] for giver in needs[id_] if giver in made]
        box.folded = sorted(lines[giver][0] for giver in needs[id_] if giver not in made)
        for giver in box.needs:
            giver.last = box.row
    return list(made.values())


class _Stack:
    """Boxes one below the other, and to their right the tracks on which the arrows run down."""

    def __init__(self, drawing: Drawing, boxes: Sequence[_Box], top: float) -> None:
        self.drawing, self.boxes = drawing, boxes
        for box in boxes:
            box.top = top
            top -= box.height + _BETWEEN
        self.folded = {id(box): _listed(box.folded) for box in boxes if box.folded}
        self.names = [self._fitted(*_read(box.name), _NAME) for box in boxes]
        self.values = [self._fitted(box.value, False, _VALUE)[0] for box in boxes]
        stub = max((width_of(drawing, [text]) + 4 * _GAP for text in self.folded.values()), default=0.0)
        self.left = _EDGE + stub
        self.name = self.left + width_of(drawing, [str(box.number) for box in boxes]) + 3 * _GAP
        widest = max(width_of(drawing, [name], math=math) for name, math in self.names)
        self.value = self.name + widest + 2 * _GAP
        self.right = self.value + width_of(drawing, self.values) + _GAP
        tracks = self._lay_tracks()
        room = WIDTH - _EDGE - self.right - 2 * _GAP
        self.pitch = min(_TRACK, room / tracks) if tracks else _TRACK

    def draw(self) -> None:
        """Put everything on the sheet; the last box is the result."""
        for box, (name, math), value in zip(self.boxes, self.names, self.values, strict=True):
            middle = box.top - box.height / 2
            letter(self.drawing, self.name - 2 * _GAP, middle, str(box.number), ha="right")
            letter(self.drawing, self.name, middle, name, math=math)
            letter(self.drawing, self.value, middle, value)
            frame = HEAVY if box is self.boxes[-1] else LINE
            self._add(Rectangle((self.left, box.top - box.height), self.right - self.left, box.height, fill=False,
                                lw=frame))  # fmt: skip
            divide = self.name - _GAP
            self._line([divide, divide], [box.top - box.height, box.top], lw=THIN)
            if box.folded:
                self._line([self.left - 3.5 * _GAP, self.left], [middle, middle], lw=THIN, linestyle=DASHED)
                self._head(self.left, middle, 1)
                letter(self.drawing, self.left - 4 * _GAP, middle, self.folded[id(box)], ha="right")
        for box in self.boxes:
            if box.last >= 0:
                out = box.port(len(box.needs))
                x = self._x(box)
                self._line([self.right, x], [out, out], lw=THIN)
                self._line([x, x], [out, self._port(self.boxes[box.last], box)], lw=THIN)
            for giver in box.needs:
                x, y = self._x(giver), self._port(box, giver)
                self._line([x, self.right], [y, y], lw=THIN)
                self._head(self.right, y, -1)
                if giver.last > box.row:
                    self._add(Circle((x, y), _DOT, facecolor="black", edgecolor="none"))

    def _lay_tracks(self) -> int:
        """Give every box that is used a track of its own from its row to its last use; short ones run innermost."""
        laid: list[list[_Box]] = []
        used = [box for box in self.boxes if box.last >= 0]
        for box in sorted(used, key=lambda box: (box.last - box.row, box.row)):
            free = (n for n, others in enumerate(laid) if all(o.last <= box.row or box.last <= o.row for o in others))
            box.track = next(free, len(laid))
            if box.track == len(laid):
                laid.append([])
            laid[box.track].append(box)
        for box in self.boxes:
            box.needs.sort(key=lambda giver: giver.track)
        return len(laid)

    def _x(self, box: _Box) -> float:
        return self.right + 2 * _GAP + box.track * self.pitch

    def _port(self, user: _Box, giver: _Box) -> float:
        return user.port(user.needs.index(giver))

    def _fitted(self, text: str, math: bool, limit: float) -> tuple[str, bool]:
        """The text, cut short where it is too wide."""
        if width_of(self.drawing, [text], math=math) <= limit:
            return text, math
        while width_of(self.drawing, [f"{text}..."]) > limit:
            text = text[:-1].rstrip()
        return f"{text}...", False

    def _head(self, x: float, y: float, direction: int) -> None:
        length, half = _HEAD
        corners = [(x, y), (x - direction * length, y + half), (x - direction * length, y - half)]
        self._add(Polygon(corners, facecolor="black", edgecolor="none"))

    def _line(self, xs: Sequence[float], ys: Sequence[float], **options: object) -> None:
        self._add(Line2D(xs, ys, color="black", **options))  # type: ignore[arg-type]

    def _add(self, artist: Line2D | Patch) -> None:
        artist.set_transform(self.drawing.dpi_scale_trans)
        self.drawing.add_artist(artist)


def _read(name: str) -> tuple[str, bool]:
    """A name of one word is a symbol, with its part in front; any other is a title."""
    if not fullmatch(r"[\w.]+", name):
        return name, False
    part, _, symbol = name.rpartition(".")
    return (f"{part}: " if part else "") + typeset(symbol), True


def _listed(numbers: Sequence[int]) -> str:
    """Numbers of lines, the first few by name."""
    more = f" and {len(numbers) - _LISTED} more" if len(numbers) > _LISTED else ""
    return f"from {', '.join(map(str, numbers[:_LISTED]))}{more}"
