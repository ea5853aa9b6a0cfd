#!/bin/bash
# The papers of the project: what lies at the top, words that must not stay, links that lead
# somewhere, examples and presets named.
. "$(dirname "$0")/say.sh"

verdict "top level" "$(
	find . -maxdepth 1 -mindepth 1 -printf '%f\n' | grep -vxE 'src|include|tests|presets|examples|Makefile|README\.md|DEVELOPERS\.md|LICENSE|CHANGELOG\.md|build|build-.*|\..*')"

texts=$(find src include tests presets examples Makefile README.md DEVELOPERS.md CHANGELOG.md \
	-type f ! -name '*.pdf' ! -name '*.png')
verdict "no word of unfinished work" "$(grep -nE '\b([T]ODO|[F]IXME|X{3}|H[A]CK)\b' $texts | head)"
verdict "no path of one machine" "$(
	grep -nE '/(wor[k]|roo[t]|hom[e])/|/tmp/[b]uild|\.\./share[d]' $texts | head)"
verdict "DEVELOPERS.md up to 250 lines" "$(
	lines=$(wc -l < DEVELOPERS.md)
	[ "$lines" -le 250 ] || echo "$lines lines")"

verdict "files named in the papers exist" "$(
	grep -ohE '`(src|tests|presets|examples|include)/[A-Za-z0-9_./-]+`' README.md DEVELOPERS.md |
		tr -d '\140' | grep -vE 'NAME|FOLDER' | sort -u | while read -r path; do
		[ -e "$path" ] || echo "$path"
	done)"

verdict "every file of src is on the map in DEVELOPERS.md" "$(
	for file in src/*/*.c; do
		stem=$(basename "$file" .c)
		folder=$(basename "$(dirname "$file")")
		sed -n "/^### .*src\/$folder\`/,/^##/p" DEVELOPERS.md |
			grep -qE "\b$stem\b|${stem%%_*}_\*" || echo "$file"
	done)"

verdict "README names every example and every preset" "$(
	for file in examples/*.conf presets/instruments/*.conf; do
		grep -q "$(basename "$file" .conf)" README.md || echo "$file"
	done)"

verdict "one version everywhere" "$(
	version=$(sed -n 's/^VERSION := //p' Makefile)
	grep -q "^## $version\|^## Unreleased" CHANGELOG.md || echo "CHANGELOG.md: no $version")"
finish
