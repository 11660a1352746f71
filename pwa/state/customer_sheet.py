"""The customer's sheet as a file: the user's own firm, and the making of the PDF."""

from __future__ import annotations

import asyncio
import base64
import binascii
import json
import logging
from collections.abc import Callable
from dataclasses import asdict, dataclass, fields, replace
from typing import Any

from pwa.services.files import file_name
from pwa.services.storage import StorageError
from pwa.sheet.data import Firm
from pwa.state.sheet import Sheet
from pwa.state.signoff import DATE, NAME, signed_job
from pwa.state.workspace import Workspace

log = logging.getLogger("tapwright")

SETTING = "firm"
BREATH = 0.1  # s for the screen to show a sentence before the drawing begins
PAPERS = ("A4", "Letter")
LARGEST_LOGO = 1_000_000  # bytes
MONTHS = (
    *("January", "February", "March", "April", "May", "June"),
    *("July", "August", "September", "October", "November", "December"),
)


@dataclass(frozen=True, slots=True)
class FirmSetting:
    """The user's firm as it is kept and edited."""

    name: str = ""
    lines: str = ""  # address, telephone, licence, one below the other
    terms: str = ""
    logo: str = ""  # base64 of a PNG or JPEG
    paper: str = ""  # A4 | Letter; "" goes by the user's units

    def to_text(self) -> str:
        """The firm as JSON."""
        return json.dumps(asdict(self))

    @classmethod
    def from_text(cls, text: str | None) -> FirmSetting:
        """A firm from JSON; what is missing or of the wrong kind is empty."""
        try:
            held = json.loads(text or "{}")
        except (ValueError, RecursionError):
            held = {}
        held = held if isinstance(held, dict) else {}
        names = {column.name for column in fields(cls)}
        kept = cls(**{name: value for name, value in held.items() if name in names and isinstance(value, str)})
        return kept if kept.paper in PAPERS else replace(kept, paper="")

    def firm(self) -> Firm:
        """The firm as the sheet takes it."""
        lines = tuple(filter(None, (line.strip() for line in self.lines.splitlines())))
        try:
            logo = base64.b64decode(self.logo, validate=True) or None
        except (binascii.Error, ValueError):
            logo = None
        return Firm(self.name.strip(), lines, logo, self.terms.strip())

    def with_logo(self, data: bytes) -> FirmSetting:
        """The same firm with another logo, or none."""
        return replace(self, logo=base64.b64encode(data).decode("ascii"))


@dataclass(frozen=True, slots=True)
class Made:
    """A finished PDF, or the sentence that says why there is none."""

    name: str = ""
    pdf: bytes = b""
    said: tuple[str, ...] = ()


async def read_firm(workspace: Workspace) -> FirmSetting:
    """The firm that is kept."""
    return FirmSetting.from_text(await workspace.storage.get_setting(SETTING))


async def keep_firm(workspace: Workspace, firm: FirmSetting) -> None:
    """Keep the firm; where that fails the user is told."""
    try:
        await workspace.storage.set_setting(SETTING, firm.to_text())
    except StorageError as error:
        workspace.notice.say(str(error))


def paper_of(firm: FirmSetting, workspace: Workspace, sheet: Sheet) -> str:
    """The paper that was chosen, or the one of the user's units."""
    return firm.paper or ("Letter" if workspace.display(sheet).unit_set == "us" else "A4")


async def make_pdf(workspace: Workspace, sheet: Sheet, firm: FirmSetting, day: str, say: Callable[[str], Any]) -> Made:
    """The sheet of a job as a PDF; `day` is an ISO date, `say` shows how far it is."""
    try:
        say("Loading what draws the sheet …")
        await workspace.host.load_pdf()
        say("Drawing the sheet …")
        await asyncio.sleep(BREATH)
        drawn = _drawn(workspace, sheet, firm, day)
    except Exception as error:  # whatever fails, the user gets a sentence and goes on
        log.exception("the sheet could not be made")
        return Made(said=(f"The sheet could not be made ({error}). Try again.",))
    return Made(file_name(sheet.job.name or "job", "pdf"), drawn.pdf, drawn.notes)


def _drawn(workspace: Workspace, sheet: Sheet, firm: FirmSetting, day: str) -> Any:
    from pwa.sheet.content import Signed, sheet_of  # they need numpy and what was loaded just now
    from pwa.sheet.draw import draw_sheet

    assessment = workspace.assessed(sheet.job)
    parts = {section: getattr(assessment, section) for section in sheet.layout.sections}
    found, choices = signed_job(workspace, sheet), sheet.job.choices
    signed = found and Signed(found.result, choices.get(NAME, ""), shown_date(choices.get(DATE, "")))
    data = sheet_of(
        sheet.job,
        parts,
        workspace.display(sheet),
        firm.firm(),
        signed=signed,
        date=shown_date(day),
        day=day,
        paper=paper_of(firm, workspace, sheet),
    )
    return draw_sheet(data)


def shown_date(day: str) -> str:
    """An ISO date as it is written: "4 May 2031"; what is no date stays as it is."""
    year, _, rest = day.partition("-")
    month, _, number = rest.partition("-")
    if not (month.isdigit() and number.isdigit() and 1 <= int(month) <= len(MONTHS)):
        return day
    return f"{int(number)} {MONTHS[int(month) - 1]} {year}"
