"""What rests on what among the formulas of a workbook: followed only when something could not be computed."""

from __future__ import annotations

from bisect import bisect_left, bisect_right
from collections import defaultdict
from collections.abc import Collection, Iterable, Iterator, Mapping, Sequence

from ingle_addin.book.book import Book, Formulas
from ingle_addin.book.plan import Plan, rect_of
from ingle_addin.book.refs import MAX_COLUMN, Rect, key_of, place_of
from ingle_addin.book.scan import MAX_ARRAY, FormulaCell

# A cell of the workbook: (index of its sheet, its number).
Place = tuple[int, int]
# Ranges up to this size are followed cell by cell, larger ones as a whole.
_SMALL = 64


class Graph:
    """The formulas of a workbook with their references. An array formula stands for all cells of its range."""

    def __init__(self, book: Book, formulas: Sequence[Formulas], plans: Sequence[Sequence[Plan]]) -> None:
        self._book, self._formulas, self._plans = book, formulas, plans
        self._index: dict[Place, int] = {}
        self._sorted = [sorted(cell.key for cell in sheet.formulas) for sheet in book.sheets]
        for sheet, each in enumerate(book.sheets):
            for index, cell in enumerate(each.formulas):
                self._index[sheet, cell.key] = index
                if cell.rect is not None:
                    for key in _keys(cell.rect) if _size(cell.rect) <= MAX_ARRAY else ():
                        self._index.setdefault((sheet, key), index)

    def _owner(self, place: Place) -> Place | None:
        """The formula that fills a cell."""
        index = self._index.get(place)
        return None if index is None else (place[0], self._book.sheets[place[0]].formulas[index].key)

    def formula(self, place: Place) -> tuple[Place, FormulaCell, Plan] | None:
        """The formula that fills a cell, with its own place and its plan."""
        index = self._index.get(place)
        if index is None:
            return None
        cell = self._book.sheets[place[0]].formulas[index]
        return (place[0], cell.key), cell, self._plans[place[0]][index]

    def rests_on(self, place: Place, places: Collection[Place]) -> bool:
        """Whether a formula refers to any of the cells."""
        index = self._index.get(place)
        if index is None:
            return False
        for sheet, rect in self._precedents(place[0], index):
            if _size(rect) <= _SMALL:
                if any((sheet, key) in places for key in _keys(rect)):
                    return True
            elif any(each == sheet and rect.holds(*place_of(key)) for each, key in places):
                return True
        return False

    def _precedents(self, sheet: int, index: int) -> Iterator[tuple[int, Rect]]:
        cell = self._book.sheets[sheet].formulas[index]
        plan = self._plans[sheet][index]
        taken = self._formulas[sheet].take(cell) if plan.refs else None
        if taken is None:
            return
        for ref in plan.refs:
            rect = rect_of(ref, taken[1], cell.key)
            if rect is not None:
                yield (sheet if ref.sheet is None else int(ref.sheet)), rect

    def dependents(self, places: Mapping[Place, Place]) -> dict[Place, Place]:
        """All formulas that rest on the given cells, each with what ``places`` names as the cause of one of them."""
        small: defaultdict[Place, list[Place]] = defaultdict(list)
        large: defaultdict[tuple[int, Rect], list[Place]] = defaultdict(list)
        over: defaultdict[tuple[int, int], set[Rect]] = defaultdict(set)  # (sheet, column) -> large ranges there
        wide: defaultdict[int, set[Rect]] = defaultdict(set)
        for sheet, each in enumerate(self._book.sheets):
            for index, cell in enumerate(each.formulas):
                for owner, rect in self._precedents(sheet, index):
                    if _size(rect) <= _SMALL:
                        for key in _keys(rect):
                            small[owner, key].append((sheet, cell.key))
                    else:
                        if (owner, rect) not in large:
                            if rect.columns > _SMALL:
                                wide[owner].add(rect)
                            for column in range(rect.left, rect.right + 1) if rect.columns <= _SMALL else ():
                                over[owner, column].add(rect)
                        large[owner, rect].append((sheet, cell.key))
        found: dict[Place, Place] = {}
        waiting = list(places.items())
        while waiting:
            (sheet, key), cause = waiting.pop()
            row, column = place_of(key)
            hit = list(small.get((sheet, key), ()))
            for ranges in (over.get((sheet, column), set()), wide[sheet]):
                reached = {rect for rect in ranges if rect.holds(row, column)}
                ranges -= reached  # once reached, all that rest on it are known
                for rect in reached:
                    hit += large.pop((sheet, rect), ())
            for place in hit:
                if place not in found and place not in places:
                    found[place] = cause
                    index = self._index[place]
                    rect_filled = self._book.sheets[place[0]].formulas[index].rect
                    filled = [place[1]] if rect_filled is None or _size(rect_filled) > MAX_ARRAY else _keys(rect_filled)
                    waiting.extend(((place[0], each_key), cause) for each_key in filled)
        return found

    def circles(self, starts: Iterable[Place]) -> list[list[Place]]:
        """Rings of formulas that rest on themselves, among all that the given cells rest on, each in reading order.

        The algorithm is Tarjan's for strongly connected components, without recursion.
        """
        number: dict[object, int] = {}
        low: dict[object, int] = {}
        stack: list[object] = []
        on_stack: set[object] = set()
        rings: list[list[Place]] = []
        for start in starts:
            root = self._owner(start)
            if root is None or root in number:
                continue
            work: list[tuple[object, Iterator[object]]] = [(root, self._next(root))]
            number[root] = low[root] = len(number)
            stack.append(root)
            on_stack.add(root)
            while work:
                node, edges = work[-1]
                for other in edges:
                    if other not in number:
                        number[other] = low[other] = len(number)
                        stack.append(other)
                        on_stack.add(other)
                        work.append((other, self._next(other)))
                        break
                    if other in on_stack:
                        low[node] = min(low[node], number[other])
                else:
                    work.pop()
                    if work:
                        above = work[-1][0]
                        low[above] = min(low[above], low[node])
                    if low[node] == number[node]:
                        ring: list[Place] = []
                        members = 0
                        while True:
                            member = stack.pop()
                            on_stack.discard(member)
                            members += 1
                            if _is_place(member):
                                ring.append(member)  # type: ignore[arg-type]
                            if member == node:
                                break
                        if members > 1 or node in list(self._next(node)):
                            rings.append(sorted(ring))
        return rings

    def _next(self, node: object) -> Iterator[object]:
        """Formulas and large ranges that a node rests on. A large range is a node too, visited once."""
        if _is_place(node):
            place: Place = node  # type: ignore[assignment]
            for owner, rect in self._precedents(place[0], self._index[place]):
                if _size(rect) <= _SMALL:
                    yield from self._within(owner, rect)
                else:
                    yield ("range", owner, rect)
        else:
            _, owner, rect = node  # type: ignore[misc]
            yield from self._within(owner, rect)

    def _within(self, sheet: int, rect: Rect) -> Iterator[Place]:
        if _size(rect) <= _SMALL:
            for key in _keys(rect):
                place = self._owner((sheet, key))
                if place is not None:
                    yield place
            return
        keys = self._sorted[sheet]
        start = bisect_left(keys, key_of(rect.top, 1))
        end = bisect_right(keys, key_of(rect.bottom, MAX_COLUMN))
        if end - start <= 2 * rect.rows:  # few formulas to look through
            yield from ((sheet, key) for key in keys[start:end] if rect.left <= place_of(key)[1] <= rect.right)
            return
        for row in range(rect.top, rect.bottom + 1):
            first = bisect_left(keys, key_of(row, rect.left), start, end)
            last = bisect_right(keys, key_of(row, rect.right), first, end)
            yield from ((sheet, key) for key in keys[first:last])


def _is_place(node: object) -> bool:
    return isinstance(node, tuple) and len(node) == 2


def _size(rect: Rect) -> int:
    return rect.rows * rect.columns


def _keys(rect: Rect) -> list[int]:
    return [key for row in range(rect.top, rect.bottom + 1) for key in range(key_of(row, rect.left), key_of(row, rect.right) + 1)]
