#include "read/build.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "physics/xray.h"
#include "read/suggest.h"

typedef struct {
	const bh_conf_section *s; /* NULL: the file does not have it */
	const char *name;
	bh_problems *problems;
} part;

static part part_of(const bh_conf_section *root, const char *name, bh_problems *problems)
{
	return (part){ bh_conf_section_of(root, name), name, problems };
}

static double number(const part *p, const char *key)
{
	return bh_conf_number(BH_FILE_INSTRUMENT, p->s, p->name, key);
}

static double number_or_0(const part *p, const char *key)
{
	double value = number(p, key);

	return isnan(value) ? 0 : value;
}

static const char *text(const part *p, const char *key)
{
	return bh_conf_text(BH_FILE_INSTRUMENT, p->s, p->name, key);
}

static bh_place place_of(const part *p, const char *key)
{
	const bh_conf_entry *entry = bh_conf_entry_of(p->s, key);

	return entry ? entry->values[0].place : p->s->place;
}

/* {low, high} */
static bool pair(double *low, double *high, const part *p, const char *key)
{
	const bh_conf_entry *entry = bh_conf_entry_of(p->s, key);

	if (!entry) /* noted */
		return false;
	if (entry->count != 2 || !(entry->values[0].number < entry->values[1].number))
		return bh_problem(
			p->problems, entry->place,
			"\"%s\" is not {low, high}\ntwo values, the lower first", key);
	*low = entry->values[0].number;
	*high = entry->values[1].number;
	return true;
}

/* A key that another one needs; it may be what a faulty section lacks. */
static bool needs(const part *p, const char *key, const char *because)
{
	return bh_conf_entry_of(p->s, key) || p->s->faulty ||
	       bh_problem(p->problems, p->s->place,
			  "\"%s\" has no \"%s\"\nit is needed with %s", p->name, key,
			  because);
}

/* Keys that mean nothing without another one. */
static bool alone(const part *p, const char *keys, const char *without)
{
	bool good = true;

	for (size_t i = 0; i < p->s->entry_count; i++) {
		const bh_conf_entry *entry = &p->s->entries[i];
		const char *found = strstr(keys, entry->key->name);
		size_t n = strlen(entry->key->name);

		if (found && (found == keys || found[-1] == ' ') &&
		    (found[n] == ' ' || !found[n]) && !p->s->faulty)
			good = bh_problem(p->problems, entry->place,
					  "\"%s\" means nothing here\nit goes with %s",
					  entry->key->name, without);
	}
	return good;
}

static bool element(int *z, const part *p, const char *key)
{
	*z = 0;
	if (!*text(p, key))
		return true;
	*z = bh_xray_z(text(p, key));
	return *z ||
	       bh_problem(p->problems, place_of(p, key),
			  "\"%s\" is \"%s\": that is no element\nallowed: symbols H "
			  "to U, like Ni",
			  key, text(p, key));
}

static bool goniometer(bh_instrument *to, const bh_conf_section *root,
		       bh_problems *problems)
{
	part p = part_of(root, "goniometer", problems);

	if (!p.s)
		return false;
	to->radius_mm = number(&p, "radius_mm");
	to->smallest_step_deg = number(&p, "smallest_step");
	to->fastest_deg_s = number(&p, "fastest");
	to->settle_s = number(&p, "settle_s");
	to->shortest_step_s = number(&p, "shortest_s");
	if (!pair(&to->two_theta_min_deg, &to->two_theta_max_deg, &p, "two_theta"))
		return false;
	return to->two_theta_max_deg - fmax(to->two_theta_min_deg, 0) >= 1 ||
	       bh_problem(problems, place_of(&p, "two_theta"),
			  "\"two_theta\" leaves less than 1° to measure in\n{low, high} "
			  "with high at least 1° above low and above 0");
}

static bool crystal(bh_monochromator *to, const part *p)
{
	to->two_theta_deg = number_or_0(p, "monochromator");
	to->side = strcmp(text(p, "monochromator_side"), "tube") == 0 ? BH_SIDE_TUBE
								      : BH_SIDE_DETECTOR;
	to->mosaic_deg = number(p, "monochromator_mosaic");
	to->reflectivity = number(p, "monochromator_reflectivity");
	to->ka1_only = number(p, "ka1_only") > 0;
	if (to->two_theta_deg > 0 && to->two_theta_deg < 2)
		return bh_problem(p->problems, place_of(p, "monochromator"),
				  "\"monochromator\" is %g\nallowed: 2 to 120 °2θ, or 0 "
				  "for none",
				  to->two_theta_deg);
	if (!(to->two_theta_deg > 0) &&
	    !alone(p,
		   "monochromator_side monochromator_mosaic monochromator_reflectivity",
		   "monochromator = angle"))
		return false;
	if (to->ka1_only && !p->s->faulty &&
	    (!(to->two_theta_deg > 0) || to->side != BH_SIDE_TUBE))
		return bh_problem(
			p->problems, place_of(p, "ka1_only"),
			"\"ka1_only\" needs a monochromator on the tube's side\ngive "
			"monochromator = angle and monochromator_side = \"tube\"");
	return true;
}

static bool generator(const bh_tube *to, const part *p)
{
	bool good = true;

	if (to->kV > to->most_kV)
		good = bh_problem(p->problems, place_of(p, "kV"),
				  "\"kV\" is %g\nallowed: up to most_kV "
				  "= %g",
				  to->kV, to->most_kV);
	if (to->mA > to->most_mA)
		good = bh_problem(p->problems, place_of(p, "mA"),
				  "\"mA\" is %g\nallowed: up to most_mA "
				  "= %g",
				  to->mA, to->most_mA);
	if (to->kV * to->mA > to->most_W * (1 + 1e-9))
		good = bh_problem(p->problems, place_of(p, "mA"),
				  "%g kV and %g mA are %g W\nallowed: up "
				  "to most_W = %g",
				  to->kV, to->mA, to->kV * to->mA, to->most_W);
	return good;
}

static bool tube(bh_tube *to, const bh_conf_section *s, bh_problems *problems)
{
	part p = { s, "tube", problems };
	char list[80] = "";
	bool good;

	to->anode = bh_anode_find(s->title);
	for (size_t i = 0; i < bh_anode_count; i++) {
		size_t used = strlen(list);

		snprintf(list + used, sizeof list - used, "%s%s", used ? ", " : "",
			 bh_anodes[i].symbol);
	}
	if (!to->anode)
		bh_problem(problems, s->title_place,
			   "no such anode: \"%.*s\"\nallowed: %s",
			   bh_suggest_cut(s->title, 40), s->title, list);
	to->most_kV = number(&p, "most_kV");
	to->most_mA = number(&p, "most_mA");
	to->most_W = number(&p, "most_W");
	to->kV = number(&p, "kV");
	to->mA = number(&p, "mA");
	to->takeoff_deg = number(&p, "takeoff");
	to->focus_mm = number(&p, "focus_mm");
	to->window_um = number(&p, "window_um");
	to->foil_side = strcmp(text(&p, "foil_side"), "tube") == 0 ? BH_SIDE_TUBE
								   : BH_SIDE_DETECTOR;
	to->foil_um = number_or_0(&p, "foil_um");
	to->throughput = number(&p, "throughput");
	to->throughput_factor = number(&p, "throughput_factor");
	to->tungsten_share = number(&p, "tungsten");
	good = generator(to, &p) && to->anode;
	good = element(&to->foil_z, &p, "foil") && good;
	if (to->foil_z)
		good = needs(&p, "foil_um", "foil") && good;
	else if (!*text(&p, "foil"))
		good = alone(&p, "foil_um foil_side",
			     "foil = \"Ni\" or another element") &&
		       good;
	return crystal(&to->monochromator, &p) && good;
}

static bool tubes(bh_instrument *to, const bh_conf_section *root, bh_problems *problems)
{
	bool good = true;

	for (size_t i = 0; i < root->section_count; i++) {
		const bh_conf_section *s = root->sections[i];

		if (strcmp(s->name, "tube") != 0)
			continue;
		if (to->tube_count == BH_MAX_TUBES)
			return bh_problem(problems, s->place,
					  "more than %d tubes\ntake some out",
					  BH_MAX_TUBES);
		good = tube(&to->tubes[to->tube_count++], s, problems) && good;
	}
	return good;
}

static int ascending(const void *a, const void *b)
{
	double x = *(const double *)a, y = *(const double *)b;

	return (x > y) - (x < y);
}

static bool slits(bh_instrument *to, const bh_conf_section *root, bh_problems *problems)
{
	part p = part_of(root, "slits", problems);
	const bh_conf_entry *offered = bh_conf_entry_of(p.s, "divergence");

	if (!p.s)
		return false;
	to->automatic_length_mm = number_or_0(&p, "automatic_length_mm");
	to->beam_width_mm = number(&p, "beam_width_mm");
	to->soller_tube_deg = number_or_0(&p, "soller_tube");
	to->soller_detector_deg = number_or_0(&p, "soller_detector");
	to->usual_divergence_deg = number_or_0(&p, "usual");
	if (to->automatic_length_mm > 0 && to->automatic_length_mm < 1)
		return bh_problem(
			problems, place_of(&p, "automatic_length_mm"),
			"\"automatic_length_mm\" is %g\nallowed: 1 to 100 mm, or "
			"0 for none",
			to->automatic_length_mm);
	if (!offered && !(to->automatic_length_mm > 0) && !p.s->faulty)
		return bh_problem(problems, p.s->place,
				  "\"slits\" offers no divergence\ngive divergence "
				  "= {...} and usual, or automatic_length_mm");
	if (!offered)
		return alone(&p, "usual", "divergence = {...}");
	if (offered->count > BH_MAX_SLITS)
		return bh_problem(problems, offered->place,
				  "more than %d slits\ntake some out", BH_MAX_SLITS);
	for (size_t i = 0; i < offered->count; i++)
		to->divergence_deg[to->divergence_count++] = offered->values[i].number;
	qsort(to->divergence_deg, to->divergence_count, sizeof *to->divergence_deg,
	      ascending);
	if (!needs(&p, "usual", "divergence") || !bh_conf_entry_of(p.s, "usual"))
		return false;
	for (size_t i = 0; i < to->divergence_count; i++)
		if (fabs(to->divergence_deg[i] - to->usual_divergence_deg) < 1e-9)
			return true;
	return bh_problem(problems, place_of(&p, "usual"),
			  "\"usual\" is %g\nallowed: one of "
			  "\"divergence\"",
			  to->usual_divergence_deg);
}

/* What the two kinds of detector need. */
static bool aperture(bh_detector *to, const part *p)
{
	bool strip = strcmp(text(p, "kind"), "strip") == 0, good;

	to->kind = strip ? BH_DETECTOR_STRIP : BH_DETECTOR_SLIT;
	to->aperture_mm = number_or_0(p, strip ? "pitch_mm" : "aperture_mm");
	to->channels = strip ? (size_t)number_or_0(p, "channels") : 1;
	to->standing = strip && number(p, "standing") > 0;
	if (!strip) {
		good = needs(p, "aperture_mm", "kind = \"slit\"");
		return alone(p, "pitch_mm channels standing", "kind = \"strip\"") && good;
	}
	good = needs(p, "pitch_mm", "kind = \"strip\"");
	good = needs(p, "channels", "kind = \"strip\"") && good;
	return alone(p, "aperture_mm", "kind = \"slit\"") && good;
}

static bool detector(bh_instrument *instrument, const bh_conf_section *root,
		     bh_problems *problems)
{
	part p = part_of(root, "detector", problems);
	bh_detector *to = &instrument->detector;
	bool good;

	if (!p.s)
		return false;
	to->height_mm = number(&p, "height_mm");
	to->sensor_um = number_or_0(&p, "sensor_um");
	to->efficiency = number(&p, "efficiency");
	to->resolution_frac = number(&p, "resolution");
	to->tail_frac = number(&p, "tail");
	to->linear_limit_cps = number(&p, "linear_limit");
	good = aperture(to, &p);
	good = element(&to->sensor_z, &p, "sensor") && good;
	if (to->sensor_z)
		good = needs(&p, "sensor_um", "sensor") && good;
	else if (!*text(&p, "sensor"))
		good = alone(&p, "sensor_um", "sensor = \"Si\" or another element") &&
		       good;
	if (!pair(&to->window_low_frac, &to->window_high_frac, &p, "window"))
		return false;
	if (to->window_low_frac < 1 && to->window_high_frac > 1)
		return good;
	return bh_problem(problems, place_of(&p, "window"),
			  "\"window\" leaves Kα out\nit must hold 1, the Kα energy, like "
			  "{0.75, 1.25}");
}

static bool gas(bh_gas *to, const part *p, const char *key)
{
	static const char *const names[BH_GAS_COUNT] = { "air", "helium", "vacuum" };

	for (int i = 0; i < BH_GAS_COUNT; i++)
		if (strcmp(text(p, key), names[i]) == 0)
			*to = (bh_gas)i;
	return true;
}

static bool profile(bh_instrument *to, const bh_conf_section *root, bh_problems *problems)
{
	part p = part_of(root, "profile", problems);

	if (!p.s || p.s->faulty) /* noted */
		return false;
	to->gauss_tan2_deg2 = number(&p, "gauss_tan2");
	to->gauss_tan_deg2 = number(&p, "gauss_tan");
	to->gauss_0_deg2 = number(&p, "gauss_0");
	to->lorentz_tan_deg = number(&p, "lorentz_tan");
	to->lorentz_sec_deg = number(&p, "lorentz_sec");
	for (double t = 0.02; t < 6; t *= 1.05) { /* tanθ from 2θ = 2.3° to 161° */
		double square = to->gauss_tan2_deg2 * t * t + to->gauss_tan_deg2 * t +
				to->gauss_0_deg2;
		double lorentz =
			to->lorentz_tan_deg * t + to->lorentz_sec_deg * sqrt(1 + t * t);

		if (square < 0 || !(square > 0 || lorentz > 0))
			return bh_problem(problems, p.s->place,
					  "the widths leave no line at 2θ = "
					  "%.0f°\nGaussian² must stay "
					  "≥ 0 and the line wider than 0 everywhere",
					  2 * atan(t) * 180 / 3.14159265358979);
	}
	return true;
}

static bool blank(bh_instrument *to, bh_arena *arena, const bh_conf_section *root,
		  bh_problems *problems)
{
	part p = part_of(root, "blank", problems);
	const bh_conf_entry *x, *y;

	if (!p.s)
		return true;
	x = bh_conf_entry_of(p.s, "two_theta");
	y = bh_conf_entry_of(p.s, "rate");
	if (!x || !y) /* noted */
		return false;
	if (x->count != y->count)
		return bh_problem(problems, y->place,
				  "\"rate\" has %zu values, \"two_theta\" has %zu\n"
				  "give one for each angle",
				  y->count, x->count);
	to->blank_two_theta_deg = bh_new(arena, double, x->count);
	to->blank_cps = bh_new(arena, double, x->count);
	if (!to->blank_two_theta_deg || !to->blank_cps) {
		problems->lost = true;
		return false;
	}
	for (size_t i = 0; i < x->count; i++) {
		if (i && !(x->values[i].number > x->values[i - 1].number))
			return bh_problem(problems, x->values[i].place,
					  "the angles of \"blank\" do not "
					  "rise\ngive them in order");
		to->blank_two_theta_deg[i] = x->values[i].number;
		to->blank_cps[i] = y->values[i].number;
	}
	to->blank_count = x->count;
	return true;
}

static void overhead(bh_instrument *to, const bh_conf_section *root,
		     bh_problems *problems)
{
	part p = part_of(root, "overhead", problems),
	     c = part_of(root, "continuum", problems);

	to->warm_up_s = number(&p, "warm_up_s");
	to->reference_check_s = number(&p, "reference_check_s");
	to->specimen_change_s = number(&p, "specimen_change_s");
	to->per_range_s = number(&p, "per_range_s");
	to->continuum_scale = number(&c, "scale");
	to->continuum_factor = number(&c, "factor");
}

bool bh_build_instrument(bh_instrument *instrument, bh_arena *arena,
			 const bh_conf_section *root, bh_problems *problems)
{
	part path = part_of(root, "path", problems);
	bool good;

	snprintf(instrument->title, sizeof instrument->title, "%s",
		 bh_conf_text(BH_FILE_INSTRUMENT, root, "", "title"));
	good = goniometer(instrument, root, problems);
	good = tubes(instrument, root, problems) && good;
	good = slits(instrument, root, problems) && good;
	good = detector(instrument, root, problems) && good;
	good = gas(&instrument->tube_path, &path, "tube") && good;
	good = gas(&instrument->detector_path, &path, "detector") && good;
	good = profile(instrument, root, problems) && good;
	overhead(instrument, root, problems);
	return blank(instrument, arena, root, problems) && good;
}
