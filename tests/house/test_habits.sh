#!/bin/bash
# What the house rules forbid or bound: banned calls, what the core must not touch, sizes.
. "$(dirname "$0")/say.sh"

# calls PATTERN FILES: places where one of these functions is called.
calls() {
	local pattern=$1
	shift
	for file in "$@"; do
		bare "$file" | grep -nE "(^|[^A-Za-z0-9_.>])($pattern) *\(" | sed "s|^|$file:|"
	done
}

verdict "no function that cannot be bounded or cannot fail honestly" "$(
	calls 'strcpy|strcat|sprintf|vsprintf|gets|atof|atoi|atol|strtok|sscanf|fscanf|scanf|alloca|system|popen|tmpnam|mktemp' \
		src/*/*.[ch])"

core=$(printf '%s\n' src/*/*.[ch] | grep -v '^src/cli/')
verdict "the core does not print, end, or read clock, environment and locale" "$(
	calls 'printf|puts|putchar|fprintf|perror|exit|abort|getenv|setlocale|time|clock|clock_gettime|gettimeofday|localtime|gmtime' \
		$core
	for file in $core; do
		bare "$file" | grep -nE '\b(stdout|stderr)\b' | sed "s|^|$file:|"
	done)"

verdict "goto leads to one exit named out" "$(
	for file in src/*/*.c; do
		bare "$file" | grep -nE '\bgoto\b' | grep -vE 'goto out;' | sed "s|^|$file:|"
	done)"

verdict "external names begin with bh_" "$(
	for file in src/*/*.h; do
		bare "$file" | grep -nE '^[a-z].*\b[a-z_0-9]+\(' | grep -vE '\bbh_[a-z_0-9A-Z]+\(' |
			grep -vE '__attribute__|^[0-9]+:(static|typedef)' | sed "s|^|$file:|"
	done)"

verdict "files up to 600 lines, tables aside" "$(
	for file in src/*/*.[ch]; do
		lines=$(wc -l < "$file")
		case $file in src/data/* | src/read/keys*.c) continue ;; esac
		[ "$lines" -le 600 ] || echo "$file: $lines lines"
	done)"

verdict "lines up to 100 columns, fenced tables aside" "$(
	perl -CSD -ne 'BEGIN { $off = 0 } $off = 1 if /clang-format off/; $off = 0 if /clang-format on/;
		chomp; $l = $_; 1 while $l =~ s/\t/" " x (8 - $-[0] % 8)/e; $l =~ s/[\x{300}-\x{36f}]//g;
		print "$ARGV:$.: ", length $l, " columns\n" if !$off && length $l > 100;
		if (eof) { close ARGV; $off = 0 }' src/*/*.[ch])"

verdict "no blanks at line ends, no carriage returns" "$(
	grep -nE '[[:blank:]]+$|'$'\r' src/*/*.[ch] tests/*/*.[ch] tests/*/*.sh presets/*/*.conf \
		examples/*.conf Makefile README.md DEVELOPERS.md CHANGELOG.md | head)"

# name, lines, parameters, deepest braces of every function
functions=$(for file in src/*/*.c; do
	bare "$file" | FILE=$file perl -e '
		my (@head, $start, $depth, $deepest, $in);
		while (my $line = <STDIN>) {
			if (!$in && $line =~ /^\{/ && "@head" =~ /\b(\w+)\s*\((.*)\)\s*$/s) {
				($name, $list) = ($1, $2);
				1 while $list =~ s/\([^()]*\)//g;
				# where results live and errors go does not count
				$list =~ s/(bh_arena|bh_err|bh_problems) \*\w+,?//g;
				$list =~ s/,\s*$//;
				$count = $list =~ /^\s*(void)?\s*$/ ? 0 : 1 + ($list =~ tr/,//);
				($in, $start, $deepest, $depth) = (1, $. - scalar @head, 0, 0);
			}
			if ($in) {
				my $code = $line;
				1 while $code =~ s/\{[^{}]*\}//g;
				$depth += ($code =~ tr/{//) - ($code =~ tr/}//);
				$deepest = $depth if $depth > $deepest;
				if ($line =~ /^\}/) {
					print "$ENV{FILE} $name ", $. - $start, " $count ", $deepest - 1, "\n";
					($in, @head) = (0);
				}
				next;
			}
			if ($line =~ /^\s*$|;\s*$|^#|^\}/) { @head = () } else { push @head, $line }
		}'
done)
verdict "functions were found" "$([ "$(echo "$functions" | wc -l)" -ge 20 ] || echo "$functions")"
verdict "functions up to 80 lines" "$(echo "$functions" | awk '$3 > 80')"
verdict "nine functions of ten up to 50 lines" "$(
	echo "$functions" | awk '{ print $3 }' | sort -n |
		awk '{ l[NR] = $1 } END { p = l[int(NR * 0.9)]; if (p > 50) print "the ninth tenth ends at", p }')"
verdict "up to 5 parameters besides arena and errors" "$(echo "$functions" | awk '$4 > 5')"
verdict "nested up to 3 deep" "$(echo "$functions" | awk '$5 > 3')"
finish
