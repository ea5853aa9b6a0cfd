#!/bin/bash
# Every example reads, plans, and plans the same again; every preset is offered and works.
. "$(dirname "$0")/say.sh"
beamhour=${BEAMHOUR:-build/beamhour}
folder=$(mktemp -d)
trap 'rm -rf "$folder"' EXIT

for file in examples/*.conf; do
	verdict "check $file" "$("$beamhour" check "$file" 2>&1 > "$folder/said" || echo "exit $?")"
	"$beamhour" plan "$file" > "$folder/one" 2> "$folder/said"
	status=$?
	"$beamhour" plan "$file" > "$folder/two" 2>> "$folder/said"
	verdict "plan $file, twice the same" "$(
		[ $status -le 1 ] || { echo "exit $status"; head -5 "$folder/said"; }
		[ -s "$folder/one" ] || echo "no plan"
		diff "$folder/one" "$folder/two" | head -5)"
	verdict "80 columns: $file" "$(
		perl -CSD -ne 'chomp; s/[\x{300}-\x{36f}]//g; print "line $.: $_\n" if length > 80' "$folder/one" |
			head -5)"
done

names=$("$beamhour" presets 2>&1)
for file in presets/instruments/*.conf; do
	name=$(basename "$file" .conf)
	verdict "preset $name is offered" "$(echo "$names" | grep -qw -- "$name" || echo "$names")"
	verdict "preset $name is printed" "$("$beamhour" presets "$name" | diff -q - "$file")"
	for anode in $(sed -n 's/^tube "\(.*\)".*/\1/p' "$file"); do
		printf 'phase "halite" { space_group = "F m -3 m"  cell = {5.6402}  targets = {"2 0 0"}
			site "Na" { element = "Na"  at = {0, 0, 0} }
			site "Cl" { element = "Cl"  at = {0.5, 0.5, 0.5} } }\n' |
			"$beamhour" plan - --instrument "$name" --anode "$anode" > "$folder/one" 2> "$folder/said"
		status=$?
		verdict "preset $name plans halite with $anode" "$(
			[ $status -le 1 ] || { echo "exit $status"; head -5 "$folder/said"; })"
	done
done
finish
