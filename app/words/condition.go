package words

import (
	"strings"

	"arrowroot/compile/study"
)

// conditions say which rows are meant: "soil is clay or loam and hedge is from
// 40 to 90 m/ha".
func conditions(s *study.Study, all []study.Condition) string {
	var parts []string
	for _, c := range all {
		parts = append(parts, c.Variable+" is "+condition(s, c))
	}
	return List(parts)
}

func condition(s *study.Study, c study.Condition) string {
	if len(c.Words) > 0 {
		return strings.Join(c.Words, " or ")
	}
	unit := ""
	if v := s.Variable(c.Variable); v != nil && v.Unit != "" {
		unit = " " + v.Unit
	}
	switch {
	case c.Low != nil && c.High != nil && *c.Low == *c.High:
		return Given(*c.Low) + unit
	case c.Low != nil && c.High != nil:
		return "from " + Given(*c.Low) + " to " + Given(*c.High) + unit
	case c.Low != nil:
		return "at least " + Given(*c.Low) + unit
	case c.High != nil:
		return "at most " + Given(*c.High) + unit
	}
	return "anything"
}

// Asides are the parts of a question that most questions do without: what is
// fixed besides the exposure, which rows and groups are meant, how they weigh.
func Asides(s *study.Study, q *study.Question) []string {
	var parts []string
	if q.Effect == study.DirectEffect {
		fixed := make([]string, len(q.Fixed))
		for i, f := range q.Fixed {
			fixed[i] = f.Variable + " at " + setting(&f.At)
		}
		parts = append(parts, "fixing "+List(fixed))
	}
	if len(q.Where) > 0 {
		parts = append(parts, "where "+conditions(s, q.Where))
	}
	if q.Groups == study.NewGroups {
		parts = append(parts, study.NewGroups)
	}
	if q.Weigh == study.ByGroups {
		parts = append(parts, "every group counting the same")
	}
	return parts
}
