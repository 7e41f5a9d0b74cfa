package words

import (
	"fmt"

	"arrowroot/compile/replicate"
)

// NoCheck stands where a conclusion is shown before anyone asked whether the
// model can reproduce the data (M12).
const NoCheck = "Whether the model can reproduce the data was not checked."

// Checks says in sentences whether a fit can reproduce its data: one about all
// of it, one for each variable that it cannot, one for each that has no check.
func Checks(c *replicate.Checks) []string {
	if c == nil {
		return []string{NoCheck}
	}
	var out []string
	held := 0
	var refused []string
	for _, v := range c.Variables {
		switch {
		case v.Refusal != "":
			refused = append(refused, sentence("no check was made of "+v.ID+": "+v.Refusal))
		case v.Failed():
			var wrong []string
			for _, k := range v.Checks {
				if k.Failed {
					wrong = append(wrong, k.Wrong())
				}
			}
			more := ""
			if n := len(wrong) - 3; n > 0 {
				wrong, more = wrong[:3], fmt.Sprintf(", and %s more", Plural(n, "check"))
			}
			out = append(out, sentence("the model does not reproduce "+v.ID+": "+List(wrong)+more))
		default:
			held++
		}
	}
	switch {
	case c.Made == 0:
		out = append(out, NoCheck)
	case len(out) == 0 && c.Made == 1:
		out = append(out, fmt.Sprintf("The model reproduces the data in the one check that suits them, against %d replicates.", c.Replicates))
	case len(out) == 0:
		out = append(out, fmt.Sprintf("The model reproduces the data in every one of %s of %s, each against %d replicates.", Plural(c.Made, "check"), Plural(held, "variable"), c.Replicates))
	case held == 1:
		out = append(out, "It reproduces the other variable.")
	case held > 0:
		out = append(out, fmt.Sprintf("It reproduces the other %s.", Plural(held, "variable")))
	}
	if c.Made > 0 {
		out = append(out, "Reproducing the data says that the laws fit, not that the arrows are right.")
	}
	return append(out, refused...)
}

// Check is one check on a line: "share of zeros: 0.21, replicates 0.08 to 0.14".
func Check(k *replicate.Check) string {
	return CheckName(k) + ": " + CheckNumbers(k) + ", " + k.Words
}

// CheckName is what a check looks at: "trend with rain, which its law leaves out".
func CheckName(k *replicate.Check) string {
	switch k.Kind {
	case replicate.Shares:
		return "share of " + k.Of
	case replicate.Groups:
		return "groups of " + k.Of
	case replicate.Trend:
		if k.Parent {
			return "change with " + k.Of
		}
		return "change with " + k.Of + ", left out of its law"
	case replicate.Largest, replicate.Smallest:
		return string(k.Kind) + " value"
	case replicate.Shape:
		return "where its values lie"
	case replicate.Counts:
		return "how often each count comes"
	case replicate.Calibration:
		return "predicted chances against what happened"
	}
	return string(k.Kind)
}

// CheckNumbers compares the data with the replicates.
func CheckNumbers(k *replicate.Check) string {
	if k.Upward && k.Beyond == 0 {
		return "no replicate is as far off"
	}
	if k.Upward {
		return fmt.Sprintf("%s of the replicates are as far off or further", Percent(k.Tail))
	}
	return fmt.Sprintf("%s, replicates %s to %s", Number(k.Observed), Number(k.Low), Number(k.High))
}
