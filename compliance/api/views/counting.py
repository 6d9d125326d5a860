"""Count days: start, note what is seen, compare with the books, finish."""

from typing import Any

from django.db.models import QuerySet
from rest_framework.request import Request
from rest_framework.response import Response

from chemicals.process.counting.selectors import (
    find_countable_for,
    get_count_day_for,
    get_count_line_for,
    list_count_days_for,
    list_lines_of,
    reckon_count,
)
from chemicals.process.counting.services import SeenInput, abandon_count, note_line, start_count, take_line_back
from chemicals.process.models import CountDay, CountLine, Seen
from chemicals.workshop.selectors import get_place_for
from compliance.api.pagination import NewestFirst
from compliance.api.serializers import counting as shapes
from compliance.api.serializers.waste import NothingInput
from compliance.api.views.base import ListCreateView, Lookup, WorkshopView
from compliance.clearance.counting import finish_count


class CountDaysView(ListCreateView):
    """Counts, the latest first."""

    shape, input_class, pagination_class = shapes.CountDayShape, shapes.CountDayInput, NewestFirst

    def rows(self) -> QuerySet[CountDay]:
        """Return the counts."""
        return list_count_days_for(self.member)

    def create(self, said: dict[str, Any]) -> CountDay:
        """Start a count of what stands at a place, or of everything. One is open at a place at a time."""
        lookup = Lookup(self.member)
        place = lookup.find("place", get_place_for, said.get("place"))
        lookup.finish()
        made = start_count(actor=self.member, now=self.now, place=place, note=said.get("note", ""))
        return get_count_day_for(self.member, made.uuid)


class CountDayView(WorkshopView):
    """One count."""

    shape = shapes.CountDayShape

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return the count."""
        return self.respond(get_count_day_for(self.member, kwargs["uuid"]))


class CountLinesView(ListCreateView):
    """Everything that was said on a count, the latest first, also what was taken back."""

    shape, input_class, pagination_class = shapes.CountLineShape, shapes.CountLineInput, NewestFirst

    def rows(self) -> QuerySet[CountLine]:
        """Return the lines."""
        return list_lines_of(self.member, get_count_day_for(self.member, self.kwargs["uuid"]))

    def create(self, said: dict[str, Any]) -> CountLine:
        """Note what was seen of a container. Saved at once; what was said of it before on this count is taken back."""
        day = get_count_day_for(self.member, self.kwargs["uuid"])
        vessel = find_countable_for(self.member, said.pop("code"))
        seen = SeenInput(said=Seen(said.pop("said", Seen.AMOUNT)), **said)
        made = note_line(actor=self.member, now=self.now, day=day, vessel=vessel, seen=seen)
        return get_count_line_for(self.member, day, made.uuid)


class TakeLineBackView(WorkshopView):
    """Takes a line of an open count back; it is kept, with who and when."""

    shape, input_class, statuses = shapes.CountLineShape, NothingInput, (200,)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Take it back."""
        self.read_body(request)
        day = get_count_day_for(self.member, kwargs["uuid"])
        line = get_count_line_for(self.member, day, kwargs["line"])
        take_line_back(actor=self.member, now=self.now, line=line)
        return self.respond(get_count_line_for(self.member, day, kwargs["line"]))


class CountPreviewView(WorkshopView):
    """A count against the books: what differs, and what was not seen yet."""

    shape = shapes.ReckoningShape

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Compare; this writes nothing."""
        return self.respond(reckon_count(self.member, get_count_day_for(self.member, kwargs["uuid"])))


class FinishCountView(WorkshopView):
    """Records a count for every line that differs, dated when it was seen; all of them or none.

    A count that is finished already is returned as it is. What is wrong is said by container: ``lines.`` and its code.
    """

    shape, input_class, statuses = shapes.CountDayShape, NothingInput, (200,)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Finish it."""
        self.read_body(request)
        day = get_count_day_for(self.member, kwargs["uuid"])
        finish_count(actor=self.member, now=self.now, day=day)
        return self.respond(get_count_day_for(self.member, kwargs["uuid"]))


class AbandonCountView(WorkshopView):
    """Ends a count without any entry."""

    shape, input_class, statuses = shapes.CountDayShape, NothingInput, (200,)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Abandon it."""
        self.read_body(request)
        abandon_count(actor=self.member, now=self.now, day=get_count_day_for(self.member, kwargs["uuid"]))
        return self.respond(get_count_day_for(self.member, kwargs["uuid"]))
