"""Texts that try to break out of wherever they are put."""

from __future__ import annotations

from builders import MadeSolution, two_stages

from pathcalc.path.steps import Step

SCRIPT = "<script>window.broken = 1</script>"
HOSTILE = (
    SCRIPT + ' <img src=x onerror="window.broken=2"> | pipe `tick` $x^2$ $$y$$ [link](javascript:alert(1)) ![i](x) '
    "*star* _low_ # head &amp; \u202eback \x1b[31m \x00 </style></title> {{ 7*7 }} {% raw %} @name"
)
MULTI = "first line\n# second line\n- third | line\n```\nfenced\r\n"


def hostile() -> MadeSolution:
    """The two-stage solution with every free text replaced."""
    made = two_stages(HOSTILE)
    made.case.text = MULTI + HOSTILE
    made.case.includes = ((HOSTILE, MULTI + "````\n" + SCRIPT),)
    made.case.record = {
        "number": HOSTILE,
        "revision": HOSTILE,
        "date": "2026-03-02",
        "author": HOSTILE,
        "project": HOSTILE,
        "checker": HOSTILE,
        "purpose": MULTI + HOSTILE,
        "assumptions": [HOSTILE, MULTI],
        "notes": [HOSTILE],
        "sources": {HOSTILE: HOSTILE},
    }
    rename: dict[str, str] = {"first stage": "first $tage_stage", "intercooler": "Кühler-中_x"}
    for group in ("states", "legs"):
        for item in made.result[group]:
            for key in ("name", "from", "to"):
                if item.get(key) in rename:
                    item[key] = rename[item[key]]
    made.result["legs"][0]["path"] = HOSTILE
    made.result["warnings"] = [{"code": HOSTILE, "at": HOSTILE, "text": HOSTILE}]
    made.result["checks"][0] |= {"name": HOSTILE, "at": HOSTILE, "passed": False}
    made.result["limits"][0]["quantity"] = "first $tage_stage.T"
    made.result["comparison"] = [{"equation": HOSTILE, "quantities": {HOSTILE: 1.0, "start.T": 300.0}}]
    made.result["fluid"]["sources"] = [HOSTILE]
    made.explanations = {
        "first $tage_stage.work": [
            Step(HOSTILE, r"w = \text{" + SCRIPT + "}", r"\frac{" + HOSTILE, HOSTILE, HOSTILE, HOSTILE),
            Step("fine", r"w = \text{" + SCRIPT + "}", "", r"\text{" + SCRIPT + "}"),
        ]
    }
    return made
