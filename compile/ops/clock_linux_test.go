package ops

import "syscall"

// ownSeconds is the processor time of this thread, which other work on the
// machine does not lengthen.
func ownSeconds() float64 {
	const thisThread = 1 // RUSAGE_THREAD
	var u syscall.Rusage
	if err := syscall.Getrusage(thisThread, &u); err != nil {
		panic(err)
	}
	return float64(u.Utime.Nano()+u.Stime.Nano()) / 1e9
}
