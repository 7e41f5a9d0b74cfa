package fit

import (
	"math"
	"testing"

	"arrowroot/infer/summary"
)

// A posterior is a study whose posterior is known: which of our quantities is
// which of theirs.
type posterior struct {
	study string
	draws int // per chain: an effective sample size near 10,000, so that 3 % of an sd are 4 of its errors
	is    map[string]value
}

var posteriors = []posterior{
	{study: "ucb_gender", draws: 8000, is: map[string]value{
		"intercept": parameter("alpha_admitted"),
		"female":    parameter("beta_female_admitted"),
	}},
	{study: "ucb_gender_dept", draws: 8000, is: map[string]value{
		"intercept": parameter("alpha_admitted"),
		"female":    parameter("beta_female_admitted"),
		"deptB":     parameter("beta_dept_b_admitted"),
		"deptC":     parameter("beta_dept_c_admitted"),
		"deptD":     parameter("beta_dept_d_admitted"),
		"deptE":     parameter("beta_dept_e_admitted"),
		"deptF":     parameter("beta_dept_f_admitted"),
	}},
	{study: "infert_logit", draws: 8000, is: map[string]value{
		"intercept":   parameter("a"),
		"spontaneous": parameter("b_spontaneous"),
		"induced":     parameter("b_induced"),
	}},
	{study: "mtcars_am_logit", draws: 8000, is: map[string]value{
		"a": parameter("alpha_manual"),
		"b": parameter("beta_weight_manual"),
	}},
	{study: "insectsprays_poisson", draws: 10000, is: map[string]value{
		"intercept": parameter("alpha_insects"),
		"B":         parameter("beta_spray_b_insects"),
		"C":         parameter("beta_spray_c_insects"),
		"D":         parameter("beta_spray_d_insects"),
		"E":         parameter("beta_spray_e_insects"),
		"F":         parameter("beta_spray_f_insects"),
	}},
	{study: "warpbreaks_poisson", draws: 8000, is: warpbreaks},
	{study: "warpbreaks_negbin", draws: 9000, is: with(warpbreaks, "log_r", func(p func(string) float64) float64 {
		return math.Log(p("k_breaks"))
	})},
	{study: "cars_normal", draws: 4000, is: map[string]value{
		"a": parameter("alpha_distance"),
		"b": parameter("beta_speed_distance"),
		"s": parameter("sigma_distance"),
	}},
	{study: "cbpp_glmm", draws: 10000, is: map[string]value{
		"b0": parameter("alpha_ill"),
		"p2": parameter("beta_period_2_ill"),
		"p3": parameter("beta_period_3_ill"),
		"p4": parameter("beta_period_4_ill"),
		"s":  parameter("tau_ill_herd"),
	}},
	{study: "eight_schools", draws: 8000, is: map[string]value{
		"mu":  parameter("alpha_gain"),
		"tau": parameter("tau_gain_school"),
		"A":   entry("alpha_gain_school", "A"),
		"B":   entry("alpha_gain_school", "B"),
		"C":   entry("alpha_gain_school", "C"),
		"D":   entry("alpha_gain_school", "D"),
		"E":   entry("alpha_gain_school", "E"),
		"F":   entry("alpha_gain_school", "F"),
		"G":   entry("alpha_gain_school", "G"),
		"H":   entry("alpha_gain_school", "H"),
	}},
	{study: "dyestuff_oneway", draws: 40000, is: map[string]value{
		"mu": parameter("alpha_yield"),
		"t":  parameter("tau_yield_batch"),
		"s":  parameter("sigma_yield"),
		"A":  entry("alpha_yield_batch", "A"),
		"B":  entry("alpha_yield_batch", "B"),
		"C":  entry("alpha_yield_batch", "C"),
		"D":  entry("alpha_yield_batch", "D"),
		"E":  entry("alpha_yield_batch", "E"),
		"F":  entry("alpha_yield_batch", "F"),
	}},
}

var warpbreaks = map[string]value{
	"intercept": parameter("alpha_breaks"),
	"woolB":     parameter("beta_wool_b_breaks"),
	"tensionM":  parameter("beta_tension_m_breaks"),
	"tensionH":  parameter("beta_tension_h_breaks"),
	"B:M":       parameter("beta_tension_m_wool_b_breaks"),
	"B:H":       parameter("beta_tension_h_wool_b_breaks"),
}

func with(all map[string]value, name string, v value) map[string]value {
	out := map[string]value{name: v}
	for n, x := range all {
		out[n] = x
	}
	return out
}

// Posterior means and sds by importance sampling with Monte Carlo errors, the
// last two by quadrature (testdata/studies/SOURCE.md). Left out because this
// version's laws cannot say it: the correlated slopes of sleepstudy.
func TestPosteriors(t *testing.T) {
	long(t)
	for _, p := range posteriors {
		t.Run(p.study, func(t *testing.T) {
			t.Parallel()
			var want map[string]struct{ Mean, SD, Error float64 }
			fromJSON(t, p.study, &want)
			if len(want) != len(p.is) {
				t.Fatalf("%d quantities are known, %d are checked", len(want), len(p.is))
			}
			req := request(t, p.study)
			req.Draws = p.draws
			f := run(t, req).Full
			for name, v := range p.is {
				w, ok := want[name]
				if !ok {
					t.Fatalf("nothing is known of %s", name)
				}
				check(t, name, f.of(t, v), moment(w))
			}
		})
	}
}

// The source's cut points are normal with mean 0 and sd 5, ours have equally
// plausible shares at predictor 0: by the change of variables from shares to
// cut points their density is 2 l(c1) l(c2) on c1 < c2, where l is the
// standard logistic density. Draws weighed by the ratio of the two priors are
// draws from the source's posterior.
func TestOrderedPosterior(t *testing.T) {
	long(t)
	t.Parallel()
	var want map[string]struct{ Mean, SD, Error float64 }
	fromJSON(t, "housing_ordered_logit", &want)
	req := request(t, "housing_ordered_logit")
	req.Draws = 5000
	f := run(t, req).Full
	first, second := entry("cut_satisfaction", "low | medium"), entry("cut_satisfaction", "medium | high")
	is := map[string]value{
		"InflMedium": parameter("beta_influence_medium_satisfaction"),
		"InflHigh":   parameter("beta_influence_high_satisfaction"),
		"Apartment":  parameter("beta_apartment_satisfaction"),
		"Atrium":     parameter("beta_atrium_satisfaction"),
		"Terrace":    parameter("beta_terrace_satisfaction"),
		"ContHigh":   parameter("beta_contact_high_satisfaction"),
		"c1":         first,
		"c2":         second,
	}
	weights := f.of(t, func(p func(string) float64) float64 {
		w := 0.0
		for _, c := range []float64{first(p), second(p)} {
			logistic := -c - 2*math.Log1p(math.Exp(-c))
			w += -c*c/50 - logistic
		}
		return math.Exp(w)
	})
	sum, squares, n := 0.0, 0.0, 0.0
	for _, c := range weights {
		for _, w := range c {
			sum, squares, n = sum+w, squares+w*w, n+1
		}
	}
	if share := sum * sum / squares / n; share < 0.95 {
		t.Fatalf("the weights keep only %.2f of the draws", share)
	}
	for name, v := range is {
		chains := f.of(t, v)
		w := want[name]
		mean := weighted(chains, weights, func(x float64) float64 { return x })
		sd := math.Sqrt(weighted(chains, weights, func(x float64) float64 { return (x - mean) * (x - mean) }))
		s := summary.Of(chains, 0.9)
		if s.BulkESS < enoughESS {
			t.Errorf("%s: effective sample size %.0f, too few to tell", name, s.BulkESS)
		}
		if allowed := errorsAllowed * math.Hypot(s.MeanError, w.Error); math.Abs(mean-w.Mean) > allowed {
			t.Errorf("%s: mean %.5f, not %.5f (%.5f allowed)", name, mean, w.Mean, allowed)
		}
		if math.Abs(sd/w.SD-1) > spreadAllowed {
			t.Errorf("%s: sd %.5f, not %.5f", name, sd, w.SD)
		}
	}
}

func weighted(chains, weights [][]float64, f func(float64) float64) float64 {
	sum, total := 0.0, 0.0
	for c := range chains {
		for i, x := range chains[c] {
			sum += weights[c][i] * f(x)
			total += weights[c][i]
		}
	}
	return sum / total
}
