#!/bin/bash
# Run test programs, some at a time, and say in one last line how it went.
#   run.sh FOLDER_FOR_LOGS PROGRAM...
# A program of cmocka reports its own tests; a script prints "ok WHAT" or "not ok WHAT" for
# each. Either is failed by its exit status. MEMCHECK=1 puts the programs under valgrind.
set -u
logs=$1
shift
[ $# -gt 0 ] || { echo "check: no test programs: failed"; exit 1; }
mkdir -p "$logs"
rm -f "$logs"/*.log "$logs"/*.status

run_one() {
	local log status=0 tool=()
	log=$1/$(echo "${2#./}" | tr / _)
	if [ -n "${MEMCHECK:-}" ] && [ "${2%.sh}" = "$2" ]; then
		tool=(valgrind --quiet --error-exitcode=99 --leak-check=full
			--errors-for-leak-kinds=definite)
	fi
	"${tool[@]}" "$2" > "$log.log" 2>&1 || status=$?
	echo "$status" > "$log.status"
	if [ "$status" -ne 0 ]; then
		printf '\n%s failed, status %s:\n' "$2" "$status"
		grep -v -e '^\[ RUN ' -e '^\[       OK ' -e '^ok ' "$log.log" | head -60
	fi
}
export -f run_one
printf '%s\0' "$@" | xargs -0 -P "$(nproc)" -I{} bash -c 'run_one "$1" "$2"' _ "$logs" {}

programs=$(find "$logs" -name '*.status' | wc -l)
failed=$(cat "$logs"/*.status | grep -vcx 0)
tests=$(cat "$logs"/*.log | grep -cE '^(\[ RUN |(not )?ok )')
skipped=$(cat "$logs"/*.log | grep -c '^\[  SKIPPED \] [^0-9]')
echo
if [ "$programs" -ne $# ] || [ "$tests" -eq 0 ]; then
	echo "check: only $programs of $# programs ran, $tests tests: failed"
	exit 1
elif [ "$failed" -gt 0 ]; then
	echo "check: $programs programs, $tests tests, $failed programs failed"
	exit 1
elif [ "$skipped" -gt 0 ]; then
	echo "check: $programs programs, $tests tests, $skipped skipped, the others passed"
else
	echo "check: $programs programs, $tests tests, all passed"
fi
