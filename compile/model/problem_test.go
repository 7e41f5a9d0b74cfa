package model

import (
	"math"
	"strings"
	"testing"

	"arrowroot/compile/study"
	"arrowroot/compile/table"
)

// A trouble is a study or a table with one thing wrong.
type trouble struct {
	name    string
	study   func(s *study.Study)
	table   func(t *table.Table)
	asks    func(q *study.Question)
	code    string
	message string // whole, or with its caret line
	labels  string // of repairs, joined by |
	mends   bool   // the first repair, applied, takes the problem away
}

func law(s *study.Study, id string) *study.Law {
	for _, n := range s.Rivals[0].Diagram.Nodes {
		if n.Variable == id {
			if n.Law == nil {
				n.Law = &study.Law{}
			}
			return n.Law
		}
	}
	return nil
}

func set(t *table.Table, name string, row int, v float64) { t.Column(name).Numbers[row] = v }

var troubles = []trouble{
	{
		name: "imputed category", code: "not-imputed",
		study:   func(s *study.Study) { law(s, "soil").Treat = study.Imputed },
		table:   func(t *table.Table) { t.Column("soil").Codes[3] = -1 },
		message: "The missing entries of soil are not imputed, and their rows are lost: hedge reads them, and soil has a law of separate values, over which this version does not add up.",
		labels:  "Leave those rows out", mends: true,
	},
	{
		name: "imputed and computed from", code: "not-imputed",
		study: func(s *study.Study) {
			law(s, "temp").Treat = study.Imputed
			s.Variables = append(s.Variables, &study.Variable{ID: "heat", Scale: study.Real, Computed: "temp * 2"})
			d := s.Rivals[0].Diagram
			d.Nodes = append(d.Nodes, &study.Node{Variable: "heat"})
			d.Arrows = append(d.Arrows, &study.Arrow{From: "temp", To: "heat"}, &study.Arrow{From: "heat", To: "bees"})
		},
		table:   func(t *table.Table) { set(t, "temp", 3, math.NaN()) },
		message: "The missing entries of temp are not imputed, and their rows are lost: heat is computed from it.",
		labels:  "Leave those rows out", mends: true,
	},
	{
		name: "formula does not parse", code: "formula",
		study:   func(s *study.Study) { law(s, "bees").Formula = "log rate = alpha_bees + (beta_hedge_bees * hedge" },
		message: "log rate = alpha_bees + (beta_hedge_bees * hedge\n                        ^ this bracket is not closed",
		labels:  "Go back to the arrows", mends: true,
	},
	{
		name: "unknown variable", code: "unknown-name",
		study: func(s *study.Study) {
			law(s, "bees").Formula = "log rate = alpha_bees by farm + beta_hedge_bees * hedges + beta_flowers_bees * flowers + beta_pesticide_bees * pesticide + beta_temp_bees * temp + log hours"
		},
		message: "log rate = alpha_bees by farm + beta_hedge_bees * hedges + beta_flowers_bees * flowers + beta_pesticide_bees * pesticide + beta_temp_bees * temp + log hours\n                                                  ^^^^^^ there is no variable *hedges*; did you mean *hedge*?",
		labels:  "Replace|Make it a parameter", mends: true,
	},
	{
		name: "unknown parameter", code: "unknown-name",
		study: func(s *study.Study) {
			law(s, "flowers").Formula = "alfa_flowers + beta_hedge_flowers * (hedge - 90) + step_soil_flowers of soil"
		},
		message: "alfa_flowers + beta_hedge_flowers * (hedge - 90) + step_soil_flowers of soil\n^^^^^^^^^^^^ there is no parameter *alfa_flowers*; did you mean *alpha_flowers*?",
		labels:  "Replace|Make it a parameter", mends: true,
	},
	{
		name: "no arrow", code: "no-arrow",
		study: func(s *study.Study) {
			law(s, "flowers").Formula = "alpha_flowers + step_soil_flowers of soil + beta_hedge_flowers * hedge + beta_temp_flowers * temp"
		},
		message: "alpha_flowers + step_soil_flowers of soil + beta_hedge_flowers * hedge + beta_temp_flowers * temp\n                                                                                             ^^^^ the formula of flowers uses *temp*, but no arrow temp → flowers is drawn",
		labels:  "Draw the arrow", mends: true,
	},
	{
		name: "arrow not used", code: "unused-arrow",
		study:   func(s *study.Study) { law(s, "flowers").Formula = "alpha_flowers + step_soil_flowers of soil" },
		message: "alpha_flowers + step_soil_flowers of soil\n                                         ^ the arrow hedge → flowers is drawn, but the formula of flowers does not use hedge",
		labels:  "Add the term|Delete the arrow", mends: true,
	},
	{
		name: "baseline does not vary", code: "unused-plate",
		study: func(s *study.Study) {
			law(s, "flowers").Formula = "alpha_flowers + step_soil_flowers of soil + beta_hedge_flowers * hedge"
			law(s, "flowers").VariesBy = []string{"farm"}
		},
		message: "alpha_flowers + step_soil_flowers of soil + beta_hedge_flowers * hedge\n^^^^^^^^^^^^^ the baseline of flowers is said to vary by farm, but its formula does not say so",
		labels:  "Let it vary|Keep one baseline", mends: true,
	},
	{
		name: "a category as a number", code: "category",
		study:   func(s *study.Study) { law(s, "flowers").Formula = "alpha_flowers + soil + beta_hedge_flowers * hedge" },
		message: "alpha_flowers + soil + beta_hedge_flowers * hedge\n                ^^^^ soil is a category, not a number: write *step_soil_flowers of soil*",
		labels:  "Replace", mends: true,
	},
	{
		name: "wrong link", code: "link",
		study: func(s *study.Study) {
			law(s, "flowers").Formula = "log mu = alpha_flowers + step_soil_flowers of soil + beta_hedge_flowers * hedge"
		},
		message: "log mu = alpha_flowers + step_soil_flowers of soil + beta_hedge_flowers * hedge\n^^^^^^^ a beta law predicts the logit of its mean, so the left side is *logit mu*",
		labels:  "Replace|Go back to the arrows", mends: true,
	},
	{
		name: "unknown function", code: "unknown-function",
		study: func(s *study.Study) {
			law(s, "flowers").Formula = "alpha_flowers + step_soil_flowers of soil + beta_hedge_flowers * sqr(hedge)"
		},
		message: "alpha_flowers + step_soil_flowers of soil + beta_hedge_flowers * sqr(hedge)\n                                                                 ^^^^^^^^^^ there is no function *sqr*; did you mean *sqrt*?",
		labels:  "Replace|Go back to the arrows", mends: true,
	},
	{
		name: "unmeasured in a formula", code: "unmeasured",
		study:   func(s *study.Study) { law(s, "hedge").Formula = "alpha_hedge + attitude" },
		message: "alpha_hedge + attitude\n              ^^^^^^^^ *attitude* was not measured and is left out of the fit, so no formula can use it",
		labels:  "Go back to the arrows", mends: true,
	},
	{
		name: "unknown plate", code: "unknown-plate",
		study:   func(s *study.Study) { law(s, "bees").VariesBy = []string{"frm"} },
		message: "There is no plate named frm, over which the law of bees varies; did you mean farm?",
		labels:  "Let it vary by farm", mends: true,
	},
	{
		name: "unknown family", code: "unknown-family",
		study:   func(s *study.Study) { law(s, "bees").Family = "poison" },
		message: "poison\n^^^^^^ there is no distribution *poison*; did you mean *Poisson*?",
		labels:  "Replace|Use negative binomial", mends: true,
	},
	{
		name: "family does not fit the scale", code: "family-scale",
		study:   func(s *study.Study) { law(s, "flowers").Family = "Poisson" },
		message: "flowers ~ Poisson: flowers is a proportion, and a Poisson law is for counts.",
		labels:  "Use beta|Take flowers as a count", mends: true,
	},
	{
		name: "unknown argument", code: "unknown-argument",
		study:   func(s *study.Study) { law(s, "bees").Arguments = []study.Argument{{Name: "sd", Text: "2"}} },
		message: "bees ~ negative binomial: a negative binomial law has no argument *sd*; it has mean and overdispersion.",
		labels:  "Drop it", mends: true,
	},
	{
		name: "argument out of range", code: "argument-range",
		study:   func(s *study.Study) { law(s, "hedge").Arguments = []study.Argument{{Name: "sd", Text: "0"}} },
		message: "0\n^ the sd of hedge must be positive",
		labels:  "Drop it", mends: true,
	},
	{
		name: "prior does not parse", code: "formula",
		study:   func(s *study.Study) { s.Rivals[0].Diagram.Arrows[8].Prior = "normal with mean 0 sd 1" },
		message: "normal with mean 0 sd 1\n                   ^^ a sign is missing before “sd”; a product is written with *",
		labels:  "Replace|Go back to the default",
	},
	{
		name: "steps with a mean", code: "prior",
		study: func(s *study.Study) {
			law(s, "flowers").Priors = []study.Prior{{Parameter: "step_soil_flowers", Text: "normal with mean 1, sd 2"}}
		},
		message: "normal with mean 1, sd 2\n^^^^^^^^^^^^^^^^^^^^^^^^ step_soil_flowers sums to zero: its prior is of the difference of two entries, normal with mean 0 and an sd",
		labels:  "Go back to the default", mends: true,
	},
	{
		name: "group effects with a number", code: "prior",
		study: func(s *study.Study) {
			law(s, "bees").Priors = []study.Prior{{Parameter: "α_bees by farm", Text: "normal with mean alpha_bees, sd 2"}}
		},
		message: "normal with mean alpha_bees, sd 2\n^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ what varies by a plate is normal around a parameter or 0, with a parameter as its sd",
		labels:  "Go back to the default", mends: true,
	},
	{
		name: "prior of an unknown parameter", code: "prior",
		study: func(s *study.Study) {
			law(s, "bees").Priors = []study.Prior{{Parameter: "beta_hedge_bees", Text: "normal with mean 0, sd omega"}}
		},
		message: "normal with mean 0, sd omega\n^^^^^^^^^^^^^^^^^^^^^^^^^^^^ *omega* in the prior of beta_hedge_bees is no parameter; give it a prior of its own",
		labels:  "Go back to the default", mends: true,
	},
	{
		name: "prior with a negative sd", code: "prior",
		study:   func(s *study.Study) { s.Rivals[0].Diagram.Arrows[8].Prior = "normal with mean 0, sd 0" },
		message: "normal with mean 0, sd 0\n^^^^^^^^^^^^^^^^^^^^^^^^ the sd of a normal law must be positive",
		labels:  "Go back to the default", mends: true,
	},
	{
		name: "priors in a circle", code: "prior",
		study: func(s *study.Study) {
			law(s, "hedge").Arguments = []study.Argument{{Name: "sd", Text: "a"}}
			law(s, "hedge").Priors = []study.Prior{{Parameter: "a", Text: "half-normal with scale b"}, {Parameter: "b", Text: "half-normal with scale a"}}
		},
		message: "half-normal with scale a\n^^^^^^^^^^^^^^^^^^^^^^^^ the priors of b and a refer to each other",
		labels:  "Go back to the default",
	},
	{
		name: "a spread that may be negative", code: "prior",
		study: func(s *study.Study) {
			law(s, "hedge").Arguments = []study.Argument{{Name: "sd", Text: "a"}}
			law(s, "hedge").Priors = []study.Prior{{Parameter: "a", Text: "normal with mean b, sd 1"}, {Parameter: "b", Text: "normal with mean 0, sd 1"}}
		},
		message: "hedge, prior of a: a must be positive, and a normal prior reaches below 0; half-normal does not.",
		labels:  "Use half-normal with scale 1", mends: true,
	},
	{
		name: "uniform from high to low", code: "prior",
		study:   func(s *study.Study) { s.Rivals[0].Diagram.Arrows[9].Prior = "uniform with low 2, high 1" },
		message: "uniform with low 2, high 1\n^^^^^^^^^^^^^^^^^^^^^^^^^^ low 2 is not below high 1, so that no value is left",
		labels:  "Go back to the default", mends: true,
	},
	{
		name: "a negative sd worked out", code: "prior",
		study:   func(s *study.Study) { s.Rivals[0].Diagram.Arrows[9].Prior = "normal with mean 0, sd 1 - 2" },
		message: "normal with mean 0, sd 1 - 2\n^^^^^^^^^^^^^^^^^^^^^^^^^^^^ the sd of a normal law must be positive",
		labels:  "Go back to the default", mends: true,
	},
	{
		name: "a mean that is no number", code: "prior",
		study:   func(s *study.Study) { s.Rivals[0].Diagram.Arrows[9].Prior = "normal with mean 1/0, sd 1" },
		message: "normal with mean 1/0, sd 1\n^^^^^^^^^^^^^^^^^^^^^^^^^^ the mean of a normal law is no number",
		labels:  "Go back to the default", mends: true,
	},
	{
		name: "a beta prior around two", code: "prior",
		study:   func(s *study.Study) { s.Rivals[0].Diagram.Arrows[9].Prior = "beta with mean 2, precision 3" },
		message: "beta with mean 2, precision 3\n^^^^^^^^^^^^^^^^^^^^^^^^^^^^^ the mean of a beta law lies between 0 and 1",
		labels:  "Go back to the default", mends: true,
	},
	{
		name: "a spread below zero", code: "prior",
		study: func(s *study.Study) {
			law(s, "hedge").Priors = []study.Prior{{Parameter: "sigma_hedge", Text: "uniform with low -2, high -1"}}
		},
		message: "uniform with low -2, high -1\n^^^^^^^^^^^^^^^^^^^^^^^^^^^^ sigma_hedge must be positive, and this prior lies below 0",
		labels:  "Go back to the default", mends: true,
	},
	{
		name: "an argument's own parameter below zero", code: "prior",
		study: func(s *study.Study) {
			law(s, "hedge").Arguments = []study.Argument{{Name: "sd", Text: "a"}}
			law(s, "hedge").Priors = []study.Prior{{Parameter: "a", Text: "normal with mean -90, sd 1"}}
		},
		message: "hedge, prior of a: a must be positive, and this prior lies below 0.",
		labels:  "Use half-normal with scale 1", mends: true,
	},
	{
		name: "two priors for one parameter", code: "prior-twice",
		study: func(s *study.Study) {
			law(s, "bees").Priors = []study.Prior{{Parameter: "beta_hedge_bees", Text: "normal with mean 0, sd 1"}}
			s.Rivals[0].Diagram.Arrows[9].Prior = "normal with mean 0, sd 2"
		},
		message: "normal with mean 0, sd 2\n^^^^^^^^^^^^^^^^^^^^^^^^ beta_hedge_bees has a different prior already, at bees: “normal with mean 0, sd 1”",
		labels:  "Drop the one at bees", mends: true,
	},
	{
		name: "a cut point's prior", code: "prior",
		study: func(s *study.Study) {
			s.Variables[5].Scale, s.Variables[5].Levels = study.Ordered, []string{"10", "14", "20"}
			law(s, "temp").Priors = []study.Prior{{Parameter: "cut_temp", Text: "normal with mean 0, sd 1"}}
		},
		table: func(t *table.Table) {
			for i := range t.Rows {
				set(t, "temp", i, []float64{10, 14, 20}[i%3])
			}
		},
		message: "normal with mean 0, sd 1\n^^^^^^^^^^^^^^^^^^^^^^^^ the cut points of an ordered law have equally plausible shares in this version; another prior cannot be given",
		labels:  "Go back to the default", mends: true,
	},
	{
		name: "prior of an unknown distribution", code: "prior",
		study: func(s *study.Study) {
			law(s, "bees").Priors = []study.Prior{{Parameter: "k_bees", Text: "gama with mean 2, shape 2"}}
		},
		message: "gama with mean 2, shape 2\n^^^^^^^^^^^^^^^^^^^^^^^^^ there is no distribution *gama*; did you mean *gamma*?",
		labels:  "Go back to the default", mends: true,
	},
	{
		name: "prior for nothing", code: "unused-prior",
		study: func(s *study.Study) {
			law(s, "bees").Priors = []study.Prior{{Parameter: "gamma_bees", Text: "normal with mean 0, sd 1"}}
		},
		message: "normal with mean 0, sd 1\n^ the prior of *gamma_bees* is not used: no law has this parameter",
		labels:  "Drop it", mends: true,
	},
	{
		name: "column gone", code: "column-gone",
		study:   func(s *study.Study) { s.Variables[6].Column = "hour" },
		message: "traps has no column hour any more, to which hours is bound; did you mean hours?",
		labels:  "Bind it to hours|Unbind hours", mends: true,
	},
	{
		name: "unbound", code: "unbound",
		study:   func(s *study.Study) { s.Variables[5].Column = "" },
		message: "temp is not bound to a column of traps. If nobody measured it, say so, and it is left out of the fit.",
		labels:  "Bind it to temp|It was not measured", mends: true,
	},
	{
		name: "text among numbers", code: "text-in-number",
		table: func(t *table.Table) {
			set(t, "hours", 17, math.NaN())
			t.Column("hours").Strange = []table.Strange{{Row: 17, Text: "six"}}
		},
		message: "traps, row 18, column hours: “six” is not a number. 59 other entries are.",
		labels:  "Treat as missing", mends: true,
	},
	{
		name: "words for numbers", code: "words",
		study:   func(s *study.Study) { s.Variables[5].Column = "soil" },
		message: "traps, column soil: the entries are words (chalk, clay, sand), but temp is a real number.",
		labels:  "Make it a category", mends: true,
	},
	{
		name: "no scale", code: "no-scale",
		study:   func(s *study.Study) { s.Variables[6].Scale = "" },
		message: "Nobody has said yet what values hours can take; it is read as a real number. The column holds whole numbers from 4 to 8: a count, or steps of an ordered scale.",
		labels:  "Take it as a count", mends: true,
	},
	{
		name: "negative count", code: "negative",
		table:   func(t *table.Table) { set(t, "bees", 6, -3) },
		message: "bees ~ negative binomial: row 7 is −3, but a negative binomial count cannot be below 0.",
		labels:  "Take bees as a real number",
	},
	{
		name: "count not whole", code: "not-whole",
		study:   func(s *study.Study) { law(s, "bees").Family = "Poisson" },
		table:   func(t *table.Table) { set(t, "bees", 6, 3.5) },
		message: "bees ~ Poisson: row 7 is 3.5, but a Poisson count is whole.",
		labels:  "Take bees as a positive number",
	},
	{
		name: "exact zeros under beta", code: "exact-end",
		table:   func(t *table.Table) { set(t, "flowers", 4, 0); set(t, "flowers", 8, 0) },
		message: "flowers ~ beta: 2 rows are exactly 0 (first in row 5), which a beta law cannot be.",
		labels:  "Nudge to 0.001|Use normal", mends: true,
	},
	{
		name: "percent", code: "beyond-unit",
		table: func(t *table.Table) {
			for i, x := range t.Column("flowers").Numbers {
				set(t, "flowers", i, 100*x)
			}
		},
		message: "flowers ~ beta: row 1 is 24.42, but a proportion lies between 0 and 1.",
		labels:  "Divide by 100|Take flowers as a real number", mends: true,
	},
	{
		name: "constant exposure", code: "constant-exposure",
		table: func(t *table.Table) {
			for i := range t.Rows {
				set(t, "hedge", i, 40)
			}
		},
		message: "hedge is 40 in every used row: with an exposure that never moves, these data say nothing about its effect.",
		labels:  "Ask for the effect of pesticide", mends: true,
	},
	{
		name: "limits nothing", code: "limits",
		study: func(s *study.Study) {
			for _, n := range s.Rivals[0].Diagram.Nodes {
				n.Limits = n.Variable == "temp"
			}
		},
		message: "Only rows with one value of temp are said to be in the data, but it has several in them.",
		labels:  "temp limits no rows", mends: true,
	},
	{
		name: "indicator that lies", code: "answers",
		study: func(s *study.Study) {
			s.Variables = append(s.Variables, &study.Variable{ID: "seen", Scale: study.Binary, Column: "seen", Answers: "temp"})
			d := s.Rivals[0].Diagram
			d.Nodes = append(d.Nodes, &study.Node{Variable: "seen"})
			d.Arrows = append(d.Arrows, &study.Arrow{From: "hedge", To: "seen"})
		},
		table: func(t *table.Table) {
			c := &table.Column{Name: "seen", Kind: table.Numeric, Numbers: make([]float64, t.Rows)}
			for i := range t.Rows {
				c.Numbers[i] = 1
			}
			c.Numbers[7], c.Numbers[8] = 0, 0
			t.Columns = append(t.Columns, c)
			set(t, "temp", 8, math.NaN())
			set(t, "temp", 9, math.NaN())
		},
		message: "seen is said to tell where temp is recorded, but is wrong in 2 rows: in row 8 it is 0, and temp has one.",
		labels:  "seen tells nothing of temp", mends: true,
	},
	{
		name: "record of what was measured", code: "records",
		study: func(s *study.Study) {
			for _, v := range s.Variables {
				if v.ID == "temp" {
					v.Records = "hedge"
				}
			}
		},
		message: "temp is said to record hedge with error, but hedge has a column of its own: its laws read that.",
		labels:  "Leave hedge out as unmeasured",
	},
	{
		name: "no rows left", code: "no-rows",
		table: func(t *table.Table) {
			for i := range t.Rows {
				set(t, "temp", i, math.NaN())
			}
		},
		message: "No rows are left: temp is missing in all 60.",
		labels:  "Leave temp out as unmeasured", mends: true,
	},
	{
		name: "offset not positive", code: "offset-positive",
		study:   func(s *study.Study) { s.Variables[6].Range = nil },
		table:   func(t *table.Table) { set(t, "hours", 2, 0) },
		message: "hours → bees is an offset, so hours must be positive; its smallest value is 0 (row 3).",
		labels:  "Use a slope", mends: true,
	},
	{
		name: "offset without a log link", code: "offset-link",
		study: func(s *study.Study) {
			s.Variables[1].Scale = study.Real
		},
		message: "hours → bees is an offset, which multiplies the mean; that needs a law with a log link, and a normal law has none.",
		labels:  "Use a slope", mends: true,
	},
	{
		name: "not constant on the farm", code: "not-constant",
		study:   func(s *study.Study) { s.Variables[5].Plates = []string{"farm"} },
		table:   func(t *table.Table) { set(t, "temp", 0, 12); set(t, "temp", 1, 14) },
		message: "temp is said to be one value per farm, but within farm 1 it is 12 in row 1 and 14 in row 2.",
		labels:  "Let it change from row to row", mends: true,
	},
	{
		name: "level unknown", code: "unknown-level",
		study:   func(s *study.Study) { s.Variables[4].Levels = []string{"chalk", "clay"} },
		message: "traps, row 11, column soil: “sand” is not a level of soil (chalk, clay).",
		labels:  "Add “sand” to the levels", mends: true,
	},
	{
		name: "ordered words without an order", code: "no-order",
		study:   func(s *study.Study) { s.Variables[4].Scale, s.Variables[4].Levels = study.Ordered, nil },
		message: "traps, column soil: soil is ordered, but nobody has said in which order its words come. Say the order, lowest first; found: chalk, clay, sand.",
		labels:  "Take chalk < clay < sand", mends: true,
	},
	{
		name: "ordered words of a known order", code: "no-order",
		study:   func(s *study.Study) { s.Variables[4].Scale, s.Variables[4].Levels = study.Ordered, nil },
		table:   func(t *table.Table) { t.Column("soil").Levels = []string{"high", "low", "medium"} },
		message: "traps, column soil: soil is ordered, but nobody has said in which order its words come. Say the order, lowest first; found: high, low, medium.",
		labels:  "Take low < medium < high|Take high < low < medium", mends: true,
	},
	{
		name: "an ordered outcome without an order", code: "no-order",
		study: func(s *study.Study) {
			s.Variables[1].Scale, s.Variables[1].Range = study.Ordered, nil
			s.Rivals[0].Diagram.Arrows[11].Form = "slope"
		},
		table: func(t *table.Table) {
			*t.Column("bees") = table.Column{Name: "bees", Kind: table.Words, Codes: t.Column("soil").Codes, Levels: []string{"many", "few", "some"}}
		},
		message: "traps, column bees: bees is ordered, but nobody has said in which order its words come. Say the order, lowest first; found: few, many, some.",
		labels:  "Take few < many < some", mends: true,
	},
	{
		name: "two words, and nobody said which is 1", code: "which-is-one",
		study:   func(s *study.Study) { s.Variables[4].Scale, s.Variables[4].Levels = study.Binary, nil },
		table:   twoSoils,
		message: "traps, column soil: nobody has said which of “chalk” and “clay” is the 1 of soil; it is “clay” for now.",
		labels:  "“clay” is 1|“chalk” is 1", mends: true,
	},
	{
		name: "one level of a binary variable", code: "levels",
		study:   func(s *study.Study) { s.Variables[4].Scale, s.Variables[4].Levels = study.Binary, []string{"chalk"} },
		table:   twoSoils,
		message: "traps, column soil: soil is binary, but has 1 level (chalk), while the column holds “chalk” and “clay”. Name both, the one that counts as 1 last.",
		labels:  "“clay” is 1|“chalk” is 1", mends: true,
	},
	{
		name: "trials missing", code: "no-trials",
		study: func(s *study.Study) {
			law(s, "bees").Family = "binomial"
			s.Rivals[0].Diagram.Arrows[11].Form = "slope"
		},
		message: "bees ~ binomial: out of how many trials? Give a number or a column.",
	},
	{
		name: "more than the trials", code: "trials",
		study: func(s *study.Study) {
			law(s, "bees").Family = "binomial"
			law(s, "bees").Arguments = []study.Argument{{Name: "trials", Text: "hours"}}
			s.Rivals[0].Diagram.Arrows[11].Form = "slope"
		},
		table:   func(t *table.Table) { set(t, "bees", 0, 58); set(t, "hours", 0, 5) },
		message: "bees ~ binomial: in row 1 there are 58 out of 5 trials (hours).",
	},
	{
		name: "percent in a given variable", code: "beyond-unit",
		table: func(t *table.Table) {
			for i, x := range t.Column("arable").Numbers {
				set(t, "arable", i, 100*x)
			}
		},
		message: "arable: row 1 is 46.66, but a proportion lies between 0 and 1.",
		labels:  "Divide by 100|Take arable as a real number", mends: true,
	},
	{
		name: "another unit", code: "far",
		table:   func(t *table.Table) { set(t, "temp", 8, 64) },
		message: "temp is 64 in row 9, far from its plausible range 10–26: is the unit right?",
		labels:  "Use the range seen", mends: true,
	},
	{
		name: "outcome given", code: "outcome-given",
		study:   func(s *study.Study) { law(s, "bees").Treat = "given" },
		message: "bees is the outcome of the question, but set to be given: no law of it would be fitted.",
		labels:  "Model it", mends: true,
	},
	{
		name: "constant parent", code: "constant",
		table: func(t *table.Table) {
			for i := range t.Rows {
				set(t, "temp", i, 20)
			}
		},
		message: "temp is 20 in every used row: these data say nothing about what it does.",
		labels:  "Take temp off the sheet", mends: true,
	},
	{
		name: "constant outcome", code: "constant-outcome",
		table: func(t *table.Table) {
			for i := range t.Rows {
				set(t, "bees", i, 0)
			}
		},
		message: "bees is 0 in every used row: an outcome that never moves says nothing about what acts on it.",
		labels:  "Ask about flowers as the outcome", mends: true,
	},
	{
		name: "a heading used twice", code: "named-twice",
		table: func(t *table.Table) {
			numbers(t, "temp (2)", t.Column("arable").Numbers...)
			t.Notes = []string{"more than one column is named “temp”; column 10 is now called “temp (2)”"}
		},
		message: "traps has more than one column named temp; temp reads the first, and the next is called “temp (2)” here.",
		labels:  "Bind it to temp (2)", mends: true,
	},
	{
		name: "a plausible range that the law cannot have", code: "range",
		study: func(s *study.Study) {
			s.Variables[6].Range = &study.Range{Low: -5, High: -1}
			law(s, "hours").Treat = "modelled"
		},
		message: "The plausible range of hours, −5 to −1, leaves nothing that a gamma law can take.",
		labels:  "Use the range seen", mends: true,
	},
	{
		name: "an outcome that acts on itself", code: "itself",
		study:   func(s *study.Study) { law(s, "flowers").Formula = "alpha_flowers + alpha_flowers * flowers" },
		message: "alpha_flowers + alpha_flowers * flowers\n                                ^^^^^^^ flowers cannot act on itself",
		labels:  "Go back to the arrows", mends: true,
	},
	{
		name: "a plate without its column", code: "column-gone",
		study:   func(s *study.Study) { s.Plates[0].Column = "frm" },
		message: "traps has no column frm, which names the levels of the plate farm; did you mean farm?",
		labels:  "Use the column farm|Remove the plate farm", mends: true,
	},
	{
		name: "constant child without a range", code: "constant",
		study: func(s *study.Study) { s.Variables[1].Range = nil },
		table: func(t *table.Table) {
			for i := range t.Rows {
				set(t, "bees", i, 7)
			}
		},
		message: "bees is 7 in every used row: nothing can be learned about it, and no prior can be made from its range.",
	},
	{
		name: "computed from the unmeasured", code: "unmeasured",
		study: func(s *study.Study) {
			s.Variables = append(s.Variables, &study.Variable{ID: "care", Scale: study.Real, Computed: "attitude + hedge"})
			d := s.Rivals[0].Diagram
			d.Nodes = append(d.Nodes, &study.Node{Variable: "care"})
			d.Arrows = append(d.Arrows, &study.Arrow{From: "attitude", To: "care"}, &study.Arrow{From: "hedge", To: "care"}, &study.Arrow{From: "care", To: "flowers"})
		},
		message: "attitude + hedge\n^^^^^^^^ *attitude* was not measured, so that care cannot be computed from it",
		labels:  "Do not compute care", mends: true,
	},
	{
		name: "log of zero", code: "not-finite",
		study: func(s *study.Study) {
			law(s, "flowers").Formula = "alpha_flowers + step_soil_flowers of soil + beta_hedge_flowers * log(2 * hedge)"
		},
		table:   func(t *table.Table) { set(t, "hedge", 4, 0) },
		message: "alpha_flowers + step_soil_flowers of soil + beta_hedge_flowers * log(2 * hedge)\n                                                                 ^^^^^^^^^^^^^^ *log(2 * hedge)* is no number in row 5, where hedge is 0",
		labels:  "Go back to the arrows", mends: true,
	},
	{
		name: "log of a variable that can be zero", code: "not-finite",
		study: func(s *study.Study) {
			law(s, "flowers").Formula = "alpha_flowers + step_soil_flowers of soil + beta_hedge_flowers * log hedge"
		},
		table:   func(t *table.Table) { set(t, "hedge", 4, 0) },
		message: "alpha_flowers + step_soil_flowers of soil + beta_hedge_flowers * log hedge\n                                                                 ^^^^^^^^^ *log hedge* is no number in row 5, where hedge is 0",
		labels:  "Use log(hedge + 1)|Go back to the arrows", mends: true,
	},
	{
		name: "a parameter divided by zero", code: "not-finite",
		study: func(s *study.Study) {
			law(s, "flowers").Formula = "alpha_flowers + step_soil_flowers of soil + beta_hedge_flowers * hedge / 0"
		},
		message: "alpha_flowers + step_soil_flowers of soil + beta_hedge_flowers * hedge / 0\n                                                                         ^ nothing can be divided by 0",
		labels:  "Go back to the arrows", mends: true,
	},
	{
		name: "a parameter divided by data that are zero", code: "not-finite",
		study: func(s *study.Study) {
			law(s, "flowers").Formula = "alpha_flowers + step_soil_flowers of soil + beta_hedge_flowers / (hedge - 50.5)"
		},
		table:   func(t *table.Table) { set(t, "hedge", 4, 50.5) },
		message: "alpha_flowers + step_soil_flowers of soil + beta_hedge_flowers / (hedge - 50.5)\n                                                                  ^^^^^^^^^^^^ *hedge - 50.5* is 0 in row 5, and nothing can be divided by 0",
		labels:  "Go back to the arrows", mends: true,
	},
	{
		name: "a computed value that is no number", code: "not-finite",
		study:   func(s *study.Study) { compute(s, "bare", "2 + log(hedge - 40)") },
		table:   func(t *table.Table) { set(t, "hedge", 0, 50); set(t, "hedge", 1, 12) },
		message: "2 + log(hedge - 40)\n    ^^^^^^^^^^^^^^^ *log(hedge - 40)* is no number in row 2, where hedge is 12, nor is it one in 18 more rows",
		labels:  "Do not compute bare", mends: true,
	},
	{
		name: "a computed log of zero", code: "not-finite",
		study:   func(s *study.Study) { compute(s, "more", "log hedge") },
		table:   func(t *table.Table) { set(t, "hedge", 4, 0) },
		message: "log hedge\n^^^^^^^^^ *log hedge* is no number in row 5, where hedge is 0",
		labels:  "Use log(hedge + 1)|Do not compute more", mends: true,
	},
	{
		name: "a known sd of zero", code: "argument-range",
		study:   func(s *study.Study) { law(s, "hedge").Arguments = []study.Argument{{Name: "sd", Text: "hours - 4"}} },
		message: "hours - 4\n^^^^^^^^^ the sd of hedge is 0 in row 2, but it must be positive",
		labels:  "Drop it", mends: true,
	},
	{
		name: "two tables", code: "two-tables",
		study: func(s *study.Study) {
			s.Data = []*study.Data{{Name: "traps"}, {Name: "weather"}}
			s.Variables[5].Data = "weather"
		},
		message: "hedge is in traps, but temp is in weather: this version fits one table at a time. Join the two by row before opening them.",
	},
	{
		name: "no data", code: "no-data",
		table:   func(t *table.Table) { t.Rows = -1 }, // the test passes nil then
		message: "There are no data to fit yet: open a table and bind its columns to the variables.",
	},
	{
		name: "nothing drawn", code: "nothing",
		study:   func(s *study.Study) { s.Rivals[0].Diagram.Arrows = nil; law(s, "bees").VariesBy = nil },
		asks:    func(q *study.Question) { *q = study.Question{} },
		message: "There is nothing to fit on this sheet yet: draw an arrow into a measured variable.",
	},
}

// twoSoils has chalk and clay only.
func twoSoils(t *table.Table) {
	c := t.Column("soil")
	c.Levels = []string{"chalk", "clay"}
	for i := range c.Codes {
		c.Codes[i] %= 2
	}
}

func TestProblems(t *testing.T) {
	for _, c := range troubles {
		t.Run(c.name, func(t *testing.T) {
			s, tab, q := hedgerows(), traps(), beesQuestion()
			if c.study != nil {
				c.study(s)
			}
			if c.table != nil {
				c.table(tab)
			}
			if tab.Rows < 0 {
				tab = nil
			}
			if c.asks != nil {
				c.asks(&q)
			}
			s.Questions = []*study.Question{&q}
			found := find(Problems(s, "R", q, tab), c.code)
			if found == nil {
				t.Fatalf("no problem %s; there are %v", c.code, messages(Problems(s, "R", q, tab)))
			}
			if c.message != "" && found.Display() != c.message {
				t.Errorf("says\n%s\nnot\n%s", found.Display(), c.message)
			}
			if !strings.Contains(found.Message, found.Variable) {
				t.Errorf("does not name %s: %s", found.Variable, found.Message)
			}
			var labels []string
			for _, r := range found.Repairs {
				labels = append(labels, r.Label)
				if after, err := r.Edit.Apply(s); err != nil {
					t.Errorf("repair %q: %v", r.Label, err)
				} else if after == s {
					t.Errorf("repair %q changes nothing", r.Label)
				}
			}
			if c.message != "" && strings.Join(labels, "|") != c.labels {
				t.Errorf("offers %s, not %s", strings.Join(labels, "|"), c.labels)
			}
			if c.mends {
				after, _ := found.Repairs[0].Edit.Apply(s)
				if left := find(Problems(after, "R", *after.Questions[0], tab), c.code); left != nil && left.Display() == found.Display() {
					t.Errorf("repair %q leaves the problem: %s", found.Repairs[0].Label, left.Display())
				}
			}
		})
	}
}

func find(problems []Problem, code string) *Problem {
	for i := range problems {
		if problems[i].Code == code {
			return &problems[i]
		}
	}
	return nil
}

func messages(problems []Problem) []string {
	var out []string
	for _, p := range problems {
		out = append(out, p.Code+": "+p.Display())
	}
	return out
}

// A cycle cannot be drawn, but a file merged by hand may hold one.
func TestCycle(t *testing.T) {
	s := hedgerows()
	s.Rivals[0].Diagram.Arrows = append(s.Rivals[0].Diagram.Arrows, &study.Arrow{From: "bees", To: "hedge"})
	p := find(Problems(s, "R", beesQuestion(), traps()), "cycle")
	if p == nil || !strings.Contains(p.Message, "→") || len(p.Repairs) < 2 {
		t.Fatalf("%+v", p)
	}
}

// The sound study has no problem at all.
func TestSound(t *testing.T) {
	if problems := Problems(hedgerows(), "R", beesQuestion(), traps()); len(problems) > 0 {
		t.Error(messages(problems))
	}
}
