"""Print the commands of a README's shell blocks, one a line, as they are written there."""

import re
import sys
from pathlib import Path

text = Path(sys.argv[1]).read_text(encoding="utf-8")
for block in re.findall(r"^```sh\n(.*?)^```$", text, flags=re.MULTILINE | re.DOTALL):
    for line in block.replace("\\\n", "").splitlines():
        if line.strip():
            print(line.strip())
