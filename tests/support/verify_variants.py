"""Has verify_trail.py check many variants of one trail in one process, so that a test of a thousand stays quick.

On standard input stand the path of the trail and, a line each, its variants in JSON: `edits`, each the place, the
number of bytes taken out there and what is put in (base64), or the whole `text`; and `head`, `key` and
`photographs` as on the command line. Out come the outcomes and places, in the same order.
"""

import base64
import functools
import json
import os
import sys

sys.dont_write_bytecode = True
sys.path.insert(0, os.path.join(os.path.dirname(__file__), "..", "..", "src", "commands"))
import verify_trail  # noqa: E402  (found only by the line above)

# Most variants carry the same signatures; whether one holds depends on nothing but key, message and signature.
verify_trail.p256_holds = functools.lru_cache(maxsize=None)(verify_trail.p256_holds)
verify_trail.ed25519_holds = functools.lru_cache(maxsize=None)(verify_trail.ed25519_holds)


def bytes_of(variant, whole):
    if "text" in variant:
        return variant["text"].encode("utf-8")
    for at, taken, put in variant.get("edits", []):
        whole = whole[:at] + base64.b64decode(put) + whole[at + taken :]
    return whole


def main():
    lines = sys.stdin.buffer.read().splitlines()
    with open(lines[0], "rb") as file:
        whole = file.read()
    found = []
    for line in lines[1:]:
        variant = json.loads(line)
        asked = [variant.get(name) for name in ("head", "key", "photographs")]
        report = verify_trail.verify(bytes_of(variant, whole), *asked)
        found.append([report.outcome, report.place])
    json.dump(found, sys.stdout)


main()
