package main

import (
	"cmp"
	"context"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"math"
	"strconv"
	"strings"

	"arrowroot/app/fit"
	"arrowroot/app/words"
)

type compareOut struct {
	Question    *questionOut        `json:"question"`
	Seed        uint64              `json:"seed"`
	Blocked     []string            `json:"blocked"`
	Outcome     string              `json:"outcome"`
	Unit        string              `json:"unit"`
	Units       int                 `json:"units"`
	Entries     int                 `json:"entries"`
	KnownGroups bool                `json:"knownGroups"`
	Sentences   []string            `json:"sentences"`
	Rivals      []scoredOut         `json:"rivals"`
	Differences []differenceOut     `json:"differences"`
	Better      string              `json:"better"`
	NoBetter    []string            `json:"noBetter"`
	Weights     map[string]*float64 `json:"weights"`
	NoWeights   string              `json:"noWeights"`
}

type scoredOut struct {
	Rival       string     `json:"rival"`
	Score       *float64   `json:"score"`
	Error       *float64   `json:"standardError"`
	Withheld    string     `json:"withheld"`
	Parameters  *float64   `json:"effectiveParameters"`
	Identified  bool       `json:"identified"`
	None        bool       `json:"noEffectDrawn"`
	HeldEnough  bool       `json:"heldIsEnough"`
	Why         string     `json:"why"`
	LargestTail *float64   `json:"largestTail"`
	TailLimit   *float64   `json:"tailLimit"`
	Refitted    []string   `json:"refitted"`
	Doubtful    []string   `json:"doubtful"`
	Wide        *float64   `json:"wideScore"`
	WideShaky   int        `json:"wideInDoubt"`
	Draws       int        `json:"draws"`
	Replicates  int        `json:"groupReplicates"`
	Simulation  *float64   `json:"simulationError"`
	Rows        rowsOut    `json:"rows"`
	Trust       trustOut   `json:"trust"`
	Run         runOut     `json:"run"`
	ByUnit      []*float64 `json:"byUnit"`
}

type differenceOut struct {
	Higher    string   `json:"higher"`
	Lower     string   `json:"lower"`
	By        *float64 `json:"difference"`
	Error     *float64 `json:"standardError"`
	Undecided string   `json:"undecided"`
	LawsOnly  bool     `json:"lawsOnly"`
}

// compareVerb scores the rivals by how well they predict the question's
// outcome. Rivals that cannot be compared are printed as blocked.
func compareVerb(ctx context.Context, j *job) (any, error) {
	t, err := j.table()
	if err != nil {
		return nil, err
	}
	req := fit.CompareRequest{Study: j.study, Question: j.question, Table: t, Seed: j.seed, Chains: j.chains, Draws: j.draws, KnownGroups: j.knownGroups}
	for name := range strings.SplitSeq(j.rivals, ",") {
		if name = strings.TrimSpace(name); name != "" {
			req.Rivals = append(req.Rivals, name)
		}
	}
	doing := ""
	watch := j.watch()
	c, err := fit.Compare(ctx, req, func(p fit.ComparingProgress) {
		if p.Doing != doing {
			doing = p.Doing
			fmt.Fprintln(j.stderr, doing)
			watch = j.watch()
		}
		watch(p.Within)
	})
	var no *fit.Incomparable
	if errors.As(err, &no) {
		out := emptyComparison(j)
		out.Blocked = no.Reasons
		return out, errors.New("the rivals were not compared")
	}
	if err != nil {
		return nil, err
	}
	if j.out != "" {
		if err := writeFile(j.out, func(w io.Writer) error { return writeScores(w, c) }); err != nil {
			return nil, err
		}
	}
	return printComparison(j, c), nil
}

func emptyComparison(j *job) *compareOut {
	return &compareOut{Question: printQuestion(j.question), Seed: j.seed, Blocked: []string{}, Sentences: []string{}, Rivals: []scoredOut{}, Differences: []differenceOut{}, NoBetter: []string{}}
}

func printComparison(j *job, c *fit.Comparison) *compareOut {
	out := emptyComparison(j)
	out.Outcome, out.Unit, out.Units, out.Entries, out.KnownGroups = c.Outcome, cmp.Or(c.Plate, "row"), len(c.Units), c.Entries, c.KnownOnly
	out.Sentences, out.Better, out.NoWeights = words.Comparison(c), c.Better, c.NoWeights
	out.NoBetter = append(out.NoBetter, c.NoBetter...)
	for i, s := range c.Rivals {
		one := scoredOut{
			Rival: s.Rival, Withheld: s.Withheld, Identified: s.Identified, None: s.None, HeldEnough: s.HeldEnough, Why: s.Why,
			TailLimit: finite(s.Limit), Refitted: append([]string{}, s.Refitted...), Doubtful: append([]string{}, s.Doubtful...),
			Wide: finite(s.WideScore), WideShaky: s.WideShaky, Draws: s.Draws, Replicates: s.Replicates, Simulation: finite(s.Simulation),
			Rows: printRows(s.Fitted.Model.Rows), Trust: printTrust(s.Trust), Run: printRun(s.Fitted), ByUnit: []*float64{},
		}
		largest := math.Inf(-1)
		for _, k := range s.K {
			largest = max(largest, k)
		}
		one.LargestTail = finite(largest)
		if s.Withheld == "" {
			one.Score, one.Error, one.Parameters = finite(s.Score), finite(s.Error), finite(s.Parameters)
			for _, x := range s.Unit {
				one.ByUnit = append(one.ByUnit, finite(x))
			}
		}
		out.Rivals = append(out.Rivals, one)
		if c.Weights != nil {
			if out.Weights == nil {
				out.Weights = make(map[string]*float64)
			}
			out.Weights[s.Rival] = finite(c.Weights[i])
		}
	}
	for _, p := range c.Pairs {
		out.Differences = append(out.Differences, differenceOut{p.Higher, p.Lower, finite(p.Difference), finite(p.Error), p.Undecided, p.ByLaws})
	}
	return out
}

// writeScores writes a line for each unit: its name, and for each rival its
// score and the tail of its weights.
func writeScores(w io.Writer, c *fit.Comparison) error {
	out := csv.NewWriter(w)
	line := []string{cmp.Or(c.Plate, "row")}
	for _, s := range c.Rivals {
		line = append(line, s.Rival, s.Rival+", tail")
	}
	if err := out.Write(line); err != nil {
		return err
	}
	for i, name := range c.Units {
		line = append(line[:0], name)
		for _, s := range c.Rivals {
			value := ""
			if s.Withheld == "" {
				value = strconv.FormatFloat(s.Unit[i], 'g', -1, 64)
			}
			line = append(line, value, strconv.FormatFloat(s.K[i], 'g', -1, 64))
		}
		if err := out.Write(line); err != nil {
			return err
		}
	}
	out.Flush()
	return out.Error()
}
