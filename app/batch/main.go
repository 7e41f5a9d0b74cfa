// Command batch does without a window what Arrowroot does in one: it reads a
// study's arrows, holds them against the data, checks its laws, fits it,
// computes its effect, compares its rivals and writes a report. Results go to
// standard output as JSON, messages to standard error.
//
//	batch VERB [flags] STUDY.arrowroot
//
// Exit status: 0 done, 1 the study has problems, 2 wrong use.
//
// Read main.go (the command line), verbs.go (what all verbs share, and the short
// ones), then a file for each longer verb; print.go and question.go hold what
// several verbs print. FIELDS.md says what every field is.
package main

import (
	"context"
	"encoding/json"
	"errors"
	"flag"
	"fmt"
	"io"
	"os"
	"os/signal"
	"strconv"

	"arrowroot/compile/model"
)

const usage = `use: batch VERB [flags] STUDY.arrowroot

verbs
  read       what follows from the arrows: paths, what to hold, whether the effect can be had
  validate   what is wrong with the study, its laws and its data
  check      what the arrows promise against the data: independences, other constraints, negative controls
  arrows     what the rival supposes, arrow by arrow, with reasons and references
  fit        the posterior of every quantity, with trust
  replicate  whether the fitted model can reproduce the data
  effect     the question's contrast: crude, held, full model
  compare    how well the rivals predict what they have not seen
  report     one HTML file with verdict, figure, statement, result and limits

flags
  -rival NAME     the rival; the first one without it
  -question N     the question, counted from 1; the first one without it
  -seed N         same study, same seed, same draws (1)
  -chains N       chains side by side, 1 to 64 (4)
  -draws N        draws of each chain, 1 to 1000000; without it, until every quantity is precise enough
  -out FILE       fit, effect: draws as CSV; replicate: data and replicates as CSV; arrows: the table as CSV; compare: scores by unit as CSV; report: the HTML file
  -paths N        read: at most N paths, 1 to 100000 (500)
  -sets N         read: at most N sets of a kind, 1 to 100000 (100)
  -exposure LIST  read: the effect of these variables, with commas between them
  -outcome LIST   read: on these
  -held LIST      read: with these held
  -given LIST     read: among those with known values of these
  -with LIST      read: sets to hold that contain these
  -without LIST   read: sets to hold without these
  -rivals LIST    compare: these rivals; all of them without it
  -known-groups   compare: predict new rows of known groups, not new groups
`

// Exit statuses.
const (
	done     = 0
	problems = 1
	wrongUse = 2
)

// An options value is the command line.
type options struct {
	verb, study   string
	rival         string
	question      int
	seed          uint64
	chains, draws int
	out           string
	paths, sets   int

	exposure, outcome, hold, given, with, without string // lists of IDs
	rivals                                        string // a list of names
	knownGroups                                   bool
}

// errUse is a command line that makes no sense.
var errUse = errors.New("wrong use")

func main() {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	defer stop()
	os.Exit(run(ctx, os.Args[1:], os.Stdout, os.Stderr))
}

func run(ctx context.Context, args []string, stdout, stderr io.Writer) int {
	opt, err := parse(args)
	if errors.Is(err, flag.ErrHelp) {
		fmt.Fprint(stderr, usage)
		return done
	}
	if err != nil {
		fmt.Fprintf(stderr, "%v\n\n%s", err, usage)
		return wrongUse
	}
	verbs := map[string]func(context.Context, *job) (any, error){
		"read": read, "validate": validate, "arrows": arrows, "check": check, "fit": fitVerb, "effect": effectVerb, "compare": compareVerb, "replicate": replicateVerb, "report": reportVerb,
	}
	verb := verbs[opt.verb]
	if verb == nil {
		fmt.Fprintf(stderr, "there is no verb %q\n\n%s", opt.verb, usage)
		return wrongUse
	}
	j, err := load(opt, stderr)
	if errors.Is(err, errUse) {
		fmt.Fprintln(stderr, err)
		return wrongUse
	}
	if err != nil && opt.verb != "validate" {
		fmt.Fprintln(stderr, err)
		return problems
	}
	var answer any
	if err != nil { // the study cannot even be opened: that is what is wrong with it
		answer = printProblems([]model.Problem{{Code: "file", Place: "file", Message: err.Error(), Stops: true}}, noMistakes())
	} else {
		answer, err = verb(ctx, j)
	}
	if answer != nil {
		out := json.NewEncoder(stdout)
		out.SetEscapeHTML(false)
		out.SetIndent("", " ")
		if err := out.Encode(answer); err != nil {
			fmt.Fprintln(stderr, err)
			return problems
		}
	}
	if err != nil {
		fmt.Fprintln(stderr, err)
		if errors.Is(err, errUse) {
			return wrongUse
		}
		return problems
	}
	return done
}

// ranges of the flags that count something, from 1.
var ranges = []struct {
	flag string
	most int
}{{"question", 10000}, {"chains", 64}, {"draws", 1000000}, {"paths", 100000}, {"sets", 100000}}

// parse takes flags before and after the study's name.
func parse(args []string) (*options, error) {
	opt := &options{}
	flags := flag.NewFlagSet("batch", flag.ContinueOnError)
	flags.SetOutput(io.Discard)
	flags.StringVar(&opt.rival, "rival", "", "")
	flags.IntVar(&opt.question, "question", 0, "")
	flags.Uint64Var(&opt.seed, "seed", 1, "")
	flags.IntVar(&opt.chains, "chains", 0, "")
	flags.IntVar(&opt.draws, "draws", 0, "")
	flags.StringVar(&opt.out, "out", "", "")
	flags.IntVar(&opt.paths, "paths", 0, "")
	flags.IntVar(&opt.sets, "sets", 0, "")
	flags.StringVar(&opt.exposure, "exposure", "", "")
	flags.StringVar(&opt.outcome, "outcome", "", "")
	flags.StringVar(&opt.hold, "held", "", "")
	flags.StringVar(&opt.given, "given", "", "")
	flags.StringVar(&opt.with, "with", "", "")
	flags.StringVar(&opt.without, "without", "", "")
	flags.StringVar(&opt.rivals, "rivals", "", "")
	flags.BoolVar(&opt.knownGroups, "known-groups", false, "")
	var words []string
	for len(args) > 0 {
		if err := flags.Parse(args); err != nil {
			return nil, err
		}
		args = flags.Args()
		if len(args) > 0 {
			words = append(words, args[0])
			args = args[1:]
		}
	}
	switch {
	case len(words) == 0:
		return nil, fmt.Errorf("%w: no verb", errUse)
	case len(words) == 1:
		return nil, fmt.Errorf("%w: no study file", errUse)
	case len(words) > 2:
		return nil, fmt.Errorf("%w: one study at a time, not %q", errUse, words[2:])
	}
	// A flag that was not given is zero and means its default; a zero that was
	// given is out of its range.
	var outside error
	flags.Visit(func(f *flag.Flag) {
		for _, r := range ranges {
			if n, _ := strconv.Atoi(f.Value.String()); f.Name == r.flag && (n < 1 || n > r.most) {
				outside = fmt.Errorf("%w: -%s takes 1 to %d, not %d", errUse, r.flag, r.most, n)
			}
		}
	})
	if outside != nil {
		return nil, outside
	}
	opt.verb, opt.study = words[0], words[1]
	return opt, nil
}
