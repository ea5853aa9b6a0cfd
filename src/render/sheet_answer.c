#include <math.h>
#include <string.h>

#include "data/elements.h"
#include "render/sheet_build.h"

static void say(bh_builder *b, bh_section *s, const char *lead, const char *text)
{
	bh_put_item(b, s, (bh_item){ .lead = lead, .text = text, .then = "" });
}

const char *bh_put_kbeta(bh_builder *b)
{
	const bh_tube *tube = b->plan->signal.setting.tube;
	const bh_monochromator *crystal = &tube->monochromator;
	const char *foil = "", *mono = "";

	if (tube->foil_z)
		foil = bh_put(b, "%s foil %s µm on the %s side",
			      bh_element_symbol(tube->foil_z),
			      bh_put_short(b, tube->foil_um, 3),
			      tube->foil_side == BH_SIDE_TUBE ? "tube's" : "detector's");
	if (crystal->two_theta_deg > 0)
		mono = bh_put(b, "crystal at 2θ %s° %s the specimen%s",
			      bh_put_short(b, crystal->two_theta_deg, 4),
			      crystal->side == BH_SIDE_TUBE ? "before" : "behind",
			      crystal->ka1_only ? ", Kα1 alone" : "");
	if (!*foil && !*mono)
		return "nothing but the detector's window";
	return bh_put(b, "%s%s%s", foil, *foil && *mono ? "; " : "", mono);
}

const char *bh_put_slit(bh_builder *b)
{
	const bh_instrument *instrument = b->plan->instrument;
	double divergence_deg = b->plan->signal.setting.divergence_deg;

	if (divergence_deg > 0)
		return bh_put(b, "%s° divergence", bh_put_short(b, divergence_deg, 3));
	return bh_put(b, "automatic, %s mm lit",
		      bh_put_short(b, instrument->automatic_length_mm, 3));
}

static const char *setting_words(bh_builder *b)
{
	const bh_setting *s = &b->plan->signal.setting;

	return bh_put(b, "%s, %s kV, %s mA; slit %s", s->tube->anode->symbol,
		      bh_put_short(b, s->kV, 3), bh_put_short(b, s->mA, 3),
		      bh_put_slit(b));
}

static const char *detector_words(bh_builder *b)
{
	const bh_instrument *instrument = b->plan->instrument;
	const bh_setting *s = &b->plan->signal.setting;
	const char *kind =
		instrument->detector.kind == BH_DETECTOR_STRIP
			? bh_put(b, "strip, %zu channels of %s°",
				 instrument->detector.channels,
				 bh_put_digits(b, b->plan->signal.aperture_deg, 3))
			: bh_put(b, "receiving slit %s mm (%s°)",
				 bh_put_short(b, instrument->detector.aperture_mm, 3),
				 bh_put_digits(b, b->plan->signal.aperture_deg, 3));

	return bh_put(b, "%s; pulses of %s to %s keV", kind,
		      bh_put_fixed(b, s->window_low_keV, 2),
		      bh_put_fixed(b, s->window_high_keV, 2));
}

static const char *time_words(bh_builder *b)
{
	const bh_times *t = &b->plan->times;
	const char *even = t->constant_scan_s > 0 && b->plan->range_count > 0
				   ? bh_put(b, "; one even scan for the same aims: %s",
					    bh_put_duration(b, t->constant_scan_s))
				   : "";

	return bh_put(b, "%s: %s counting, %s for warm-up, checks and driving%s",
		      bh_put_duration(b, t->total_s), bh_put_duration(b, t->scanning_s),
		      bh_put_duration(b, t->overhead_s), even);
}

static size_t met(const bh_plan *plan)
{
	size_t n = 0;

	for (size_t i = 0; i < plan->aim_count; i++)
		n += plan->aims[i].met;
	return n;
}

/* The largest of what is unsure. */
static const char *unsure_words(bh_builder *b)
{
	const bh_unsure *u = &b->plan->unsure[0];

	return bh_put(b, "all aims take %s to %s: %s (factor %s either way)",
		      bh_put_duration(b, u->wall_low_s),
		      bh_put_duration(b, u->wall_high_s), u->input,
		      bh_put_short(b, u->factor, 2));
}

static const char *matter_words(bh_builder *b)
{
	const bh_signal *signal = &b->plan->signal;

	if (!signal->rates_known)
		return "composition not known: positions only";
	return bh_put(
		b, "X-ray density %s g/cm³; μ/ρ %s cm²/g at Kα1",
		bh_put_fixed(b, signal->density_g_cm3, 3),
		bh_put_digits(b, signal->radiation.lines[0].mass_attenuation_cm2_g, 4));
}

void bh_sheet_answer(bh_builder *b)
{
	const bh_plan *plan = b->plan;
	bh_section *s = bh_put_section(b, BH_PART_ANSWER, "");
	size_t severe = 0;

	for (size_t i = 0; i < plan->finding_count; i++)
		severe += plan->findings[i].severity == BH_SEVERE;
	if (plan->booking_short)
		bh_put_item(
			b, s,
			(bh_item){ .lead = "too short",
				   .text = bh_put(
					   b,
					   "all aims would take %s; the booking has %s",
					   bh_put_duration(b, plan->wanted_total_s),
					   bh_put_duration(
						   b, plan->request->booking.longest_s)),
				   .then = "",
				   .weight = 2 });
	say(b, s, "tube", setting_words(b));
	say(b, s, "Kβ", bh_put_kbeta(b));
	say(b, s, "detector", detector_words(b));
	say(b, s, "specimen", matter_words(b));
	say(b, s, "book", time_words(b));
	if (plan->unsure_count)
		say(b, s, "unsure", unsure_words(b));
	say(b, s, "aims",
	    bh_put(b, "%zu of %zu met; %zu finding%s, %zu of them severe", met(plan),
		   plan->aim_count, plan->finding_count,
		   plan->finding_count == 1 ? "" : "s", severe));
}
