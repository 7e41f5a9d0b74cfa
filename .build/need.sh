#!/bin/sh
# Installs what this machine lacks to build the window ("run") or also to drive
# it in tests ("test"). Says what it installs and why before it does.
set -eu
purpose=${1:-run}

say() { printf '%s\n' "$*"; }

if ! command -v go >/dev/null 2>&1; then
	say "Go is not installed. Arrowroot needs Go 1.26 or newer: https://go.dev/dl/"
	exit 1
fi

missing=
for library in gl x11 xcursor xrandr xinerama xi xxf86vm wayland-client xkbcommon; do
	if ! command -v pkg-config >/dev/null 2>&1 || ! pkg-config --exists "$library" 2>/dev/null; then
		missing="$missing $library"
	fi
done
command -v cc >/dev/null 2>&1 || missing="$missing cc"
if [ "$(uname -s)" = Darwin ]; then
	missing=
	xcode-select -p >/dev/null 2>&1 || missing=xcode-command-line-tools
fi
tools=
if [ "$purpose" = test ] && [ "$(uname -s)" != Darwin ]; then
	for tool in Xvfb xdotool openbox import xclip; do
		command -v "$tool" >/dev/null 2>&1 || tools="$tools $tool"
	done
fi
[ -z "$missing$tools" ] && exit 0

as_root=
if [ "$(id -u)" != 0 ]; then as_root=sudo; fi
[ -n "$missing" ] && say "The window is drawn with OpenGL through C; the compiler or headers for it are missing:$missing"
[ -n "$tools" ] && say "The window test drives a real window on a display without a screen; its tools are missing:$tools"

if command -v apt-get >/dev/null 2>&1; then
	packages="gcc pkg-config libgl1-mesa-dev libx11-dev libxcursor-dev libxrandr-dev libxinerama-dev libxi-dev libxxf86vm-dev libwayland-dev libxkbcommon-dev"
	[ "$purpose" = test ] && packages="$packages xvfb xdotool openbox imagemagick x11-utils xclip"
	say "Installing with apt: $packages"
	$as_root apt-get update -qq
	$as_root env DEBIAN_FRONTEND=noninteractive apt-get install -y -qq --no-install-recommends $packages >/dev/null
elif command -v dnf >/dev/null 2>&1; then
	packages="gcc pkgconf mesa-libGL-devel libX11-devel libXcursor-devel libXrandr-devel libXinerama-devel libXi-devel libXxf86vm-devel wayland-devel libxkbcommon-devel"
	[ "$purpose" = test ] && packages="$packages xorg-x11-server-Xvfb xdotool openbox ImageMagick xclip"
	say "Installing with dnf: $packages"
	$as_root dnf install -y -q $packages
elif command -v pacman >/dev/null 2>&1; then
	packages="gcc pkgconf libgl libx11 libxcursor libxrandr libxinerama libxi libxxf86vm wayland libxkbcommon"
	[ "$purpose" = test ] && packages="$packages xorg-server-xvfb xdotool openbox imagemagick xclip"
	say "Installing with pacman: $packages"
	$as_root pacman -S --needed --noconfirm $packages
elif [ "$(uname -s)" = Darwin ]; then
	say "Installing Apple's command line tools, which hold the compiler"
	xcode-select --install
elif command -v brew >/dev/null 2>&1; then
	say "Installing with brew: gcc pkg-config"
	brew install gcc pkg-config
else
	say "This machine has none of apt, dnf, pacman or brew. Please install a C compiler, pkg-config and the headers named above, then run this again."
	exit 1
fi
