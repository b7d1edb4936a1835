"""Bad studies and the sentences they must get: name -> (study text or bytes, expected parts of the message)."""

GOOD = """
[lever]
pivot_mm = [150, 250, 1100]
length_mm = 300
start_deg = -20
end_deg = 50
[linkage]
kind = "handle"
[load]
kind = "constant"
force_n = 60
"""


def changed(old, new, base=GOOD):
    assert old in base
    return base.replace(old, new)


LINK = changed('kind = "handle"', 'kind = "connecting link"\narm_mm = 60\nlink_mm = 30\nslide_direction_deg = 180')
CASES = {
    "not_toml": ("lever = [", ["is not a TOML file"]),
    "not_utf8": (b"\xff\xfe[lever]", ["is not UTF-8 text"]),
    "ten_megabytes": (b"#" * 10_000_000, ["is too large for a study", "10000000 bytes"]),
    "no_lever": ("[study]\ntitle = 'x'\n", ["lever: is missing", "a [lever] section, or a [path] section"]),
    "missing_length": (changed("length_mm = 300\n", ""), ["lever.length_mm: is missing", "20 to 2000 mm"]),
    "length_text": (changed("length_mm = 300", 'length_mm = "long"'), ["lever.length_mm: must be a number", "'long'"]),
    "length_in_metres": (changed("length_mm = 300", "length_mm = 0.3"),
                         ["lever.length_mm: is outside its range, got 0.3", "did you mean 300 mm?"]),
    "length_in_micrometres": (changed("length_mm = 300", "length_mm = 300000"), ["did you mean 300 mm?"]),
    "length_nan": (changed("length_mm = 300", "length_mm = nan"), ["lever.length_mm: must be a finite number, got nan"]),
    "length_infinite": (changed("length_mm = 300", "length_mm = inf"), ["must be a finite number, got inf"]),
    "length_negative": (changed("length_mm = 300", "length_mm = -300"), ["lever.length_mm: is outside its range, got -300"]),
    "pivot_of_two": (changed("[150, 250, 1100]", "[150, 250]"), ["lever.pivot_mm", "three numbers"]),
    "pivot_word": (changed("[150, 250, 1100]", '"middle"'), ["lever.pivot_mm", "three numbers"]),
    "axis_word": (changed("length_mm = 300", 'axis = "sidewise"\nlength_mm = 300'),
                  ["lever.axis", "sideways, fore-aft, upright"]),
    "axis_no_length": (changed("length_mm = 300", "axis = [0, 0, 0]\nlength_mm = 300"), ["lever.axis: has no length"]),
    "zero_stroke": (changed("end_deg = 50", "end_deg = -20"), ["lever.end_deg", "the stroke is zero"]),
    "too_many_turns": (changed("start_deg = -20", "start_deg = -350").replace("end_deg = 50", "end_deg = 350"),
                       ["lever.end_deg: is more than one turn"]),
    "unknown_section": (GOOD + "[levers]\nx = 1\n", ["levers: is not a key of a study", "did you mean lever?"]),
    "unknown_key": (changed("length_mm", "lenght_mm"), ["lever.lenght_mm: is not a key", "did you mean length_mm?",
                                                        "lever.length_mm: is missing"]),
    "key_of_another_section": (changed("length_mm = 300", "length_mm = 300\nglove = 'thin'"),
                               ["lever.glove: is not a key of a study", "it belongs to operators.glove"]),
    "unknown_linkage": (changed('"handle"', '"conecting link"'),
                        ["linkage.kind", "conecting link", "did you mean connecting link?"]),
    "linkage_without_kind": (changed('kind = "handle"', "pin_radius_mm = 3"), ["linkage.kind: is missing", "rack"]),
    "key_of_another_kind": (changed('kind = "handle"', 'kind = "handle"\npinion_radius_mm = 10'),
                            ["linkage.pinion_radius_mm: is not a key"]),
    "unknown_load": (changed('"constant"', '"hydraulic"'), ["load.kind: is none of the kinds there are, got hydraulic"]),
    "link_too_short": (LINK, ["linkage.link_mm", "too short"]),
    "negative_friction": (LINK.replace("link_mm = 30", "link_mm = 200\npin_friction = -0.1"),
                          ["linkage.pin_friction: is outside its range, got -0.1"]),
    "friction_in_percent": (changed("[linkage]", "[bench]\nfloor_friction = 50\n[linkage]"),
                            ["bench.floor_friction: is outside its range, got 50"]),
    "share_in_percent": (GOOD + "[operators]\nwomen_share = 40\n", ["operators.women_share", "did you mean 0.4?"]),
    "overhang_without_bearing": (LINK.replace("link_mm = 30", "link_mm = 200\nslide_overhang_mm = 20"),
                                 ["linkage.slide_bearing_mm", "is needed where the driving force overhangs the guide"]),
    "pin_longer_than_lever": (LINK.replace("link_mm = 30", "link_mm = 200\npin_radius_mm = 190\npin_friction = 1.5")
                              .replace("length_mm = 300", "length_mm = 250"), ["linkage.pin_radius_mm"]),
    "torque_without_shaft": (changed("force_n = 60", "torque_nm = 20"),
                             ["load.force_n: is missing", "load.torque_nm: does not belong to a handle linkage"]),
    "shaft_with_spring": (changed('kind = "handle"', 'kind = "shaft"').replace('kind = "constant"\nforce_n = 60',
                          'kind = "spring"\nrate_n_per_mm = 2'), ["load.kind: a shaft takes a torque"]),
    "negative_load": (changed("force_n = 60", "force_n = -60"), ["load.force_n: is outside its range, got -60"]),
    "lets_go_after_the_end": (changed("force_n = 60", "force_n = 60\nlets_go_at = 1.2"),
                              ["load.lets_go_at: is outside its range, got 1.2"]),
    "drill_too_thick": (changed('kind = "constant"\nforce_n = 60', 'kind = "drilling"\ndiameter_mm = 40\nfeed_mm_per_rev = 0.1'),
                        ["load.diameter_mm: is outside its range, got 40"]),
    "drill_material": (changed('kind = "constant"\nforce_n = 60', 'kind = "drilling"\ndiameter_mm = 6\nfeed_mm_per_rev = 0.1\n'
                               'material = "cheese"'), ["cheese", "steel 200 HB"]),
    "load_table_missing": (changed('kind = "constant"\nforce_n = 60', 'kind = "table"\nfile = "nowhere.csv"'),
                           ["load.file: there is no such file", "slide_mm, force_n"]),
    "load_table_columns": (changed('kind = "constant"\nforce_n = 60', 'kind = "table"\nfile = "columns.csv"'),
                           ["load.file: does not have the expected columns", "travel"]),
    "load_table_words": (changed('kind = "constant"\nforce_n = 60', 'kind = "table"\nfile = "words.csv"'),
                         ["load.file: line 3 is not 2 finite numbers", "ten"]),
    "load_table_falls": (changed('kind = "constant"\nforce_n = 60', 'kind = "table"\nfile = "falls.csv"'),
                         ["load.file: slide_mm must rise from row to row"]),
    "load_table_short": (changed('kind = "constant"\nforce_n = 60', 'kind = "table"\nfile = "short.csv"'), ["load.", "mm"]),
    "path_and_lever": (GOOD + '[path]\nfile = "path.csv"\n', ["path: stands in place of lever, linkage and load"]),
    "path_broken": ('[path]\nfile = "columns.csv"\n', ["path.file: does not have the expected columns"]),
    "slot_without_shape": (changed('kind = "handle"', 'kind = "curved slot"'),
                           ["a curved slot needs either file or constant_ratio_mm_per_deg"]),
    "path_through_operator": (changed("[150, 250, 1100]", "[0, -800, 1100]"),
                              ["the handle path goes through the operator"]),
    "path_below_floor": (changed("[150, 250, 1100]", "[150, 250, -900]"), ["the handle path goes below the floor"]),
    "path_far_aside": (changed("[150, 250, 1100]", "[2900, 250, 1100]"), ["out of anybody's reach sideways"]),
    "unknown_population": (GOOD + '[operators]\npopulation = "us_army"\n',
                           ["operators.population: is no population, got us_army", "did you mean us_army_2012?"]),
    "huge_count": (GOOD + "[operators]\ncount = 100000000\n", ["operators.count: is outside its range, got 1e+08"]),
    "count_of_half_people": (GOOD + "[operators]\ncount = 100.5\n", ["operators.count: must be a whole number"]),
    "ages_turned_round": (GOOD + "[operators]\nage_years = [60, 20]\n",
                          ["operators.age_years: the first number must not exceed the second"]),
    "seat_back_standing": (GOOD + '[operators]\nbrace = "seat back"\n',
                           ["operators.brace: a seat back needs a seated operator"]),
    "nowhere_to_stand": (GOOD + "[operators]\nstand_off_mm = [-400, -300]\n", ["operators.stand_off_mm: lets nobody stand"]),
    "zone_without_size": (GOOD + '[[zones]]\nname = "a"\nshape = "box"\ncentre_mm = [0, 0, 0]\nsize_mm = [10, 0, 10]\n',
                          ["zones[0].size_mm: must be above zero three times"]),
    "zone_on_the_operator": (GOOD + '[[zones]]\nname = "bin"\nshape = "ball"\ncentre_mm = [0, -550, 900]\nradius_mm = 120\n',
                             ["zones[0]: overlaps the operator at rest, got bin"]),
    "zone_of_no_shape": (GOOD + '[[zones]]\nname = "a"\nshape = "cone"\n', ["zones[0].shape", "box, cylinder, ball"]),
    "zones_of_one_name": (GOOD + 2 * '[[zones]]\nname = "a"\nshape = "ball"\ncentre_mm = [0, 900, 0]\nradius_mm = 10\n',
                          ["zones[1].name: is used twice"]),
    "touch_point_behind": (GOOD + '[[touch_points]]\nname = "switch"\nat_mm = [0, -1500, 1000]\n',
                           ["touch_points[0].at_mm: lies behind the operator"]),
    "twist_without_torque": (GOOD + "[grip]\nturns = true\n", ["grip.twist_torque_nm: is needed where the grip turns"]),
    "variant_key": (GOOD + '[[variants]]\nname = "v"\nset = { "lever.lenght_mm" = 200 }\n',
                    ["variants[0] 'v': lever.lenght_mm: is not a key", "did you mean length_mm?"]),
    "variant_invalid": (GOOD + '[[variants]]\nname = "v"\nset = { "lever.length_mm" = 5 }\n',
                        ["variants[0] 'v': lever.length_mm: is outside its range, got 5"]),
    "variants_of_one_name": (GOOD + 2 * '[[variants]]\nname = "v"\nset = { "lever.length_mm" = 250 }\n',
                             ["variants[1].name: is used twice"]),
    "targets_free_key": (GOOD + '[targets.free]\n"lever.lenght_mm" = [100, 200]\n',
                         ["targets.free.lever.lenght_mm: is not a key of a study"]),
    "edge_thicker_than_bench": (GOOD + "[bench]\nsurface_height_mm = 100\nedge_thickness_mm = 200\n",
                                ["bench.edge_thickness_mm: is more than the bench's height"]),
    "many_at_once": (changed("length_mm = 300", "lenght_mm = 0.3").replace("end_deg = 50", "end_deg = nan")
                     + '[operators]\nhand = "rigth"\ncount = 1\n[grip]\nkind = "bal"\n',
                     ["lever.lenght_mm", "lever.end_deg: must be a finite number", "operators.hand", "did you mean right?",
                      "operators.count", "grip.kind", "did you mean ball?"]),
}  # fmt: skip
FILES = {
    "columns.csv": "travel, force\n0,1\n",
    "words.csv": "slide_mm,force_n\n0,10\n1,ten\n2,30\n",
    "falls.csv": "slide_mm,force_n\n0,10\n5,20\n4,30\n",
    "short.csv": "slide_mm,force_n\n0,10\n5,20\n",
    "path.csv": "x_mm,y_mm,z_mm,force_n\n0,100,1000,10\n0,50,1000,20\n",
}
