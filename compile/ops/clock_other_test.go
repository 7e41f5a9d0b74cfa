//go:build !linux

package ops

import "time"

var began = time.Now()

// ownSeconds is the time of the wall clock, the best there is here.
func ownSeconds() float64 { return time.Since(began).Seconds() }
