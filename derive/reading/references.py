"""Names that point to other names: every one must be there, and be of the right kind."""

from __future__ import annotations

from derive.quantities.words import did_you_mean, listed, quoted
from derive.reading.document import Document
from derive.reading.kinds import TWO_NODE_KINDS
from derive.reading.network import mentions
from derive.topology.topology import GROUND, Topology


def check_names(topology: Topology, document: Document) -> None:
    """Refuse one name for two things, and a name that is that of a node's voltage."""
    parts = {part.name for part in topology.parts}
    drives = {drive.name: drive for drive in topology.drives}
    supplies = [supply.name for supply in topology.supplies]
    merges = [merge.name for merge in topology.merges]
    for name in drives:
        if name in parts:
            raise document.error(
                f"the name {quoted(name)} is that of a drive and of a part",
                "parts",
                name,
                cure="rename one of them",
            )
    owners = dict.fromkeys(parts, "part") | dict.fromkeys(drives, "drive")
    for table, what, names in (("supplies", "supply", supplies), ("merge", "merge", merges)):
        for name in names:
            if name in owners:
                raise document.error(
                    f"{what} {name}: the name is that of a {owners[name]}",
                    table,
                    name,
                    cure="choose another name",
                )
            owners[name] = what
    for find in topology.finds:
        if find.name in owners:
            owner = owners[find.name]
            raise document.error(
                f"find {find.name}: the name is that of a {owner}",
                "find",
                find.name,
                cure="choose another name, such as A_v or Z_in",
            )
    nodes = {mention.node for mention in mentions(topology)}
    tables = (
        ("drives", list(drives)),
        ("parts", sorted(parts)),
        ("merge", merges),
    )
    for table, names in tables:
        for name in names:
            node = name[2:] if name.startswith("v_") else ""
            if node not in nodes:
                continue
            drive = drives.get(name)
            if drive and drive.quantity == "voltage" and drive.nodes == (node, GROUND):
                continue
            raise document.error(
                f"the name {quoted(name)} is that of the voltage at node {quoted(node)}",
                table,
                name,
                cure="rename the part or drive",
            )


def check_sensed(topology: Topology, document: Document) -> None:
    """Refuse a current that no part of two nodes carries."""
    for part in topology.parts:
        if part.senses_part is None:
            continue
        path = ("parts", part.name, "senses")
        if part.senses_part == part.name:
            raise document.error(
                f"part {part.name} senses its own current", *path, cure="name another part"
            )
        _check_current(topology, document, part.senses_part, f"part {part.name}: senses", path)
    for find in topology.finds:
        if find.part is not None:
            path = ("find", find.name, "current")
            _check_current(topology, document, find.part, f"find {find.name}: current", path)


def check_coils(topology: Topology, document: Document) -> None:
    """Refuse a coupling of anything but two different inductors, and a second one of a pair."""
    kinds = {part.name: part.kind for part in topology.parts}
    inductors = [name for name, kind in kinds.items() if kind == "inductor"]
    seen: dict[frozenset[str], str] = {}
    for part in topology.parts:
        if part.coils is None:
            continue
        item = f"part {part.name}"
        for i, coil in enumerate(part.coils):
            path = ("parts", part.name, "coils", i)
            if coil not in kinds:
                cure = f"the inductors are {listed(inductors)}" if inductors else "add an inductor"
                raise document.error(
                    f"{item}: there is no inductor {quoted(coil)}",
                    *path,
                    cure=did_you_mean(coil, inductors, cure),
                )
            if kinds[coil] != "inductor":
                raise document.error(
                    f"{item}: {coil} is a {kinds[coil]}, not an inductor",
                    *path,
                    cure="couple two inductors",
                )
        pair = frozenset(part.coils)
        if len(pair) == 1:
            raise document.error(
                f"{item} couples {part.coils[0]} with itself",
                "parts",
                part.name,
                "coils",
                cure="name two different inductors",
            )
        if pair in seen:
            raise document.error(
                f"{item}: {listed(part.coils)} are coupled already by {seen[pair]}",
                "parts",
                part.name,
                cure="keep one of the two couplings",
            )
        seen[pair] = part.name


def check_nodes(topology: Topology, document: Document) -> None:
    """Refuse words for a node, or a find at a node, that the circuit does not have."""
    nodes = list(dict.fromkeys(mention.node for mention in mentions(topology)))
    known = {*nodes, GROUND}
    wanted: list[tuple[str, str, tuple[str | int, ...]]] = [
        (node, "nodes", ("nodes", node)) for node, _ in topology.node_words
    ]
    for find in topology.finds:
        for i, node in enumerate(find.nodes or ()):
            wanted.append((node, f"find {find.name}", ("find", find.name, find.quantity, i)))
    for node, item, path in wanted:
        if node not in known:
            raise document.error(
                f"{item}: the circuit has no node {quoted(node)}",
                *path,
                cure=did_you_mean(node, nodes, f"the nodes are {listed(nodes[:12])}"),
            )


def _check_current(
    topology: Topology, document: Document, name: str, item: str, path: tuple[str | int, ...]
) -> None:
    kinds = {part.name: part.kind for part in topology.parts}
    drives = {drive.name: drive.quantity for drive in topology.drives}
    carriers = [part for part, kind in kinds.items() if kind in TWO_NODE_KINDS]
    carriers += [drive for drive, quantity in drives.items() if quantity == "voltage"]
    if name in carriers:
        return
    if name in kinds or name in drives:
        kind = kinds.get(name, "current drive")
        article = "an" if kind[0] in "aeiou" else "a"
        raise document.error(
            f"{item}: {name} is {article} {kind}, and its current cannot be named",
            *path,
            cure="name a part of two nodes, such as a resistor in series with it",
        )
    raise document.error(
        f"{item}: there is no part {quoted(name)}",
        *path,
        cure=did_you_mean(name, carriers, f"the parts are {listed(carriers[:12])}"),
    )
