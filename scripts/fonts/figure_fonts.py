"""Makes fonts/figures/*.ttf from the variable fonts of fonts/: one weight each, Latin and Greek in one file.

Needs fontTools with brotli. Run from the root of the project; what it writes is kept in the repository.
"""

import os

from fontTools import merge, subset
from fontTools.ttLib import TTFont
from fontTools.varLib import instancer

FACES = {
    "source-sans-3-regular": ("Source Sans 3", "Regular", ["source-sans-3-latin-wght-normal", "source-sans-3-greek-wght-normal"], 400),
    "source-sans-3-semibold": ("Source Sans 3 Semibold", "Regular", ["source-sans-3-latin-wght-normal", "source-sans-3-greek-wght-normal"], 600),
    "stix-two-text-italic": ("STIX Two Text", "Italic", ["stix-two-text-latin-wght-italic", "stix-two-text-greek-wght-italic"], 400),
}
PUNCTUATION = {0x2009, 0x2013, 0x2014, 0x2018, 0x2019, 0x201C, 0x201D, 0x2026, 0x2212}


def instance(source: str, weight: int, path: str) -> str:
    font = TTFont(f"fonts/{source}.woff2")
    font.flavor = None
    font = instancer.instantiateVariableFont(font, {"wght": weight})
    options = subset.Options()
    options.layout_features = ["kern"]
    options.hinting = False
    subsetter = subset.Subsetter(options)
    known = font.getBestCmap()
    subsetter.populate(unicodes=[u for u in known if u < 0x180 or 0x370 <= u <= 0x3FF or u in PUNCTUATION])
    subsetter.subset(font)
    font.save(path)
    return path


for name, (family, style, sources, weight) in FACES.items():
    parts = [instance(source, weight, f"/tmp/{name}-{i}.ttf") for i, source in enumerate(sources)]
    font = merge.Merger().merge(parts)
    for record, text in ((1, family), (2, style), (4, f"{family} {style}"), (6, f"{family}-{style}".replace(" ", ""))):
        font["name"].setName(text, record, 3, 1, 0x409)
    for record in (16, 17, 25):
        font["name"].removeNames(nameID=record)
    font["OS/2"].usWeightClass = weight
    # The same sources must make the same file.
    font["head"].created = font["head"].modified = 0
    font.recalcTimestamp = False
    os.makedirs("fonts/figures", exist_ok=True)
    font.save(f"fonts/figures/{name}.ttf")
    print(name, os.path.getsize(f"fonts/figures/{name}.ttf"), "bytes")
