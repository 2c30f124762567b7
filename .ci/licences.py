"""Refuses a dependency whose licence isn't among those that suit MIT OR Apache-2.0.

Reads `cargo metadata` on standard input.
"""

import json
import re
import sys

ALLOWED = {
    "MIT",
    "Apache-2.0",
    "Apache-2.0 WITH LLVM-exception",
    "BSD-2-Clause",
    "BSD-3-Clause",
    "BSL-1.0",
    "CC0-1.0",
    "ISC",
    "MIT-0",
    "Unicode-3.0",
    "Unlicense",
    "Zlib",
}


def suits(expression):
    """Whether some choice that an SPDX expression leaves is allowed."""
    words = re.split(r"\s+(OR|AND)\s+|/|([()])", expression)
    tokens = [word.strip() for word in words if word and word.strip()]
    python = []
    for token in tokens:
        if token in ("OR", "AND", "(", ")"):
            python.append(token.lower())
        else:
            if python and python[-1] in ("True", "False"):
                python.append("or")
            python.append(str(token in ALLOWED))
    return eval(" ".join(python), {"__builtins__": {}})


def main():
    packages = json.load(sys.stdin)["packages"]
    bad = [p for p in packages if not suits(p["license"] or "none")]
    for package in bad:
        print(f"{package['name']} {package['version']}: {package['license']}")
    print(f"{len(packages)} packages, {len(bad)} with a licence that does not suit")
    return 1 if bad else 0


if __name__ == "__main__":
    sys.exit(main())
