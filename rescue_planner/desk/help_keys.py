"""The keys of the desk, listed once for the Keyboard window and the help. No Qt here."""

from __future__ import annotations

KEYS = (
    ("F1", "Help on the page you are on"),
    ("Shift+F1", "This list of keys"),
    ("Tab, Shift+Tab", "Next or previous field"),
    ("F6", "Next region: plans, pages, page, explainer, work strip"),
    ("Ctrl+1, Ctrl+2, Ctrl+3", "Pages Case, Plans, Compare"),
    ("Space on a plan", "Hide or show this plan everywhere"),
    ("Enter", "Put a typed number into the case"),
    ("Escape", "Take a typed number back"),
    ("Up, Down", "Step a number; Page Up and Page Down step it ten times as far"),
    ("Left, Right on a chart", "Read the values of all plans at a year"),
    ("Up, Down on a chart", "Previous or next chart; the explainer tells what it shows"),
    ("Ctrl+C on a chart or table", "Copy it as a table"),
    ("F2, Delete, Alt+Up, Alt+Down in the plans", "Rename, remove, move a plan"),
    ("Left, Right, +, −, Insert, Delete on the calendar", "Move, repeat, add, remove a release"),
    ("Ctrl+V, Ctrl+D in the grid of releases", "Paste cells, fill down"),
    ("Ctrl+Z, Ctrl+Y", "Undo, redo"),
    ("Ctrl+N, Ctrl+O, Ctrl+S", "New case, open, save"),
    ("Ctrl+Shift+S, Ctrl+E", "Save as, export"),
    ("Ctrl+R", "Remarks"),
    ("Ctrl++, Ctrl+−", "Larger or smaller text"),
    ("Ctrl+W, Ctrl+Q", "Close the case, quit"),
    ("F9", "Hide or show the explainer"),
    ("Ctrl+F in the help", "Search all pages of the help"),
    ("Alt+Left, Alt+Right in the help", "Back, forward"),
    ("Alt and a letter", "A menu"),
)
