#!/bin/sh
# Installs networkx for Python, a general library of graph algorithms, which
# `make bench-reference` times beside our d-separation. Nothing else uses it.
set -eu

say() { printf '%s\n' "$*"; }
there() { python3 -c 'import networkx' 2>/dev/null; }

there && exit 0
say "The comparison runs the d-separation of networkx, a general graph library for Python; it is not there."
if command -v apt-get >/dev/null 2>&1; then
	as_root=
	[ "$(id -u)" = 0 ] || as_root=sudo
	say "Installing with apt: python3-networkx"
	$as_root apt-get update -qq
	$as_root env DEBIAN_FRONTEND=noninteractive apt-get install -y -qq --no-install-recommends python3-networkx >/dev/null
fi
there && exit 0
say "Please install networkx for python3, then run this again."
exit 1
