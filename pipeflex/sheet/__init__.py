"""What people see of an outcome: sentences, drawings, ledger, page. No physics."""

from pipeflex.sheet.design_text import read_design
from pipeflex.sheet.headline import Headline
from pipeflex.sheet.making import reopen, sheet
from pipeflex.sheet.page import Sheet
from pipeflex.sheet.scene import scene
from pipeflex.sheet.svg import svg

__all__ = ["Headline", "Sheet", "read_design", "reopen", "scene", "sheet", "svg"]
