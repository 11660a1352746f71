"""One section of a job: its answer in sight above, its entries below, its answers with their working."""

from __future__ import annotations

import flet as ft

from core.job.fields import CHOICES, FIELDS, FURTHER_PARTS, PART_TITLES, SECTIONS
from pwa import theme
from pwa.components.answer import AnswerStrip
from pwa.components.banner import Banners
from pwa.components.entry import ChoiceField, EntryField
from pwa.components.guard import guarded
from pwa.components.how_sure import HowSure
from pwa.components.notes import Answers, Further, Remarks
from pwa.components.paste import PasteButton
from pwa.components.words import Disclosure
from pwa.screens.sources import Limits, SourceList
from pwa.state.display import Display
from pwa.state.sheet import Layout, PartState, Sheet
from pwa.state.sureness import PLANS
from pwa.state.workspace import Preferences, Workspace

CHOICE_FIRST = ("dose",)  # sections in which a decision says which entries matter


@guarded
def SectionPane(sheet: Sheet, section: str, workspace: Workspace, preferences: Preferences) -> ft.Control:
    """Strip, entries, answers."""
    display = workspace.display(sheet)

    def shown() -> Display:
        return workspace.display(sheet)

    further = FURTHER_PARTS.get(section, ())
    ft.use_effect(lambda: ft.context.page.run_task(workspace.look, sheet, section), [section])
    return ft.Column(
        expand=True,
        spacing=0,
        horizontal_alignment=ft.CrossAxisAlignment.STRETCH,
        controls=[
            *([Banners(workspace.standing, workspace)] if sheet.locked else []),
            AnswerStrip(
                sheet.parts[section], SECTIONS[section], shown, sheet.sure[section] if section in PLANS else None
            ),
            ft.ListView(
                expand=True,
                padding=theme.PAD,
                spacing=theme.PAD,
                controls=[
                    *([SourceList(sheet.layout, sheet, shown)] if section == "sources" else []),
                    *_entries(sheet, section, display, often=True),
                    *([Limits(sheet.layout, sheet, display)] if section == "sources" else []),
                    *([PasteButton(sheet.job.id)] if section == "water" else []),
                    More(sheet, section, display),
                    HowSure(sheet.sure[section], sheet.job.id, shown),
                    Answers(sheet.parts[section], shown),
                    *[
                        control
                        for part in further
                        for control in (
                            Further(sheet.parts[part], PART_TITLES[part], sheet, shown, workspace.work_out),
                            PartEntries(sheet.parts[part], sheet, section, display),
                        )
                    ],
                    Remarks(sheet.parts[section], shown),
                ],
            ),
            NextBar(sheet.layout, sheet.job.id, section),
        ],
    )


def _entries(sheet: Sheet, section: str, display: Display, *, often: bool, part: str = "") -> list[ft.Control]:
    fields = [f.key for f in FIELDS.values() if f.section == section and f.often == often and f.part == part]
    choices = [c for c in CHOICES.values() if c.section == section and c.often == often and not part]
    decided = [ChoiceField(sheet.choices[c.key], c.label, c.help, c.options, sheet, key=c.key) for c in choices]
    entered = [EntryField(sheet.fields[key], sheet, display, key=key) for key in fields]
    return [*decided, *entered] if section in CHOICE_FIRST else [*entered, *decided]


@guarded
def PartEntries(state: PartState, sheet: Sheet, section: str, display: Display) -> ft.Control:
    """The entries that belong to a further part, once it has answers."""
    controls = _entries(sheet, section, display, often=True, part=state.key)
    if not controls or state.part is None or not state.part.answers:
        return ft.Container(height=0)
    return ft.Column(spacing=theme.PAD, controls=controls)


@guarded
def More(sheet: Sheet, section: str, display: Display) -> ft.Control:
    """Entries that are needed now and then, behind one tap."""
    opened, set_opened = ft.use_state(lambda: _any_entered(sheet, section))
    rare = _entries(sheet, section, display, often=False)
    if not rare:
        return ft.Container(height=0)
    return ft.Column(
        spacing=theme.PAD,
        controls=[
            Disclosure("Fewer entries" if opened else "More entries", "", opened, lambda event: set_opened(not opened)),
            *(rare if opened else []),
        ],
    )


def _any_entered(sheet: Sheet, section: str) -> bool:
    return any(sheet.fields[f.key].typed for f in FIELDS.values() if f.section == section and not f.often)


@guarded
def NextBar(layout: Layout, job_id: str, section: str) -> ft.Control:
    """On to the next section, or back to the sheet after the last; always within the thumb's reach."""
    order = list(SECTIONS)
    following = [key for key in order[order.index(section) + 1 :] if key in layout.sections][:1]
    label = f"Next: {SECTIONS[following[0]]}" if following else "Back to the sheet"
    route = "/".join([f"/job/{job_id}", *following])
    return ft.Container(
        padding=ft.Padding.symmetric(horizontal=theme.PAD, vertical=theme.GAP),
        border=ft.Border.only(top=ft.BorderSide(1, ft.Colors.OUTLINE_VARIANT)),
        bgcolor=ft.Colors.SURFACE,
        content=ft.Row(
            controls=[
                ft.FilledTonalButton(
                    label,
                    expand=True,
                    height=theme.TOUCH,
                    on_click=lambda event: ft.context.page.navigate(route),
                )
            ]
        ),
    )
