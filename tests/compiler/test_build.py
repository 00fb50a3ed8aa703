"""The cache of built patches: what changes the code changes its name."""

import numpy as np
from patches import one

import rtfx
from rtfx.compiler import build

TEXT = "from rtfx.dsp.sine import sine\n\n\ndef {kernel}():\n    return sine(0.1)\n"


def test_name_depends_on_the_text_and_on_the_first_contents():
    names = {
        build.name_for(TEXT),
        build.name_for(TEXT.replace("0.1", "0.2")),
        build.name_for(TEXT, (np.zeros(3),)),
        build.name_for(TEXT, (np.ones(3),)),
    }
    assert len(names) == 4


def test_name_depends_on_the_content_of_every_inlined_module(monkeypatch):
    before = build.name_for(TEXT)
    kept = build._content_of

    def changed(path):
        return b"other" if path.endswith("dsp/sine.py") else kept(path)

    monkeypatch.setattr(build, "_content_of", changed)
    assert build.name_for(TEXT) != before


def test_what_is_inlined_in_a_patch_covers_its_kinds_and_the_ground():
    files = build._inlined_files(("rtfx.blocks.clip",))
    for part in ("native/lanewise.py", "native/options.py", "dsp/glide.py", "blocks/clip.py"):
        assert any(f.endswith(part) for f in files), part


def test_built_source_lies_beside_its_machine_code_and_says_what_it_is():
    path = rtfx.plan(one("gain")).build().path
    assert "one function, for 48000 Hz at stage quality" in path.read_text()
    assert list(path.parent.glob(f"__pycache__/{path.stem}*.nbc"))
