#include "findings/findings.h"

/* What the reader of structure files remarked. A note changes nothing that is planned, so only
 * cautions become findings; the notes stand with the structure. */
bool bh_find_structure(bh_findings *findings)
{
	const bh_plan *plan = findings->plan;

	for (size_t i = 0; i < plan->phase_count; i++) {
		const bh_phase *phase = &plan->phases[i];

		for (size_t k = 0; k < phase->remark_count; k++) {
			const bh_remark *r = &phase->remarks[k];

			if (r->severity == BH_NOTE)
				continue;
			if (!bh_findings_add(
				    findings,
				    &(bh_finding){
					    .severity = r->severity,
					    .where = bh_say(findings, "%s", phase->name),
					    .text = bh_say(findings, "%s:%d: %s.",
							   r->place.file, r->place.line,
							   r->text),
					    .evidence = { { "file_line", r->place.line, "" } },
					    .evidence_count = 1,
					    .remedy = *r->remedy
							      ? bh_say(findings, "%s.",
								       r->remedy)
							      : "" }))
				return false;
		}
	}
	return true;
}
