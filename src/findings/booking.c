#include "findings/findings.h"

#include <math.h>

static const char *duration(bh_findings *findings, double seconds)
{
	int minutes = (int)lround(seconds / 60);

	if (minutes < 60)
		return bh_say(findings, "%d min", minutes);
	if (minutes >= 2880)
		return bh_say(findings, "%d days", (minutes + 720) / 1440);
	return bh_say(findings, "%d h %02d min", minutes / 60, minutes % 60);
}

static const char *bought(bh_findings *findings)
{
	const bh_plan *plan = findings->plan;
	const char *text = "";

	for (size_t i = 0; i < plan->aim_count && text; i++) {
		const bh_aim_result *aim = &plan->aims[i];

		if (aim->computed)
			text = bh_say(findings, "%s%s%s %.2g %s instead of %.2g", text,
				      *text ? "; " : "", aim->what, aim->predicted,
				      aim->unit, aim->wanted);
	}
	return text;
}

/* Without a limit a plan may grow beyond all measure: say which aim makes it so. */
static bool very_long(bh_findings *findings)
{
	static const double long_s = 86400;
	const bh_plan *plan = findings->plan;
	const bh_aim_result *dearest = NULL;
	const char *total;

	if (plan->times.total_s < long_s)
		return true;
	for (size_t i = 0; i < plan->aim_count; i++)
		if (!dearest || plan->aims[i].price_s > dearest->price_s)
			dearest = &plan->aims[i];
	total = duration(findings, plan->times.total_s);
	if (!dearest || !total)
		return !dearest || bh_fail_memory(findings->err);
	return bh_findings_add(
		findings,
		&(bh_finding){
			.severity = BH_CAUTION,
			.where = "",
			.text = bh_say(
				findings,
				"The plan takes %s. The dearest aim is %s (%.2g %s)%s: "
				"without it the counting would be %s shorter.",
				total, dearest->what, dearest->wanted, dearest->unit,
				dearest->aim->by_default
					? ", set because the request has "
					  "no aims"
					: "",
				duration(findings, dearest->price_s)),
			.evidence = { { "planned", plan->times.total_s, "s" },
				      { "dearest", dearest->price_s, "s" } },
			.evidence_count = 2,
			.remedy = "Ask for less there, narrow two_theta, or give a "
				  "booking: the plan "
				  "then says what it buys.",
		});
}

bool bh_find_booking(bh_findings *findings)
{
	const bh_plan *plan = findings->plan;
	const bh_booking *booking = &plan->request->booking;
	double room_s = booking->longest_s * (1 - booking->reserve_frac);
	const char *wanted, *room, *text, *total;

	if (!plan->booking_short)
		return very_long(findings);
	wanted = duration(findings, plan->wanted_total_s);
	room = duration(findings, room_s);
	total = duration(findings, plan->times.total_s);
	text = bought(findings);
	if (!wanted || !room || !text || !total)
		return bh_fail_memory(findings->err);
	return bh_findings_add(
		findings, &(bh_finding){
				  .severity = BH_SEVERE,
				  .where = "",
				  .text = plan->times.total_s > room_s * 1.001
						  ? bh_say(findings,
							   "All aims would take %s; the "
							   "booking has %s, less than "
							   "warm-up, checks and driving "
							   "alone (%s).",
							   wanted, room, total)
						  : bh_say(findings,
							   "All aims would take %s; the "
							   "booking has %s. Every count "
							   "time is cut by the same "
							   "factor. That buys: %s.",
							   wanted, room, text),
				  .evidence = { { "wanted", plan->wanted_total_s, "s" },
						{ "booked", booking->longest_s, "s" },
						{ "reserve", booking->reserve_frac, "" },
						{ "planned", plan->times.total_s, "s" } },
				  .evidence_count = 4,
				  .remedy = bh_say(findings,
						   "Book %s, or drop the dearest aim "
						   "(see its price), or allow "
						   "larger errors: twice the error is a "
						   "quarter of the time.",
						   wanted),
			  });
}
