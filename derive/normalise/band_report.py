"""The nouns of what is said of the bands: why each part is a short or open, and how well they separate."""

from __future__ import annotations

from dataclasses import dataclass

from derive.bands.band_circuit import BandCircuit
from derive.devices.elements import SmallSignal
from derive.normalise.band_edges import BandEdges, band_edges
from derive.normalise.capacitor_table import CapacitorRow, capacitor_table
from derive.normalise.separation import Separation, separation


@dataclass(frozen=True, slots=True)
class BandReport:
    """One band's circuit and its table of capacitors and inductors; () where no part has a role."""

    circuit: BandCircuit
    capacitors: tuple[CapacitorRow, ...]


@dataclass(frozen=True, slots=True)
class BandsReport:
    """All bands of one topology, their edges, and per quantity how good the separation is."""

    bands: tuple[BandReport, ...]
    edges: BandEdges
    separations: tuple[tuple[str, Separation], ...]


def report_bands(circuit: SmallSignal, bands: tuple[BandCircuit, ...]) -> BandsReport:
    """Say of a circuit's bands what a reviewer asks; without roles there is nothing to say."""
    if not circuit.roles:
        return BandsReport(tuple(BandReport(band, ()) for band in bands), BandEdges((), ()), ())
    edges = band_edges(circuit)
    reports = tuple(BandReport(band, capacitor_table(circuit, band.band, edges)) for band in bands)
    found = ((find.name, separation(circuit, find)) for find in circuit.topology.finds)
    return BandsReport(reports, edges, tuple((name, sep) for name, sep in found if sep is not None))
