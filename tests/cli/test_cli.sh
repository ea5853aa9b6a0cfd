#!/bin/bash
# The command line as its users meet it: exit status, what goes where, whole files or none.
. "$(dirname "$0")/../house/say.sh"
bh=${BEAMHOUR:-build/beamhour}
dir=$(mktemp -d)
trap 'rm -rf "$dir"' EXIT
good=examples/battery-cathode.conf
severe=examples/gear-steel-austenite.conf

# expect STATUS COMMAND...: runs it, keeps out and err
expect() {
	local want=$1
	shift
	"$@" > "$dir/out" 2> "$dir/err" < /dev/null
	local status=$?
	[ "$status" -eq "$want" ] || echo "status $status, not $want: $*"
}

verdict "done is 0" "$(expect 0 "$bh" plan $good)"
verdict "a severe finding is 1, the plan comes all the same" "$(
	expect 1 "$bh" plan $severe
	grep -q "Ranges" "$dir/out" || echo "no plan"
	[ -s "$dir/err" ] && cat "$dir/err")"
verdict "no command is 2" "$(expect 2 "$bh"; grep -q "no command" "$dir/err" || echo silent)"
verdict "an unknown command names the nearest" "$(
	expect 2 "$bh" plam $good
	grep -q 'did you mean "plan"' "$dir/err" || cat "$dir/err"
	[ -s "$dir/out" ] && echo "something on standard output")"
verdict "an unknown option is 2" "$(expect 2 "$bh" plan --colour red $good
	grep -q -- "--colour" "$dir/err" || cat "$dir/err")"
verdict "an option without value is 2" "$(expect 2 "$bh" plan $good --anode)"
verdict "too many files are 2" "$(expect 2 "$bh" plan $good $severe)"
verdict "a missing file is 3" "$(expect 3 "$bh" plan "$dir/none.conf"
	grep -q "none.conf: cannot read" "$dir/err" || cat "$dir/err")"
verdict "a folder is 3" "$(expect 3 "$bh" plan examples)"
verdict "an anode that is not offered is 2" "$(expect 2 "$bh" plan $good --anode Ag
	grep -q "it offers" "$dir/err" || cat "$dir/err")"
verdict "an unknown instrument is 2" "$(expect 2 "$bh" plan $good --instrument strip-20
	grep -q 'did you mean "strip-200"' "$dir/err" || cat "$dir/err")"
verdict "a bad duration is 2" "$(expect 2 "$bh" plan $good --within soon)"
verdict "an ending that is no kind is 2, before any work" "$(
	expect 2 "$bh" plan $good -o "$dir/plan.doc"
	ls "$dir"/plan.* 2> /dev/null)"
verdict "problems come with file, line and column" "$(
	printf 'instrument = "strip-200"\nphase "x" { sell = {1} }\n' > "$dir/bad.conf"
	expect 2 "$bh" check "$dir/bad.conf"
	grep -qE "bad.conf:2:13: unknown key \"sell\"" "$dir/err" || cat "$dir/err")"
verdict "a good request is said to be good" "$(expect 0 "$bh" check $good
	grep -q "good" "$dir/out" || cat "$dir/out")"
verdict "several outputs at once, quietly" "$(
	expect 0 "$bh" plan $good --quiet -o "$dir/a.pdf" -o "$dir/a.json" -o "$dir/a.txt" \
		-o "$dir/a.svg" -o "$dir/a.png"
	[ -s "$dir/out" ] && echo "not quiet"
	[ "$(head -c 5 "$dir/a.pdf")" = "%PDF-" ] || echo "no PDF"
	[ "$(head -c 1 "$dir/a.json")" = "{" ] || echo "no JSON"
	head -c 8 "$dir/a.png" | grep -q PNG || echo "no PNG"
	grep -q "<svg" "$dir/a.svg" || echo "no SVG"
	grep -q "Ranges" "$dir/a.txt" || echo "no text"
	[ "$(ls "$dir" | grep -c '^a\.')" -eq 5 ] || ls "$dir")"
verdict "the terminal and a file say the same" "$(
	expect 0 "$bh" plan $good -o "$dir/b.txt"
	cmp "$dir/out" "$dir/b.txt")"
verdict "format json on standard output" "$(expect 0 "$bh" plan $good --format json
	head -c 1 "$dir/out" | grep -q "{" || echo "no JSON")"
verdict "reflections as CSV" "$(expect 0 "$bh" reflections $good --format csv
	head -1 "$dir/out" | grep -q "^phase,h,k,l,d_A" || head -1 "$dir/out"
	expect 2 "$bh" reflections $good --format pdf)"
verdict "reflections between two angles" "$(
	expect 0 "$bh" reflections $good --format csv --two-theta 30,40
	awk -F, 'NR > 1 && ($8 < 30 || $8 > 40)' "$dir/out"
	[ "$(wc -l < "$dir/out")" -gt 2 ] || echo "none"
	expect 2 "$bh" reflections $good --two-theta 40,30)"
verdict "without dispersion |F|² is that of f0 alone" "$(
	# corundum 0 1 2 by hand: see the published test; with dispersion it is larger
	expect 0 "$bh" reflections examples/harbour-steel.conf --format csv --without anomalous
	cp "$dir/out" "$dir/f0"
	expect 0 "$bh" reflections examples/harbour-steel.conf --format csv
	paste -d, "$dir/f0" "$dir/out" | awk -F, 'NR > 1 && $1 == "hematite" && $7 == $19 { print }'
	expect 2 "$bh" reflections $good --without color)"
verdict "a request from standard input" "$(
	"$bh" plan - < $good > "$dir/out" 2> "$dir/err" || echo "status $?"
	grep -q "Ranges" "$dir/out" || echo "no plan")"
verdict "the starter plans" "$("$bh" new | "$bh" check - > "$dir/out" 2>&1 || cat "$dir/out")"
verdict "presets are listed and shown" "$(
	[ "$("$bh" presets | wc -l)" -ge 6 ] || echo "fewer than six"
	"$bh" presets strip-250 | cmp - presets/instruments/strip-250.conf)"
verdict "within cuts the booking" "$(
	expect 1 "$bh" plan examples/harbour-steel.conf --within "2 h"
	grep -q "the booking has 2 h 00 min" "$dir/out" || head -5 "$dir/out")"
verdict "no colour unless asked, or a terminal" "$(
	expect 0 "$bh" plan $good
	grep -q $'\033' "$dir/out" && echo "colour in a pipe"
	expect 0 "$bh" plan $good --color always
	grep -q $'\033' "$dir/out" || echo "no colour"
	expect 2 "$bh" plan $good --color red)"
verdict "a full disk is 3" "$(
	ln -s /dev/full "$dir/full.json"
	expect 3 "$bh" plan $good --quiet -o "$dir/full.json"
	"$bh" plan $good > /dev/full 2> "$dir/err"
	[ $? -eq 3 ] || echo "standard output to a full disk: not 3")"
verdict "a folder that takes no file is 3, nothing half-written" "$(
	expect 3 "$bh" plan $good --quiet -o "$dir/none/plan.pdf"
	ls "$dir/none" 2> /dev/null)"
verdict "an old file is replaced whole" "$(
	echo old > "$dir/c.json"
	expect 0 "$bh" plan $good --quiet -o "$dir/c.json"
	grep -q old "$dir/c.json" && echo "old text"
	ls "$dir"/c.json.* 2> /dev/null)"
verdict "help and version" "$(expect 0 "$bh" --help
	grep -q "exit status" "$dir/out" || echo "no status"
	expect 0 "$bh" --version
	grep -qE "^beamhour [0-9.]+$" "$dir/out" || cat "$dir/out")"
verdict "another locale changes no number" "$(
	for l in de_DE.UTF-8 C.UTF-8; do
		LC_ALL=$l "$bh" plan $good > "$dir/$l" 2> /dev/null
	done
	cmp "$dir/de_DE.UTF-8" "$dir/C.UTF-8")"
finish
