# coverage.py EXPORT.json KEEP - the report of cmake/coverage.sh. In KEEP: a header, what its line holds and why that branch
# cannot be taken, with tabs between. Ends with exit code 1 when a branch was not taken that is not in KEEP.
import collections
import json
import os
import sys

taken = collections.defaultdict(lambda: [0, 0])  # (header, where) -> how often yes, how often no
for unit in json.load(open(sys.argv[1]))["data"]:
    for function in unit["functions"]:
        for line, column, end_line, end_column, yes, no, file, *_ in function["branches"]:
            path = function["filenames"][file]
            at = path.find("include/wend/")
            if at >= 0 and "/lab/" not in path:
                counts = taken[path[at:], (line, column, end_line, end_column)]
                counts[0] += yes
                counts[1] += no

known = {}
if os.path.exists(sys.argv[2]):
    for line in open(sys.argv[2]):
        if line.strip() and not line.startswith("#"):
            header, text, why = line.rstrip("\n").split("\t")
            known[header, text] = why

headers = collections.defaultdict(lambda: [0, 0, 0])  # branches, taken, known not to be
missing = []
for (header, where), counts in sorted(taken.items()):
    for side, count in zip(("yes", "no"), counts):
        headers[header][0] += 1
        if count > 0:
            headers[header][1] += 1
            continue
        lines = open(header).read().split("\n")
        line, column, end_line, end_column = where
        text = lines[line - 1][column - 1 : end_column - 1] if line == end_line else lines[line - 1][column - 1 :]
        text = f"{text} is {side}"
        if (header, text) in known:
            headers[header][2] += 1
        else:
            missing.append(f"{header}:{line}: never taken: {text}")

for header, (branches, done, excused) in headers.items():
    print(f"{header:48} {branches:5} branches {done:5} taken {excused:3} cannot be")
branches = sum(h[0] for h in headers.values())
done = sum(h[1] for h in headers.values())
excused = sum(h[2] for h in headers.values())
print("\n".join(missing))
print(f"coverage: {done} of {branches} branches taken, {excused} cannot be, {len(missing)} were not")
sys.exit(1 if missing else 0)
