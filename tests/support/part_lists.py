"""A document with two part lists, which most tests of part lists change in some way.

Import it as ``from support.part_lists import DOCUMENT`` (``tests`` is on the path).
"""

DOCUMENT = """\
title: Listed
defaults: {wall: {material: abs, thickness_mm: 2, finish_outside: white_paint}}
box: {width_mm: 200, height_mm: 150, depth_mm: 80}
boards:
  main: {parallel_to: back, length_mm: 180, width_mm: 130, other_power_w: 1}
modes: {full: {}, low: {power_pct: 50}}
part_types:
  chip: {length_mm: 8, width_mm: 6, height_mm: 1, limits: {junction: {max_c: 100}}}
  plain: {length_mm: 4, width_mm: 4, height_mm: 1}
surroundings: {air_c: 30}
part_lists:
  placement:
    file: place.csv
    unit: mm
    columns: {reference: Ref, x: X, y: Y, rotation: Rot, side: Side, type: Type}
    board: main
    sides: {T: front, B: back}
    types: {QFP: chip}
    seen_from: front
  power:
    file: power.csv
    columns: {reference: Name, power: P}
"""
PLACE = "Ref,X,Y,Rot,Side,Type\nU1,50,40,0,T,QFP\nU2,100,60,90,B,plain\nR1,20,20,0,T,0603\n"
POWER = "Name,P\nU1,1.5\nU2,0.5\n"
