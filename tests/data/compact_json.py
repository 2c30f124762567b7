"""JSON with one list of numbers a line, so that a change shows as few lines."""

import json
import re

import numpy as np

LEAF_LIST = re.compile(r"\[[^\[\]{}]*\]")


def plain(value):
    """Arrays become lists, numpy numbers plain ones, and -0.0 becomes 0.0."""
    if isinstance(value, dict):
        return {key: plain(item) for key, item in value.items()}
    if isinstance(value, (list, tuple, np.ndarray)):
        return [plain(item) for item in value]
    if isinstance(value, (float, np.floating)):
        return float(value) + 0.0
    return int(value) if isinstance(value, np.integer) else value


def write(path, data):
    """Floats are written by `repr`: the shortest digits that read back as the same bits."""
    text = json.dumps(plain(data), indent=1, allow_nan=False)
    text = LEAF_LIST.sub(lambda found: re.sub(r"\s*\n\s*", " ", found[0]), text)
    text = text.replace("[ ", "[").replace(" ]", "]")
    assert json.loads(text) == plain(data)
    path.write_text(text + "\n")
    print(f"{path.name}: {path.stat().st_size} bytes")
