"""Reviews made by hand, all invented: a ready one, an exceeded one, and an unanswered one full of hostile texts."""

from __future__ import annotations

from dataclasses import replace

from stresscheck.cautions.caution import Caution, ChecklistLine
from stresscheck.findings.finding import VERDICTS, Finding, Place, Proof
from stresscheck.findings.outlook import DriveReport, Resonance
from stresscheck.report.record import SCHEMA, Accepted, DeratingMark, DesignMark, Review
from stresscheck.working import Step

HOSTILE = "Q[/] L[red]x |a`b <script>alert(1)</script> *_#~ \x1b[31m \u202eturned =1+1 " + "x" * 120
AT = Place(85400.0, (("capacitor.Ctank.value", 1.425e-7), ("inductor.Lwork.value", 2.332e-5),
                     ("drive.bridge.frequency", 85400.0)))  # fmt: skip
VOLT = Finding(
    id="Ctank.voltage_peak@normal", state="normal", state_kind="operating", event="steady", part="Ctank",
    kind="capacitor", quantity="voltage_peak", unit="V", verdict="within", nominal=301.2, worst=412.7, bound=419.0,
    rated=1000.0, allowed_fraction=0.6, allowed=600.0, ratio=412.7 / 600.0, ratio_bound=419.0 / 600.0, at=AT,
    working=(Step("V_peak", "I_peak / (2 pi f C)", "31.56 A / (2 pi 85.4 kHz 142.5 nF)", 412.7, "V",
                  "circuit theory"),),
    rating_source="data sheet, revision 3, p. 4", derating_source="a policy, row 2, edition 1", why="",
    proof=Proof(37, 0.0153, "corner rule", 300.0), reason="voltage gain 18.2 x drive 12 V peak, at the resonance",
)  # fmt: skip
HEAT = replace(
    VOLT, id="Lwork.temperature@normal", part="Lwork", kind="inductor", quantity="temperature", unit="K",
    nominal=320.0, worst=353.15, bound=354.0, rated=403.15, allowed_fraction=None, allowed=383.15,
    ratio=353.15 / 383.15, ratio_bound=354.0 / 383.15, working=(), proof=Proof(1, 0.0, "nothing varies"), reason="",
    remarks=("the declared frequency is near the part's self-resonance",),
)  # fmt: skip


def _review(name: str, findings: tuple[Finding, ...], **other: object) -> Review:
    counts = tuple((v, sum(f.verdict == v and not f.accepted for f in findings)) for v in VERDICTS)
    record = Review(
        schema=SCHEMA,
        version="0.0.0",
        design=DesignMark(f"Tank, {name} (invented)", "B", "tank.toml", "0" * 64),
        derating=DeratingMark("a-policy", "A policy for tests", "edition 1", "nowhere but here", "own decision"),
        verdict=name,
        counts=(*counts, ("accepted", sum(f.accepted for f in findings))),
        resonances=(Resonance("normal", 85090.0, 18.2, 4675.0, 6.8e-05, (("Ctank", 0.5), ("Lwork", 0.5))),
                    Resonance("normal", 2e6, None, 0.0, None, (("Ctank", 1.0),))),
        drives=(DriveReport("normal", "bridge", 88000.0, 11.4, 15.9, 88.1, -13.5, 89.1, -8.7, "capacitive"),),
        findings=findings,
        cautions=(Caution("stored-energy.Ctank", "Ctank", "0.03 J can stay; local codes decide.", 0.03, "J", 0.25,
                          "a document, clause 3", "secondary"),),
        checklist=(ChecklistLine("discharge", "Discharge Ctank", "it holds 0.03 J"),),
        accepted=(),
        assumptions=("Every part is linear.",),
    )  # fmt: skip
    return replace(record, **other)


READY = _review("ready", (VOLT, HEAT))
OVER = replace(VOLT, verdict="above-rating", worst=1000.05, bound=1040.0, ratio=1000.05 / 600.0, ratio_bound=1.74)
DERATED = replace(VOLT, id="Ctank.voltage_peak@cold", state="cold", verdict="above-derated", worst=600.06, bound=610.0,
                  ratio=600.06 / 600.0, ratio_bound=1.02)  # fmt: skip
TAKEN = replace(DERATED, id="Ctank.voltage_peak@fault", state="fault", state_kind="fault", accepted=True)
EXCEEDED = _review(
    "exceeded", (OVER, DERATED, TAKEN, HEAT),
    accepted=(Accepted(TAKEN.id, "measured on the bench", "two of us", "2030-01-01", counts=True),
              Accepted("Cgone.voltage_peak@normal", "old", "nobody", "2020-01-01", counts=False)),
)  # fmt: skip
UNANSWERED = _review(
    "unanswered",
    (
        replace(VOLT, verdict="unproved", bound=None, ratio_bound=None, why="no bound was proved",
                proof=Proof(900, None, "corner rule")),
        replace(VOLT, id="Ctank.voltage_rms@normal", quantity="voltage_rms", verdict="no-rating", rated=None,
                allowed=None, allowed_fraction=None, ratio=None, ratio_bound=None, why=f"no figure: {HOSTILE}"),
        replace(HEAT, verdict="not-checked", nominal=None, worst=None, bound=None, ratio=None, ratio_bound=None,
                at=None, proof=None, remarks=(), why="no thermal resistance is declared"),
    ),
    design=DesignMark(HOSTILE, HOSTILE, "ta\x1bnk\n.toml", "f" * 64),
    cautions=(), checklist=(), resonances=(), drives=(), problems=("state cold: no solution",),
)  # fmt: skip
SAMPLES = {"ready": READY, "exceeded": EXCEEDED, "unanswered": UNANSWERED}
