"""What all views share: who asks, in which workshop, what may stand in the request, and one domain call."""

from abc import ABC, abstractmethod
from collections.abc import Callable, Iterable, Sequence
from contextlib import ExitStack
from datetime import datetime
from typing import Any, ClassVar, TypeVar
from uuid import UUID

from django.db.models import QuerySet
from django.http import HttpRequest
from django.http.response import HttpResponseBase
from django.utils import timezone
from django.utils.cache import patch_cache_control
from django.utils.translation import gettext as _
from django_scopes import scope
from rest_framework.generics import GenericAPIView
from rest_framework.mixins import ListModelMixin
from rest_framework.negotiation import BaseContentNegotiation
from rest_framework.parsers import BaseParser
from rest_framework.permissions import SAFE_METHODS
from rest_framework.renderers import BaseRenderer
from rest_framework.request import Request
from rest_framework.response import Response
from rest_framework.serializers import BaseSerializer

from chemicals.workshop.errors import FieldError, InvalidInputError, NotFoundError
from chemicals.workshop.models import Membership, Workshop
from chemicals.workshop.permissions import require_writer
from compliance.api.fields import Strict, read
from compliance.api.pagination import StableCursor
from compliance.api.parsers import StrictJSONParser
from compliance.api.schema import ApiSchema
from compliance.api.serializers.base import Shape
from compliance.api.serializers.query import NoQuery, PageQuery

T = TypeVar("T")


class OneKind(BaseContentNegotiation):
    """Every answer has one kind, whatever the request would accept."""

    def select_parser(self, request: Request, parsers: Iterable[BaseParser]) -> BaseParser | None:
        """Return the parser of the body's kind, if there is one."""
        kind = (request.content_type or "").partition(";")[0].strip().lower()
        return next((parser for parser in parsers if parser.media_type == kind), None)

    def select_renderer(
        self, request: Request, renderers: Iterable[BaseRenderer], format_suffix: str | None = None
    ) -> tuple[BaseRenderer, str]:
        """Return the one renderer."""
        renderer = next(iter(renderers))
        return renderer, renderer.media_type or ""


class ApiView(GenericAPIView[Any]):
    """Base of all views.

    ``shape`` is what an answer looks like, ``input_class`` what a body says, ``query_class`` what may stand after the
    question mark, ``statuses`` what a write may answer with, ``needs_key`` whether it takes an Idempotency-Key,
    ``media_types`` what a file may be, ``read_conflicts`` whether reading may meet a record that is being made.
    """

    schema: ApiSchema | None = ApiSchema()  # None keeps a view out of the description
    http_method_names = ("get", "head", "post")
    parser_classes: Sequence[type[BaseParser]] = (StrictJSONParser,)
    content_negotiation_class = OneKind
    shape: ClassVar[Any] = Shape
    input_class: ClassVar[type[Strict] | None] = None
    query_class: ClassVar[type[Strict]] = NoQuery
    statuses: ClassVar[tuple[int, ...]] = (201,)
    needs_key: ClassVar[bool] = False
    media_types: ClassVar[tuple[str, ...]] = ()
    read_conflicts: ClassVar[bool] = False
    query: dict[str, Any]

    def initial(self, request: Request, *args: Any, **kwargs: Any) -> None:
        """Let a member in, and read what stands after the question mark."""
        super().initial(request, *args, **kwargs)
        self.enter(request, **kwargs)
        self.query = read(self.query_class, _once(request))

    def enter(self, request: Request, **kwargs: Any) -> None:
        """Let every member in."""

    @property
    def now(self) -> datetime:
        """Return this moment: the faces read the clock, nothing below them does."""
        return timezone.now()

    def read_body(self, request: Request) -> dict[str, Any]:
        """Return what the body says, or raise ValidationError with everything that is wrong."""
        assert self.input_class is not None  # noqa: S101  (a view's mistake, not a request's)
        return read(self.input_class, request.data)

    def finalize_response(self, request: Request, response: Any, *args: Any, **kwargs: Any) -> Any:
        """Let nobody between the service and its client keep an answer."""
        found = super().finalize_response(request, response, *args, **kwargs)
        patch_cache_control(found, private=True, no_cache=True)
        return found

    def get_serializer_class(self) -> type[BaseSerializer[Any]]:
        """Return what a row of a list looks like."""
        return self.shape  # type: ignore[no-any-return]  # shapes of calculations are made at run time

    def respond(self, found: object, status: int = 200, **context: Any) -> Response:
        """Return a thing in the view's shape."""
        return Response(self.shape(found, context=context).data, status=status)


def _once(request: Request) -> dict[str, str]:
    """Return the query parameters; of two values it would be a guess which one is meant."""
    twice = [name for name, values in request.query_params.lists() if len(values) > 1]
    if twice:
        raise InvalidInputError([FieldError(name, _("This is written twice. Leave one out.")) for name in twice])
    return request.query_params.dict()


class WorkshopView(ApiView):
    """Base of all views of a workshop: the token's own one, in its scope; an observer only reads."""

    member: Membership

    def dispatch(self, request: HttpRequest, *args: Any, **kwargs: Any) -> HttpResponseBase:
        """Answer inside the workshop's scope."""
        with ExitStack() as self.scopes:
            return super().dispatch(request, *args, **kwargs)

    def enter(self, request: Request, **kwargs: Any) -> None:
        """Let members of this workshop in: strangers learn nothing, observers write nothing."""
        member = request.auth
        if not isinstance(member, Membership) or member.workshop.uuid != kwargs["workshop"]:
            raise NotFoundError(_("There is no such workshop."))
        if request.method not in SAFE_METHODS:
            require_writer(member)
        self.member = member
        self.scopes.enter_context(scope(workshop=member.workshop))


class ListView(ListModelMixin, WorkshopView, ABC):
    """A list in pages."""

    query_class = PageQuery
    pagination_class = StableCursor

    @abstractmethod
    def rows(self) -> QuerySet[Any]:
        """Return everything that the list shows."""

    def get_queryset(self) -> QuerySet[Any]:
        """Return the rows; none while the description is drawn, when nobody asks."""
        if getattr(self, "swagger_fake_view", False):
            return Workshop.objects.none()
        return self.rows()

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return one page."""
        return self.list(request, **kwargs)


class ListCreateView(ListView):
    """A list in pages, to which a POST adds."""

    @abstractmethod
    def create(self, said: dict[str, Any]) -> object:
        """Create the thing that the body describes: one domain call."""

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Create one."""
        return self.respond(self.create(self.read_body(request)), 201)


def freeze(said: dict[str, Any]) -> dict[str, Any]:
    """Return what a body says as a frozen input keeps it: lists as tuples."""
    return {name: tuple(value) if isinstance(value, list) else value for name, value in said.items()}


class Lookup:
    """Finds the things that a body names; what is missing is noted under its field and raised all at once."""

    def __init__(self, member: Membership) -> None:
        self.member = member
        self.errors: list[FieldError] = []

    def find(self, field: str, get: Callable[[Membership, Any], T], key: UUID | str | None) -> T | None:
        """Return the thing, or None if none is named."""
        if key is None:
            return None
        try:
            return get(self.member, key)
        except NotFoundError as error:
            self.errors.append(FieldError(field, str(error)))
            return None

    def find_all(self, field: str, get: Callable[[Membership, Any], T], keys: Iterable[UUID]) -> list[T]:
        """Return the things of a list; each missing one is noted under its number."""
        found = [self.find(f"{field}.{number}", get, key) for number, key in enumerate(keys)]
        return [thing for thing in found if thing is not None]

    def finish(self) -> None:
        """Raise everything that was noted."""
        if self.errors:
            raise InvalidInputError(self.errors)
