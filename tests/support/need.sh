#!/bin/bash
# Install the Debian packages that are missing, saying which and why.
#   need.sh "to build" gcc libc6-dev ...
set -eu
why=$1
shift

if ! command -v dpkg-query > /dev/null; then
	echo "This is not a Debian system: nothing installed. Needed $why, or the like of it: $*" >&2
	exit 0
fi

missing=()
for package in "$@"; do
	state=$(dpkg-query -W -f '${Status}' "$package" 2> /dev/null || true)
	[ "$state" = "install ok installed" ] || missing+=("$package")
done
[ ${#missing[@]} -gt 0 ] || exit 0

as_root=()
if [ "$(id -u)" -ne 0 ]; then
	if ! command -v sudo > /dev/null; then
		echo "Missing $why: ${missing[*]}" >&2
		echo "Neither root nor sudo here; as root: apt-get install ${missing[*]}" >&2
		exit 1
	fi
	as_root=(sudo)
fi

echo "Installing with apt, because they are needed $why: ${missing[*]}"
export DEBIAN_FRONTEND=noninteractive
"${as_root[@]}" apt-get update -qq
"${as_root[@]}" apt-get install -y -qq --no-install-recommends "${missing[@]}" > /dev/null
