package words

import "arrowroot/app/fit"

// HowWrong says how strong an unmeasured cause would have to be to explain an
// effect away, beside what is held; a single line where that is not said.
func HowWrong(e *fit.Effect) []string {
	switch {
	case e == nil:
		return nil
	case e.Sensitivity != nil:
		return e.Sensitivity.Sentences
	case e.NoSensitivity != "":
		return []string{sentence("how wrong it could be is not said: " + e.NoSensitivity)}
	}
	return nil
}
