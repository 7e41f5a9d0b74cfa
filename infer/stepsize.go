package infer

import "math"

// A stepSize adapts the leapfrog step by dual averaging (Hoffman & Gelman
// 2014, section 3.2.1, with their constants).
type stepSize struct {
	target  float64
	step    float64 // the one in use
	mu      float64
	count   float64
	bar     float64 // running mean of the shortfall of the acceptance statistic
	logMean float64
}

const (
	shrinkage  = 0.05
	delay      = 10
	forgetting = 0.75
)

func newStepSize(target float64) *stepSize { return &stepSize{target: target, step: 1} }

// restart begins a new average around step.
func (s *stepSize) restart(step float64) {
	s.step = step
	s.mu = math.Log(10 * step)
	s.count, s.bar, s.logMean = 0, 0, 0
}

// learn takes the acceptance statistic of one iteration.
func (s *stepSize) learn(accept float64) {
	if math.IsNaN(accept) {
		accept = 0
	}
	s.count++
	w := 1 / (s.count + delay)
	s.bar = (1-w)*s.bar + w*(s.target-accept)
	logStep := s.mu - math.Sqrt(s.count)/shrinkage*s.bar
	v := math.Pow(s.count, -forgetting)
	s.logMean = v*logStep + (1-v)*s.logMean
	s.step = math.Exp(logStep)
}

// settle fixes the step at its average.
func (s *stepSize) settle() {
	if s.count > 0 {
		s.step = math.Exp(s.logMean)
	}
}
