"""Texts people type: bounded where they enter the record, kept apart where private."""

from __future__ import annotations

from stakes.record import Refused

LONGEST = 120
LONGEST_REMARK = 2000


def short(text: str, field: str, longest: int = LONGEST) -> str:
    """A text of one line; Refused when it is too long to be one."""
    plain = " ".join(text.replace("\x00", "").split())
    if len(plain) > longest:
        raise Refused(
            f"This text has {len(plain)} letters.",
            do=f"Say it in {longest}, and the rest as a remark.",
            field=field,
            code="too long",
        )
    return plain


def kept_apart(remark: str) -> dict[str, str]:
    """A free remark as a private part, outside the hashed body; none when empty."""
    plain = remark.replace("\x00", "").strip()
    if len(plain) > LONGEST_REMARK:
        raise Refused(
            f"The remark has {len(plain)} letters.",
            do=f"Say it in {LONGEST_REMARK}.",
            field="remark",
            code="too long",
        )
    return {"remark": plain} if plain else {}
