// Command generate makes the data of the example study and of the test study
// with the shape of a scholarship survey. Both are invented; every number is
// known. Run it from the repository's root: go run ./assets/examples/generate
package main

import (
	"bytes"
	"encoding/json"
	"fmt"
	"log"
	"math"
	"math/rand/v2"
	"os"
)

func main() {
	for name, make := range map[string]func() []byte{
		"assets/examples/hedgerows.csv":         func() []byte { csv, _ := hedgerows(); return csv },
		"testdata/studies/hedgerows-truth.json": func() []byte { _, truth := hedgerows(); return truth },
		"testdata/studies/scholarship.csv":      scholarship,
	} {
		if err := os.WriteFile(name, make(), 0o644); err != nil {
			log.Fatal(err)
		}
	}
}

// The laws of the hedgerow country. Farms differ in arable share, soil and a
// farmer's attitude, which nobody measured; attitude brings hedges and keeps
// pesticide away.
const (
	farms  = 84
	rounds = 3

	hedgeOnBees     = 0.004 // per m/ha, log scale: nest sites
	hedgeOnFlowers  = 0.012 // per m/ha, logit scale
	flowersOnBees   = 2.0   // per unit of cover, log scale
	pesticideOnBees = -0.18 // per unit of the index, log scale
	tempOnBees      = 0.03  // per °C, log scale
	farmSpread      = 0.25
	overdispersion  = 4.0
	precision       = 25.0 // of flower cover
	perHour         = 0.65 // bees an hour where everything is at its reference

	missingShare = 0.06
)

var soils = []struct {
	name           string
	hedge, flowers float64
}{{"clay", 15, -0.2}, {"loam", 0, 0.25}, {"sand", -15, -0.05}}

type round struct {
	hedge, soilFlowers, pesticide, temp, hours, farm float64
}

// bees is the expected count at a hedge density and a flower cover.
func (r round) bees(hedge, flowers float64) float64 {
	return r.hours * perHour * math.Exp(hedgeOnBees*(hedge-90)+flowersOnBees*(flowers-0.3)+
		pesticideOnBees*(r.pesticide-5)+tempOnBees*(r.temp-18)+r.farm)
}

func (r round) cover(hedge float64) float64 {
	return 1 / (1 + math.Exp(-(-0.9 + hedgeOnFlowers*(hedge-90) + r.soilFlowers)))
}

func hedgerows() (csv, truth []byte) {
	r := rand.New(rand.NewPCG(2026, 84))
	var out bytes.Buffer
	fmt.Fprintln(&out, "farm,round,hedge_m_ha,flower_pct,pest_load,arable_pct,soil_class,temp_c,trap_hours,bees")
	var all []round
	for f := range farms {
		arable := math.Round(10*(20+70*r.Float64())) / 10
		attitude := r.NormFloat64()
		soil := soils[r.IntN(len(soils))]
		hedge := 90 - 0.6*(arable-55) + soil.hedge + 18*attitude + 20*r.NormFloat64()
		hedge = math.Round(min(max(hedge, 3), 178))
		pesticide := 5 + 0.04*(arable-55) - attitude + r.NormFloat64()
		pesticide = math.Round(100*min(max(pesticide, 0), 10)) / 100
		farm := farmSpread * r.NormFloat64()
		for t := range rounds {
			x := round{
				hedge: hedge, soilFlowers: soil.flowers, pesticide: pesticide, farm: farm,
				temp:  math.Round(10*(18+3*r.NormFloat64())) / 10,
				hours: math.Round(2*(24+24*r.Float64())) / 2,
			}
			mean := x.cover(hedge)
			flowers := math.Round(1000*beta(r, mean*precision, (1-mean)*precision)) / 1000
			flowers = min(max(flowers, 0.002), 0.998)
			count := fmt.Sprint(poisson(r, x.bees(hedge, flowers)*gamma(r, overdispersion)/overdispersion))
			if r.Float64() < missingShare {
				count = "NA"
			} else {
				all = append(all, x)
			}
			fmt.Fprintf(&out, "F%02d,%d,%g,%.1f,%g,%g,%s,%g,%g,%s\n", f+1, t+1, hedge, 100*flowers, pesticide, arable, soil.name, x.temp, x.hours, count)
		}
	}
	return out.Bytes(), expected(all)
}

// expected is the true effect of setting hedge from 40 to 90 m/ha over the
// rows whose count was seen: expected bees under both, by averaging over
// flower covers.
func expected(rows []round) []byte {
	r := rand.New(rand.NewPCG(7, 7))
	const covers = 4000
	at := func(hedge float64) float64 {
		sum := 0.0
		for _, x := range rows {
			mean := x.cover(hedge)
			for range covers {
				sum += x.bees(hedge, beta(r, mean*precision, (1-mean)*precision))
			}
		}
		return sum / float64(covers*len(rows))
	}
	from, to := at(40), at(90)
	text, err := json.MarshalIndent(map[string]float64{"from": from, "to": to, "ratio": to / from, "rows": float64(len(rows))}, "", " ")
	if err != nil {
		log.Fatal(err)
	}
	return append(text, '\n')
}

// scholarship: talent, unmeasured, moves entry score and final mark; entry
// score and income decide the award; the award buys study hours. The award's
// total effect on the mark is .30 + .50·.40 = .50; the drawn parents of the
// mark alone give .72.
func scholarship() []byte {
	r := rand.New(rand.NewPCG(31, 1900))
	var out bytes.Buffer
	fmt.Fprintln(&out, "entry,income,award,hours,mark")
	for range 1900 {
		talent, income := r.NormFloat64(), r.NormFloat64()
		entry := 0.8*talent + 0.6*r.NormFloat64()
		award := 0.6*entry + 0.4*income + r.NormFloat64()
		hours := 0.5*award + r.NormFloat64()
		mark := 0.3*award + 0.4*hours + 0.2*income + 0.623*talent + r.NormFloat64()
		fmt.Fprintf(&out, "%.4f,%.4f,%.4f,%.4f,%.4f\n", entry, income, award, hours, mark)
	}
	return out.Bytes()
}

// gamma is a gamma variate with scale 1 (Marsaglia & Tsang 2000), shape ≥ 1.
func gamma(r *rand.Rand, shape float64) float64 {
	if shape < 1 {
		return gamma(r, shape+1) * math.Pow(r.Float64(), 1/shape)
	}
	d := shape - 1.0/3
	c := 1 / math.Sqrt(9*d)
	for {
		x := r.NormFloat64()
		v := 1 + c*x
		if v <= 0 {
			continue
		}
		v *= v * v
		if math.Log(r.Float64()) < 0.5*x*x+d-d*v+d*math.Log(v) {
			return d * v
		}
	}
}

func beta(r *rand.Rand, a, b float64) float64 {
	x, y := gamma(r, a), gamma(r, b)
	return x / (x + y)
}

// poisson counts exponential waits; means here are below a thousand.
func poisson(r *rand.Rand, mean float64) int {
	n, sum := 0, r.ExpFloat64()
	for sum < mean {
		n++
		sum += r.ExpFloat64()
	}
	return n
}
