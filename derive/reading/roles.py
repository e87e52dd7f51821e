"""Roles of capacitors and inductors, and the bands that a file asks for."""

from __future__ import annotations

from typing import Any, get_args

from derive.quantities.words import did_you_mean, listed, quoted
from derive.reading.document import Document
from derive.reading.fields import described
from derive.topology.topology import BandName, Role

ROLES: tuple[Role, ...] = tuple(role for role in get_args(Role) if role)
BANDS: tuple[BandName, ...] = get_args(BandName)
_BANDS_CURE = 'write bands = ["low", "mid", "high"] or leave it out'


def role(document: Document, raw: Any, item: str, *path: str | int) -> Role:
    """Give the role that stands there.

    Raises: InputError for anything but coupling, bypass or parasitic.
    """
    if not isinstance(raw, str):
        raise document.error(
            f"{item}: role wants a word, not {described(raw)}", *path, cure='write role = "coupling"'
        )
    for known in ROLES:
        if raw == known:
            return known
    raise document.error(
        f"{item}: the role {quoted(raw)} is not known",
        *path,
        cure=did_you_mean(raw, ROLES, f"the roles are {listed(ROLES)}"),
    )


def read_bands(document: Document) -> tuple[BandName, ...]:
    """Give the bands that the file asks for, in the order of frequency; none where it does not.

    Raises: InputError for a name that is no band, one written twice, or another order.
    """
    if "bands" not in document.data:
        return ()
    raw = document.data["bands"]
    if not isinstance(raw, list) or not raw:
        found = "an empty list" if raw == [] else described(raw)
        raise document.error(f"bands wants a list of bands, not {found}", "bands", cure=_BANDS_CURE)
    bands: list[BandName] = []
    for i, item in enumerate(raw):
        if item not in BANDS:
            shown = quoted(item) if isinstance(item, str) else described(item)
            cure = f"the bands are {listed(BANDS)}"
            near = did_you_mean(item, BANDS, cure) if isinstance(item, str) else cure
            raise document.error(f"bands: {shown} is not a band", "bands", i, cure=near)
        if item in bands:
            raise document.error(
                f"bands: {quoted(item)} stands there twice", "bands", i, cure="take one out"
            )
        bands.append(item)
    ordered = sorted(bands, key=BANDS.index)
    if bands != ordered:
        shown = ", ".join(map(quoted, ordered))
        raise document.error(
            "bands: they are not in the order of frequency", "bands", cure=f"write bands = [{shown}]"
        )
    return tuple(bands)
