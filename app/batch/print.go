package main

import (
	"math"
	"strings"

	"arrowroot/app/fit"
	"arrowroot/app/words"
	"arrowroot/compile/model"
	"arrowroot/infer/summary"
)

// What the verbs print. FIELDS.md documents every field, and a test holds it to
// that.

type problemOut struct {
	Code     string   `json:"code"`
	Variable string   `json:"variable"`
	Place    string   `json:"place"`
	Message  string   `json:"message"`
	Repairs  []string `json:"repairs"`
	Stops    bool     `json:"stops"`
}

func printProblems(all []model.Problem, m mistakesOut) any {
	out := struct {
		Problems []problemOut `json:"problems"`
		mistakesOut
	}{[]problemOut{}, m}
	for _, p := range all {
		po := problemOut{Code: p.Code, Variable: p.Variable, Place: p.Place, Message: p.Message, Repairs: []string{}, Stops: p.Stops}
		for _, r := range p.Repairs {
			po.Repairs = append(po.Repairs, r.Label)
		}
		out.Problems = append(out.Problems, po)
	}
	return out
}

type trustOut struct {
	Verdict string   `json:"verdict"`
	Reasons []string `json:"reasons"`
}

func printTrust(t summary.Trust) trustOut {
	out := trustOut{Verdict: t.Verdict.String(), Reasons: t.Reasons}
	if out.Reasons == nil {
		out.Reasons = []string{}
	}
	return out
}

type essOut struct {
	Bulk *float64 `json:"bulk"`
	Tail *float64 `json:"tail"`
}

type quantityOut struct {
	Name    string   `json:"name"`
	Symbol  string   `json:"symbol,omitempty"`
	Centre  *float64 `json:"centre"`
	Spread  *float64 `json:"spread"`
	Low     *float64 `json:"low"`
	High    *float64 `json:"high"`
	Level   float64  `json:"level"`
	Error   *float64 `json:"monteCarloError"`
	RHat    *float64 `json:"rHat"`
	ESS     essOut   `json:"ess"`
	Trust   string   `json:"trust"`
	Reasons []string `json:"reasons"`
}

func printSummary(name, symbol string, s summary.Summary, t summary.Trust) quantityOut {
	reasons := t.Reasons
	if reasons == nil {
		reasons = []string{}
	}
	return quantityOut{
		Name: name, Symbol: symbol, Centre: finite(s.Centre), Spread: finite(s.Spread), Low: finite(s.Low), High: finite(s.High),
		Level: s.Level, Error: finite(s.MeanError), RHat: finite(s.RHat), ESS: essOut{finite(s.BulkESS), finite(s.TailESS)},
		Trust: t.Verdict.String(), Reasons: reasons,
	}
}

// finite is null in JSON where a number cannot be said.
func finite(x float64) *float64 {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		return nil
	}
	return &x
}

type rowsOut struct {
	Used    int            `json:"used"`
	Read    int            `json:"read"`
	Outside int            `json:"outsideFilter"`
	Lost    map[string]int `json:"lost"`
}

func printRows(r model.Rows) rowsOut {
	out := rowsOut{Used: r.Used, Read: r.Read, Outside: r.Filtered, Lost: map[string]int{}}
	for _, l := range r.Lost {
		out.Lost[l.Variable] = l.Rows
	}
	return out
}

type runOut struct {
	Chains    int `json:"chains"`
	Draws     int `json:"draws"` // of each chain
	Divergent int `json:"divergent"`
	Gradients int `json:"gradients"`
	Warmup    int `json:"warmUpGradients"`
}

// A fittedOut is a quantity of a fit with what it may be read as.
type fittedOut struct {
	quantityOut
	ReadAs  string `json:"readAs"`
	Control bool   `json:"control"`
}

type fitOut struct {
	Rival      string       `json:"rival"`
	Question   *questionOut `json:"question"`
	Seed       uint64       `json:"seed"`
	Rows       rowsOut      `json:"rows"`
	Trust      trustOut     `json:"trust"`
	Quantities []fittedOut  `json:"quantities"`
	Run        runOut       `json:"run"`
	Given      []string     `json:"given"`
	Statement  []string     `json:"statement"`
	Typed      []string     `json:"typed"`
	Cut        bool         `json:"cut"`
}

func printRun(f *fit.Fitted) runOut {
	return runOut{len(f.Chains), f.Steps(), f.Sampling.Divergent, f.Gradients, f.Warmup}
}

func printFit(j *job, r *fit.Result) *fitOut {
	f := r.Full
	out := &fitOut{
		Rival: j.rival, Question: printQuestion(j.question), Seed: j.seed, Rows: printRows(f.Model.Rows),
		Trust: printTrust(f.Trust), Quantities: []fittedOut{}, Given: f.Model.Given, Cut: r.Cut,
		Run: printRun(f),
	}
	if out.Given == nil {
		out.Given = []string{}
	}
	labels := words.Coefficients(j.study, f.Model)
	for _, q := range f.Quantities {
		c := labels[q.Parameter]
		out.Quantities = append(out.Quantities, fittedOut{printSummary(q.Name, q.Symbol, q.Summary, q.Trust), c.Words, c.Control})
	}
	out.Typed = []string{}
	out.Typed = append(out.Typed, f.Model.Statement().Typed...)
	out.Statement = strings.Split(strings.TrimRight(f.Model.Statement().String(), "\n"), "\n")
	return out
}

type numberOut struct {
	quantityOut
	Association bool        `json:"association"`
	Over        string      `json:"over"`
	From        quantityOut `json:"expectedFrom"`
	To          quantityOut `json:"expectedTo"`
}

type effectOut struct {
	Rival        string       `json:"rival"`
	Question     *questionOut `json:"question"`
	Seed         uint64       `json:"seed"`
	Answer       []string     `json:"answer"`
	Identified   bool         `json:"identified"`
	NoneDrawn    bool         `json:"noEffectDrawn"`
	Refusal      string       `json:"refusal"`
	HeldSet      []string     `json:"heldSet"`
	HeldProposed bool         `json:"heldProposed"`
	HeldEnough   bool         `json:"heldIsEnough"`
	LawsDisagree bool         `json:"lawsDisagree"`
	Headline     string       `json:"headline"` // "full", "held" or "none"
	Crude        *numberOut   `json:"crude"`
	Held         *numberOut   `json:"held"`
	Full         *numberOut   `json:"full"`
	CrudeRefusal string       `json:"crudeRefusal"`
	HeldRefusal  string       `json:"heldRefusal"`
	Rows         rowsOut      `json:"rows"`
	Trust        trustOut     `json:"trust"`
	Run          runOut       `json:"run"`
	HowWrong     *howWrongOut `json:"howWrong"`
	Cut          bool         `json:"cut"`
}

func printEffect(j *job, r *fit.Result) *effectOut {
	e := r.Effect
	out := &effectOut{
		Rival: j.rival, Question: printQuestion(j.question), Seed: j.seed, Answer: words.Effect(j.study, r),
		Identified: e.Identified, NoneDrawn: e.None, Refusal: e.Refusal, CrudeRefusal: e.CrudeRefusal, HeldRefusal: e.AdjustedRefusal,
		HeldSet: e.Held, HeldProposed: e.HeldProposed, HeldEnough: e.HeldValid, LawsDisagree: e.LawsDisagree,
		Headline: "none", Crude: printNumber("crude", e.Crude), Held: printNumber("held", e.Adjusted), Full: printNumber("full", e.Full),
		Rows: printRows(r.Full.Model.Rows), Trust: printTrust(r.Trust()),
		Run: printRun(r.Full), HowWrong: printHowWrong(e), Cut: r.Cut || e.Cut,
	}
	if out.HeldSet == nil {
		out.HeldSet = []string{}
	}
	switch h := e.Headline(); {
	case h == nil:
	case h == e.Full:
		out.Headline = "full"
	default:
		out.Headline = "held"
	}
	return out
}

func printNumber(name string, n *fit.Number) *numberOut {
	if n == nil {
		return nil
	}
	return &numberOut{
		quantityOut: printSummary(name, "", n.Summary, n.Trust), Association: n.Association, Over: n.Words,
		From: printSummary("from", "", n.From, n.Trust), To: printSummary("to", "", n.To, n.Trust),
	}
}
