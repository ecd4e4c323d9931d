"""Derive docs/result-file.md from the layout: `python -m tools.docs.result_file`."""

from __future__ import annotations

from pathlib import Path

from gossan.store.layout import ATTRIBUTES, PARTS, VARIABLES, variables

PAGE = Path(__file__).parents[2] / "docs" / "result-file.md"

_HEAD = """# The result file

This page is derived from `src/gossan/store/layout.py` by `python -m tools.docs.result_file`: change it there.

HDF5 that netCDF-4 readers open, SI throughout. One group is one data set:

```python
import xarray
profiles = xarray.open_dataset("gate.h5", group="profiles", engine="h5netcdf")
profiles.dissolved.sel(component="Zn^2+").plot(x="x", hue="time")
```

or, without xarray, `gossan.open_result("gate.h5").profiles.dissolved.sel(component="Zn^2+")`.

Names along an axis are string coordinates. Times are numbers of seconds (`s`), not dates. Where nothing
stands along an axis (a case without minerals), the axis and its variables are left out of the file.
"""

_TAIL = """
## checkpoint

Only in a file whose run has ended: `state`, the bytes from which the run can go on bit for bit. They begin
with the line `gossan state 1`, the length of a JSON header (8 bytes, little-endian) and the header, which
says where each array stands behind it (type, shape, order, offset); SHA-256 of all that is at the end.

## While a run goes on, and after a kill

- The file appears with its first checkpoint. Beside it stand `FILE.state-1` and `FILE.state-2`, the two
  newest checkpoints in the form above, and `FILE.lock`, which says who writes. Keep the state files with the
  file: from them `gossan run --resume FILE` goes on. When the run ends they go, and the file is compressed.
- Any other process may read the file. A record is committed when the axis along which its group grows
  (`time`, in `steps` `step`) reaches it; that axis is extended last. In the instant between, xarray shows
  one more record whose time is NaN.
- A kill at any instant leaves every committed record readable. A power cut may not: only checkpoints are
  waited for until they are on the disk itself.
- A file whose run was killed still says `running`.
- Every variable of a growing file is one chunk with room to spare, so the file looks larger than the disk
  space it takes. When the room is used up the file is replaced by a copy with twice as much.
"""


def _only(part: str) -> str:
    return f" (only of {PARTS[part]})" if part else ""


def page() -> str:
    """The whole page."""
    parts = [_HEAD, "\n## Root attributes\n\n| attribute | holds |\n|---|---|\n"]
    parts += [f"| {name} | {text} |\n" for name, text in ATTRIBUTES.items()]
    parts.append("| others | figures of the wall clock, once the run has ended |\n")
    for group in dict.fromkeys(row.group for row in VARIABLES):
        parts.append(f"\n## {group}\n\n| variable | dimensions | unit | meaning |\n|---|---|---|---|\n")
        parts += [f"| {row.name} | {', '.join(row.dims)} | {row.unit} | {row.long_name}{_only(row.part)} |\n"
                  for row in variables(group)]
    return "".join([*parts, _TAIL])


if __name__ == "__main__":
    PAGE.write_text(page(), encoding="utf-8")
