package main

// systemPackage is something that has to be on the machine and that Go's
// modules cannot bring.
type systemPackage struct {
	debian string // name of the package on Debian and Ubuntu
	reason string
	// How to tell on a machine without dpkg that it is there: a command on the
	// PATH or a pkg-config module. Neither set: cannot be told, always named.
	command string
	module  string
}

// The groups of packages. A reader of this file sees all that Bandwright ever
// asks of a machine.
var (
	// cCompiler alone is needed on macOS and Windows, where the system brings
	// the graphics headers.
	cCompiler = systemPackage{"gcc", "C compiler: the window's toolkit binds to OpenGL through cgo", "cc", ""}

	buildPackages = []systemPackage{
		cCompiler,
		{"libc6-dev", "C library headers", "", ""},
		{"pkg-config", "finds the headers below", "pkg-config", ""},
		{"libgl-dev", "OpenGL headers: the window is drawn with OpenGL", "", "gl"},
		{"libx11-dev", "X11 headers: windows and events", "", "x11"},
		{"libxcursor-dev", "X11 headers: pointer shapes", "", "xcursor"},
		{"libxrandr-dev", "X11 headers: monitors and their scale", "", "xrandr"},
		{"libxinerama-dev", "X11 headers: several monitors", "", "xinerama"},
		{"libxi-dev", "X11 headers: pointer and wheel input", "", "xi"},
		{"libxxf86vm-dev", "X11 headers: video modes", "", "xxf86vm"},
		{"ca-certificates", "certificates with which Go downloads modules", "update-ca-certificates", ""},
	}

	displayPackages = []systemPackage{
		{"libgl1", "OpenGL library", "", "gl"},
		{"libgl1-mesa-dri", "OpenGL drivers, also the one without a graphics card", "", "dri"},
		{"libx11-6", "X11 library", "", "x11"},
		{"libxcursor1", "X11 library: pointer shapes", "", "xcursor"},
		{"libxrandr2", "X11 library: monitors and their scale", "", "xrandr"},
		{"libxinerama1", "X11 library: several monitors", "", "xinerama"},
		{"libxi6", "X11 library: pointer and wheel input", "", "xi"},
		{"libxxf86vm1", "X11 library: video modes", "", "xxf86vm"},
	}

	drivingPackages = []systemPackage{
		{"xvfb", "a display in memory, on which the tests open the window", "Xvfb", ""},
		{"xkb-data", "keyboard layouts of that display", "", "xkeyboard-config"},
		{"xdotool", "moves the pointer and presses the keys of the driven window", "xdotool", ""},
	}

	peerPackages = []systemPackage{
		{"libopenblas-dev", "OpenBLAS: the LAPACK that our eigensolver is measured against", "", "openblas"},
		{"liblapack-dev", "LAPACK interfaces", "", "lapack"},
		{"python3", "runs the numpy scripts that the benchmarks are measured against", "python3", ""},
		{"python3-numpy", "numpy", "", ""},
	}
)

// buildTags are the tags that every build, vet and test of the repository
// uses on the given system.
//
// migrated_fynedo: all our calls into the toolkit are on its own goroutine, so
// its check of every call can be left out. x11: on Linux and the BSDs the
// window speaks X11 only; a Wayland desktop shows it through XWayland. That
// spares three development packages and behaves the same in the tests, which
// run on an X display.
func buildTags(goos string) string {
	switch goos {
	case "darwin", "windows":
		return "migrated_fynedo"
	}
	return "migrated_fynedo,x11"
}

// packagesFor is the groups that a system of this kind needs, in order and
// without doubles.
func packagesFor(goos string, groups ...[]systemPackage) []systemPackage {
	if goos == "darwin" || goos == "windows" {
		return []systemPackage{cCompiler}
	}
	var all []systemPackage
	seen := map[string]bool{}
	for _, group := range groups {
		for _, p := range group {
			if !seen[p.debian] {
				seen[p.debian] = true
				all = append(all, p)
			}
		}
	}
	return all
}
