"""The one error an action raises for something a person must mend."""

from __future__ import annotations


class Refused(Exception):
    """What is wrong, where, and what to do, in sentences for the person who asked.

    `field` names the form field it belongs to; `code` is stable for programs. Raised
    before anything is written: whoever sees it can be sure that nothing was half-saved.
    """

    def __init__(
        self,
        what: str,
        *,
        where: str = "",
        do: str = "",
        field: str = "",
        code: str = "refused",
    ) -> None:
        self.what, self.where, self.do = what, where, do
        self.field, self.code = field, code
        super().__init__(" ".join(part for part in (what, where, do) if part))
