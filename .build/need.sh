#!/bin/sh
# Installs what this machine lacks to build the window ("run") or also to drive
# it in tests ("test"). Says what it installs and why before it does.
set -eu
purpose=${1:-run}

say() { printf '%s\n' "$*"; }
have() { command -v "$1" >/dev/null 2>&1; }

if ! have go; then
	say "Go is not installed. Arrowroot needs Go 1.26 or newer: https://go.dev/dl/"
	exit 1
fi

# look sets missing and tools to what is not there.
look() {
	missing=
	tools=
	if [ "$(uname -s)" = Darwin ]; then
		xcode-select -p >/dev/null 2>&1 || missing=" Xcode command line tools"
		return
	fi
	have cc || missing="$missing cc"
	if have pkg-config; then
		for library in gl x11 xcursor xrandr xinerama xi xxf86vm wayland-client xkbcommon; do
			pkg-config --exists "$library" 2>/dev/null || missing="$missing $library"
		done
	else
		missing="$missing pkg-config"
	fi
	if [ "$purpose" = test ]; then
		for tool in Xvfb xdotool openbox import; do
			have "$tool" || tools="$tools $tool"
		done
	fi
}

look
[ -z "$missing$tools" ] && exit 0
[ -n "$missing" ] && say "The window is drawn with OpenGL through C; the compiler or headers for it are missing:$missing"
[ -n "$tools" ] && say "The window test drives a real window on a display without a screen; its tools are missing:$tools"

as_root=
[ "$(id -u)" = 0 ] || as_root=sudo

if have apt-get; then
	packages="gcc pkg-config libgl1-mesa-dev libx11-dev libxcursor-dev libxrandr-dev libxinerama-dev libxi-dev libxxf86vm-dev libwayland-dev libxkbcommon-dev"
	[ "$purpose" = test ] && packages="$packages xvfb xdotool openbox imagemagick"
	say "Installing with apt: $packages"
	$as_root apt-get update -qq
	$as_root env DEBIAN_FRONTEND=noninteractive apt-get install -y -qq --no-install-recommends $packages >/dev/null
elif have dnf; then
	packages="gcc pkgconf-pkg-config mesa-libGL-devel libX11-devel libXcursor-devel libXrandr-devel libXinerama-devel libXi-devel libXxf86vm-devel wayland-devel libxkbcommon-devel"
	[ "$purpose" = test ] && packages="$packages xorg-x11-server-Xvfb xdotool openbox ImageMagick"
	say "Installing with dnf: $packages"
	$as_root dnf install -y -q $packages
elif have pacman; then
	packages="gcc pkgconf libgl libx11 libxcursor libxrandr libxinerama libxi libxxf86vm wayland libxkbcommon"
	[ "$purpose" = test ] && packages="$packages xorg-server-xvfb xdotool openbox imagemagick"
	say "Installing with pacman: $packages"
	$as_root pacman -S --needed --noconfirm $packages
elif [ "$(uname -s)" = Darwin ]; then
	say "Installing Apple's command line tools, which hold the compiler"
	xcode-select --install
elif have brew; then
	packages="gcc pkgconf mesa libx11 libxcursor libxrandr libxinerama libxi libxxf86vm wayland libxkbcommon"
	[ "$purpose" = test ] && packages="$packages xorg-server xdotool imagemagick"
	say "Installing with brew: $packages"
	brew install $packages
else
	say "This machine has none of apt, dnf, pacman or brew. Please install what is named above, then run this again."
	exit 1
fi

look
[ -z "$missing$tools" ] && exit 0
say "Still missing:$missing$tools. Please install that, or wait until its own installer is done, then run this again."
exit 1
