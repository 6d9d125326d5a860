"""Which substances a product holds, from a composition by name, or from the numbers of its only substance."""

from collections.abc import Mapping, Sequence
from typing import Any

from chemicals.process.importing.register.columns import CAS, COMPOSITION, EC, FORMULA
from chemicals.process.importing.register.parts import Part
from chemicals.process.importing.register.substances import Substances
from chemicals.process.importing.values import CellError
from chemicals.register.inputs import LineInput
from chemicals.register.models import ProductRevision, Substance
from chemicals.register.selectors import solute_code

ANY_SHARE = "0-100 %"
"""What is known of a content that nobody wrote."""
NAMES = {CAS: "CAS number", EC: "EC number", FORMULA: "formula"}


class TargetError(CellError):
    """What is wrong with a cell of another column than that of the composition."""

    def __init__(self, target: str, message: str) -> None:
        super().__init__(message)
        self.target = target


class Composer:
    """Makes the lines of a product; ``remarks`` are what was taken for granted in the last one, by target."""

    def __init__(self, substances: Substances) -> None:
        self.substances = substances
        self.remarks: list[tuple[str, str]] = []

    def compose(
        self, product: str, said: Mapping[str, Any], current: ProductRevision | None
    ) -> tuple[LineInput, ...] | None:
        """Return the lines; None where rows say nothing of them, or nothing but what is here. Raises CellError."""
        self.remarks = []
        parts: Sequence[Part] = said.get(COMPOSITION, ())
        numbers = {target: said[target] for target in (CAS, EC, FORMULA) if target in said}
        if not numbers:
            if any(not part.name for part in parts):
                raise CellError("Which substance is this? Write its name before the content, or its CAS number.")
            found = tuple(LineInput(self.substances.find(part.name), part.content) for part in parts)
            return found if COMPOSITION in said else None
        if len(parts) > 1:
            target = next(iter(numbers))
            message = "The product has several substances. Write their numbers in the composition, in place of names."
            raise TargetError(target, message)
        name, content = (parts[0].name, parts[0].content) if parts else ("", "")
        substance = self._identify(product, name, numbers)
        if not content:
            kept = [] if current is None else list(current.lines.all())
            if [line.substance for line in kept] == [substance]:
                return None
            content = ANY_SHARE
            self.remarks.append((next(iter(numbers)), f"How much of it is in the product is not said: {ANY_SHARE}."))
        return (LineInput(substance, content),)

    def _identify(self, product: str, name: str, numbers: Mapping[str, str]) -> Substance:
        """Return the substance of a product that has only one: by its name or its numbers, else a new one."""
        cas, ec, formula = (numbers.get(target, "") for target in (CAS, EC, FORMULA))
        called = name or product
        texts = (name, cas, ec, called, "" if cas or ec else formula)
        found = next((row for text in texts if text and (row := self.substances.seek(text)) is not None), None)
        if found is None:
            return self.substances.make(called, cas_number=cas, ec_number=ec, formula=formula)
        self._compare(found, numbers)
        return found

    def _compare(self, found: Substance, numbers: Mapping[str, str]) -> None:
        """Refuse numbers that are not those of a known substance; one that nobody knew is noted on a fresh one only."""
        for target, number in numbers.items():
            kept = getattr(found, target)
            same = solute_code(kept) == solute_code(number) if target == FORMULA else kept == number
            if kept and not same:
                message = f'"{found.name}" has the {NAMES[target]} {kept} in the register. Mend the one that is wrong.'
                raise TargetError(target, message)
            if not kept and found.pk is None and target != FORMULA:
                setattr(found, target, number)
            elif not kept:
                remark = f'The register has no {NAMES[target]} of "{found.name}"; add it there.'
                self.remarks.append((target, remark))
