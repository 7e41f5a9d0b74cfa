package replicate

import (
	"cmp"
	"math"
	"slices"
)

// allowed is the share of right models that may be called not reproduced.
const allowed = 0.05

// Reproduced is the verdict of a check that found nothing.
const Reproduced = "reproduced"

// judge says which checks are not reproduced. Each replicate is put in the
// place of the data and its worst score over all checks of all variables noted;
// what is further out than 95 % of these worst scores is not reproduced (the
// single step of Westfall & Young 1993, with scaled statistics). However many
// checks there are and however they hang together, a right model then fails in
// one of twenty cases, or less often since it was fitted to the data
// (Robins, van der Vaart & Ventura 2000).
func (c *Checks) judge() {
	worst := make([]float64, c.Replicates)
	for _, v := range c.Variables {
		for _, k := range v.Checks {
			c.Made++
			for j, x := range k.scores {
				worst[j] = math.Max(worst[j], x)
			}
		}
	}
	if c.Made == 0 {
		return
	}
	// The higher of two neighbours, so that no more than the share lie beyond.
	sorted := slices.Sorted(slices.Values(worst))
	c.Allowed = math.Max(1, sorted[min(len(sorted)-1, int(math.Ceil((1-allowed)*float64(len(sorted)))))])
	for _, v := range c.Variables {
		for _, k := range v.Checks {
			k.Far = k.Distance / c.Allowed
			k.Failed = k.Far > 1 && k.Tail <= allowed
			k.Words = Reproduced
			if k.Failed {
				k.Words = "not reproduced: " + k.Wrong()
			}
			k.scores = nil
		}
		sortWorst(v.Checks)
	}
	slices.SortStableFunc(c.Variables, func(a, b *Variable) int {
		return compareWorst(a.worst(), b.worst())
	})
}

func (v *Variable) worst() *Check {
	if len(v.Checks) == 0 {
		return &Check{Far: -1}
	}
	return v.Checks[0]
}

func sortWorst(all []*Check) { slices.SortStableFunc(all, compareWorst) }

func compareWorst(a, b *Check) int {
	if a.Failed != b.Failed {
		if a.Failed {
			return -1
		}
		return 1
	}
	return cmp.Compare(b.Far, a.Far)
}

// Wrong says how the data differ from what the model gives.
func (k *Check) Wrong() string {
	more := k.Observed > k.Centre
	either := func(up, down string) string {
		if more {
			return up
		}
		return down
	}
	switch k.Kind {
	case Zeros:
		return either("more zeros than the model gives", "fewer zeros than the model gives")
	case Dispersion:
		return either("it varies more about what is expected than the model gives", "it varies less about what is expected than the model gives")
	case Largest:
		return either("its largest value is larger than the model gives", "its largest value is smaller than the model gives")
	case Smallest:
		return either("its smallest value is larger than the model gives", "its smallest value is smaller than the model gives")
	case Spread:
		return either("it spreads wider than the model gives", "it spreads less than the model gives")
	case Shares:
		return either("more "+k.Of+" than the model gives", "less "+k.Of+" than the model gives")
	case Counts:
		return "some counts come more often and others less often than the model gives"
	case Calibration:
		return "what happens is not as likely as the model predicts"
	case Shape:
		return "its values lie otherwise than the model gives"
	case Groups:
		return "the groups of " + k.Of + " differ more than the model gives"
	case Trend:
		if k.Parent {
			return "it changes with " + k.Of + " otherwise than the model gives"
		}
		return "what the model leaves of it changes with " + k.Of
	}
	return "the data differ from what the model gives"
}
