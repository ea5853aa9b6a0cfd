#include "read/build.h"

#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <string.h>

#include "physics/formula.h"
#include "read/suggest.h"

/* What the steps of one request share. */
typedef struct {
	bh_request *request;
	bh_arena *arena;
	const bh_conf_section *root;
	const bh_read_options *options;
	bh_problems *problems;
	const bh_conf_section **sections; /* of the phases            */
	bh_built *built;		  /* how far the phases went  */
} work;

static size_t sections_named(const bh_conf_section *root, const char *name)
{
	size_t n = 0;

	for (size_t i = 0; i < root->section_count; i++)
		n += strcmp(root->sections[i]->name, name) == 0;
	return n;
}

static bool build_phases(work *w)
{
	size_t most = sections_named(w->root, "phase");
	bool good = true;

	w->request->phases = bh_new(w->arena, bh_phase, most);
	w->sections = bh_new(w->arena, const bh_conf_section *, most);
	w->built = bh_new(w->arena, bh_built, most);
	if (!w->request->phases || !w->sections || !w->built) {
		w->problems->lost = true;
		return false;
	}
	for (size_t i = 0; i < w->root->section_count; i++) {
		size_t n = w->request->phase_count;

		if (strcmp(w->root->sections[i]->name, "phase") != 0)
			continue;
		w->request->phase_count++;
		w->sections[n] = w->root->sections[i];
		w->built[n] = bh_build_phase(&w->request->phases[n], w->arena,
					     w->sections[n], w->problems);
		good = good && w->built[n] == BH_BUILT;
	}
	return good;
}

/* The shares of all phases can be added up: those without share leave it out. */
static bool shares_are_known(const work *w)
{
	const bh_conf_section *specimen = bh_conf_section_of(w->root, "specimen");

	if (w->root->lacks || w->request->phase_count == 0 ||
	    (specimen && specimen->faulty && !bh_conf_entry_of(specimen, "amorphous")))
		return false;
	for (size_t i = 0; i < w->request->phase_count; i++)
		if (!(w->request->phases[i].share_frac >= 0) && w->sections[i]->faulty)
			return false;
	return true;
}

/* Where the last share stands, else the amorphous part: there the sum is known. */
static bh_place place_of_sum(const work *w)
{
	const bh_conf_entry *entry = NULL;

	for (size_t i = w->request->phase_count; i > 0 && !entry; i--)
		entry = bh_conf_entry_of(w->sections[i - 1], "share");
	if (!entry)
		entry = bh_conf_entry_of(bh_conf_section_of(w->root, "specimen"),
					 "amorphous");
	return entry ? entry->values[0].place : w->root->place;
}

/* One phase may leave its share out: it gets the rest. Nothing is scaled silently, beyond the
 * last digits that people write. */
static bool settle_shares(work *w)
{
	static const double slack = 5e-4;
	bh_request *request = w->request;
	double sum = request->amorphous_frac, crystalline;
	bh_phase *rest = NULL;

	for (size_t i = 0; i < request->phase_count; i++) {
		bh_phase *phase = &request->phases[i];

		if (phase->share_frac >= 0) {
			sum += phase->share_frac;
			continue;
		}
		if (rest)
			return bh_problem(w->problems, phase->place,
					  "phases \"%s\" and \"%s\" both have no share\n"
					  "only one may leave it out: it gets the rest",
					  rest->name, phase->name);
		rest = phase;
	}
	if (sum > 1 + slack)
		return bh_problem(w->problems, place_of_sum(w),
				  "the shares and the amorphous part sum to %.6g "
				  "wt%%\nallowed: 100 in all",
				  100 * sum);
	if (!rest && sum < 1 - slack)
		return bh_problem(
			w->problems, place_of_sum(w),
			"the shares sum to %.6g wt%%: %.6g wt%% is missing\nadd "
			"it, or leave the share of one phase out: it gets the "
			"rest",
			100 * sum, 100 * (1 - sum));
	if (rest)
		rest->share_frac = fmax(1 - sum, 0);
	crystalline = rest ? fmax(sum, 1) - request->amorphous_frac
			   : sum - request->amorphous_frac;
	for (size_t i = 0; i < request->phase_count && crystalline > 0; i++)
		request->phases[i].share_frac *=
			(1 - request->amorphous_frac) / crystalline;
	return true;
}

static bool build_specimen(work *w)
{
	const bh_conf_section *s = bh_conf_section_of(w->root, "specimen");
	bh_request *request = w->request;
	const bh_conf_entry *formula = bh_conf_entry_of(s, "amorphous_formula");
	bh_specimen *to = &request->specimen;
	bh_err err = { BH_OK, 0, 0, "", "", "" };

#define NUMBER(key) bh_conf_number(BH_FILE_REQUEST, s, "specimen", key)
	snprintf(to->holder, sizeof to->holder, "%s",
		 bh_conf_text(BH_FILE_REQUEST, s, "specimen", "holder"));
	to->length_mm = NUMBER("length_mm");
	to->width_mm = NUMBER("width_mm");
	to->thickness_mm = NUMBER("thickness_mm");
	to->packing_frac = NUMBER("packing");
	to->grain_um = NUMBER("grain_um");
	to->spin = NUMBER("spin") > 0;
	to->displacement_mm = NUMBER("displacement_mm");
	request->amorphous_frac = NUMBER("amorphous") / 100;
#undef NUMBER
	if (!formula || !*formula->values[0].text)
		return true;
	snprintf(request->amorphous_formula, sizeof request->amorphous_formula, "%s",
		 formula->values[0].text);
	if (bh_formula_read(&request->amorphous, w->arena, formula->values[0].text, &err))
		return true;
	return bh_problem(w->problems, formula->values[0].place, "%s\n%s", err.what,
			  err.hint);
}

static size_t phase_named(const work *w, const bh_conf_value *value)
{
	enum { SHOWN = 40 };
	bh_suggestion near = { 0 };
	char list[200] = "";

	for (size_t i = 0; i < w->request->phase_count; i++) {
		const char *name = w->request->phases[i].name;
		size_t used = strlen(list);

		if (strcmp(name, value->text) == 0)
			return i;
		bh_suggest(&near, value->text, name);
		if (used + SHOWN + 4 < sizeof list)
			snprintf(list + used, sizeof list - used, "%s%.*s",
				 used ? ", " : "", bh_suggest_cut(name, SHOWN), name);
	}
	if (w->root->lacks) /* it may stand in what was left out */
		return SIZE_MAX;
	bh_problem(w->problems, value->place, "there is no phase \"%s\"\n%sphases: %s",
		   value->text, bh_suggest_hint(&near), *list ? list : "none");
	return SIZE_MAX;
}

static bool has_rates(const bh_phase *phase)
{
	return phase->kind == BH_PHASE_ATOMS ||
	       (phase->kind == BH_PHASE_LIST && phase->corundum_ratio > 0);
}

/* Whether lines of a phase have counts, where that can be said. */
static bool check_counts(const work *w, const bh_conf_value *name, size_t i)
{
	const bh_phase *phase = &w->request->phases[i];

	if (w->built[i] == BH_BUILT && !has_rates(phase))
		return bh_problem(w->problems, name->place,
				  "\"%s\" has no rates: nothing is known of its "
				  "counts\ngive it atoms, or a d list with a "
				  "corundum_ratio; or drop the aim",
				  phase->name);
	if (fabs(phase->share_frac) > 0)
		return true;
	return bh_problem(w->problems, name->place,
			  "the share of \"%s\" is 0: its lines have no counts\ngive it a "
			  "share, or drop the aim",
			  phase->name);
}

static bool build_line_aim(work *w, bh_aim *aim, const bh_conf_section *s)
{
	const bh_conf_entry *name = bh_conf_entry_of(s, "phase");
	const bh_conf_entry *plane = bh_conf_entry_of(s, "plane");
	double area = bh_conf_number(BH_FILE_REQUEST, s, "aim line", "area_error");
	double position =
		bh_conf_number(BH_FILE_REQUEST, s, "aim line", "position_error");
	bool good = !s->faulty;

	if (isnan(area) && isnan(position) && good)
		good = bh_problem(w->problems, s->place,
				  "the aim asks for nothing\ngive area_error (%%), "
				  "position_error (°2θ), or both");
	aim->area_error_frac = isnan(area) ? 0 : area / 100;
	aim->position_error_deg = isnan(position) ? 0 : position;
	aim->phase = name ? phase_named(w, &name->values[0]) : SIZE_MAX;
	if (aim->phase == SIZE_MAX)
		return false;
	if (!check_counts(w, &name->values[0], aim->phase) || !plane ||
	    w->built[aim->phase] == BH_BUILT_NOT)
		return false;
	aim->target = bh_build_target(&w->request->phases[aim->phase], w->arena,
				      &plane->values[0], w->problems);
	return aim->target != SIZE_MAX && good;
}

static bool build_aims(work *w)
{
	bh_request *request = w->request;
	bool good = true;

	request->aims = bh_new(w->arena, bh_aim, sections_named(w->root, "aim"));
	if (!request->aims) {
		w->problems->lost = true;
		return false;
	}
	for (size_t i = 0; i < w->root->section_count; i++) {
		const bh_conf_section *s = w->root->sections[i];
		bh_aim *aim = &request->aims[request->aim_count];

		if (strcmp(s->name, "aim") != 0)
			continue;
		request->aim_count++;
		aim->place = s->place;
		aim->kind = strcmp(s->key_section, "aim line") == 0 ? BH_AIM_LINE
								    : BH_AIM_SURVEY;
		if (aim->kind == BH_AIM_LINE)
			good = build_line_aim(w, aim, s) && good;
		else
			aim->at_frac =
				bh_conf_number(BH_FILE_REQUEST, s, "aim survey", "at") /
				100;
	}
	return good;
}

/* With no aim: each target's area to 3 %, and a survey at 5 wt%. */
static bool default_aims(work *w)
{
	static const double area_error_frac = 0.03, survey_frac = 0.05;
	bh_request *request = w->request;
	size_t most = 1;

	for (size_t i = 0; i < request->phase_count; i++)
		most += request->phases[i].target_count;
	request->aims = bh_new(w->arena, bh_aim, most);
	if (!request->aims) {
		w->problems->lost = true;
		return false;
	}
	for (size_t i = 0; i < request->phase_count; i++) {
		const bh_phase *phase = &request->phases[i];

		for (size_t k = 0; k < phase->target_count; k++)
			if (has_rates(phase) && phase->share_frac > 0)
				request->aims[request->aim_count++] =
					(bh_aim){ .kind = BH_AIM_LINE,
						  .phase = i,
						  .target = k,
						  .area_error_frac = area_error_frac,
						  .by_default = true };
	}
	request->aims[request->aim_count++] = (bh_aim){ .kind = BH_AIM_SURVEY,
							.at_frac = survey_frac,
							.by_default = true };
	return true;
}

/* Counts follow from what the whole specimen absorbs. A request for positions only (no aim but
 * the survey that stands there by default) may leave compositions out. */
static bool check_compositions(const work *w)
{
	const bh_request *request = w->request;
	bool good = true;

	if (request->aim_count == 1 && request->aims[0].by_default)
		return true;
	for (size_t i = 0; i < request->phase_count; i++) {
		const bh_phase *phase = &request->phases[i];
		bool formula = phase->composition.count > 0;

		if (!(phase->share_frac > 0) || (formula && phase->density_g_cm3 > 0))
			continue;
		good = bh_problem(w->problems, phase->place,
				  "phase \"%s\" has a share but no %s: no count can be "
				  "foreseen for any phase\ngive its %s, or share = 0",
				  phase->name, formula ? "density" : "formula",
				  formula		     ? "density"
				  : phase->density_g_cm3 > 0 ? "formula"
							     : "formula and density");
	}
	return good;
}

static const bh_anode *offered(const bh_instrument *instrument, const char *symbol)
{
	for (size_t i = 0; i < instrument->tube_count; i++)
		if (strcmp(instrument->tubes[i].anode->symbol, symbol) == 0)
			return instrument->tubes[i].anode;
	return NULL;
}

static bool add_anode(bh_request *request, const char *symbol, bh_place place,
		      bh_problems *problems)
{
	const bh_anode *anode = offered(request->instrument, symbol);
	char list[80] = "";

	for (size_t i = 0; i < request->instrument->tube_count; i++) {
		size_t used = strlen(list);

		snprintf(list + used, sizeof list - used, "%s%s", used ? ", " : "",
			 request->instrument->tubes[i].anode->symbol);
	}
	if (!anode)
		return bh_problem(problems, place, "%s has no %.*s tube\nit offers: %s",
				  request->instrument->name, bh_suggest_cut(symbol, 40),
				  symbol, list);
	for (size_t i = 0; i < request->anode_count; i++)
		if (request->anodes[i] == anode)
			return bh_problem(problems, place,
					  "anode %s is given twice\ngive it once",
					  symbol);
	request->anodes[request->anode_count++] = anode;
	return true;
}

static bool choose_anodes(bh_request *request, const bh_conf_section *root,
			  const bh_read_options *options, bh_problems *problems)
{
	const bh_conf_entry *given = bh_conf_entry_of(root, "anodes");
	bool good = true;

	if (options->anode)
		return add_anode(request, options->anode, (bh_place){ "--anode", 0, 0 },
				 problems);
	for (size_t i = 0; given && i < given->count; i++)
		good = add_anode(request, given->values[i].text, given->values[i].place,
				 problems) &&
		       good;
	for (size_t i = 0; !given && i < request->instrument->tube_count; i++)
		request->anodes[request->anode_count++] =
			request->instrument->tubes[i].anode;
	return good;
}

static bool limits(bh_request *request, const bh_conf_section *root,
		   bh_problems *problems)
{
	const bh_conf_entry *given = bh_conf_entry_of(root, "two_theta");
	const bh_instrument *instrument = request->instrument;

	request->two_theta_min_deg = fmax(instrument->two_theta_min_deg, 0.1);
	request->two_theta_max_deg = instrument->two_theta_max_deg;
	if (!given)
		return true;
	if (given->count != 2 || !(given->values[0].number < given->values[1].number))
		return bh_problem(
			problems, given->place,
			"\"two_theta\" is not {low, high}\ntwo angles, the lower first");
	request->two_theta_given = true;
	request->two_theta_min_deg =
		fmax(request->two_theta_min_deg, given->values[0].number);
	request->two_theta_max_deg =
		fmin(request->two_theta_max_deg, given->values[1].number);
	if (request->two_theta_max_deg - request->two_theta_min_deg >= 0.5)
		return true;
	return bh_problem(problems, given->place,
			  "\"two_theta\" leaves %s less than half a degree\nits arms "
			  "reach %g to %g°",
			  instrument->name, instrument->two_theta_min_deg,
			  instrument->two_theta_max_deg);
}

static void take_booking(bh_request *request, const bh_conf_section *root)
{
	const bh_conf_section *booking = bh_conf_section_of(root, "booking");
	double longest = bh_conf_number(BH_FILE_REQUEST, booking, "booking", "longest");

	request->booking.longest_s = isnan(longest) ? 0 : longest;
	request->booking.most_ranges = (size_t)bh_conf_number(BH_FILE_REQUEST, booking,
							      "booking", "most_ranges");
	request->booking.reserve_frac =
		bh_conf_number(BH_FILE_REQUEST, booking, "booking", "reserve") / 100;
}

bool bh_build_request(bh_request *request, bh_arena *arena, const bh_conf_section *root,
		      const bh_read_options *options, bh_problems *problems)
{
	work w = { request, arena, root, options, problems, NULL, NULL };
	bool good = !root->faulty;

	snprintf(request->title, sizeof request->title, "%s",
		 bh_conf_text(BH_FILE_REQUEST, root, "", "title"));
	take_booking(request, root);
	request->share_factor =
		bh_conf_number(BH_FILE_REQUEST, bh_conf_section_of(root, "unsure"),
			       "unsure", "share_factor");
	good = build_specimen(&w) && good;
	good = build_phases(&w) && good;
	if (request->instrument) {
		good = choose_anodes(request, root, options, problems) && good;
		good = limits(request, root, problems) && good;
	}
	if (problems->lost)
		return false;
	if (!shares_are_known(&w) || !settle_shares(&w))
		good = false;
	good = build_aims(&w) && good;
	if (!good) /* what follows needs all of the phases */
		return false;
	if (request->aim_count == 0 && !default_aims(&w))
		return false;
	return check_compositions(&w);
}
