package main

import (
	"arrowroot/app/fit"
	"arrowroot/app/words"
	"arrowroot/compile/sensitivity"
)

type howWrongOut struct {
	Sentences    []string       `json:"sentences"`
	Robustness   *robustnessOut `json:"robustness"`
	NoRobustness string         `json:"noRobustness"`
	EValue       *eValueOut     `json:"eValue"`
	NoEValue     string         `json:"noEValue"`
	Benchmarks   []benchmarkOut `json:"benchmarks"`
	NoBenchmarks string         `json:"noBenchmarks"`
}

type robustnessOut struct {
	Value     float64 `json:"value"`
	Limit     float64 `json:"limit"`
	PartialR2 float64 `json:"partialR2"`
	Freedom   float64 `json:"freedom"`
}

type eValueOut struct {
	Value      float64  `json:"value"`
	Limit      float64  `json:"limit"`
	RiskRatio  float64  `json:"riskRatio"`
	Low        float64  `json:"low"`
	High       *float64 `json:"high"`
	Conversion string   `json:"conversion"`
}

type benchmarkOut struct {
	Variable      string     `json:"variable"`
	OfExposure    float64    `json:"ofExposure"`
	OfOutcome     float64    `json:"ofOutcome"`
	RatioExposure float64    `json:"ratioExposure"`
	RatioOutcome  float64    `json:"ratioOutcome"`
	Factor        float64    `json:"factor"`
	Times         []timesOut `json:"times"`
}

type timesOut struct {
	Times        float64  `json:"times"`
	WithExposure float64  `json:"withExposure"`
	WithOutcome  float64  `json:"withOutcome"`
	Leaves       *float64 `json:"leaves"`
}

// printHowWrong prints a value with its benchmarks, or why there are none.
func printHowWrong(e *fit.Effect) *howWrongOut {
	out := &howWrongOut{Sentences: words.HowWrong(e), Benchmarks: []benchmarkOut{}}
	if out.Sentences == nil {
		out.Sentences = []string{}
	}
	r := e.Sensitivity
	if r == nil {
		out.NoRobustness, out.NoEValue, out.NoBenchmarks = e.NoSensitivity, e.NoSensitivity, e.NoSensitivity
		return out
	}
	out.NoRobustness, out.NoEValue, out.NoBenchmarks = r.NoRobustness, r.NoE, r.NoBenchmarks
	if b := r.Robustness; b != nil {
		out.Robustness = &robustnessOut{b.Value, b.Limit, b.PartialR2, b.Freedom}
	}
	if v := r.E; v != nil {
		out.EValue = &eValueOut{v.Value, v.Limit, v.RiskRatio, v.Low, finite(v.High), v.Conversion}
	}
	for _, b := range r.Benchmarks {
		out.Benchmarks = append(out.Benchmarks, printBenchmark(b))
	}
	return out
}

func printBenchmark(b sensitivity.Benchmark) benchmarkOut {
	out := benchmarkOut{b.Name, b.OfExposure, b.OfOutcome, b.RatioExposure, b.RatioOutcome, b.Factor, []timesOut{}}
	for _, t := range b.Times {
		out.Times = append(out.Times, timesOut{t.K, t.WithExposure, t.WithOutcome, finite(t.Adjusted)})
	}
	return out
}
