"""What the page about the document says that the models do not."""

INTRODUCTION = """\
# The document

This page is written by `python -m enclosure_check.description.page > docs/document.md`; edit the
models in `enclosure_check/description/` instead.

A document is one YAML file: a box, what is in it and what is around it. Required are `title`,
`box`, `surroundings`, and for every wall a material, a thickness and an outside finish, which
`defaults.wall` can give for all six. Everything else has a default; those that change an answer
are listed as assumptions in every report. Where positions are counted from is drawn in
[coordinates](coordinates.md); materials and finishes that may be named are listed in the
[library](library.md).

Whatever repeats (walls, boards, copper layers, parts, limits, modes, options, conditions) is a
mapping by name, never a list, so that a patch can reach one member of it. Names are yours: 1 to
80 characters, parts under their references. Names of boards and parts may not be those of walls
or `air`.

## Units

Every number with a unit carries it at the end of its key. There is no conversion: a key with
another unit is refused with the key that is meant. The one exception are readings of parts under
`measured`, which are keyed by the point (`junction`, `case`) and are in degrees Celsius.
"""

YAML_RULES = """\
## How YAML is read

Stricter than YAML allows, so that a slip of the hand does not become a number nobody meant:

- a key given twice, an unknown key and a tag (`!!float`) are errors; so are merge keys (`<<`);
- an anchor may be repeated by an alias, but not inside itself, and not so often that more than
  20,000 values come of it;
- UTF-8, at most 1 MiB, nested at most 32 deep, one document in a file, no control characters;
- an error names `file:line:column: key: what was given, what is allowed`, with the nearest
  spelling, and all errors are shown at once;
- a value in quotes is text, also where it looks like a number. Keys are always text and never
  need quotes to be names. Only `true`, `false`, `null`, `~`, an empty value and decimal numbers
  are more than text when they stand without quotes:
"""

#: Scalars shown in the table, and why.
YAML_EXAMPLES = (
    ("1e-3", "a number without a point"),
    ("010", "no octal"),
    ('"5"', "refused where a number is wanted"),
    ("off", "no truth value: a mode may be called `off`; quote it for other programs' sake"),
    ("no", "likewise `yes`, `on`, `True`"),
    ("12:30", "no base 60"),
    ("0x1F", "no hexadecimal"),
    ("1_000", "no underscores in numbers"),
    ("2024-05-01", "no dates"),
    ("true", "only so, in small letters; no key of this version takes it"),
    ("~", "back to the default, as an empty value or `null`"),
)

CHANGES = """\
## Options and conditions

`options` are design choices (taller box, other finish), `conditions` are installations and cases
(noon sun, cold soak). Each is a JSON merge patch (RFC 7396) of the document without these two
keys. The order is: base, then the option asked for by `--option`, then the condition.

- A mapping in a patch is merged into the mapping it meets, key by key.
- `null` removes a key, back to its default. A `null` for a name that is nowhere is an error.
- Anything else, lists such as `at_mm` included, replaces what was there.
- With conditions, every condition is run and the base itself is not. Without any, the base runs
  under the name `base`.
- The condition comes last. A number it gives replaces the option's: an option cannot change what
  every condition states again.
- A patch has no `options` or `conditions` of its own.
- Every combination of an option (or none) with a condition is checked when the file is read, at
  most 200 of them. An error that only arises in some says so, and names the line of the patch.

```yaml
title: Two finishes, day and night
defaults:
  wall: {material: aluminium_die_cast, thickness_mm: 3, finish_outside: white_paint}
box: {width_mm: 200, height_mm: 150, depth_mm: 80}
boards:
  main: {parallel_to: back, length_mm: 180, width_mm: 130, other_power_w: 6}
surroundings: {air_c: 35, sky: clear}
requirements: {touch_max_c: 70}
options:
  bare: {defaults: {wall: {finish_outside: bare_aluminium_rolled}}}
conditions:
  noon: {surroundings: {sun_w_per_m2: {top: 900, front: 400}}}
  night:
    surroundings: {air_c: -10}
    boards: {main: {other_power_w: null}}   # back to the default, no power
```
"""

TOGETHER = """\
## What must fit together

Checked after the keys themselves, with every option and condition applied:

- `walls.WALL`: material, thickness and outside finish must come from the wall or from
  `defaults.wall`. The inside is finished as the outside unless it is said. At least one wall is in
  open air.
- `mounting`: `against_surface` takes `gap_mm`, `surface_c` and `surface_emissivity`; `standing_on`
  and `bolted_to` take `contact_w_per_m2k` and `surface_c`; `bolted_to` needs the contact; the
  other two take nothing more. A gap left out or below 0.1 mm counts as 0.1 mm.
- Boards lie inside the box. `copper` and `conductivity_in_plane_w_per_mk` exclude each other, and
  the copper is thinner than the board.
- Zones, stand-offs, fillers and shield cans lie on their board. A zone has `copper` or
  `conductivity_in_plane_w_per_mk` as a board has; with neither it is bare laminate.
- A stand-off, filler or can belongs to a wall that the board lies parallel to, an edge clamp to one
  of the other four. A stand-off has `diameter_mm` and `material`, its bore smaller, or
  `resistance_k_per_w` alone, which counts as a foot of 5 mm. A clamp is no longer than its edge.
- Fillers on one side of a board share no place, cans neither, and a filler none with a can. No
  part on another face, no body in the air and no other board reaches into a filler. A part in a
  filler has no pad.
- A part lies wholly under a can or beside it. A can is no lower than the parts under it and fits
  between board and wall. A part under a can has no pad. Its local air is as warm as the can.
- An opening lies inside its wall, which has air outside: open air, or a gap with open edges, which
  is a warning. One that is closed (`blocked_pct: 100`) may be anywhere. Sizes: `hole` (one, or
  `count` in a row at `pitch_mm`), `mesh` and `filter` take `diameter_mm`, or `width_mm` and
  `height_mm`; `cable_gland` takes `diameter_mm` and `cable_mm`; `perforated` the area, `hole_mm`
  and one of `free_area_pct`, `pitch_mm` and `count`; `slots` the area, `slot_width_mm` and one of
  these too, or `count` and `pitch_mm`, which give the size across; `louvre` the area,
  `slot_width_mm` and `free_area_pct`. Openings over each other, and parts or fillers over them, are
  a warning.
- Cables: the copper has room in the diameter.
- Parts: sizes come from the part or its type. On a board: `side` and `at_mm`; on a wall: `at_mm`;
  in the air: `from_walls_mm` or the middle. Outlines stay on the board or wall, tops stay out of
  the wall they face. Overlapping outlines are a warning, and so is a part that reaches into a board
  it is not on. Boards that share space are refused, and bodies in the air that reach into one.
- The path to the board is `theta_jb_k_per_w` when given, else `theta_jc_bottom_k_per_w` and
  `bottom_contact_k_per_w` in series (no joint when only the first is given), else 0.1 mm of air.
- `output_w` and `efficiency_pct` go together and exclude `power_w`: the power is
  `output_w (100 / efficiency_pct - 1)`. A mode's own power in `power_by_mode_w` is always heat.
- `power_slope_pct_per_k` and `power_doubling_k` exclude each other.
- A pad of a part on a board goes to the wall the part faces, is no larger than the part and, before
  assembly, at least as thick as the distance. It is compressed to that distance; to less than half
  is a warning.
- A limit has `max_c`, `min_c` or a derating curve, the lower below the higher; `board` limits only
  for parts on boards. A derating curve has rising temperatures and a load that does not rise; the
  temperature at which it still allows the load is the limit.
- A part turned between quarter turns counts as a rectangle along the edges of the same area.
- `part_lists`: what lists may hold, how they are joined and what becomes of parts without power or
  size is told in [part lists](parts_lists.md).
- `power_budget`: no more power goes out than in. What stays is compared with the heat of parts,
  boards and cables; a difference beyond the tolerance is a warning.
- `mode` and every mode named in a power exist. `tolerances` match at least one number each; of
  several for one number the one with the fewest `*` counts, the last of equals. `measured` names
  parts that exist, and its condition when there are any.
- `sky_c` goes with `sky: given`. Sun on a wall that is not in open air is left out, with a warning.
"""
