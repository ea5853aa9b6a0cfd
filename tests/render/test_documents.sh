#!/bin/bash
# What the program writes, read back by others: JSON by a schema validator, PDF by poppler.
. "$(dirname "$0")/../house/say.sh"
bh=${BEAMHOUR:-build/beamhour}
dir=$(mktemp -d)
trap 'rm -rf "$dir"' EXIT

for file in examples/*.conf; do
	name=$(basename "$file" .conf)
	"$bh" plan "$file" --quiet -o "$dir/$name.json" -o "$dir/$name.pdf" -o "$dir/$name.txt" \
		-o "$dir/$name.svg" -o "$dir/$name.png" 2> "$dir/err"
	"$bh" reflections "$file" --format json > "$dir/$name.list.json"
done

verdict "every document keeps to the schema, and damaged ones do not" "$(
	python3 tests/render/check_schema.py include/beamhour-plan.schema.json "$dir"/*.json 2>&1)"
verdict "what the numbers of a plan must obey" "$(
	python3 tests/render/check_plan.py "$dir"/*[!t].json 2>&1)"

for file in examples/*.conf; do
	name=$(basename "$file" .conf)
	verdict "$name: the same bytes twice" "$(
		"$bh" plan "$file" --quiet -o "$dir/again.json" -o "$dir/again.pdf" \
			-o "$dir/again.txt" -o "$dir/again.svg" -o "$dir/again.png"
		for kind in json pdf txt svg png; do
			cmp "$dir/$name.$kind" "$dir/again.$kind"
		done)"
	verdict "$name: paper says what the terminal says" "$(
		pdftotext -layout "$dir/$name.pdf" "$dir/paper.txt" 2>&1
		tr -s ' \n' ' ' < "$dir/paper.txt" > "$dir/paper"
		grep -q "$(sed -n 1p "$dir/$name.txt")" "$dir/paper" || echo "no title"
		for word in "°2θ" "counts/s" "Safety" "dosimeter" "Sign-off" "FWHM" "g/cm³" "Kα1"; do
			grep -q "$word" "$dir/paper" || echo "no $word"
		done
		# each range as typed
		awk '/^Ranges/ { on = 1; next } on && NF == 0 { exit }
			on && $1 ~ /^[0-9.]+$/ && $2 ~ /^[0-9.]+$/ { print $1, $2 }' "$dir/$name.txt" |
			while read -r from to; do
				grep -qE "$from +$to " "$dir/paper" || echo "no range $from to $to"
			done)"
	verdict "$name: fonts are embedded, the title is set" "$(
		pdffonts "$dir/$name.pdf" | awk 'NR > 2 && $(NF - 4) != "yes"'
		pdfinfo "$dir/$name.pdf" | grep -q "^Title: *[^ ]" || echo "no title"
		pages=$(pdfinfo "$dir/$name.pdf" | awk '/^Pages/ { print $2 }')
		[ "$pages" -le 4 ] || echo "$pages pages")"
done
finish
