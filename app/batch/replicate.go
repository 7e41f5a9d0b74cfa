package main

import (
	"context"
	"encoding/csv"
	"fmt"
	"io"
	"strconv"
	"time"

	"arrowroot/app/fit"
	"arrowroot/app/words"
	"arrowroot/compile/model"
	"arrowroot/compile/replicate"
)

type replicateOut struct {
	Rival      string            `json:"rival"`
	Question   *questionOut      `json:"question"`
	Seed       uint64            `json:"seed"`
	Rows       rowsOut           `json:"rows"`
	Trust      trustOut          `json:"trust"`
	Sentences  []string          `json:"sentences"`
	Reproduced bool              `json:"reproduced"`
	Replicates int               `json:"replicates"`
	Made       int               `json:"checksMade"`
	Variables  []checkedVariable `json:"variables"`
	Run        runOut            `json:"run"`
	Cut        bool              `json:"cut"`
}

type checkedVariable struct {
	Variable string          `json:"variable"`
	Values   int             `json:"values"`
	Observed int             `json:"observed"`
	NoCheck  string          `json:"noCheck"`
	Checks   []reproducedOut `json:"checks"`
}

type reproducedOut struct {
	Looks    string   `json:"looksAt"`
	Of       string   `json:"of"`
	LeftOut  bool     `json:"leftOut"`
	Observed *float64 `json:"observed"`
	Low      *float64 `json:"low"`
	Centre   *float64 `json:"centre"`
	High     *float64 `json:"high"`
	Tail     float64  `json:"tail"`
	Upward   bool     `json:"upward"`
	Far      *float64 `json:"far"`
	Verdict  string   `json:"verdict"`
	Sentence string   `json:"sentence"`
}

// replicateVerb asks whether the rival's fit can reproduce the data.
func replicateVerb(ctx context.Context, j *job) (any, error) {
	r, err := j.fitted(ctx, fit.Request{NoEffects: true, NoPaint: true})
	if err != nil {
		return nil, err
	}
	c, err := j.checks(ctx, r)
	if err != nil {
		return nil, err
	}
	if err := j.writeReplicates(c, r.Full.Model); err != nil {
		return nil, err
	}
	return j.printChecks(r, c), nil
}

// grace is how long the checks of a fit that was stopped may take.
const grace = 2 * time.Second

// checks replicates a fit, also one that was stopped; it tells every tenth part.
func (j *job) checks(ctx context.Context, r *fit.Result) (*replicate.Checks, error) {
	if r.Cut { // what was drawn is checked all the same, if that is soon done
		late, cancel := context.WithTimeout(context.WithoutCancel(ctx), grace)
		defer cancel()
		ctx = late
	}
	last := 0
	c, err := r.Full.Replicate(ctx, r.Seed, func(done, of int) {
		if tenth := 10 * done / max(of, 1); tenth != last {
			last = tenth
			fmt.Fprintf(j.stderr, "%d %% of the replicates drawn\n", 10*tenth)
		}
	})
	if err != nil {
		return nil, fmt.Errorf("the fit was not checked: %w", err)
	}
	return c, nil
}

func (j *job) printChecks(r *fit.Result, c *replicate.Checks) *replicateOut {
	f := r.Full
	out := &replicateOut{
		Rival: j.rival, Question: printQuestion(j.question), Seed: j.seed, Rows: printRows(f.Model.Rows), Trust: printTrust(f.Trust),
		Sentences: words.Checks(c), Reproduced: len(c.Failed()) == 0 && c.Made > 0, Replicates: c.Replicates, Made: c.Made,
		Variables: []checkedVariable{}, Run: printRun(f), Cut: r.Cut,
	}
	for _, v := range c.Variables {
		one := checkedVariable{Variable: v.ID, Values: v.Units, Observed: v.Observed, NoCheck: v.Refusal, Checks: []reproducedOut{}}
		for _, k := range v.Checks {
			one.Checks = append(one.Checks, reproducedOut{
				Looks: string(k.Kind), Of: k.Of, LeftOut: k.Kind == replicate.Trend && !k.Parent,
				Observed: finite(k.Observed), Low: finite(k.Low), Centre: finite(k.Centre), High: finite(k.High),
				Tail: k.Tail, Upward: k.Upward, Far: finite(k.Far), Verdict: k.Words, Sentence: words.Check(k),
			})
		}
		out.Variables = append(out.Variables, one)
	}
	return out
}

// writeReplicates writes data and the first replicates of each variable as CSV
// if -out asks for it: one line for each value.
func (j *job) writeReplicates(c *replicate.Checks, m *model.Model) error {
	if j.out == "" {
		return nil
	}
	return writeFile(j.out, func(w io.Writer) error {
		out := csv.NewWriter(w)
		kept := 0
		for _, v := range c.Variables {
			kept = max(kept, len(v.Values))
		}
		row := []string{"variable", "row", "data"}
		for d := range kept {
			row = append(row, "replicate "+strconv.Itoa(d+1))
		}
		if err := out.Write(row); err != nil {
			return err
		}
		for _, v := range c.Variables {
			at, _ := m.Name(v.ID)
			text := func(x float64) string { return valueText(m.Variables[at], x) }
			for i, used := range v.Rows {
				row = append(row[:0], v.ID, strconv.Itoa(tableRow(m, used)+1), text(v.Data[i]))
				for _, values := range v.Values {
					row = append(row, text(values[i]))
				}
				if err := out.Write(row); err != nil {
					return err
				}
			}
		}
		out.Flush()
		return out.Error()
	})
}

// tableRow is the row of the table, from 0, that a used row comes from.
func tableRow(m *model.Model, used int) int {
	if used < len(m.Rows.Index) {
		return m.Rows.Index[used]
	}
	return used
}

// valueText is a level's word, or a number.
func valueText(v *model.Variable, x float64) string {
	if k := int(x); len(v.Levels) > 0 && k >= 0 && k < len(v.Levels) {
		return v.Levels[k]
	}
	return strconv.FormatFloat(x, 'g', -1, 64)
}
