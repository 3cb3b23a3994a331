"""Check every combination of options and conditions, and tell which patch a problem needs."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import replace
from itertools import islice
from typing import TYPE_CHECKING

from enclosure_check.description.case import Case
from enclosure_check.description.merge import merge_patch
from enclosure_check.description.positions import positions
from enclosure_check.description.problems import (
    DocumentError,
    FieldErrors,
    FieldProblem,
    Problem,
    dotted,
    nearest,
    quoted,
)
from enclosure_check.description.quick import Known, validated
from enclosure_check.description.resolve import resolve
from enclosure_check.description.tolerances import like_paths, matches_number
from enclosure_check.description.yaml_nodes import MappingNode, locate

if TYPE_CHECKING:
    from enclosure_check.description.document import Document
    from enclosure_check.description.listed import PartLists

# Checking further combinations ends once this many different problems are found.
MAX_PROBLEMS = 500
BASE = "base"

# An option's name and a condition's name; None without one.
Combination = tuple[str | None, str | None]


class Checked:
    """The combinations of a document: their cases, and which problem arises in which."""

    def __init__(
        self,
        file: str,
        node: MappingNode,
        options: Mapping[str, MappingNode],
        conditions: Mapping[str, MappingNode],
        condition_names: Iterable[str],
        lists: PartLists | None = None,
    ) -> None:
        self.file = file
        self.lists = lists
        own = ("options", "conditions")
        self.base = MappingNode(
            {key: value for key, value in node.entries.items() if key not in own},
            {key: mark for key, mark in node.marks.items() if key not in own},
            node.line,
            node.column,
        )
        self.options, self.conditions = options, conditions
        self.condition_names = tuple(condition_names)
        self.cases: dict[Combination, Case] = {}
        self.known: Known = {}
        self.merged: list[MappingNode] = []
        self.tolerances: dict[str, Problem] = {}
        # Combinations whose models are valid, so that they were resolved.
        self.valid: set[Combination] = set()
        # By problem, whether it was found when resolving, and the combinations it arises in.
        self.found: dict[Problem, tuple[bool, set[Combination]]] = {}

    def check(self, combinations: Sequence[Combination]) -> None:
        """Validate and resolve the combinations; on any problem the bare base as well."""
        for combination in combinations:
            self._check_one(combination)
            if len(self.found) > MAX_PROBLEMS:
                break
        for problem in islice(self._unmatched_tolerances(), MAX_PROBLEMS):
            self.found[problem] = (True, {*self.valid, (None, None)})
        if self.found and (None, None) not in combinations:
            known = set(self.found)
            self._check_one((None, None))
            self.found = {each: where for each, where in self.found.items() if each in known}

    def _check_one(self, combination: Combination) -> None:
        option, condition = combination
        patches = []
        if option is not None:
            patches.append(self.options[option])
        if condition is not None:
            patches.append(self.conditions[condition])
        node, listed, unread = self.base, None, False
        try:
            if self.lists is not None:
                try:
                    node, listed = self.lists.put_in(node, patches)
                except DocumentError as error:
                    for problem in error.problems:
                        self._note(problem, False, combination)
                    unread = True
            for patch in patches:
                node = merge_patch(node, patch)
            if unread:  # parts of the document's own may want their listed half
                kept = {key: each for key, each in node.entries.items() if key != "parts"}
                node = replace(node, entries=kept)
            document = validated(node, self.file, self.known)
        except DocumentError as error:
            for problem in error.problems:
                self._note(problem, False, combination)
            return
        if unread:
            return
        self.valid.add(combination)
        self.merged.append(node)
        for pattern in document.tolerances:
            if pattern not in self.tolerances:
                self.tolerances[pattern] = self._located(
                    FieldProblem(("tolerances", pattern), "matches no number here"), node
                )
        problems = list(self._measured(document))
        try:
            case = resolve(document, condition or BASE, option, listed)
        except FieldErrors as error:
            problems += error.problems
        else:
            found = positions(node, case.walls)
            if self.lists is not None:
                found = self.lists.placed_positions(found)
            case = replace(case, positions=found)
            if document.tolerances:
                from enclosure_check.description.numbers import stated_tolerances

                case = replace(case, tolerances=stated_tolerances(node, document))
            self.cases[combination] = case
        for each in problems:
            self._note(self._located(each, node), True, combination)

    def _note(self, problem: Problem, resolving: bool, combination: Combination) -> None:
        self.found.setdefault(problem, (resolving, set()))[1].add(combination)

    def _located(self, problem: FieldProblem, node: MappingNode) -> Problem:
        at = locate(node, problem.path)
        return Problem(self.file, *at, dotted(problem.path), problem.message)

    def _measured(self, document: Document) -> Iterator[FieldProblem]:
        """Check that each run on the bench names a condition it was run under."""
        names = self.condition_names
        for run, measured in document.measured.items():
            given = measured.condition
            if given is None and names:
                yield FieldProblem(
                    ("measured", run, "condition"),
                    f"missing; needs one of the conditions {', '.join(map(quoted, names))}",
                )
            elif given is not None and given not in names:
                yield FieldProblem(
                    ("measured", run, "condition"),
                    f"given {quoted(given)}, which is no condition{nearest(given, names)}",
                )

    def _unmatched_tolerances(self) -> Iterator[Problem]:
        """Give a problem for each tolerance that matches no number in any combination."""
        told = 0
        for pattern, problem in self.tolerances.items():
            if any(matches_number(node, pattern, top=True) for node in self.merged):
                continue
            # To look through every combination for each would take long; one is like the next.
            near = nearest(pattern, like_paths(self.merged[:1], pattern)) if told < 10 else ""
            told += 1
            message = f"{problem.message}{near}"
            yield Problem(self.file, problem.line, problem.column, problem.field, message)

    def problems(self, combinations: Sequence[Combination]) -> Iterator[Problem]:
        """Give every problem once, naming the patches it arises under if not everywhere."""
        for problem, (resolving, where) in self.found.items():
            reached = [each for each in combinations if not resolving or each in self.valid]
            under = self._under(where, reached, resolving)
            yield Problem(
                problem.file,
                problem.line,
                problem.column,
                problem.field,
                f"{problem.message}{under}",
            )

    def _under(
        self, where: set[Combination], reached: Sequence[Combination], resolving: bool
    ) -> str:
        """Name the patches a problem needs to arise; empty when it arises without any."""
        base: Combination = (None, None)
        bare = [each for each in reached if each[0] is None]
        # With conditions the base is no case, and may be unfit for a reason of its own.
        unknown = bool(self.conditions) and resolving and base not in self.valid
        if where.issuperset(bare) and (base in where or unknown):
            return ""
        conditions = [each[1] for each in bare if each[1] is not None and each in where]
        if conditions:
            return f" (under {_names('condition', conditions)})"
        by_option: dict[str, list[Combination]] = {}
        for each in reached:
            if each[0] is not None:
                by_option.setdefault(each[0], []).append(each)
        options = [option for option, all_of in by_option.items() if where.issuperset(all_of)]
        if options:
            return f" (under {_names('option', options)})"
        pairs = [each for each in reached if each in where]
        first = [
            _names(what, [name])
            for what, name in zip(("option", "condition"), pairs[0], strict=True)
            if name
        ]
        more = f" and {len(pairs) - 1} more combinations" if len(pairs) > 1 else ""
        return f" (under {' and '.join(first)}{more})"


def _names(what: str, names: Sequence[str]) -> str:
    shown = [quoted(name) for name in names[:3]]
    if len(names) > len(shown):
        shown.append(f"{len(names) - len(shown)} more")
    if len(shown) == 1:
        return f"{what} {shown[0]}"
    return f"{what}s {', '.join(shown[:-1])} and {shown[-1]}"
