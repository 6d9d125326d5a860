"""Substances, products and their revisions."""

from typing import Any

from django.db.models import QuerySet
from django.utils import timezone
from rest_framework.request import Request
from rest_framework.response import Response

from chemicals.journal.selectors import get_attachment_for
from chemicals.register.models import Product, ProductRevision, Substance
from chemicals.register.selectors import (
    get_current_revision,
    get_product_for,
    get_substance_for,
    list_current_revisions_for,
    list_revisions_of,
    list_substances_for,
)
from chemicals.register.services import (
    LimitInput,
    LineInput,
    RevisionInput,
    add_starter_substances,
    change_substance,
    create_product,
    create_substance,
    revise_product,
)
from compliance.api.pagination import NewestFirst
from compliance.api.serializers import register as shapes
from compliance.api.serializers.finding import FindQuery
from compliance.api.views.base import ListCreateView, Lookup, WorkshopView, freeze
from compliance.api.views.finding import read_wanted
from compliance.premises.finding import find_products


class SubstancesView(ListCreateView):
    """Chemical species, of which products are made."""

    shape, input_class = shapes.SubstanceShape, shapes.SubstanceInput

    def rows(self) -> QuerySet[Substance]:
        """Return the substances."""
        return list_substances_for(self.member)

    def create(self, said: dict[str, Any]) -> Substance:
        """Create a substance."""
        return create_substance(actor=self.member, **said)


class StartersView(WorkshopView):
    """The usual substances of plating by name, CAS number and formula, without hazards."""

    shape, statuses = shapes.StartersShape, (201,)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Add those that are not here yet; what is here stays as it is."""
        return self.respond({"added": add_starter_substances(actor=self.member)}, 201)


class SubstanceView(WorkshopView):
    """One substance."""

    shape = shapes.SubstanceShape

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return the substance."""
        return self.respond(get_substance_for(self.member, kwargs["uuid"]))


class ChangeSubstanceView(WorkshopView):
    """Corrects a substance: what is left out stays as it is. What a composition names keeps its formula."""

    shape, input_class, statuses = shapes.SubstanceShape, shapes.SubstanceChange, (200,)

    def post(self, request: Request, **kwargs: Any) -> Response:
        """Correct the substance."""
        found = get_substance_for(self.member, kwargs["uuid"])
        said = self.read_body(request)
        names = ("name", "cas_number", "ec_number", "formula", "synonyms", "inert")
        kept = {name: getattr(found, name) for name in names if name not in said}
        return self.respond(change_substance(actor=self.member, substance=found, **kept, **said))


class _RevisionsView(ListCreateView):
    """Base of the views that write a revision."""

    shape = shapes.RevisionShape

    def build_revision(self, said: dict[str, Any]) -> RevisionInput:
        """Return what is known of the product, with the things that it names."""
        lookup = Lookup(self.member)
        found = [
            (lookup.find(f"lines.{number}.substance", get_substance_for, line["substance"]), line["content"])
            for number, line in enumerate(said.pop("lines", []))
        ]
        limits = []
        for number, row in enumerate(said.pop("limits", [])):
            of_what = lookup.find(f"limits.{number}.substance", get_substance_for, row.pop("substance", None))
            limits.append(LimitInput(substance=of_what, **row))
        sheet = lookup.find("safety_data_sheet", get_attachment_for, said.pop("safety_data_sheet", None))
        lookup.finish()
        inputs = tuple(LineInput(substance, content) for substance, content in found if substance is not None)
        return RevisionInput(lines=inputs, limits=tuple(limits), safety_data_sheet=sheet, **freeze(said))


class ProductsView(_RevisionsView):
    """Products in their current revisions: those that are looked for, else all."""

    input_class, query_class = shapes.ProductInput, FindQuery

    def rows(self) -> QuerySet[ProductRevision]:
        """Return the current revisions of what the query asks for."""
        today = timezone.localdate(self.now, self.member.workshop.zone)
        found = find_products(self.member, read_wanted(self.member, self.query), today)
        return list_current_revisions_for(self.member).filter(product__in=found.order_by().values("pk"))

    def create(self, said: dict[str, Any]) -> ProductRevision:
        """Create a product with its first revision."""
        name, supplier = said.pop("name"), said.pop("supplier", "")
        revision = self.build_revision(said)
        return create_product(actor=self.member, now=self.now, name=name, supplier=supplier, revision=revision)


class ProductView(WorkshopView):
    """One product in its current revision."""

    shape = shapes.RevisionShape

    def get(self, request: Request, **kwargs: Any) -> Response:
        """Return the current revision."""
        return self.respond(get_current_revision(get_product_for(self.member, kwargs["uuid"])))


class RevisionsView(_RevisionsView):
    """All revisions of a product, the newest first; a new one leaves the earlier ones as they were."""

    input_class = shapes.RevisionInput
    pagination_class = NewestFirst

    def rows(self) -> QuerySet[ProductRevision]:
        """Return the revisions."""
        return list_revisions_of(self._product())

    def create(self, said: dict[str, Any]) -> ProductRevision:
        """Write the next revision."""
        product = self._product()
        return revise_product(actor=self.member, now=self.now, product=product, revision=self.build_revision(said))

    def _product(self) -> Product:
        return get_product_for(self.member, self.kwargs["uuid"])
