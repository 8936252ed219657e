"""The menu that chooses what specimens are compared with: groups of the study, published values, nothing."""

from __future__ import annotations

from PySide6.QtGui import QActionGroup
from PySide6.QtWidgets import QMenu, QWidget

from panelview.assess.review import Review
from panelview.assess.settings import ReferenceChoice
from panelview.desktop import choices
from panelview.desktop.reviewing import Reviewing


def reference_choices(review: Review, start: ReferenceChoice) -> list[tuple[str, ReferenceChoice]]:
    """What can be compared with, in words; first what the program was started with."""
    usual = "Controls of the study, else published values" if start.kind == "auto" else "As started"
    made = [(usual, start)]
    groups = dict.fromkeys(s.group for s in review.specimens if s.group)
    made += [(f"Group “{group}”", ReferenceChoice("group", group)) for group in groups]
    made += [
        ("Published concentrations", ReferenceChoice("published")),
        ("Nothing", ReferenceChoice("none")),
    ]
    return made


class ReferenceMenu(QMenu):
    """Filled anew for each panel; the choice in use is ticked."""

    def __init__(self, reviewing: Reviewing, parent: QWidget) -> None:
        super().__init__("Compare &with", parent)
        self._reviewing = reviewing
        self._group = QActionGroup(self)
        self.setEnabled(False)
        reviewing.opened.connect(self._fill)
        reviewing.reviewed.connect(self._fill)

    def _fill(self) -> None:
        review = self._reviewing.review
        assert review is not None
        self.clear()
        self.setEnabled(True)
        for text, choice in reference_choices(review, self._reviewing.start.reference):
            action = self.addAction(text)
            action.setCheckable(True)
            action.setChecked(choice == self._reviewing.settings.reference)
            self._group.addAction(action)
            action.triggered.connect(lambda _=False, c=choice: self._choose(c))

    def _choose(self, choice: ReferenceChoice) -> None:
        self._reviewing.apply(choices.with_reference(self._reviewing.wanted, choice))
