"""Notebook cells that stand in for the kernel side, so that running is tested apart from what is computed."""

import json

from tests.report import plain

KERNEL = """
import json, os, sys, types
from pathlib import Path
folder = Path(os.environ["CALCKIT_RUN"])
outcome = {"record": None, "problems": [], "files": {}}
stand_in = types.ModuleType("calckit.core.run")
stand_in.deliver = lambda: (folder / "outcome.json").write_text(json.dumps(outcome))
sys.modules["calckit.core.run"] = stand_in
def keep(**values):
    (folder / "figures").mkdir(exist_ok=True)
    (folder / "figures" / "kept.json").write_text(json.dumps(values))
"""

RECORD = f'outcome["record"] = json.loads({json.dumps(plain.record().to_json())})'
