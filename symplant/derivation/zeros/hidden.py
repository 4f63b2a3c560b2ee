"""The case book of hidden modes: what hides always, and under which equations in the letters more hides."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from typing import TypeAlias

from symplant.algebra.letter_images import LetterImage, solve_for_letter
from symplant.algebra.polynomial import Polynomial
from symplant.algebra.ring import Element
from symplant.algebra.verdict import Verdict
from symplant.derivation.derive import Derivation
from symplant.derivation.zeros.blocks import Blocks
from symplant.derivation.zeros.case_conditions import ConditionChain
from symplant.derivation.zeros.case_entries import CaseEntries
from symplant.derivation.zeros.conditions import candidate_conditions
from symplant.derivation.zeros.free_response import free_response
from symplant.derivation.zeros.hidden_findings import HiddenModes
from symplant.derivation.zeros.hidden_parts import HiddenParts, hidden_parts
from symplant.derivation.zeros.structure import channel_positions, find_zeros, surroundings
from symplant.derivation.zeros.vanishing import vanishing
from symplant.errors import UndecidedError

__all__ = ["hidden_modes"]

#: Conditions that are put in and looked at before the rest is left out with a note.
CASE_LIMIT = 200
#: Times as many terms as the plant may have the pencil in which a second equation is looked for.
GROWTH_LIMIT = 2
#: Most terms of the conditions under which a second and a third equation is looked for.
LONGEST_CONDITION = (12, 2)
#: Equations that are looked for at once.
DEPTH_LIMIT = 3


def hidden_modes(
    derivation: Derivation,
    output: str | None = None,
    input: str | None = None,
    stage: Callable[[str], None] = lambda name: None,
) -> HiddenModes:
    """The case book of the plant, or of the part that is seen from one output or driven by one input.

    Errors: KeyError for a name that is no output or input.

    >>> from symplant.derivation.derive import derive
    >>> from symplant.reading.plant_file import read_plant_text
    >>> text = '''
    ... format = 1
    ... [parameters]
    ... a = { sign = "positive", nominal = 3 }
    ... b = { sign = "positive", nominal = 2 }
    ... [matrices]
    ... A = [["-a", "1"], ["0", "-b"]]
    ... B = [["1"], ["1"]]
    ... C = [["1", "0"]]
    ... '''
    >>> derivation = derive(read_plant_text(text))
    >>> found = hidden_modes(derivation)
    >>> [(str(c.conditions[0]), c.kind, str(c.hidden_factor.element)) for c in found.cases]
    [('a - b - 1', 'uncontrollable', 's + b + 1')]
    """
    structure = find_zeros(derivation, output, input, stage)
    outputs, inputs = channel_positions(derivation, output, input)
    book = _CaseBook(derivation, outputs, inputs, stage)
    book.write()
    responses = tuple(r for r in free_response(derivation) if r.output in outputs)
    complete = Verdict.UNDECIDED if book.gaps else Verdict.PROVED
    return HiddenModes(
        structure, book.entries.sorted(), responses, complete, tuple(dict.fromkeys(book.notes))
    )


@dataclass
class _Candidate:
    """A condition, the sides on which it may hide a mode, and whether it may do so alone."""

    condition: Element
    sides: list[str] = field(default_factory=list)
    alone: bool = False


#: Conditions that hold, the pencil there, what hides there, and the sides to look at further.
_Branch: TypeAlias = tuple[ConditionChain, Blocks, HiddenParts, Sequence[str]]


class _CaseBook:
    def __init__(
        self,
        derivation: Derivation,
        outputs: Sequence[int],
        inputs: Sequence[int],
        stage: Callable[[str], None],
    ) -> None:
        self.derivation, self.stage = derivation, stage
        self.around = surroundings(derivation)
        self.blocks = Blocks.of(derivation.pencil, outputs, inputs)
        self.divisors = {str(element) for element in derivation.assumed_nonzero}
        self.entries = CaseEntries(derivation, outputs, inputs)
        self.notes: list[str] = []
        self.gaps = False
        self.single: list[Element] = []  # conditions that make a case on their own
        self.explored: list[tuple[Element, set[str]]] = []  # under these everything was looked for
        self.looked_at = 0

    def write(self) -> None:
        generic = hidden_parts(self.blocks)
        assert generic is not None  # derive refuses a pencil that is singular for all letters
        start = ConditionChain(self.blocks.ring)
        self.entries.enter(start, self.blocks, generic, generic.beyond(_nothing(generic)))
        self._explore(start, self.blocks, generic, ("input", "output"))

    def _explore(
        self, chain: ConditionChain, blocks: Blocks, known: HiddenParts, sides: Sequence[str]
    ) -> None:
        """Look at every candidate condition beyond those of the chain."""
        if not chain.ring.letters:
            return
        wanted: dict[str, _Candidate] = {}
        for side in sides:
            self.stage(f"conditions of the {side}s")
            flipped = blocks if side == "input" else blocks.transposed()
            generic = known.input if side == "input" else known.output
            try:
                found = candidate_conditions(flipped, generic, 1 if chain.images else 2)
            except UndecidedError:
                self._gap(f"the equations under which a mode hides from the {side}s are too large")
                continue
            if not found.found and any(any(row) for row in flipped.drive):
                self._gap(f"no single {side} was found whose conditions do not vanish identically")
            for condition in (*found.alone, *found.together):
                candidate = wanted.setdefault(str(condition), _Candidate(condition))
                candidate.sides.append(side)
                candidate.alone = candidate.alone or condition in found.alone
        deeper: list[_Branch] = []
        for candidate in wanted.values():
            if self._is_excluded(chain, candidate):
                continue
            if self.looked_at >= CASE_LIMIT:
                self._gap(f"only the first {CASE_LIMIT} conditions were looked at")
                return
            self.looked_at += 1
            deeper += self._look(chain, blocks, known, candidate)
        for branch in deeper:
            self._explore(*branch)
            if not chain.images:
                self.explored.append((branch[0].images[0].condition, set(branch[3])))

    def _is_excluded(self, chain: ConditionChain, candidate: _Candidate) -> bool:
        """Whether the plant is not defined there, or what was looked at before covers the condition."""
        condition = candidate.condition
        if not chain.images:
            return str(condition) in self.divisors
        for element in chain.leading:
            if not element % condition:
                # There the solution that was put in does not hold.
                if vanishing(chain.target, element, self.around).verdict is not Verdict.REFUTED:
                    self._gap("where a coefficient that was divided by vanishes too, nothing was looked for")
                return True
        covered = [element for element, sides in self.explored if sides >= set(candidate.sides)]
        for element in (*self.single, *self.derivation.assumed_nonzero, *covered):
            image = chain.image(Polynomial.of(chain.ring, element)).element
            if not image or not image % condition:
                return True
        return False

    def _look(
        self, chain: ConditionChain, blocks: Blocks, known: HiddenParts, candidate: _Candidate
    ) -> list[_Branch]:
        """Enter the cases of one condition; returned is where more equations are to be looked for."""
        condition = candidate.condition
        if not candidate.alone and len(condition) > LONGEST_CONDITION[0]:
            if vanishing(blocks.ring, condition, self.around).verdict is not Verdict.REFUTED:
                self._gap("cases that need several equations at once were not all looked for")
            return []
        solved = solve_for_letter(blocks.ring, condition)
        if not solved:
            self._unsolved(chain, blocks, candidate)
        deeper: list[_Branch] = []
        for image in solved:
            there = blocks.mapped(image.target, image.row)
            longer = chain.then(image)
            parts = hidden_parts(there)
            if parts is None:
                self.notes.append(
                    "where a condition holds the pencil is singular for every value of the variable"
                )
                continue
            before = known.imaged(image)
            extra = parts.beyond(before)
            if extra:
                self.entries.enter(longer, there, parts, extra)
                if not chain.images:
                    self.single.append(condition)
            if parts.verdict is not Verdict.PROVED:
                self._gap(parts.reason)
            rest = [
                side
                for side in candidate.sides
                if _degree(parts, side) == _degree(before, side) and self._may_need_more(chain, blocks, side)
            ]
            if rest and self._is_possible(image):
                if self._is_small(longer, there):
                    deeper.append((longer, there, parts, rest))
                else:
                    self._gap("cases that need several equations at once were not all looked for")
        return deeper

    def _may_need_more(self, chain: ConditionChain, blocks: Blocks, side: str) -> bool:
        """Losing a mode on a side takes as many equations as there are signals there, at most."""
        _, m, p = blocks.size
        needed = min(m if side == "input" else p, len(self.derivation.model.parameters))
        if len(chain.images) + 1 < needed and len(chain.images) + 1 >= DEPTH_LIMIT:
            self._gap(f"cases that need more than {DEPTH_LIMIT} equations at once were not looked for")
            return False
        return len(chain.images) + 1 < needed

    def _is_small(self, chain: ConditionChain, blocks: Blocks) -> bool:
        """Whether the conditions and the pencil are short enough for a search for one more equation."""
        longest = max(len(image.condition) for image in chain.images)
        return (
            not any(image.root for image in chain.images)
            and longest <= LONGEST_CONDITION[len(chain.images) - 1]
            and _terms(blocks) <= GROWTH_LIMIT * _terms(self.blocks)
        )

    def _is_possible(self, image: LetterImage) -> bool:
        return vanishing(image.source, image.condition, self.around).verdict is not Verdict.REFUTED

    def _unsolved(self, chain: ConditionChain, blocks: Blocks, candidate: _Candidate) -> None:
        inside = vanishing(blocks.ring, candidate.condition, self.around)
        if inside.verdict is Verdict.REFUTED:
            return
        reason = "cases that need several equations at once were not all looked for"
        if candidate.alone:
            reason = "no letter could be solved from the condition: which mode hides was not worked out"
            self.entries.enter_unsolved(chain, candidate.condition, candidate.sides, inside, reason)
        self._gap(reason)

    def _gap(self, note: str) -> None:
        self.gaps = True
        self.notes.append(note)


def _terms(blocks: Blocks) -> int:
    return sum(len(entry) for row in blocks.rows for entry in row)


def _nothing(parts: HiddenParts) -> HiddenParts:
    one = Polynomial.constant(parts.input.ring, 1)
    return HiddenParts(one, one, dict.fromkeys(parts.by_kind, one), Verdict.PROVED, "")


def _degree(parts: HiddenParts, side: str) -> int:
    return (parts.input if side == "input" else parts.output).degree
