r"""LaTeX of a declaration's formula as plain text for a terminal: ``\sigma = \frac{F}{A}`` reads ``σ = F/A``."""

from __future__ import annotations

import re

_SYMBOLS = {
    "alpha": "α", "beta": "β", "gamma": "γ", "delta": "δ", "epsilon": "ε", "varepsilon": "ε", "eta": "η",
    "theta": "θ", "kappa": "κ", "lambda": "λ", "mu": "μ", "nu": "ν", "xi": "ξ", "pi": "π", "rho": "ρ",
    "sigma": "σ", "tau": "τ", "phi": "φ", "varphi": "φ", "psi": "ψ", "omega": "ω", "zeta": "ζ",
    "Gamma": "Γ", "Delta": "Δ", "Theta": "Θ", "Lambda": "Λ", "Sigma": "Σ", "Phi": "Φ", "Psi": "Ψ", "Omega": "Ω",
    "cdot": "·", "times": "×", "pm": "±", "mp": "∓", "le": "≤", "leq": "≤", "ge": "≥", "geq": "≥", "ne": "≠",
    "neq": "≠", "approx": "≈", "infty": "∞", "sum": "Σ", "int": "∫", "partial": "∂", "circ": "°", "to": "→",
    "rightarrow": "→", "quad": "  ", "qquad": "    ", "ldots": "…", "dots": "…", "cdots": "…", "prime": "′",
    "equiv": "≡", "propto": "∝", "ell": "ℓ", "max": "max", "min": "min", "ln": "ln", "exp": "exp", "sin": "sin",
    "cos": "cos", "tan": "tan", "arctan": "arctan", "arcsin": "arcsin", "arccos": "arccos", "log": "log",
    "sinh": "sinh", "cosh": "cosh", "tanh": "tanh", "lvert": "|", "rvert": "|", "vert": "|", "mid": "|",
    "prod": "Π", "oint": "∮", "det": "det", "coth": "coth",
}  # fmt: skip
_SUPERSCRIPTS = str.maketrans("0123456789+-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻")


def plain(latex: str) -> str:
    r"""Return a formula as plain text.

    Parameters
    ----------
    latex : str
        The subset of LaTeX that declarations use: fractions, roots, Greek letters, sub- and superscripts.

    Returns
    -------
    str
        The same in one line.

    Examples
    --------
    >>> plain(r"\sigma = \frac{F}{A}")
    'σ = F/A'
    >>> plain(r"\sigma_{vm} = \sqrt{\sigma_x^2 + 3 \tau_{xy}^2}")
    'σ_vm = √(σ_x² + 3 τ_xy²)'
    """
    text = re.sub(r"\\(left|right|,|;|!|displaystyle|limits|bigl?|bigr?|Bigl?|Bigr?|biggl?|biggr?)(?![a-z])", "", latex)
    text = re.sub(r"\\(?:text|mathrm|mathbf|operatorname|bar|hat|overline)\s*\{([^{}]*)\}", r"\1", text)
    text = re.sub(r"\\[dt]frac", r"\\frac", text)
    while (start := _last_command(text)) is not None:
        text = _replace(text, start)
    text = re.sub(r"\\([A-Za-z]+)", lambda m: _SYMBOLS.get(m[1], m[1]), text)
    text = re.sub(r"\^\{([0-9+-]+)\}|\^([0-9])", lambda m: (m[1] or m[2]).translate(_SUPERSCRIPTS), text)
    text = re.sub(r"([_^])\{(\w+)\}", r"\1\2", text)
    text = re.sub(r"([_^])\{([^{}]*)\}", r"\1(\2)", text)
    text = text.replace("{", "").replace("}", "").replace("\\", "")
    return " ".join(text.split())


def _last_command(text: str) -> int | None:
    """Find the innermost fraction or root: the last one holds no other."""
    position = max(text.rfind("\\frac"), text.rfind("\\sqrt"))
    return None if position < 0 else position


def _replace(text: str, start: int) -> str:
    if text.startswith("\\frac", start):
        top, after = _group(text, start + 5)
        bottom, after = _group(text, after)
        return f"{text[:start]}{_wrapped(top)}/{_wrapped(bottom)}{text[after:]}"
    after = start + 5
    index = ""
    if text[after : after + 1] == "[":
        close = text.index("]", after)
        index, after = text[after + 1 : close].translate(_SUPERSCRIPTS), close + 1
    inner, after = _group(text, after)
    return f"{text[:start]}{index}√({inner}){text[after:]}"


def _group(text: str, start: int) -> tuple[str, int]:
    """Return the braced group (or the single character) that begins at `start`, and where it ends."""
    while text[start : start + 1] == " ":
        start += 1
    if text[start : start + 1] != "{":
        return text[start : start + 1], start + 1
    depth = 0
    for position in range(start, len(text)):
        depth += {"{": 1, "}": -1}.get(text[position], 0)
        if depth == 0:
            return text[start + 1 : position], position + 1
    return text[start + 1 :], len(text)


def _wrapped(part: str) -> str:
    part = part.strip()
    simple = re.fullmatch(r"(\\?\w+|√\([^()]*\))([_^](\{[^{}]*\}|\w))*", part)
    return part if simple else f"({part})"
