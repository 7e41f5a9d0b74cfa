// Command arrowroot opens the window: arrowroot [STUDY]. Without an argument
// it opens the built-in example.
package main

import (
	"flag"
	"fmt"
	"os"
	"runtime"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/app"

	"arrowroot/app/session"
	"arrowroot/app/ui"
)

const usage = `usage: arrowroot [STUDY]

Opens the study in a window; without STUDY, the built-in example.
`

const noDisplay = `arrowroot: there is no display to open a window on.
The batch program needs none and writes the same results as one HTML file:

    make report                                     the example study
    make report STUDY=path/to/study.arrowroot       a study of yours
`

func main() {
	flag.Usage = func() { fmt.Fprint(os.Stderr, usage) }
	flag.Parse()
	if flag.NArg() > 1 {
		flag.Usage()
		os.Exit(2)
	}
	if !display() {
		fmt.Fprint(os.Stderr, noDisplay)
		os.Exit(1)
	}
	a := app.NewWithID("io.arrowroot.window")
	w := ui.New(a, session.New(fyne.Do), fyne.Do)
	if path := flag.Arg(0); path != "" {
		w.Open(path)
	} else {
		w.OpenExample()
	}
	w.ShowAndRun()
}

// display reports whether there is something to open a window on. Only X11 and
// Wayland say so in the environment.
func display() bool {
	switch runtime.GOOS {
	case "darwin", "windows":
		return true
	}
	return os.Getenv("DISPLAY") != "" || os.Getenv("WAYLAND_DISPLAY") != ""
}
