#ifndef MODEL_FINDING_H
#define MODEL_FINDING_H

#include <stddef.h>

typedef enum { BH_NOTE, BH_CAUTION, BH_SEVERE } bh_severity;

enum { BH_MAX_EVIDENCE = 10 };

typedef struct {
	const char *name; /* snake_case; the JSON key        */
	double value;
	const char *unit; /* "" for a pure number            */
} bh_evidence;

typedef struct {
	const char *kind; /* of the registry row, stable         */
	bh_severity severity;
	const char *where; /* "quartz 1 0 1", "below 18.2°", ...  */
	const char *text;  /* one or two sentences with numbers   */
	bh_evidence evidence[BH_MAX_EVIDENCE];
	size_t evidence_count;
	const char *remedy; /* what to do; "" when nothing         */
	double gain;	    /* factor in time that the remedy saves; 0: not computed */
} bh_finding;

#endif
