#!/bin/bash
# The plan of every example as it was when somebody last looked at it: tests/golden/NAME/plan.txt
# and plan.json (numbers to six digits, without the long curves). --write renews them and
# shows what moved.
set -u
cd "$(dirname "$0")/../.." || exit 3
beamhour=${BEAMHOUR:-build/beamhour}
folder=$(mktemp -d)
trap 'rm -rf "$folder"' EXIT
failures=0

# Six digits: what another compiler or machine still agrees on. Lists of peaks and background
# are long and follow from the rest.
shorten() {
	perl -0777 -pe 's/"(peaks|background)": *\[.*?\n?\s*\]/"$1": []/gs;
		s/(?<![\w.])-?\d+\.\d+(e[-+]?\d+)?/sprintf "%.6g", $&/ge'
}

for file in examples/*.conf; do
	name=$(basename "$file" .conf)
	kept=tests/golden/$name
	mkdir -p "$folder/$name"
	"$beamhour" plan "$file" -o "$folder/$name/plan.txt" -o "$folder/$name/long.json" --quiet \
		> /dev/null 2> "$folder/said"
	status=$?
	if [ $status -gt 1 ]; then
		echo "not ok golden $name: exit $status"
		head -3 "$folder/said"
		failures=1
		continue
	fi
	shorten < "$folder/$name/long.json" > "$folder/$name/plan.json"
	rm "$folder/$name/long.json"
	if [ "${1:-}" = --write ]; then
		mkdir -p "$kept"
		diff -u "$kept/plan.txt" "$folder/$name/plan.txt" 2> /dev/null
		cp "$folder/$name"/* "$kept/"
		continue
	fi
	for plan in plan.txt plan.json; do
		if diff -u "$kept/$plan" "$folder/$name/$plan" > "$folder/diff" 2>&1; then
			echo "ok golden $name $plan"
		else
			echo "not ok golden $name $plan: make golden, and look at what moved"
			head -20 "$folder/diff"
			failures=1
		fi
	done
done
exit $failures
