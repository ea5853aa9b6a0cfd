# shellcheck shell=bash
# For the scripts of this folder: one line for each thing looked at, and an exit status.
cd "$(dirname "${BASH_SOURCE[0]}")/../.." || exit 3
failures=0

# verdict WHAT COMPLAINTS: fine when there are none.
verdict() {
	if [ -z "$2" ]; then
		echo "ok $1"
	else
		echo "not ok $1"
		echo "$2" | sed 's/^/    /'
		failures=$((failures + 1))
	fi
}

# Code without comments and without what stands in quotes.
bare() {
	perl -0777 -pe 's{"(?:\\.|[^"\\])*"|\x27(?:\\.|[^\x27\\])*\x27|/\*.*?\*/|//[^\n]*}{
		my $s = $&; $s =~ m{^/} ? " " . ("\n" x ($s =~ tr/\n//)) : q("") }gsex' "$1"
}

finish() {
	[ "$failures" -eq 0 ] || exit 1
	exit 0
}
