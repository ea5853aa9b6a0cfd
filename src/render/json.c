#include <math.h>
#include <stdint.h>
#include <string.h>

#include <jansson.h>

#include "data/elements.h"
#include "render/render.h"

/* Door to jansson. Names carry no unit: the schema says it. What is not known is null. */

static json_t *number(double value)
{
	return isfinite(value) ? json_real(value) : json_null();
}

static json_t *number_if(bool known, double value)
{
	return known ? number(value) : json_null();
}

static json_t *whole(size_t value)
{
	return json_integer((json_int_t)value);
}

static json_t *text(const char *value)
{
	return json_string(value ? value : "");
}

/* An array of one object for each item. */
#define ARRAY(count, make)                                                               \
	json_t *array = json_array();                                                    \
	for (size_t i = 0; array && i < (count); i++)                                    \
		json_array_append_new(array, (make));                                    \
	return array

static json_t *generator(const bh_plan *plan)
{
	const bh_setting *s = &plan->signal.setting;

	if (!plan->instrument)
		return json_null();
	return json_pack("{s:o, s:o, s:o}", "kV", number(s->kV), "mA", number(s->mA),
			 "overvoltage", number(plan->signal.radiation.overvoltage));
}

static json_t *emission_line(const bh_plan *plan, const bh_line *line)
{
	return json_pack("{s:o, s:o, s:o, s:o}", "name", text(line->name), "wavelength",
			 number(line->wavelength_A), "energy", number(line->energy_keV),
			 "flux", number_if(plan->instrument, line->flux_s));
}

static json_t *emission_lines(const bh_plan *plan)
{
	ARRAY(plan->signal.radiation.count,
	      emission_line(plan, &plan->signal.radiation.lines[i]));
}

static json_t *radiation(const bh_plan *plan)
{
	return json_pack("{s:o, s:o}", "lines", emission_lines(plan), "kbeta_ratio",
			 number_if(plan->instrument,
				   plan->signal.radiation.kbeta_ratio));
}

static json_t *attenuations(const bh_plan *plan)
{
	const bh_radiation *r = &plan->signal.radiation;

	ARRAY(r->count, json_pack("{s:o, s:o}", "line", text(r->lines[i].name), "value",
				  number_if(plan->signal.rates_known,
					    r->lines[i].mass_attenuation_cm2_g)));
}

static json_t *elements(const bh_plan *plan)
{
	const bh_composition *mix = &plan->signal.mixture;

	ARRAY(mix->count, json_pack("{s:o, s:o}", "symbol",
				    text(bh_element_symbol(mix->elements[i].z)),
				    "mass_fraction", number(mix->elements[i].mass_frac)));
}

static json_t *mixture(const bh_plan *plan)
{
	return json_pack("{s:o, s:o, s:o}", "density",
			 number_if(plan->signal.rates_known, plan->signal.density_g_cm3),
			 "mass_attenuation", attenuations(plan), "elements",
			 elements(plan));
}

static json_t *cell(const bh_phase *phase)
{
	const bh_cell *c = &phase->cell;

	if (phase->kind == BH_PHASE_LIST)
		return json_null();
	return json_pack("[o, o, o, o, o, o]", number(c->a_A), number(c->b_A),
			 number(c->c_A), number(c->alpha_deg), number(c->beta_deg),
			 number(c->gamma_deg));
}

static json_t *atoms(const bh_phase *phase)
{
	size_t n = 0;

	for (size_t i = 0; i < phase->site_count; i++)
		n += (size_t)phase->sites[i].multiplicity;
	return whole(n);
}

static json_t *remarks(const bh_phase *phase)
{
	ARRAY(phase->remark_count, text(phase->remarks[i].text));
}

static json_t *phase_of(const bh_phase *phase)
{
	bool list = phase->kind == BH_PHASE_LIST;

	return json_pack("{s:o, s:o, s:o, s:o, s:o, s:o, s:o, s:o, s:o, s:o, s:o}", "name",
			 text(phase->name), "space_group",
			 list ? json_null() : text(phase->group.symbol), "hall",
			 *phase->group.hall ? text(phase->group.hall) : json_null(),
			 "cell",
			 cell(phase), "volume", number_if(!list, phase->volume_A3),
			 "density",
			 number_if(phase->density_g_cm3 > 0, phase->density_g_cm3),
			 "formula", *phase->formula ? text(phase->formula) : json_null(),
			 "share", number(100 * phase->share_frac), "atoms", atoms(phase),
			 "source", *phase->source ? text(phase->source) : json_null(),
			 "remarks", remarks(phase));
}

static json_t *phases(const bh_plan *plan)
{
	ARRAY(plan->phase_count, phase_of(&plan->phases[i]));
}

static json_t *reflection(const bh_plan *plan, const bh_reflection *r)
{
	const bh_phase *phase = &plan->phases[r->phase];
	bool plane = phase->kind != BH_PHASE_LIST;
	bool has_atoms = phase->kind == BH_PHASE_ATOMS;
	bool relative = has_atoms || (!plane && phase->corundum_ratio > 0);

	return json_pack(
		"{s:o, s:o, s:o, s:o, s:o, s:o, s:o, s:o, s:o, s:o, s:o, s:b}", "phase",
		text(phase->name), "h", plane ? json_integer(r->h[0]) : json_null(), "k",
		plane ? json_integer(r->h[1]) : json_null(), "l",
		plane ? json_integer(r->h[2]) : json_null(), "d", number(r->d_A),
		"multiplicity", plane ? json_integer(r->multiplicity) : json_null(), "f2",
		number_if(has_atoms, r->f2), "two_theta", number(r->two_theta_deg),
		"fwhm", number(r->fwhm_deg), "rate",
		number_if(r->rate_known, r->rate_cps_deg), "relative",
		number_if(relative, r->relative), "target", (int)r->target);
}

static json_t *reflections(const bh_plan *plan)
{
	ARRAY(plan->signal.in_range_count,
	      reflection(plan, &plan->signal.reflections[i]));
}

static json_t *peaks(const bh_plan *plan)
{
	const bh_signal *signal = &plan->signal;
	json_t *array = json_array();

	for (size_t i = 0; array && i < signal->peak_count; i++) {
		const bh_peak *p = &signal->peaks[i];

		if (p->reflection >= signal->in_range_count ||
		    p->two_theta_deg < plan->instrument->two_theta_min_deg ||
		    p->two_theta_deg > plan->instrument->two_theta_max_deg)
			continue;
		json_array_append_new(
			array,
			json_pack("{s:o, s:o, s:o, s:o, s:o}", "reflection",
				  whole(p->reflection), "line",
				  text(signal->radiation.lines[p->line].name),
				  "two_theta", number(p->two_theta_deg), "fwhm",
				  number(p->fwhm_deg), "rate",
				  number_if(signal->reflections[p->reflection].rate_known,
					    p->rate_cps_deg)));
	}
	return array;
}

static json_t *background_row(const bh_background *b, bool known)
{
	return json_pack("{s:o, s:o, s:o, s:o, s:o, s:o, s:o}", "two_theta",
			 number(b->two_theta_deg), "blank", number(b->blank),
			 "fluorescence", number_if(known, b->fluorescence), "continuum",
			 number_if(known, b->continuum), "compton",
			 number_if(known, b->compton), "diffuse",
			 number_if(known, b->diffuse), "total",
			 number_if(known, b->total));
}

static json_t *background(const bh_plan *plan)
{
	ARRAY(plan->signal.background_count,
	      background_row(&plan->signal.background[i], plan->signal.rates_known));
}

static json_t *fluorescence(const bh_plan *plan)
{
	const bh_fluorescence *f = plan->signal.fluorescence;

	ARRAY(plan->signal.fluorescence_count,
	      json_pack("{s:o, s:o, s:o, s:o, s:o}", "element",
			text(bh_element_symbol(f[i].z)), "line", text(f[i].line),
			"energy", number(f[i].energy_keV), "excited_by",
			text(f[i].excited_by), "rate", number(f[i].rate_cps)));
}

static json_t *evidence(const bh_finding *finding)
{
	json_t *object = json_object();

	for (size_t i = 0; object && i < finding->evidence_count; i++)
		json_object_set_new(object, finding->evidence[i].name,
				    number(finding->evidence[i].value));
	return object;
}

static json_t *finding_of(const bh_finding *f)
{
	static const char *const severities[] = { "note", "caution", "severe" };

	return json_pack("{s:o, s:o, s:o, s:o, s:o, s:o, s:o}", "kind", text(f->kind),
			 "severity", text(severities[f->severity]), "where",
			 text(f->where), "text", text(f->text), "evidence", evidence(f),
			 "remedy", text(f->remedy), "gain",
			 number_if(f->gain > 0, f->gain));
}

static json_t *findings(const bh_plan *plan)
{
	ARRAY(plan->finding_count, finding_of(&plan->findings[i]));
}

static json_t *range_of(const bh_range *r)
{
	static const char *const modes[] = { "step", "moving", "standing" };

	return json_pack("{s:o, s:o, s:o, s:o, s:o, s:o, s:o, s:o, s:o, s:o, s:o}",
			 "from", number(r->from_deg), "to", number(r->to_deg),
			 "travel_from", number(r->travel_from_deg), "travel_to",
			 number(r->travel_to_deg), "mode", text(modes[r->mode]), "step",
			 number(r->step_deg), "steps", whole(r->steps), "exposure",
			 number(r->exposure_s), "time_per_step",
			 number(r->time_per_step_s), "speed",
			 number_if(r->mode == BH_MODE_MOVING, r->speed_deg_s),
			 "wall_time", number(r->wall_s));
}

static json_t *ranges(const bh_plan *plan)
{
	ARRAY(plan->range_count, range_of(&plan->ranges[i]));
}

static json_t *aim_of(const bh_plan *plan, const bh_aim_result *a)
{
	bool line = a->aim->kind == BH_AIM_LINE;

	return json_pack("{s:o, s:o, s:o, s:o, s:o, s:o, s:b, s:o}", "kind",
			 text(a->kind), "phase",
			 line ? text(plan->phases[a->aim->phase].name) : json_null(),
			 "what", text(a->what), "wanted", number(a->wanted), "predicted",
			 number_if(a->computed, a->predicted), "floor",
			 number_if(a->computed && line, a->floor), "met", (int)a->met,
			 "price", number_if(a->computed && a->price_s >= 0, a->price_s));
}

static json_t *aims(const bh_plan *plan)
{
	ARRAY(plan->aim_count, aim_of(plan, &plan->aims[i]));
}

static json_t *times(const bh_plan *plan)
{
	const bh_times *t = &plan->times;

	return json_pack(
		"{s:o, s:o, s:o, s:n, s:n, s:o, s:n}", "total", number(t->total_s),
		"scanning", number(t->scanning_s), "overhead", number(t->overhead_s),
		"ideal", "ideal_bound", "constant_scan",
		number_if(t->constant_scan_s > 0, t->constant_scan_s), "certificate");
}

static json_t *uncertainty(const bh_plan *plan)
{
	ARRAY(plan->unsure_count,
	      json_pack("{s:o, s:o, s:o, s:o}", "input", text(plan->unsure[i].input),
			"factor", number(plan->unsure[i].factor), "wall_time_low",
			number(plan->unsure[i].wall_low_s), "wall_time_high",
			number(plan->unsure[i].wall_high_s)));
}

static json_t *cautions(const bh_plan *plan)
{
	ARRAY(plan->caution_count, text(plan->cautions[i].text));
}

static json_t *up_to_reflections(const bh_plan *plan)
{
	return json_pack("{s:o, s:o, s:o, s:o, s:o, s:o, s:o, s:o, s:o, s:o}", "schema",
			 text("beamhour/1"), "version", text(BH_VERSION), "request",
			 text(plan->request->title), "anode",
			 text(plan->anode->symbol), "instrument",
			 plan->instrument ? text(plan->instrument->name) : json_null(),
			 "generator", generator(plan),
			 "radiation", radiation(plan), "mixture", mixture(plan), "phases",
			 phases(plan), "reflections", reflections(plan));
}

static json_t *rest(const bh_plan *plan)
{
	return json_pack("{s:o, s:o, s:o, s:o, s:o, s:o, s:o, s:o, s:o, s:[]}", "peaks",
			 peaks(plan), "background", background(plan), "fluorescence",
			 fluorescence(plan), "findings", findings(plan), "ranges",
			 ranges(plan), "aims", aims(plan), "time", times(plan),
			 "uncertainty", uncertainty(plan), "cautions", cautions(plan),
			 "booking");
}

static int add_bytes(const char *bytes, size_t count, void *to)
{
	bh_text_add_bytes(to, bytes, count);
	return 0;
}

/* Takes the document over. NULL: memory was out while it was built. */
static bool print(bh_text *to, json_t *document, bh_err *err)
{
	bool good = document &&
		    json_dump_callback(document, add_bytes, to,
				       JSON_INDENT(1) | JSON_REAL_PRECISION(17)) == 0;

	if (good)
		bh_text_add(to, "\n");
	json_decref(document);
	return (good && !to->lost) || bh_fail_memory(err);
}

bool bh_render_json(bh_text *to, const bh_plan *plan, bh_err *err)
{
	json_t *document = up_to_reflections(plan), *more = rest(plan);

	if (!document || !more || json_object_update(document, more) != 0) {
		json_decref(document);
		document = NULL;
	}
	json_decref(more);
	return print(to, document, err);
}

bool bh_render_reflections_json(bh_text *to, const bh_plan *plan, bh_err *err)
{
	return print(to, up_to_reflections(plan), err);
}
