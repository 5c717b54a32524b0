"""Derating policies: which fraction of each rating may be used, row by row, and which document says so."""

from __future__ import annotations

from dataclasses import dataclass, replace
from pathlib import Path

from stresscheck.errors import InputError, Problem
from stresscheck.limits.data_file import EVIDENCE, DataFile, nearest, read_data_file
from stresscheck.limits.families import Family
from stresscheck.limits.policy_rows import Reference, Row, read_references, read_rows
from stresscheck.shipped import ratings_dir

_HEAD = ("name", "title", "document", "edition", "source", "evidence")
_KNOWN = {*_HEAD, "fill_from", "notes", "row", "reference"}


@dataclass(frozen=True, slots=True)
class Policy:
    """A derating policy. `fill` answers where this document has no row; None where nothing does.

    `references` are figures of the document for parts that have no check; they are shown, not applied.
    """

    name: str
    title: str
    document: str
    edition: str
    source: str
    evidence: str
    notes: tuple[str, ...]
    rows: tuple[Row, ...]
    references: tuple[Reference, ...] = ()
    fill: Policy | None = None

    def candidates(self, kind: str, quantity: str) -> tuple[Row, ...]:
        """Rows for a quantity of a kind, whatever the family: the exact ones, else the general ones."""
        exact = tuple(row for row in self.rows if row.kind == kind and row.quantity == quantity)
        return exact or tuple(row for row in self.rows if row.general and row.speaks_of(kind, quantity))

    def rows_for(self, kind: str, family: Family | None, quantity: str) -> tuple[Row, ...]:
        """Rows that apply to a part of this family; several may, and then the strictest counts."""
        return tuple(
            row
            for row in self.candidates(kind, quantity)
            if not row.families or (family is not None and family.belongs_to(row.families))
        )


def load_policy(name_or_path: str, folder: Path | None = None) -> Policy:
    """A shipped policy by name, or a policy from a TOML file by path.

    Text that ends in `.toml` or holds a slash is a path, relative to `folder` (that of the design) where
    given. InputError with every problem of the file; for a name that isn't known it lists those that are.
    """
    path = _locate(name_or_path, folder)
    policy, fill_from = _read(path)
    if not fill_from:
        return policy
    fill, further = _read(_locate(fill_from, path.parent))
    if further:
        expected = "a policy without a fill_from of its own"
        raise InputError(
            [
                Problem(
                    "bad-rating-file",
                    path.name,
                    None,
                    "fill_from",
                    repr(fill_from),
                    expected,
                    "name another policy",
                )
            ]
        )
    return replace(policy, fill=fill)


def list_policies() -> tuple[Policy, ...]:
    """The shipped policies, by name."""
    return tuple(load_policy(name) for name in policy_names())


def policy_names() -> tuple[str, ...]:
    """Names of the shipped policies, without reading them."""
    return tuple(sorted(path.stem for path in (ratings_dir() / "policies").glob("*.toml")))


def _locate(name_or_path: str, folder: Path | None) -> Path:
    if name_or_path.endswith(".toml") or "/" in name_or_path or "\\" in name_or_path:
        return (folder or Path()) / name_or_path
    names = policy_names()
    if name_or_path in names:
        return ratings_dir() / "policies" / f"{name_or_path}.toml"
    expected = f"a policy: {', '.join(names)}; or a path that ends in .toml"
    repair = nearest(name_or_path, names) or "name one of them"
    raise InputError([Problem("unknown-name", "", None, "derating", repr(name_or_path), expected, repair)])


def _read(path: Path) -> tuple[Policy, str]:
    """The policy of one file without its filling, and the name of the policy that fills it."""
    file = read_data_file(path)
    head = {key: file.text(key, required=True) for key in _HEAD}
    if head["evidence"]:
        file.one_of("evidence", among=EVIDENCE)
    fill_from = file.text("fill_from")
    notes = file.texts("notes")
    rows = read_rows(file, head["document"], head["edition"])
    references = read_references(file)
    _check_rows(file, rows)
    file.finish(_KNOWN)
    name, title, document, edition, source, evidence = (head[key] for key in _HEAD)
    policy = Policy(name, title, document, edition, source, evidence, notes, rows, references)
    return policy, fill_from


def _check_rows(file: DataFile, rows: tuple[Row, ...]) -> None:
    if not rows and not file.problems:
        file.problem("missing-key", ("row",), "no rows", "at least one table [row.NAME]", "add the document's rows")
