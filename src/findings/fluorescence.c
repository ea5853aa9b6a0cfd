#include "findings/findings.h"

#include <math.h>
#include <string.h>

#include "physics/bragg.h"
#include "physics/xray.h"

static const double least_of_background = 0.1; /* an element's share to be named      */
static const double least_cost = 1.15;	       /* factor in time to be worth a caution */

/* One element's fluorescence, all lines and exciters, and its strongest exciter. */
typedef struct {
	int z;
	double rate_cps, by_best_cps;
	const char *line, *by;
} emitter;

static emitter sum_of(const bh_signal *signal, int z)
{
	emitter e = { .z = z, .line = "", .by = "" };
	double best_line = 0;

	for (size_t i = 0; i < signal->fluorescence_count; i++) {
		const bh_fluorescence *row = &signal->fluorescence[i];

		if (row->z != z)
			continue;
		e.rate_cps += row->rate_cps;
		if (row->rate_cps > best_line) {
			best_line = row->rate_cps;
			e.line = row->line;
			e.by = row->excited_by;
			e.by_best_cps = row->rate_cps;
		}
	}
	return e;
}

static double total_cps(const bh_signal *signal)
{
	double sum = 0;

	for (size_t i = 0; i < signal->fluorescence_count; i++)
		sum += signal->fluorescence[i].rate_cps;
	return sum;
}

/* Factor in exposure that a share of the background costs a target. */
static double cost_of(const bh_findings *findings, const bh_target_result *t,
		      double take_cps)
{
	bh_view_of_line line;
	double with, without, background_deg;

	bh_view_make(&line, &findings->plan->signal, t->reflection);
	with = bh_view_net_variance(&background_deg, &line);
	take_cps = fmin(take_cps, line.background_cps);
	line.background_cps -= take_cps;
	line.gross_cps_deg -= take_cps * (line.high_deg - line.low_deg);
	without = bh_view_net_variance(&background_deg, &line);
	return with / without;
}

typedef struct {
	const char *text; /* "another anode: Co" */
	double gain;	  /* factor in time for the target, 0: none */
} cure;

/* What the same target costs in another setting, of the same instrument. */
static bool gain_of(bh_findings *findings, const bh_target_result *t,
		    const bh_setting *setting, double *gain)
{
	bh_plan *plan = findings->plan;
	const bh_phase *phase = &plan->phases[t->phase];
	bh_scene near = *findings->scene;
	bh_signal other;
	double now = bh_findings_cost(&plan->signal, findings->scene, t), then, at_deg;

	*gain = 0;
	if (!bh_bragg_two_theta_deg(&at_deg, phase->targets[t->target].d_A,
				    setting->tube->anode->ka1_A))
		return true;
	near.background_low_deg = fmax(at_deg - 2, 0.1);
	near.background_high_deg = near.background_low_deg + 4;
	if (!bh_observe(&other, plan->arena, &near, setting, findings->err))
		return false;
	then = bh_findings_cost(&other, findings->scene, t);
	*gain = isfinite(then) && then > 0 && isfinite(now) ? now / then : 0;
	return true;
}

static bool keep_if_better(bh_findings *findings, const bh_target_result *t,
			   const bh_setting *setting, const char *text, cure *best)
{
	double gain;

	if (!text)
		return bh_fail_memory(findings->err);
	if (!gain_of(findings, t, setting, &gain))
		return false;
	if (gain > best->gain)
		*best = (cure){ text, gain };
	return true;
}

static bool try_anodes(bh_findings *findings, const bh_target_result *t, cure *best)
{
	const bh_plan *plan = findings->plan;
	const bh_instrument *instrument = plan->instrument;

	for (size_t i = 0; i < instrument->tube_count; i++) {
		const bh_tube *tube = &instrument->tubes[i];
		bh_setting setting = bh_observe_usual(instrument, tube);

		if (tube != plan->signal.setting.tube &&
		    !keep_if_better(findings, t, &setting,
				    bh_say(findings, "the %s tube at %.0f kV",
					   tube->anode->symbol, tube->kV),
				    best))
			return false;
	}
	return true;
}

static bool try_windows(bh_findings *findings, const bh_target_result *t, cure *best)
{
	const bh_setting *now = &findings->plan->signal.setting;
	double ka_keV = findings->plan->signal.radiation.lines[0].energy_keV;

	for (int percent = 80; percent <= 95; percent += 5) {
		bh_setting setting = *now;

		setting.window_low_keV = ka_keV * percent / 100;
		if (setting.window_low_keV > now->window_low_keV &&
		    !keep_if_better(findings, t, &setting,
				    bh_say(findings,
					   "the detector's lower level at %.2f keV",
					   setting.window_low_keV),
				    best))
			return false;
	}
	return true;
}

static bool try_voltage(bh_findings *findings, const bh_target_result *t, cure *best)
{
	const bh_setting *now = &findings->plan->signal.setting;
	double anode_keV = bh_xray_edge_keV(now->tube->anode->z, BH_SHELL_K);

	for (double kV = now->kV - 5; kV >= fmax(1.5 * anode_keV, 15); kV -= 5) {
		bh_setting setting = *now;

		setting.kV = kV;
		setting.mA = fmin(now->tube->most_mA, now->tube->most_W / kV);
		if (!keep_if_better(
			    findings, t, &setting,
			    bh_say(findings, "%.0f kV and %.0f mA", kV, setting.mA),
			    best))
			return false;
	}
	return true;
}

/* The best other anode, level and voltage for a target; the same for every element. */
enum { ANODE, LEVEL, VOLTAGE, CURES };

static bool find_cures(cure cures[CURES], bh_findings *findings,
		       const bh_target_result *t)
{
	for (int i = 0; i < CURES; i++)
		cures[i] = (cure){ "", 0 };
	return try_anodes(findings, t, &cures[ANODE]) &&
	       try_windows(findings, t, &cures[LEVEL]) &&
	       try_voltage(findings, t, &cures[VOLTAGE]);
}

static const char *listed(bh_findings *findings, const cure *cures, size_t count)
{
	const char *text = "";

	for (size_t i = 0; i < count && text; i++)
		if (cures[i].gain > 1.1)
			text = bh_say(findings, "%s%s%s (%.2g×)", text,
				      *text ? ", " : "Less count time with ",
				      cures[i].text, cures[i].gain);
	if (text && !*text)
		return "No anode, level or voltage on offer is better by a tenth: a "
		       "diffracted-beam crystal or a sharper detector would be.";
	return text ? bh_say(findings, "%s.", text) : NULL;
}

/* "Cu Kα1" of a line's name. */
static const char *exciter(bh_findings *findings, const char *name)
{
	static const char *const words[][2] = { { "Ka1", "Kα1" },
						{ "Ka2", "Kα2" },
						{ "Kb", "Kβ" } };
	const char *anode = findings->plan->signal.setting.tube->anode->symbol;

	if (strcmp(name, "continuum") == 0)
		return "the tube's continuum";
	for (size_t i = 0; i < sizeof words / sizeof *words; i++)
		if (strcmp(name, words[i][0]) == 0)
			return bh_say(findings, "%s %s", anode, words[i][1]);
	return "tungsten Lα1";
}

static bool report(bh_findings *findings, const bh_target_result *t, emitter e,
		   const cure cures[CURES])
{
	double cost = cost_of(findings, t, e.rate_cps), gain = 0;
	double at_target = e.rate_cps, peak_cps = t->top_cps;
	const char *by_continuum = exciter(findings, e.by);

	for (size_t i = 0; i < CURES; i++)
		gain = fmax(gain, cures[i].gain);
	return bh_findings_add(
		findings,
		&(bh_finding){
			.severity = cost > 5		? BH_SEVERE
				    : cost > least_cost ? BH_CAUTION
							: BH_NOTE,
			.where = bh_findings_target(findings, t),
			.text = bh_say(findings,
				       "%s fluoresces, excited mostly by %s: %.3g "
				       "counts/s in one "
				       "aperture beside a peak of %.3g. It costs this "
				       "line a factor "
				       "%.2g in count time.",
				       bh_xray_symbol(e.z), by_continuum, at_target,
				       peak_cps, cost),
			.evidence = { { "element", e.z, "Z" },
				      { "energy",
					bh_xray_group_keV(e.z, strcmp(e.line, "Ka") == 0
								       ? BH_FL_KA
								       : BH_FL_LA),
					"keV" },
				      { "rate", e.rate_cps, "counts/s" },
				      { "peak", peak_cps, "counts/s" },
				      { "background", t->background_cps, "counts/s" },
				      { "cost", cost, "" },
				      { "gain_anode", cures[ANODE].gain, "" },
				      { "gain_level", cures[LEVEL].gain, "" },
				      { "gain_voltage", cures[VOLTAGE].gain, "" } },
			.evidence_count = 9,
			.remedy = listed(findings, cures, CURES),
			.gain = gain > 1.1 ? gain : 0,
		});
}

bool bh_find_fluorescence(bh_findings *findings)
{
	const bh_plan *plan = findings->plan;
	const bh_signal *signal = &plan->signal;
	const bh_target_result *t = bh_findings_weakest(plan);
	double total = total_cps(signal);
	cure cures[CURES];
	bool found = false;

	if (!t)
		return true;
	for (size_t i = 0; i < signal->mixture.count; i++) {
		emitter e = sum_of(signal, signal->mixture.elements[i].z);

		if (!(e.rate_cps > least_of_background * t->background_cps) ||
		    !(e.rate_cps > 0.05 * total))
			continue;
		if (!found && !find_cures(cures, findings, t))
			return false;
		found = true;
		if (!report(findings, t, e, cures))
			return false;
	}
	return true;
}
