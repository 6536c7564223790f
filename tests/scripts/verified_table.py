"""The page of verified cases in the guide (cmake/docs/verified.md) against the library: every case with its title, source, number
of values, and the error measured. `--write` writes the page anew; without it the page has to tell the truth still."""
import re
import sys
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
PAGE = ROOT / "cmake" / "docs" / "verified.md"
sys.path.insert(0, str(ROOT / "examples" / "scripts"))
import tepor  # noqa: E402

HEAD = """# Guide: verified cases {#guide_verified}

What the library is checked against. Each row is a case of `self_check()`: bodies with published or independently derived answers, run
by the tests, and by users in their own build with their own compiler and flags. The error is that of the value that uses most of
what is allowed to it, measured with %s. `fmt::print("{}", to_text(self_check(), Detail::full))` lists every value beside its source.

| case | body | source | values | largest error for what is allowed | measured | allowed |
|---|---|---|---|---|---|---|
"""


def cases():
    facts, text = tepor.self_check()
    found, case = [], None
    for line in text.splitlines():
        head = re.match(r"  (?:ok|FAILED) +(\S+) +(\S.*?) +(\d+) rows, worst at", line)
        row = re.match(r"      (?:ok|FAILED) +(\S.*?)  +(-?[\d.e+-]+) +(-?[\d.e+-]+) +([\d.e+-]+)  (.*)", line)
        if head:
            case = {"id": head[1], "title": head[2], "rows": int(head[3]), "worst": (0.0, "", 0.0, 1.0, "")}
            found.append(case)
        elif line.startswith("      source: "):
            case["source"] = line[14:]
        elif row:
            error, allowed = abs(float(row[3]) - float(row[2])), float(row[4])
            case["worst"] = max(case["worst"], (error / allowed, row[1], error, allowed, row[5].strip()))
    build = text.splitlines()[1].strip().split(",")[0]
    return facts, build, found


def line_of(case):
    _, what, error, allowed, unit = case["worst"]
    shown = f"{error:.1e}" if error >= 0.005 * allowed else f"below {0.01 * allowed:.0e}"
    cells = (case["id"], case["title"], case["source"], str(case["rows"]), what, shown, f"{allowed:.1e} {unit}")
    return "| " + " | ".join(cell.replace("|", "\\|") for cell in cells) + " |\n"


facts, build, found = cases()
if len(found) != facts.cases or sum(case["rows"] for case in found) != facts.rows or not facts.passed:
    raise SystemExit(f"{len(found)} cases read of {facts.cases}; passed: {facts.passed}")
if "--write" in sys.argv:
    PAGE.write_text(HEAD % build + "".join(map(line_of, found)))
    print(f"{len(found)} cases written")
    raise SystemExit(0)
failures = 0
page = {line.split(" | ")[0][2:]: line.strip(" |").split(" | ") for line in PAGE.read_text().splitlines() if line.startswith("| ")}
for case in found:
    told = page.get(case["id"])
    same = told and told[1:4] == line_of(case).strip(" |\n").split(" | ")[1:4]
    number = re.search(r"[\d.]+e[+-]\d+", told[5]) if told else None
    _, what, error, allowed, unit = case["worst"]
    true = bool(number) and error <= max(2.0 * float(number[0]), 0.05 * allowed)
    if not (same and true):
        failures += 1
        print(f"{case['id']}: the page says {told}, measured {what}: {error:.2e} {unit}")
gone = set(page) - {case["id"] for case in found} - {"case"}
if gone:
    print("on the page, but no case:", ", ".join(sorted(gone)))
print(f"{len(found)} cases, {facts.rows} values; `python3 tests/scripts/verified_table.py --write` writes the page anew")
raise SystemExit(1 if failures or gone else 0)
