#!/bin/bash
# Processor time of `beamhour plan` for each example, best of five, and as a multiple of the
# program's own start-up (--version) in the same run: a figure to look at, not a test, for
# machines differ.
set -u
cd "$(dirname "$0")/../.." || exit 3
beamhour=${BEAMHOUR:-build/beamhour}
TIMEFORMAT='%U %S'

# best MS of five runs of a command
best() {
	for _ in 1 2 3 4 5; do
		{ time "$@" > /dev/null 2>&1; } 2>&1
	done | awk '{ t = ($1 + $2) * 1000; if (NR == 1 || t < best) best = t }
		END { printf "%.1f", (best > 0.1 ? best : 0.1) }'
}

start=$(best "$beamhour" --version)
printf '%-28s %10s %16s\n' example 'CPU, ms' 'start-ups'
printf '%-28s %10s %16s\n' '(start-up)' "$start" 1
for file in examples/*.conf; do
	ms=$(best "$beamhour" plan "$file")
	printf '%-28s %10s %16s\n' "$(basename "$file" .conf)" "$ms" \
		"$(awk -v a="$ms" -v b="$start" 'BEGIN { printf "%.0f", a / b }')"
done
echo "bench: aim 200 ms for each"
