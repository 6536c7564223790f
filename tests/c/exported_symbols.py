"""The shared library exports what tepor.h declares, all of it and nothing else."""
import re
import subprocess
import sys

library, header = sys.argv[1:3]
declared = set(re.findall(r"TEPOR_C_API[^;(]*?(tepor_\w+)\(", open(header).read()))
listing = subprocess.run(["nm", "-D", "--defined-only", library], capture_output=True, text=True, check=True).stdout
exported = {line.split()[-1].split("@")[0] for line in listing.splitlines() if line.split()[-2] in "TDBRWV"}
print(f"{len(declared)} functions declared, {len(exported)} symbols exported")
for name in sorted(declared - exported):
    print("declared, not exported:", name)
for name in sorted(exported - declared):
    print("exported, not declared:", name)
raise SystemExit(0 if declared and declared == exported else 1)
