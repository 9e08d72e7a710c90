"""Print recall, false findings and coverage, a kind at a time: ``python -m tests.check.seeded [-v]``."""

import sys

from tests.check.seeded.measure import measured, table

if __name__ == "__main__":
    seeded, clean, others = measured()
    if "-v" in sys.argv:
        for outcome in [*clean, *others, *seeded]:
            if outcome.strays or (outcome.fault and not outcome.found):
                print(outcome.name, "" if outcome.found or not outcome.fault else f"MISSED ({len(outcome.hits)})")
                for finding in outcome.strays:
                    print("    ", finding.severity, finding.kind, f"{finding.sheet}!{finding.cell}", finding.message)
    print(table(seeded, clean, others))
