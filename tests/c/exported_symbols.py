"""The shared library exports what the headers of the C interface declare, all of it and nothing else; its SONAME is their ABI
version; and no declared call stands without a comment on it."""
import re
import subprocess
import sys
from pathlib import Path

library, folder = sys.argv[1], Path(sys.argv[2])
text = "".join(path.read_text() for path in sorted(folder.glob("*.h")))
declared = set(re.findall(r"TEPOR_C_API[^;(]*?(tepor_\w+)\(", text))
listing = subprocess.run(["nm", "-D", "--defined-only", library], capture_output=True, text=True, check=True).stdout
exported = {line.split()[-1].split("@")[0] for line in listing.splitlines() if line.split()[-2] in "TDBRWV"}
print(f"{len(declared)} functions declared, {len(exported)} symbols exported")
for name in sorted(declared - exported):
    print("declared, not exported:", name)
for name in sorted(exported - declared):
    print("exported, not declared:", name)
wanted = "libtepor.so." + re.search(r"define TEPOR_ABI_VERSION (\d+)", text).group(1)
dynamic = subprocess.run(["readelf", "-d", library], capture_output=True, text=True, check=True).stdout
soname = re.search(r"SONAME.*\[(.*)\]", dynamic).group(1)
needed = re.findall(r"NEEDED.*\[(.*)\]", dynamic)
print(f"SONAME {soname}, expected {wanted}; needs {', '.join(needed)}")
alien = [name for name in needed if not re.match(r"lib(stdc\+\+|m|gcc_s|c)\.|ld-linux", name)]
for name in alien:
    print("needs a library of another package:", name)
raise SystemExit(0 if declared and declared == exported and soname == wanted and not alien else 1)
