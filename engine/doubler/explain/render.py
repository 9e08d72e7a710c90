"""The chain behind a cell as text for the terminal, and as Markdown."""

from __future__ import annotations

from doubler.explain.chain import Explanation


def as_text(explanation: Explanation) -> str:
    """Return the chain as plain text, inputs first, each step on lines of its own."""
    lines = [f"{explanation.cell} in {explanation.workbook}", ""]
    if explanation.inputs:
        lines.append("Given")
        width = max(len(one.symbol) for one in explanation.inputs)
        values = max(len(one.value) for one in explanation.inputs)
        lines += [
            f"  {one.symbol:<{width}} = {one.value:<{values}}   {one.label}  ({one.cell})".rstrip()
            for one in explanation.inputs
        ]
        lines.append("")
    for number, step in enumerate(explanation.steps, start=1):
        lines.append(f"{number}. {step.label or step.symbol}  ({step.cell})")
        lines.append(f"   {step.symbol} = {step.formula}")
        indent = " " * (3 + len(step.symbol))
        if step.numbers and step.numbers != step.formula:
            lines.append(f"{indent} = {step.numbers}")
        if step.result != step.numbers:
            lines.append(f"{indent} = {step.result}")
        lines += [f"   ({note})" for note in step.notes]
        lines.append("")
    return "\n".join(lines).rstrip()


def as_markdown(explanation: Explanation) -> str:
    """Return the chain as Markdown."""
    lines = [f"# {explanation.cell} in {explanation.workbook}", ""]
    if explanation.inputs:
        lines += ["## Given", "", "| symbol | value | what | cell |", "| --- | --- | --- | --- |"]
        lines += [
            f"| {_cell(one.symbol)} | {_cell(one.value)} | {_cell(one.label)} | {_cell(one.cell)} |"
            for one in explanation.inputs
        ]
        lines.append("")
    lines += ["## Steps", ""]
    for number, step in enumerate(explanation.steps, start=1):
        lines.append(f"{number}. **{step.label or step.symbol}** ({step.cell})")
        shown = [f"{step.symbol} = {step.formula}"]
        shown += [f"= {part}" for part in (step.numbers, step.result) if part and part != shown[-1]]
        lines += ["", "   ```", *(f"   {line}" for line in shown), "   ```", ""]
        lines += [f"   - {note}" for note in step.notes]
        if step.notes:
            lines.append("")
    return "\n".join(lines).rstrip()


def _cell(text: str) -> str:
    return text.replace("|", "\\|")
