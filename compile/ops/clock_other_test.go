//go:build !linux

package ops

import "time"

var start = time.Now()

// ownSeconds is the time of the wall clock, the best there is here.
func ownSeconds() float64 { return time.Since(start).Seconds() }
