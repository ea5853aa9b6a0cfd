#include "read/keys.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

#define REQ BH_FILE_REQUEST
#define INS BH_FILE_INSTRUMENT
#define NUM BH_KEY_NUMBER
#define INT BH_KEY_WHOLE
#define TXT BH_KEY_TEXT
#define WRD BH_KEY_WORD
#define FLG BH_KEY_FLAG
#define NUMS BH_KEY_NUMBERS
#define INTS BH_KEY_WHOLES
#define TXTS BH_KEY_TEXTS
#define DUR BH_KEY_DURATION

/* clang-format off */
const bh_key bh_keys[] = {
	/* file section        name                 type  unit   low     high    fallback  words   help */
	{ REQ, "",             "title",             TXT,  "",    0,      120,    "",       NULL, "what the plan is called" },
	{ REQ, "",             "instrument",        TXT,  "",    0,      250,    "",       NULL, "a preset's name, or the path of an instrument file; --instrument goes before it" },
	{ REQ, "",             "anodes",            TXTS, "",    1,      8,      "",       NULL, "anodes to choose among, the first is planned for; left out: all of the instrument" },
	{ REQ, "",             "two_theta",         NUMS, "°",   0,      180,    "",       NULL, "your own limits, {low, high}" },

	{ REQ, "phase",        "space_group",       TXT,  "",    0,      60,     "",       NULL, "Hermann-Mauguin (short or full, any setting), Hall symbol, or number; :1 :2 :H :R choose" },
	{ REQ, "phase",        "cif",               TXT,  "",    0,      400,    "",       NULL, "structure file (CIF, packed or not), from the request's folder; #NAME or #NUMBER behind it chooses a data block" },
	{ REQ, "phase",        "cell",              NUMS, "Å, °",0.5,    500,    "",       NULL, "1 value for cubic, 2 for hexagonal, trigonal and tetragonal, 3 for orthorhombic, or all 6" },
	{ REQ, "phase",        "share",             NUM,  "wt%", 0,      100,    "",       NULL, "of the whole specimen; one phase may leave it out: the rest" },
	{ REQ, "phase",        "size_nm",           NUM,  "nm",  0.5,    1e5,    "",       NULL, "crystallite size; left out: no broadening by size" },
	{ REQ, "phase",        "strain",            NUM,  "",    0,      0.05,   "0",      NULL, "microstrain ε of 4 ε tanθ" },
	{ REQ, "phase",        "march",             NUM,  "",    0.1,    10,     "1",      NULL, "March-Dollase r; below 1: plates lying flat" },
	{ REQ, "phase",        "march_axis",        INTS, "",    -99,    99,     "",       NULL, "plane normal of the texture, {h, k, l}; needed with march" },
	{ REQ, "phase",        "targets",           TXTS, "",    1,      200,    "",       NULL, "planes asked for, like {\"1 0 1\"}; in a d list the d values" },
	{ REQ, "phase",        "d",                 NUMS, "Å",   0.3,    500,    "",       NULL, "a list of distances instead of cell and space group" },
	{ REQ, "phase",        "intensity",         NUMS, "",    0,      1e6,    "",       NULL, "as many as d, on any scale, measured with copper" },
	{ REQ, "phase",        "corundum_ratio",    NUM,  "",    0.01,   100,    "",       NULL, "I/I_c of a d list: gives it rates, good to 20 %" },
	{ REQ, "phase",        "formula",           TXT,  "",    0,      60,     "",       NULL, "composition of a phase without atoms" },
	{ REQ, "phase",        "density",           NUM,  "g/cm³",0.05,  30,     "",       NULL, "density of a phase without atoms" },

	{ REQ, "site",         "element",           TXT,  "",    0,      40,     NULL,     NULL, "symbol" },
	{ REQ, "site",         "at",                NUMS, "",    -10,    10,     NULL,     NULL, "fractional coordinates {x, y, z}" },
	{ REQ, "site",         "occupancy",         NUM,  "",    1e-6,   1,      "1",      NULL, "share of the site that is filled" },
	{ REQ, "site",         "b_iso",             NUM,  "Å²",  0,      20,     "",       NULL, "displacement parameter B; left out: 0.5, and the plan says so" },

	{ REQ, "specimen",     "holder",            WRD,  "",    0,      0,      "flat",   "aluminium flat glass steel zero-background", "what it lies in" },
	{ REQ, "specimen",     "length_mm",         NUM,  "mm",  0.5,    200,    "20",     NULL, "along the beam" },
	{ REQ, "specimen",     "width_mm",          NUM,  "mm",  0.5,    200,    "20",     NULL, "across the beam" },
	{ REQ, "specimen",     "thickness_mm",      NUM,  "mm",  0.001,  100,    "1.5",    NULL, "of the packed powder" },
	{ REQ, "specimen",     "packing",           NUM,  "",    0.05,   1,      "0.6",    NULL, "powder density over X-ray density" },
	{ REQ, "specimen",     "grain_um",          NUM,  "µm",  0.01,   1000,   "10",     NULL, "diameter of the grains" },
	{ REQ, "specimen",     "spin",              FLG,  "",    0,      0,      "false",  NULL, "turned in its plane" },
	{ REQ, "specimen",     "displacement_mm",   NUM,  "mm",  -2,     2,      "0.1",    NULL, "how far off the axis it may lie" },
	{ REQ, "specimen",     "amorphous",         NUM,  "wt%", 0,      99.9,   "0",      NULL, "amorphous part of the whole specimen" },
	{ REQ, "specimen",     "amorphous_formula", TXT,  "",    0,      60,     "",       NULL, "its composition; left out: that of the crystalline mixture" },

	{ REQ, "aim line",     "phase",             TXT,  "",    0,      60,     NULL,     NULL, "name of a phase" },
	{ REQ, "aim line",     "plane",             TXT,  "",    0,      36,     NULL,     NULL, "plane, or d of a list" },
	{ REQ, "aim line",     "area_error",        NUM,  "%",   0.05,   50,     "",       NULL, "wanted standard error of the net area" },
	{ REQ, "aim line",     "position_error",    NUM,  "°2θ", 0.0001, 0.5,    "",       NULL, "wanted standard error of the position" },
	{ REQ, "aim survey",   "at",                NUM,  "wt%", 0.01,   100,    NULL,     NULL, "any phase of corundum ratio 1 at this share shows its 10 % lines, everywhere in range" },

	{ REQ, "unsure",       "share_factor",      NUM,  "",    1,      10,     "1.5",    NULL, "minor shares may be off by this factor" },

	{ REQ, "booking",      "longest",           DUR,  "",    1,      3.6e6,    "",       NULL, "like \"2 h\" or \"90 min\"; left out: no limit" },
	{ REQ, "booking",      "most_ranges",       INT,  "",    1,      50,     "6",      NULL, "ranges that you care to type in" },
	{ REQ, "booking",      "reserve",           NUM,  "%",   0,      90,     "0",      NULL, "of the booking, kept free" },

	{ INS, "",             "title",             TXT,  "",    0,      120,    NULL,     NULL, "one line that says what it is" },
	{ INS, "",             "geometry",          WRD,  "",    0,      0,      "reflection", "reflection", "flat specimen, reflection" },
	{ INS, "",             "note",              TXT,  "",    0,      250,    "",       NULL, "anything else" },

	{ INS, "goniometer",   "radius_mm",         NUM,  "mm",  50,     1000,   NULL,     NULL, "source to specimen, specimen to detector" },
	{ INS, "goniometer",   "two_theta",         NUMS, "°",   -5,     179.5,  NULL,     NULL, "what the arms reach, {low, high}" },
	{ INS, "goniometer",   "smallest_step",     NUM,  "°",   1e-5,   1,      "0.001",  NULL, "smallest step of 2θ" },
	{ INS, "goniometer",   "fastest",           NUM,  "°/s", 0.01,   100,    "5",      NULL, "fastest drive" },
	{ INS, "goniometer",   "settle_s",          NUM,  "s",   0,      60,     "0.3",    NULL, "after each step" },
	{ INS, "goniometer",   "shortest_s",        NUM,  "s",   0.001,  60,     "0.1",    NULL, "shortest count time" },

	{ INS, "tube",         "most_kV",           NUM,  "kV",  10,     150,    NULL,     NULL, "limit of tube and generator" },
	{ INS, "tube",         "most_mA",           NUM,  "mA",  0.01,   1000,   NULL,     NULL, "limit" },
	{ INS, "tube",         "most_W",            NUM,  "W",   1,      50000,  NULL,     NULL, "limit" },
	{ INS, "tube",         "kV",                NUM,  "kV",  5,      150,    NULL,     NULL, "usual setting" },
	{ INS, "tube",         "mA",                NUM,  "mA",  0.01,   1000,   NULL,     NULL, "usual setting" },
	{ INS, "tube",         "takeoff",           NUM,  "°",   1,      45,     "6",      NULL, "take-off angle" },
	{ INS, "tube",         "focus_mm",          NUM,  "mm",  0.005,  5,      "0.04",   NULL, "width of the line focus as the specimen sees it" },
	{ INS, "tube",         "window_um",         NUM,  "µm",  0,      2000,   "300",    NULL, "beryllium window" },
	{ INS, "tube",         "foil",              TXT,  "",    0,      40,     "",       NULL, "element of the Kβ foil; left out: none" },
	{ INS, "tube",         "foil_um",           NUM,  "µm",  0.1,    1000,   "",       NULL, "its thickness; needed with foil" },
	{ INS, "tube",         "foil_side",         WRD,  "",    0,      0,      "detector", "tube detector", "where the foil stands" },
	{ INS, "tube",         "monochromator",     NUM,  "°2θ", 0,      120,    "0",      NULL, "setting angle of a crystal, at least 2; 0: none" },
	{ INS, "tube",         "monochromator_side",WRD,  "",    0,      0,      "detector", "tube detector", "where the crystal stands" },
	{ INS, "tube",         "monochromator_mosaic", NUM, "°", 0.001,  5,      "0.4",    NULL, "angle that the crystal accepts" },
	{ INS, "tube",         "monochromator_reflectivity", NUM, "", 0.001, 1,  "0.3",    NULL, "share of Kα that it passes on" },
	{ INS, "tube",         "ka1_only",          FLG,  "",    0,      0,      "false",  NULL, "an incident crystal that takes Kα2 away" },
	{ INS, "tube",         "throughput",        NUM,  "",    1e-6,   1,      "0.03",   NULL, "measured over calculated rate; 0.03 is a guess" },
	{ INS, "tube",         "throughput_factor", NUM,  "",    1,      10,     "2",      NULL, "how sure: times or divided by this" },
	{ INS, "tube",         "tungsten",          NUM,  "",    0,      0.5,    "0",      NULL, "W Lα1 photons per Kα1 photon of an aged tube" },

	{ INS, "slits",        "divergence",        NUMS, "°",   0.01,   5,      "",       NULL, "fixed divergence slits offered" },
	{ INS, "slits",        "usual",             NUM,  "°",   0.01,   5,      "",       NULL, "the one that is usually in; needed with divergence" },
	{ INS, "slits",        "automatic_length_mm", NUM, "mm", 0,      100,    "0",      NULL, "an automatic slit that lights this length, at least 1, at every angle; 0: none" },
	{ INS, "slits",        "beam_width_mm",     NUM,  "mm",  0.5,    50,     "12",     NULL, "beam across the specimen" },
	{ INS, "slits",        "soller_tube",       NUM,  "°",   0.5,    20,     "",       NULL, "axial opening on the tube's side; left out: none" },
	{ INS, "slits",        "soller_detector",   NUM,  "°",   0.5,    20,     "",       NULL, "axial opening on the detector's side; left out: none" },

	{ INS, "detector",     "kind",              WRD,  "",    0,      0,      NULL,     "slit strip", "one receiving slit, or a strip of channels" },
	{ INS, "detector",     "aperture_mm",       NUM,  "mm",  0.005,  5,      "",       NULL, "receiving slit; needed for a slit" },
	{ INS, "detector",     "pitch_mm",          NUM,  "mm",  0.005,  2,      "",       NULL, "one channel; needed for a strip" },
	{ INS, "detector",     "channels",          INT,  "",    2,      10000,  "",       NULL, "of a strip; needed for a strip" },
	{ INS, "detector",     "height_mm",         NUM,  "mm",  0.5,    100,    NULL,     NULL, "across the diffraction plane" },
	{ INS, "detector",     "sensor",            TXT,  "",    0,      40,     "",       NULL, "absorbing element; left out: efficiency alone" },
	{ INS, "detector",     "sensor_um",         NUM,  "µm",  1,      10000,  "",       NULL, "its thickness; needed with sensor" },
	{ INS, "detector",     "efficiency",        NUM,  "",    0.01,   1,      "0.95",   NULL, "share of absorbed photons that is counted" },
	{ INS, "detector",     "resolution",        NUM,  "",    0.005,  2,      "0.2",    NULL, "ΔE/E at Kα, full width at half maximum" },
	{ INS, "detector",     "window",            NUMS, "",    0,      3,      NULL,     NULL, "pulse heights counted, of the Kα energy, {low, high}" },
	{ INS, "detector",     "tail",              NUM,  "",    0,      0.5,    "0.02",   NULL, "share of pulses that lose part of their charge" },
	{ INS, "detector",     "linear_limit",      NUM,  "/s",  100,    1e9,    NULL,     NULL, "highest rate of one aperture" },
	{ INS, "detector",     "standing",          FLG,  "",    0,      0,      "false",  NULL, "a strip that may stand still" },

	{ INS, "path",         "tube",              WRD,  "",    0,      0,      "air",    "air helium vacuum", "tube to specimen" },
	{ INS, "path",         "detector",          WRD,  "",    0,      0,      "air",    "air helium vacuum", "specimen to detector" },

	{ INS, "profile",      "gauss_tan2",        NUM,  "°²",  -1,     1,      "0",      NULL, "of tan²θ" },
	{ INS, "profile",      "gauss_tan",         NUM,  "°²",  -1,     1,      "0",      NULL, "of tanθ" },
	{ INS, "profile",      "gauss_0",           NUM,  "°²",  0,      1,      NULL,     NULL, "constant" },
	{ INS, "profile",      "lorentz_tan",       NUM,  "°",   0,      1,      "0",      NULL, "of tanθ" },
	{ INS, "profile",      "lorentz_sec",       NUM,  "°",   0,      1,      "0",      NULL, "of 1/cosθ" },

	{ INS, "blank",        "two_theta",         NUMS, "°",   0,      180,    NULL,     NULL, "ascending" },
	{ INS, "blank",        "rate",              NUMS, "/s",  0,      1e6,    NULL,     NULL, "counts/s in one aperture without a specimen, as many" },

	{ INS, "overhead",     "warm_up_s",         NUM,  "s",   0,      86400,  "600",    NULL, "tube and generator" },
	{ INS, "overhead",     "reference_check_s", NUM,  "s",   0,      86400,  "300",    NULL, "a known line before the plan" },
	{ INS, "overhead",     "specimen_change_s", NUM,  "s",   0,      86400,  "180",    NULL, "mounting" },
	{ INS, "overhead",     "per_range_s",       NUM,  "s",   0,      3600,   "15",     NULL, "starting a range" },

	{ INS, "continuum",    "scale",             NUM,  "",    0.01,   100,    "1",      NULL, "factor on the tube's continuum" },
	{ INS, "continuum",    "factor",            NUM,  "",    1,      10,     "1.5",    NULL, "how sure: times or divided by this" },
};
/* clang-format on */
const size_t bh_key_count = sizeof bh_keys / sizeof *bh_keys;

const bh_key *bh_key_find(bh_key_file file, const char *section, const char *name)
{
	for (size_t i = 0; i < bh_key_count; i++)
		if (bh_keys[i].file == file && strcmp(bh_keys[i].section, section) == 0 &&
		    strcmp(bh_keys[i].name, name) == 0)
			return &bh_keys[i];
	return NULL;
}

static void allowed(bh_text *text, const bh_key *key)
{
	switch (key->type) {
	case BH_KEY_TEXT:
	case BH_KEY_TEXTS:
		bh_text_add(text, key->type == BH_KEY_TEXT ? "text" : "texts");
		break;
	case BH_KEY_WORD:
		bh_text_add(text, key->words);
		break;
	case BH_KEY_FLAG:
		bh_text_add(text, "true false");
		break;
	case BH_KEY_DURATION:
		bh_text_add(text, "duration");
		break;
	default:
		bh_text_format(text, "%g to %g", key->low, key->high);
	}
}

void bh_keys_markdown(bh_text *text, bh_key_file file)
{
	const char *section = NULL;

	for (size_t i = 0; i < bh_key_count; i++) {
		const bh_key *key = &bh_keys[i];

		if (key->file != file)
			continue;
		if (!section || strcmp(section, key->section) != 0) {
			bh_text_format(text,
				       "%s**%s**\n\n| key | unit | allowed | default | "
				       "meaning |\n"
				       "|---|---|---|---|---|\n",
				       section ? "\n" : "",
				       *key->section ? key->section : "top level");
			section = key->section;
		}
		bh_text_format(text, "| `%s` | %s | ", key->name, key->unit);
		allowed(text, key);
		bh_text_format(text, " | %s | %s |\n",
			       !key->fallback ? "must be given" : key->fallback,
			       key->help);
	}
}
