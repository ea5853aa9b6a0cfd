#include "cli/options.h"

#include <getopt.h>
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "base/number.h"

enum {
	OPT_FORMAT = 256,
	OPT_ANODE,
	OPT_INSTRUMENT,
	OPT_WITHIN,
	OPT_TWO_THETA,
	OPT_D,
	OPT_INTENSITY,
	OPT_WITHOUT,
	OPT_WHY,
	OPT_QUIET,
	OPT_COLOR,
	OPT_HELP,
	OPT_VERSION
};

typedef struct {
	int id;
	const char *name, *value, *help;
} row;

/* clang-format off */
static const row rows[] = {
	{ 'o',            "output",     "FILE",     "write to FILE; its ending is the kind (.pdf .svg .png .json .csv .txt); again for more; - is stdout" },
	{ OPT_FORMAT,     "format",     "KIND",     "what goes to stdout: text, json, csv (reflections), pdf, svg, png" },
	{ OPT_ANODE,      "anode",      "EL",       "plan for this anode of the instrument" },
	{ OPT_INSTRUMENT, "instrument", "NAME",     "a preset or an instrument file, instead of the request's" },
	{ OPT_WITHIN,     "within",     "DURATION", "the longest booking, instead of the request's: \"90 min\", \"2 h\"" },
	{ OPT_TWO_THETA,  "two-theta",  "LO,HI",    "reflections: only between these angles, degrees" },
	{ OPT_D,          "d",          "LO,HI",    "reflections: only between these distances, Å" },
	{ OPT_INTENSITY,  "intensity",  "LEAST",    "reflections: only from this relative intensity on, percent of the strongest" },
	{ OPT_WITHOUT,    "without",    "WHAT",     "reflections: leave out anomalous, charges, anisotropy (any of them, by commas)" },
	{ OPT_WHY,        "why",        NULL,       "say where each number comes from: equation, inputs, source" },
	{ OPT_QUIET,      "quiet",      NULL,       "nothing to the terminal but errors and what -o - asks for" },
	{ OPT_COLOR,      "color",      "WHEN",     "auto, always or never; NO_COLOR is honoured" },
	{ OPT_HELP,       "help",       NULL,       "this list" },
	{ OPT_VERSION,    "version",    NULL,       "the version" },
};
/* clang-format on */
enum { ROWS = sizeof rows / sizeof *rows };

void bh_options_print_row(const char *head, const char *help)
{
	enum { INDENT = 29, WIDTH = 80 };
	int column = printf("  %-26s ", head);

	while (*help) {
		int n = (int)strcspn(help, " ");

		if (column + n > WIDTH && column > INDENT) {
			printf("\n%*s", INDENT, "");
			column = INDENT;
		}
		column += printf("%.*s", n, help);
		help += n;
		if (*help == ' ' && column < WIDTH)
			column += printf(" ");
		help += *help == ' ';
	}
	printf("\n");
}

void bh_options_print(void)
{
	for (int i = 0; i < ROWS; i++) {
		char head[40];

		snprintf(head, sizeof head, "%s--%s%s%s",
			 rows[i].id == 'o' ? "-o, " : "    ", rows[i].name,
			 rows[i].value ? " " : "", rows[i].value ? rows[i].value : "");
		bh_options_print_row(head, rows[i].help);
	}
}

static bool number_pair(double pair[2], const char *text)
{
	const char *comma = strchr(text, ',');

	return comma && bh_number_read(&pair[0], text, (size_t)(comma - text)) &&
	       bh_number_read(&pair[1], comma + 1, strlen(comma + 1)) && pair[0] >= 0 &&
	       pair[1] > pair[0];
}

static bool color(bh_options *options, const char *text, bh_err *err)
{
	static const char *const words[] = { "auto", "always", "never" };

	for (int i = 0; i < 3; i++)
		if (strcmp(text, words[i]) == 0) {
			options->color = (bh_color)i;
			return true;
		}
	return bh_fail(err, BH_BAD_INPUT, "--color %s\nallowed: auto, always, never",
		       text);
}

/* What of a structure factor to leave out. */
static bool without(bh_options *options, const char *text, bh_err *err)
{
	static const char *const words[] = { "anomalous", "charges", "anisotropy" };
	bool *const leave_out[] = { &options->without.anomalous,
				    &options->without.charges,
				    &options->without.anisotropy };

	for (const char *s = text; *s;) {
		size_t n = strcspn(s, ","), i = 0;

		while (i < 3 && (strlen(words[i]) != n || memcmp(words[i], s, n) != 0))
			i++;
		if (i == 3)
			return bh_fail(
				err, BH_BAD_INPUT,
				"--without %s\nallowed, by commas: anomalous, charges, "
				"anisotropy",
				text);
		*leave_out[i] = true;
		s += n + (s[n] == ',');
	}
	return true;
}

static bool take(bh_options *options, int id, const char *value, bh_err *err)
{
	switch (id) {
	case 'o':
		if (options->output_count == BH_MOST_OUTPUTS)
			return bh_fail(err, BH_BAD_INPUT, "more than %d outputs",
				       BH_MOST_OUTPUTS);
		options->outputs[options->output_count++] = value;
		return true;
	case OPT_FORMAT:
		options->format = value;
		return true;
	case OPT_ANODE:
		options->anode = value;
		return true;
	case OPT_INSTRUMENT:
		options->instrument = value;
		return true;
	case OPT_WITHIN:
		return bh_duration_read(&options->within_s, value, strlen(value)) ||
		       bh_fail(err, BH_BAD_INPUT,
			       "--within %s is no duration\nlike \"2 h\", \"90 min\", "
			       "\"1 h 30 min\"",
			       value);
	case OPT_TWO_THETA:
		options->two_theta_given = true;
		return (number_pair(options->two_theta_deg, value) &&
			options->two_theta_deg[1] <= 180) ||
		       bh_fail(err, BH_BAD_INPUT,
			       "--two-theta %s\nallowed: two angles, low,high, within 0 "
			       "to 180",
			       value);
	case OPT_D:
		return number_pair(options->d_A, value) ||
		       bh_fail(err, BH_BAD_INPUT,
			       "--d %s\nallowed: two distances in Å, low,high", value);
	case OPT_INTENSITY:
		return (bh_number_read(&options->least_percent, value, strlen(value)) &&
			options->least_percent >= 0 && options->least_percent <= 100) ||
		       bh_fail(err, BH_BAD_INPUT,
			       "--intensity %s\nallowed: a percentage, 0 to 100", value);
	case OPT_WITHOUT:
		return without(options, value, err);
	case OPT_COLOR:
		return color(options, value, err);
	case OPT_WHY:
		options->why = true;
		return true;
	case OPT_QUIET:
		options->quiet = true;
		return true;
	case OPT_HELP:
		options->help = true;
		return true;
	default:
		options->version = true;
		return true;
	}
}

static void fill_long(struct option longs[ROWS + 1])
{
	for (int i = 0; i < ROWS; i++)
		longs[i] =
			(struct option){ rows[i].name,
					 rows[i].value ? required_argument : no_argument,
					 NULL, rows[i].id };
	longs[ROWS] = (struct option){ NULL, 0, NULL, 0 };
}

static bool refuse(const char *word, int id, bh_err *err)
{
	if (id == ':')
		return bh_fail(err, BH_BAD_INPUT,
			       "%s needs a value\nbeamhour --help lists the options",
			       word);
	return bh_fail(err, BH_BAD_INPUT,
		       "unknown option %s\nbeamhour --help lists the options", word);
}

bool bh_options_read(bh_options *options, int argc, char **argv, bh_err *err)
{
	struct option longs[ROWS + 1];
	int id;

	*options = (bh_options){ .d_A = { 0, HUGE_VAL } };
	fill_long(longs);
	opterr = 0;
	optind = 1;
	while ((id = getopt_long(argc, argv, ":o:", longs, NULL)) != -1) {
		if (id == '?' || id == ':')
			return refuse(argv[optind - 1], id, err);
		if (!take(options, id, optarg, err))
			return false;
	}
	for (; optind < argc; optind++) {
		if (!options->command)
			options->command = argv[optind];
		else if (options->argument_count < 4)
			options->arguments[options->argument_count++] = argv[optind];
		else
			return bh_fail(err, BH_BAD_INPUT, "too many arguments: %s",
				       argv[optind]);
	}
	return true;
}
