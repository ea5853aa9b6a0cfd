#!/bin/bash
# Processor time of `beamhour plan` for each example, best of five; more than 0.2 s fails.
set -u
cd "$(dirname "$0")/../.." || exit 3
beamhour=${BEAMHOUR:-build/beamhour}
TIMEFORMAT='%U %S'
worst=0
printf '%-28s %10s\n' example 'CPU, ms'
for file in examples/*.conf; do
	best=$(for _ in 1 2 3 4 5; do
		{ time "$beamhour" plan "$file" > /dev/null 2>&1; } 2>&1
	done | awk '{ t = ($1 + $2) * 1000; if (NR == 1 || t < best) best = t } END { printf "%.0f", best }')
	printf '%-28s %10s\n' "$(basename "$file" .conf)" "$best"
	[ "$best" -le "$worst" ] || worst=$best
done
if [ "$worst" -gt 200 ]; then
	echo "bench: the slowest takes $worst ms, more than 200"
	exit 1
fi
echo "bench: the slowest takes $worst ms, within 200"
