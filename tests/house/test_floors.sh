#!/bin/bash
# Folders are floors: a file includes from its own or from lower ones. Each foreign library has
# one door. Own header first; guards named by path.
. "$(dirname "$0")/say.sh"

verdict "every folder of src has a floor" "$(
	for folder in src/*/; do
		name=$(basename "$folder")
		grep -qE "^$name( |\$)" tests/house/floors || echo "$folder is not in tests/house/floors"
	done)"

while read -r floor allowed; do
	verdict "floor of $floor" "$(
		grep -nHoE '^#include "[^"]+"' "src/$floor"/*.[ch] 2> /dev/null |
			while IFS=: read -r file line include; do
				from=${include#*\"}
				from=${from%%/*}
				[ "$from" = 'beamhour.h"' ] && from=public
				case " $floor $allowed " in
				*" $from "*) ;;
				*) echo "$file:$line: $include" ;;
				esac
			done)"
done <<< "$(grep -v '^#' tests/house/floors)"

while read -r header door; do
	users=$(grep -lE "^#include <(.*/)?$header>" src/*/*.[ch])
	verdict "one door for $header" "$(
		[ "$(echo "$users" | wc -w)" -eq 1 ] || echo "included by: ${users:-nobody}"
		echo "$users" | grep -vE "^$door\$")"
done <<< "$(grep -v '^#' tests/house/doors)"

known='assert|ctype|dirent|errno|fcntl|float|getopt|inttypes|limits|locale|math|signal|stdarg'
known+='|stdbool|stddef|stdint|stdio|stdlib|string|strings|sys/.*|time|unistd|wchar'
verdict "no other foreign header" "$(
	grep -nE '^#include <' src/*/*.[ch] | grep -vE "<($known)\.h>" |
		grep -vE "<(.*/)?($(grep -v '^#' tests/house/doors | awk '{ print $1 }' | paste -sd'|'))>")"

verdict "own header first" "$(
	for file in src/*/*.c; do
		own=${file#src/}
		own=${own%.c}.h
		[ -f "src/$own" ] || continue
		first=$(grep -m1 '^#include' "$file")
		[ "$first" = "#include \"$own\"" ] || echo "$file: $first before \"$own\""
	done)"

verdict "guards named by path" "$(
	for file in src/*/*.h; do
		guard=$(echo "${file#src/}" | tr 'a-z/.' 'A-Z__')
		grep -q "^#ifndef $guard\$" "$file" || echo "$file: no #ifndef $guard"
	done)"

verdict "headers stand alone, twice" "$(
	for file in src/*/*.h $(ls include/*.h 2> /dev/null); do
		printf '#include "%s"\n#include "%s"\n' "$file" "$file" |
			"${CC:-gcc}" -std=c11 -D_POSIX_C_SOURCE=200809L -Wall -Wextra -Wpedantic -Werror \
				-I. -Isrc -Iinclude -fsyntax-only -x c - 2>&1 | head -3
	done)"
finish
