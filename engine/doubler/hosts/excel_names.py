"""Argument names that VBA accepts, unlike in more than their case."""

from __future__ import annotations

import re

from doubler.hosts.calc_extension import HostFunction

_WORDS = """
    addressof alias and any array as boolean byref byte byval call caller case cbool cbyte ccur cdate cdbl cdec cint
    clng const cstr currency cvar cverr date declare dim do double each else elseif empty end enum eqv erase error
    event exit false for friend function get global gosub goto if imp implements in input integer is let lib like
    long loop lset me mid mod name new next not nothing null object on open option optional or output paramarray
    preserve print private property public put raiseevent random read redim rem resume return rset seek select set
    shared single static step stop string sub tab then time to true type typeof until variant wend while width with
    withevents write xor failed xlpy
"""
RESERVED = frozenset(_WORDS.split())
"""Words of VBA, and what the generated functions use themselves."""


def vba_names(host: HostFunction) -> list[str]:
    """Return the argument names for VBA: a reserved word gets ``_value``, a name used before a number."""
    used: set[str] = {host.name.casefold()}
    found = []
    for argument in host.arguments:
        name = argument.name if argument.name.isascii() else argument.name.encode("ascii", "ignore").decode()
        name = name.strip("_") or "argument"
        if name.casefold() in RESERVED:
            name = f"{name}_value"
        plain, number = name, 2
        while name.casefold() in used:
            name, number = f"{plain}_{number}", number + 1
        used.add(name.casefold())
        found.append(name)
    return found


def vba_functions(text: str) -> dict[str, int]:
    """Return the worksheet functions of a VBA module, and how many arguments each takes."""
    heads = re.findall(r"(?m)^Function (\w+)\((.*?)\)", text)
    return {name: len(arguments.split(",")) if arguments.strip() else 0 for name, arguments in heads}
