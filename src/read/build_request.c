#include "read/build.h"

#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <string.h>

#include "physics/formula.h"
#include "read/suggest.h"

static size_t sections_named(const bh_conf_section *root, const char *name)
{
	size_t n = 0;

	for (size_t i = 0; i < root->section_count; i++)
		n += strcmp(root->sections[i]->name, name) == 0;
	return n;
}

static bool build_phases(bh_request *request, bh_arena *arena,
			 const bh_conf_section *root, bh_problems *problems)
{
	bool good = true;

	request->phases = bh_new(arena, bh_phase, sections_named(root, "phase"));
	if (!request->phases) {
		problems->lost = true;
		return false;
	}
	for (size_t i = 0; i < root->section_count; i++)
		if (strcmp(root->sections[i]->name, "phase") == 0)
			good = bh_build_phase(&request->phases[request->phase_count++],
					      arena, root->sections[i], problems) &&
			       good;
	return good;
}

/* One phase may leave its share out: it gets the rest. Nothing is scaled silently. */
static bool settle_shares(bh_request *request, const bh_conf_section *root,
			  bh_problems *problems)
{
	double sum = request->amorphous_frac;
	bh_phase *rest = NULL;

	for (size_t i = 0; i < request->phase_count; i++) {
		bh_phase *phase = &request->phases[i];

		if (phase->share_frac >= 0) {
			sum += phase->share_frac;
			continue;
		}
		if (rest)
			return bh_problem(problems, phase->place,
					  "phases \"%s\" and \"%s\" both have no "
					  "share\nonly one may "
					  "leave it out: it gets the rest",
					  rest->name, phase->name);
		rest = phase;
	}
	if (sum > 1 + 5e-4)
		return bh_problem(problems, root->place,
				  "the shares and the amorphous part sum to %.6g "
				  "wt%%\nallowed: 100 in "
				  "all",
				  100 * sum);
	if (rest)
		rest->share_frac = sum < 1 ? 1 - sum : 0;
	else if (sum < 1 - 5e-4)
		return bh_problem(problems, root->place,
				  "the shares sum to %.6g wt%%: %.6g wt%% is "
				  "missing\nadd it, or leave "
				  "the share of one phase out: it gets the rest",
				  100 * sum, 100 * (1 - sum));
	else
		for (size_t i = 0; i < request->phase_count; i++)
			request->phases[i].share_frac *= (1 - request->amorphous_frac) /
							 (sum - request->amorphous_frac);
	return true;
}

static bool build_specimen(bh_request *request, bh_arena *arena,
			   const bh_conf_section *root, bh_problems *problems)
{
	const bh_conf_section *s = bh_conf_section_of(root, "specimen");
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
	if (bh_formula_read(&request->amorphous, arena, formula->values[0].text, &err))
		return true;
	return bh_problem(problems, formula->values[0].place, "%s\n%s", err.what,
			  err.hint);
}

static size_t phase_named(const bh_request *request, const bh_conf_value *value,
			  bh_problems *problems)
{
	bh_suggestion near = { 0 };
	char list[200] = "";

	for (size_t i = 0; i < request->phase_count; i++) {
		size_t used = strlen(list);

		if (strcmp(request->phases[i].name, value->text) == 0)
			return i;
		bh_suggest(&near, value->text, request->phases[i].name);
		snprintf(list + used, sizeof list - used, "%s%.40s", used ? ", " : "",
			 request->phases[i].name);
	}
	bh_problem(problems, value->place, "there is no phase \"%s\"\n%s%s%sphases: %s",
		   value->text, near.word ? "did you mean \"" : "",
		   near.word ? near.word : "", near.word ? "\"? " : "", list);
	return SIZE_MAX;
}

static bool has_rates(const bh_phase *phase)
{
	return phase->kind == BH_PHASE_ATOMS ||
	       (phase->kind == BH_PHASE_LIST && phase->corundum_ratio > 0);
}

static bool build_line_aim(bh_request *request, bh_aim *aim, bh_arena *arena,
			   const bh_conf_section *s, bh_problems *problems)
{
	const bh_conf_value *name = &bh_conf_entry_of(s, "phase")->values[0];
	double area = bh_conf_number(BH_FILE_REQUEST, s, "aim line", "area_error");
	double position =
		bh_conf_number(BH_FILE_REQUEST, s, "aim line", "position_error");
	bh_phase *phase;

	aim->phase = phase_named(request, name, problems);
	if (aim->phase == SIZE_MAX)
		return false;
	if (isnan(area) && isnan(position))
		return bh_problem(problems, s->place,
				  "the aim asks for nothing\ngive area_error (%%), "
				  "position_error (°2θ), or both");
	phase = &request->phases[aim->phase];
	if (!has_rates(phase))
		return bh_problem(problems, name->place,
				  "\"%s\" has no rates: nothing is known of its "
				  "counts\ngive it atoms, or "
				  "a d list with a corundum_ratio; or drop the aim",
				  phase->name);
	if (!(phase->share_frac > 0))
		return bh_problem(problems, name->place,
				  "the share of \"%s\" is 0: its lines have no "
				  "counts\ngive it a share, or drop the aim",
				  phase->name);
	aim->target = bh_build_target(phase, arena,
				      &bh_conf_entry_of(s, "plane")->values[0], problems);
	aim->area_error_frac = isnan(area) ? 0 : area / 100;
	aim->position_error_deg = isnan(position) ? 0 : position;
	return aim->target != SIZE_MAX;
}

static bool build_aims(bh_request *request, bh_arena *arena, const bh_conf_section *root,
		       bh_problems *problems)
{
	bool good = true;

	request->aims = bh_new(arena, bh_aim, sections_named(root, "aim"));
	if (!request->aims) {
		problems->lost = true;
		return false;
	}
	for (size_t i = 0; i < root->section_count; i++) {
		const bh_conf_section *s = root->sections[i];
		bh_aim *aim = &request->aims[request->aim_count];

		if (strcmp(s->name, "aim") != 0)
			continue;
		request->aim_count++;
		aim->place = s->place;
		aim->kind = strcmp(s->key_section, "aim line") == 0 ? BH_AIM_LINE
								    : BH_AIM_SURVEY;
		if (aim->kind == BH_AIM_LINE)
			good = build_line_aim(request, aim, arena, s, problems) && good;
		else
			aim->at_frac =
				bh_conf_number(BH_FILE_REQUEST, s, "aim survey", "at") /
				100;
	}
	return good;
}

/* With no aim: each target's area to 3 %, and a survey at 5 wt%. */
static bool default_aims(bh_request *request, bh_arena *arena, bh_problems *problems)
{
	static const double area_error_frac = 0.03, survey_frac = 0.05;
	size_t most = 1;

	for (size_t i = 0; i < request->phase_count; i++)
		most += request->phases[i].target_count;
	request->aims = bh_new(arena, bh_aim, most);
	if (!request->aims) {
		problems->lost = true;
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
		return bh_problem(problems, place, "%s has no %.40s tube\nit offers: %s",
				  request->instrument->name, symbol, list);
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

bool bh_build_request(bh_request *request, bh_arena *arena, const bh_conf_section *root,
		      const bh_read_options *options, bh_problems *problems)
{
	const bh_conf_section *booking = bh_conf_section_of(root, "booking");
	double longest = bh_conf_number(BH_FILE_REQUEST, booking, "booking", "longest");
	bool good = problems->count == 0;

	snprintf(request->title, sizeof request->title, "%s",
		 bh_conf_text(BH_FILE_REQUEST, root, "", "title"));
	request->booking.longest_s = isnan(longest) ? 0 : longest;
	request->booking.most_ranges = (size_t)bh_conf_number(BH_FILE_REQUEST, booking,
							      "booking", "most_ranges");
	request->booking.reserve_frac =
		bh_conf_number(BH_FILE_REQUEST, booking, "booking", "reserve") / 100;
	request->share_factor =
		bh_conf_number(BH_FILE_REQUEST, bh_conf_section_of(root, "unsure"),
			       "unsure", "share_factor");
	good = build_specimen(request, arena, root, problems) && good;
	good = build_phases(request, arena, root, problems) && good;
	if (request->instrument) {
		good = choose_anodes(request, root, options, problems) && good;
		good = limits(request, root, problems) && good;
	}
	if (!good) /* what follows needs all of the phases */
		return false;
	if (!settle_shares(request, root, problems) ||
	    !build_aims(request, arena, root, problems))
		return false;
	return request->aim_count > 0 || default_aims(request, arena, problems);
}
