#include <math.h>
#include <string.h>

#include "render/render.h"

/* RFC 4180: a text with comma, quote or line end is quoted, quotes doubled. */
static void field(bh_text *text, const char *value)
{
	if (!strpbrk(value, ",\"\n\r")) {
		bh_text_add(text, value);
		return;
	}
	bh_text_add(text, "\"");
	for (; *value; value++)
		bh_text_format(text, *value == '"' ? "\"%c" : "%c", *value);
	bh_text_add(text, "\"");
}

static void number(bh_text *text, bool known, double value)
{
	if (known && isfinite(value))
		bh_text_format(text, ",%.10g", value);
	else
		bh_text_add(text, ",");
}

bool bh_render_reflections_csv(bh_text *text, const bh_plan *plan, bh_err *err)
{
	const bh_signal *signal = &plan->signal;

	bh_text_add(text,
		    "phase,h,k,l,d_A,multiplicity,f2,two_theta_deg,fwhm_deg,rate_cps_deg,"
		    "relative,target\r\n");
	for (size_t i = 0; i < signal->in_range_count; i++) {
		const bh_reflection *r = &signal->reflections[i];
		const bh_phase *phase = &plan->phases[r->phase];
		bool plane = phase->kind != BH_PHASE_LIST,
		     atoms = phase->kind == BH_PHASE_ATOMS;

		field(text, phase->name);
		for (int k = 0; k < 3; k++)
			number(text, plane, r->h[k]);
		number(text, true, r->d_A);
		number(text, plane, r->multiplicity);
		number(text, atoms, r->f2);
		number(text, true, r->two_theta_deg);
		number(text, true, r->fwhm_deg);
		number(text, r->rate_known, r->rate_cps_deg);
		number(text, atoms || r->rate_known, r->relative);
		bh_text_add(text, r->target ? ",1\r\n" : ",0\r\n");
	}
	return !text->lost || bh_fail_memory(err);
}
