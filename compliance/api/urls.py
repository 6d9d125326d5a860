"""The addresses of the API. Lists and things end in a slash; verbs and files do not."""

from django.urls import URLPattern, include, path, register_converter

from compliance.api.views import (
    books,
    calculations,
    containers,
    counting,
    doors,
    empties,
    entries,
    exports,
    finding,
    imports,
    papers,
    places,
    premises,
    readings,
    register,
    together,
    vessels,
    waste,
    workshop,
)
from compliance.api.views.description import SchemaView


class Anything:
    """The rest of an address, line breaks included: nothing under the API is answered with a page."""

    regex = r"[\s\S]+"

    def to_python(self, value: str) -> str:
        """Return it as it is."""
        return value

    def to_url(self, value: str) -> str:
        """Return it as it is."""
        return value


register_converter(Anything, "anything")

WORKSHOP: list[URLPattern] = [
    path("", workshop.WorkshopDetailView.as_view(), name="api-workshop"),
    path("places/", workshop.PlacesView.as_view(), name="api-places"),
    path("places/<uuid:uuid>/", workshop.PlaceView.as_view(), name="api-place"),
    path("places/<uuid:uuid>/change", places.ChangePlaceView.as_view(), name="api-change-place"),
    path("violations/", places.ViolationsView.as_view(), name="api-violations"),
    path("limits/", places.LimitsView.as_view(), name="api-limits"),
    path("limits/<uuid:uuid>/change", places.ChangeLimitView.as_view(), name="api-change-limit"),
    path("limits/<uuid:uuid>/remove", places.RemoveLimitView.as_view(), name="api-remove-limit"),
    path("keep-apart/", places.KeepApartView.as_view(), name="api-keep-apart"),
    path("keep-apart/<uuid:uuid>/change", places.ChangeKeepApartView.as_view(), name="api-change-keep-apart"),
    path("keep-apart/<uuid:uuid>/remove", places.RemoveKeepApartView.as_view(), name="api-remove-keep-apart"),
    path("assessments/", places.AssessmentsView.as_view(), name="api-assessments"),
    path("assessments/<uuid:uuid>/remove", places.RemoveAssessmentView.as_view(), name="api-remove-assessment"),
    path("substances/", register.SubstancesView.as_view(), name="api-substances"),
    path("substances/usual", register.StartersView.as_view(), name="api-starters"),
    path("substances/<uuid:uuid>/", register.SubstanceView.as_view(), name="api-substance"),
    path("substances/<uuid:uuid>/change", register.ChangeSubstanceView.as_view(), name="api-change-substance"),
    path("products/", register.ProductsView.as_view(), name="api-products"),
    path("products/<uuid:uuid>/", register.ProductView.as_view(), name="api-product"),
    path("products/<uuid:uuid>/revisions/", register.RevisionsView.as_view(), name="api-revisions"),
    path("imports/", imports.ImportsView.as_view(), name="api-imports"),
    path("imports/<uuid:uuid>/", imports.ImportView.as_view(), name="api-import"),
    path("imports/<uuid:uuid>/preview", imports.ImportPreviewView.as_view(), name="api-import-preview"),
    path("imports/<uuid:uuid>/record", imports.ImportRecordView.as_view(), name="api-import-record"),
    path("vessels/", vessels.VesselsView.as_view(), name="api-vessels"),
    path("vessels/<uuid:uuid>/", vessels.VesselView.as_view(), name="api-vessel"),
    path("vessels/<uuid:uuid>/care", containers.CareView.as_view(), name="api-care"),
    path("vessels/<uuid:uuid>/changes/", containers.ChangesView.as_view(), name="api-vessel-changes"),
    path("containers/", finding.FoundContainersView.as_view(), name="api-containers"),
    path("containers/receive", containers.ReceiveView.as_view(), name="api-receive-containers"),
    path("containers/change", containers.ChangeManyView.as_view(), name="api-change-containers"),
    path("vessels/<uuid:uuid>/ledger/", books.VesselLedgerView.as_view(), name="api-vessel-ledger"),
    path("vessels/<uuid:uuid>/decanted-label", premises.DecantedLabelView.as_view(), name="api-decanted-label"),
    path("empty-containers/", empties.EmptiesView.as_view(), name="api-empty-containers"),
    path("empty-containers/put-away", empties.PutAwayView.as_view(), name="api-put-away"),
    path("empty-containers/here-again", empties.HereAgainView.as_view(), name="api-here-again"),
    path("labels", premises.LabelsView.as_view(), name="api-labels"),
    path("emergency-sheet/", premises.EmergencySheetView.as_view(), name="api-emergency-sheet"),
    path("emergency-sheet/issue", premises.IssueEmergencySheetView.as_view(), name="api-issue-emergency-sheet"),
    path("emergency-numbers/", premises.EmergencyNumbersView.as_view(), name="api-emergency-numbers"),
    path("chemical-list/", premises.ChemicalsView.as_view(), name="api-chemical-list"),
    path("chemical-list/issue", premises.IssueChemicalsView.as_view(), name="api-issue-chemical-list"),
    path("chemical-list/rules/", premises.ListRulesView.as_view(), name="api-list-rules"),
    path("count-days/", counting.CountDaysView.as_view(), name="api-count-days"),
    path("count-days/<uuid:uuid>/", counting.CountDayView.as_view(), name="api-count-day"),
    path("count-days/<uuid:uuid>/lines/", counting.CountLinesView.as_view(), name="api-count-lines"),
    path(
        "count-days/<uuid:uuid>/lines/<uuid:line>/take-back",
        counting.TakeLineBackView.as_view(),
        name="api-take-line-back",
    ),
    path("count-days/<uuid:uuid>/preview/", counting.CountPreviewView.as_view(), name="api-count-preview"),
    path("count-days/<uuid:uuid>/finish", counting.FinishCountView.as_view(), name="api-finish-count"),
    path("count-days/<uuid:uuid>/abandon", counting.AbandonCountView.as_view(), name="api-abandon-count"),
    path("tanks/", vessels.TanksView.as_view(), name="api-tanks"),
    path("tanks/<uuid:uuid>/", vessels.TankView.as_view(), name="api-tank"),
    path("tanks/<uuid:uuid>/level-table/", readings.LevelTableView.as_view(), name="api-level-table"),
    path("tanks/<uuid:uuid>/changes/", readings.TankChangesView.as_view(), name="api-tank-changes"),
    path("vessels/<uuid:uuid>/readings/", readings.ReadingsView.as_view(), name="api-readings"),
    path("instruments/", readings.InstrumentsView.as_view(), name="api-instruments"),
    path("instruments/<uuid:uuid>/", readings.InstrumentView.as_view(), name="api-instrument"),
    path("instruments/<uuid:uuid>/change", readings.ChangeInstrumentView.as_view(), name="api-change-instrument"),
    path("rack-types/", vessels.RackTypesView.as_view(), name="api-rack-types"),
    path("rack-types/<uuid:uuid>/", vessels.RackTypeView.as_view(), name="api-rack-type"),
    path("routes/", vessels.RoutesView.as_view(), name="api-routes"),
    path("routes/<uuid:uuid>/", vessels.RouteView.as_view(), name="api-route"),
    path("entries/", entries.EntriesView.as_view(), name="api-entries"),
    path("entries/<uuid:uuid>/", entries.EntryView.as_view(), name="api-entry"),
    path("balances/", entries.MetalsView.as_view(), name="api-balances"),
    path("balances/<str:metal>/", entries.BalanceView.as_view(), name="api-balance"),
    *(path(f"exports/{book}", view.as_view(), name=f"api-export-{book}") for book, view in exports.VIEWS.items()),
    path("differences/", books.DifferencesView.as_view(), name="api-differences"),
    path("books/", books.BooksView.as_view(), name="api-books"),
    path("periods/", books.PeriodsView.as_view(), name="api-periods"),
    path("periods/<uuid:uuid>/", books.PeriodView.as_view(), name="api-period"),
    path("periods/<uuid:uuid>/reopen", books.ReopenView.as_view(), name="api-reopen"),
    path("waste-streams/", waste.StreamsView.as_view(), name="api-waste-streams"),
    path("waste-streams/<uuid:uuid>/", waste.StreamView.as_view(), name="api-waste-stream"),
    path("waste-containers/", waste.ContainersView.as_view(), name="api-waste-containers"),
    path("waste-containers/<uuid:uuid>/", waste.ContainerView.as_view(), name="api-waste-container"),
    path("waste-containers/<uuid:uuid>/close", waste.CloseView.as_view(), name="api-close"),
    path("waste-containers/<uuid:uuid>/label", waste.LabelView.as_view(), name="api-label"),
    path("receivers/", waste.ReceiversView.as_view(), name="api-receivers"),
    path("receivers/<uuid:uuid>/", waste.ReceiverView.as_view(), name="api-receiver"),
    path("drop-offs/", waste.DropOffsView.as_view(), name="api-drop-offs"),
    path("drop-offs/<uuid:uuid>/", waste.DropOffView.as_view(), name="api-drop-off"),
    path("drop-offs/<uuid:uuid>/pack", waste.PackView.as_view(), name="api-pack"),
    path("drop-offs/<uuid:uuid>/hand-over", waste.HandOverView.as_view(), name="api-hand-over"),
    path("papers/", papers.PapersView.as_view(), name="api-papers"),
    path("papers/<uuid:uuid>/", papers.PaperView.as_view(), name="api-paper"),
    path("papers/<uuid:uuid>.pdf", papers.PaperPdfView.as_view(), name="api-paper-pdf"),
    path("attachments/", papers.AttachmentsView.as_view(), name="api-attachments"),
    path("attachments/<str:sha256>", papers.AttachmentView.as_view(), name="api-attachment"),
    path("records", together.RecordAllView.as_view(), name="api-records"),
    path("records/preview", together.PreviewAllView.as_view(), name="api-records-preview"),
    *(path(f"preview/{verb}", view.as_view(), name=f"api-preview-{verb}") for verb, view in doors.PREVIEWS.items()),
    *(path(f"record/{verb}", view.as_view(), name=f"api-record-{verb}") for verb, view in doors.RECORDS.items()),
]

urlpatterns = [
    path("schema", SchemaView.as_view(), name="api-schema"),
    path("workshops/", workshop.WorkshopsView.as_view(), name="api-workshops"),
    path("workshops/<uuid:workshop>/", include(WORKSHOP)),
    path("calculations/", calculations.CalculationsView.as_view(), name="api-calculations"),
    *(
        path(f"calculations/{name}", view.as_view(), name=f"api-calculate-{name}")
        for name, view in calculations.VIEWS.items()
    ),
    path("", workshop.NowhereView.as_view(), name="api-root"),
    path("<anything:rest>", workshop.NowhereView.as_view(), name="api-nowhere"),
]
