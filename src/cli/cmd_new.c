#include <stdio.h>

#include "cli/commands.h"
#include "read/starter.h"

int bh_cmd_new(const bh_options *options)
{
	(void)options;
	fputs(bh_starter(), stdout);
	return BH_EXIT_DONE;
}
