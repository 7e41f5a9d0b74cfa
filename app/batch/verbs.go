package main

import (
	"bufio"
	"context"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strconv"
	"strings"

	"arrowroot/app/findings"
	"arrowroot/app/fit"
	"arrowroot/app/report"
	"arrowroot/app/session"
	"arrowroot/compile/evidence"
	"arrowroot/compile/model"
	"arrowroot/compile/replicate"
	"arrowroot/compile/study"
	"arrowroot/compile/table"
	"arrowroot/infer"
)

// A job is one study, opened, with the rival and question that were asked for.
type job struct {
	*options
	study    *study.Study
	rival    string
	question *study.Question
	stderr   io.Writer
}

func load(opt *options, stderr io.Writer) (*job, error) {
	if err := writable(opt.out); err != nil {
		return nil, err
	}
	doc, err := study.Load(opt.study)
	if err != nil {
		return nil, err
	}
	j := &job{options: opt, study: doc, rival: opt.rival, stderr: stderr}
	if len(doc.Rivals) == 0 {
		return nil, errors.New("this study has no rival yet: draw one in the window, or write one with its arrows into the file")
	}
	if j.rival == "" {
		j.rival = doc.Rivals[0].Name
	}
	if doc.Rival(j.rival) == nil {
		var names []string
		for _, r := range doc.Rivals {
			names = append(names, strconv.Quote(r.Name))
		}
		return nil, fmt.Errorf("%w: there is no rival %q; the study has %s", errUse, j.rival, strings.Join(names, ", "))
	}
	at := max(opt.question, 1)
	if at <= len(doc.Questions) {
		j.question = doc.Questions[at-1]
	} else if opt.question > 0 {
		return nil, fmt.Errorf("%w: there is no question %d; the study has %d", errUse, at, len(doc.Questions))
	}
	return j, j.spare(opt.out)
}

// table reads the data that the rival is fitted to.
func (j *job) table() (*table.Table, error) {
	d := j.study.DataOf(j.rival)
	if d == nil {
		return nil, nil
	}
	return session.ReadData(filepath.Dir(j.options.study), d)
}

// spare makes sure that -out names neither the study nor any of its data.
func (j *job) spare(path string) error {
	at, err := os.Stat(path)
	if err != nil {
		return nil // not there yet
	}
	mine := []string{j.options.study}
	for _, d := range j.study.Data {
		if d.File != "" {
			mine = append(mine, filepath.Join(filepath.Dir(j.options.study), filepath.FromSlash(d.File)), filepath.FromSlash(d.File))
		}
	}
	for _, name := range mine {
		if own, err := os.Stat(name); err == nil && os.SameFile(at, own) {
			return fmt.Errorf("%w: -out %s is the study or its data, and would be written over", errUse, path)
		}
	}
	return nil
}

var errNoQuestion = errors.New("the study asks no question: add one with an exposure and an outcome")

func validate(_ context.Context, j *job) (any, error) {
	t, err := j.table()
	if err != nil {
		return printProblems([]model.Problem{{Code: "data", Place: "data", Message: err.Error(), Stops: true}}, j.mistakes(j.question, nil)), err
	}
	var q study.Question
	if j.question != nil {
		q = *j.question
	}
	found := model.Problems(j.study, j.rival, q, t)
	answer := printProblems(found, j.mistakes(j.question, t))
	if model.Stops(found) {
		return answer, &fit.Blocked{Problems: found}
	}
	return answer, nil
}

// fitted runs the fit that all remaining verbs need; want says what of it the
// verb does not print.
func (j *job) fitted(ctx context.Context, want fit.Request) (*fit.Result, error) {
	t, err := j.table()
	if err != nil {
		return nil, err
	}
	want.Study, want.Rival, want.Question, want.Table = j.study, j.rival, j.question, t
	want.Seed, want.Chains, want.Draws = j.seed, j.chains, j.draws
	r, err := fit.Run(ctx, want, j.watch())
	var blocked *fit.Blocked
	if errors.As(err, &blocked) {
		for _, p := range blocked.Problems {
			fmt.Fprintln(j.stderr, p.Message)
		}
		return nil, errors.New("the study was not fitted")
	}
	return r, err
}

// watch reports progress every tenth part, on standard error.
func (j *job) watch() func(infer.Progress) {
	last := -1
	return func(p infer.Progress) {
		if p.Total == 0 {
			return
		}
		if tenth := 10 * p.Done / p.Total; tenth != last {
			last = tenth
			fmt.Fprintf(j.stderr, "%d %% done, %d divergences\n", 10*tenth, p.Divergent)
		}
	}
}

func fitVerb(ctx context.Context, j *job) (any, error) {
	r, err := j.fitted(ctx, fit.Request{NoEffects: true, NoPaint: true})
	if err != nil {
		return nil, err
	}
	if err := j.writeDraws(r.Full); err != nil {
		return nil, err
	}
	return printFit(j, r), nil
}

func effectVerb(ctx context.Context, j *job) (any, error) {
	if j.question == nil {
		return nil, errNoQuestion
	}
	r, err := j.fitted(ctx, fit.Request{NoPaint: true, Answer: true})
	if err != nil {
		return nil, err
	}
	if err := j.writeDraws(r.Full); err != nil {
		return nil, err
	}
	return printEffect(j, r), nil
}

func reportVerb(ctx context.Context, j *job) (any, error) {
	g, err := j.study.Graph(j.rival)
	if err != nil {
		return nil, err
	}
	// The arrows are read first: a fit that is stopped is reported all the same.
	ask, err := j.ask()
	if err != nil {
		return nil, err
	}
	read, err := findings.Read(ctx, j.study, j.rival, ask, findings.Limits{Paths: j.paths, Sets: j.sets})
	if err != nil {
		return nil, err
	}
	held, err := j.evidence(ctx, read)
	if err != nil {
		return nil, err
	}
	r, err := j.fitted(ctx, fit.Request{})
	if err != nil {
		return nil, err
	}
	var checks *replicate.Checks
	if !r.Cut {
		if checks, err = j.checks(ctx, r); err != nil && ctx.Err() == nil {
			return nil, err
		}
	}
	out := j.out
	if out == "" {
		out = strings.TrimSuffix(j.options.study, filepath.Ext(j.options.study)) + ".html"
	}
	reading := fit.Read(g, j.question, 0, 0)
	err = writeFile(out, func(w io.Writer) error {
		return report.WriteHTML(w, report.Input{Study: j.study, Rival: j.rival, Question: j.question, Graph: g, Reading: reading, Findings: read, Evidence: held, Result: r, Checks: checks})
	})
	if err != nil {
		return nil, err
	}
	return reportOut{out, r.Trust().Verdict.String(), r.Cut || r.Effect != nil && r.Effect.Cut}, nil
}

type reportOut struct {
	Report string `json:"report"`
	Trust  string `json:"trust"`
	Cut    bool   `json:"cut"`
}

// evidence is what the data say of the arrows; nil without data.
func (j *job) evidence(ctx context.Context, f *findings.Findings) (*evidence.Evidence, error) {
	t, err := j.table()
	if t == nil || err != nil {
		return nil, err
	}
	req := evidence.Request{Study: j.study, Rival: j.rival, Table: t, Graph: f.Graph, Selected: f.Selected, Question: j.question}
	if j.question != nil {
		req.Level = j.question.Level
	}
	return evidence.Test(ctx, req, nil)
}

// writeDraws writes the draws as CSV if -out asks for it.
func (j *job) writeDraws(f *fit.Fitted) error {
	if j.out == "" {
		return nil
	}
	return writeFile(j.out, func(w io.Writer) error {
		out := csv.NewWriter(w)
		row := []string{"chain", "step"}
		for _, q := range f.Quantities {
			row = append(row, q.Name)
		}
		if err := out.Write(row); err != nil {
			return err
		}
		for c, chain := range f.Chains {
			for i, draw := range chain {
				row = append(row[:0], strconv.Itoa(c+1), strconv.Itoa(i+1))
				for _, x := range draw {
					row = append(row, strconv.FormatFloat(x, 'g', -1, 64))
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

// writeFile writes a whole file or none. Errors name that file.
func writeFile(path string, write func(io.Writer) error) error {
	fail := func(err error) error {
		var place *fs.PathError
		var move *os.LinkError
		switch {
		case errors.As(err, &place):
			err = place.Err
		case errors.As(err, &move):
			err = move.Err
		}
		return fmt.Errorf("%s was not written: %w", path, err)
	}
	f, err := os.CreateTemp(filepath.Dir(path), ".arrowroot-*")
	if err != nil {
		return fail(err)
	}
	defer os.Remove(f.Name())
	w := bufio.NewWriter(f)
	if err := errors.Join(write(w), w.Flush(), f.Chmod(0o644), f.Close()); err != nil {
		return fail(err)
	}
	if err := os.Rename(f.Name(), path); err != nil {
		return fail(err)
	}
	return nil
}

// writable finds out before hours of sampling whether a file can be written.
func writable(path string) error {
	if path == "" {
		return nil
	}
	folder := filepath.Dir(path)
	if at, err := os.Stat(folder); err != nil || !at.IsDir() {
		return fmt.Errorf("%w: -out %s: there is no folder %s", errUse, path, folder)
	}
	if at, err := os.Stat(path); err == nil && at.IsDir() {
		return fmt.Errorf("%w: -out %s is a folder; name a file in it", errUse, path)
	}
	probe, err := os.CreateTemp(folder, ".arrowroot-*")
	if err != nil {
		return fmt.Errorf("%w: -out %s: nothing can be written into the folder %s", errUse, path, folder)
	}
	probe.Close()
	return os.Remove(probe.Name())
}
