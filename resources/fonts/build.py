"""Make the shipped faces from the static OpenType files of Inter: python build.py FOLDER (needs fonttools).

Tabular figures stand in the character map itself, and no feature swaps a glyph: a PDF writer finds a
character only from a glyph of the map, so a digit set by the `tnum` feature would be lost to search and
copy. The family has a name of its own, so that another Inter on the machine cannot change a width.
"""

import sys
from pathlib import Path

from fontTools import subset
from fontTools.ttLib import TTFont

FAMILY = "Gainwright Sans"
STYLES = ("Regular", "SemiBold")
RANGES = (
    (0x20, 0x17F), (0x192, 0x192), (0x2C6, 0x2DD), (0x370, 0x3FF), (0x400, 0x45F),  # letters
    (0x2000, 0x206F), (0x2070, 0x209F), (0x20AC, 0x20AC), (0x2100, 0x214F),  # punctuation, signs
    (0x2150, 0x218F), (0x2190, 0x21FF), (0x2200, 0x22FF), (0x2300, 0x23FF),  # fractions, arrows, maths
    (0x25A0, 0x25FF), (0x2700, 0x27BF),  # shapes, ticks
)  # fmt: skip


def tabular(font: TTFont) -> dict[str, str]:
    """Glyph name to its tabular form, as the font's own feature gives it."""
    table = font["GSUB"].table
    lookups = {
        index
        for record in table.FeatureList.FeatureRecord
        if record.FeatureTag == "tnum"
        for index in record.Feature.LookupListIndex
    }
    swaps: dict[str, str] = {}
    for index in lookups:
        for rule in table.LookupList.Lookup[index].SubTable:
            swaps.update(getattr(rule, "mapping", getattr(getattr(rule, "ExtSubTable", None), "mapping", {})))
    return swaps


def build(source: Path, target: Path, style: str) -> None:
    """Write one face: figures tabular, features but kerning gone, renamed."""
    font = TTFont(source)
    swaps = tabular(font)
    for table in font["cmap"].tables:
        table.cmap = {code: swaps.get(glyph, glyph) for code, glyph in table.cmap.items()}
        # Without a tab of its own Qt takes the space for one, and every space of a PDF would be read back as a tab.
        table.cmap[0x09] = table.cmap[0x2003]
    options = subset.Options(layout_features=["kern", "mark", "mkmk", "ccmp"], notdef_outline=True)
    options.name_IDs = [0, 1, 2, 3, 4, 5, 6, 13, 14, 16, 17]
    subsetter = subset.Subsetter(options)
    subsetter.populate(unicodes=[0x09, *(code for low, high in RANGES for code in range(low, high + 1))])
    subsetter.subset(font)
    full, postscript = f"{FAMILY} {style}", f"{FAMILY.replace(' ', '')}-{style}"
    legacy = (FAMILY, "Regular") if style == "Regular" else (full, "Regular")
    names = {1: legacy[0], 2: legacy[1], 3: postscript, 4: full, 6: postscript, 16: FAMILY, 17: style}
    for number, text in names.items():
        font["name"].setName(text, number, 3, 1, 0x409)
    font["CFF "].cff.fontNames = [postscript]
    top = font["CFF "].cff.topDictIndex[0]
    top.FullName, top.FamilyName = full, FAMILY
    font.save(target)


if __name__ == "__main__":
    for name in STYLES:
        build(
            Path(sys.argv[1]) / f"Inter-{name}.otf",
            Path(__file__).parent / f"GainwrightSans-{name}.otf",
            name,
        )
