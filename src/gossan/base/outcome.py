"""What a kernel can report, each code with its sentence."""

from __future__ import annotations

SOLVED = 0
ITERATIONS = 1
CYCLING = 2
DIVERGED = 3
SINGULAR = 4
LACKING = 5

SENTENCES = {
    SOLVED: "solved",
    ITERATIONS: "Newton's iteration did not settle within its limit",
    CYCLING: "the set of minerals present went round in circles",
    DIVERGED: "an activity left the range of real numbers",
    SINGULAR: "the mass balances do not determine the water (singular matrix)",
    LACKING: "the amount of a component is negative or no number",
}
