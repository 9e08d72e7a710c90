"""Native worksheet functions: each one's value rule and the name of its unit rule, declared side by side.

The names of unit rules, which the units side turns into rules:

==================  ====================================================================================
name                the result's unit, and what the arguments must have
==================  ====================================================================================
same                all arguments one unit; the result has it
rounded             the first argument's unit; the further arguments belong to it (a step has its unit,
                    a count of digits none)
number              pure numbers in, pure number out
pure                ratios of scale 1 in, pure number out
count               anything in, a count out
logical             anything in, a logical out; comparisons among arguments want one unit
text                anything in, text out
sign                anything in, pure number out
root:2              the argument's unit to the power 1/2
power               the first argument's unit to the power of the second, which is a ratio
power_sum:2         all arguments one unit; its square
product             product of all arguments' units, an entry a factor
sumproduct          product of the arguments' units, entry by entry; all entries one unit
ratio_of_two        quotient of the two arguments' units
angle_in            radians in, pure number out
angle_out           ratio in, radians out
angle_of_two        two arguments of one unit in, radians out
to_radians          degrees in, radians out
to_degrees          radians in, degrees out
branches            condition, then branches of one unit
branches:K          argument K (from 0) is a value or index; with K = 0 it is itself a branch
ifs, switch         pairs: condition or key and branch; branches of one unit
lookup:K            key against the first column (or row) of the table; unit of the column that argument K
names match               key against the vector; a count out
index               unit of the entry that is picked
lookup_vector       key against the second argument; unit of the third (or second)
xlookup             key against the second argument; unit of the third, and of the fourth where given
sum_if:K            criteria against their ranges; unit of the range that is argument K (0: the first, last:
the last) count_if            criteria against their ranges; a count out
variance            the square of the one unit of all arguments
rank                one unit in, a count out
statistic:K         unit of argument K; the others are ratios or counts
slope, intercept,   known y, known x: y per x; y; y per x and y side by side; …
regression …
convert             number in the unit that the second argument names, result in the third's
transpose, matrix,  unit an entry
…
reshape             the first argument's units, entry by entry, in another order
none                no unit rule: the result is not traced
==================  ====================================================================================
"""

from doubler.workbook.natives import (
    aggregates,
    conversion,
    criteria,
    dates,
    functional,
    information,
    logical,
    lookup,
    mathematics,
    matrices,
    positions,
    reasons,
    regression,
    rounding,
    statistics,
    subtotals,
    texts,
)
from doubler.workbook.natives.registry import NATIVES, OMITTED, Native, native

TOPICS = (
    aggregates,
    conversion,
    criteria,
    dates,
    functional,
    information,
    logical,
    lookup,
    mathematics,
    matrices,
    positions,
    reasons,
    regression,
    rounding,
    statistics,
    subtotals,
    texts,
)
"""The modules that declare native functions."""

__all__ = ["NATIVES", "OMITTED", "TOPICS", "Native", "native"]
