package main

import (
	"bytes"
	"context"
	"encoding/csv"
	"encoding/json"
	"fmt"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// folder holds one small study, plots.arrowroot, with its data.
func folder(t *testing.T) string {
	t.Helper()
	dir := t.TempDir()
	rng := rand.New(rand.NewPCG(1, 2))
	var rows strings.Builder
	fmt.Fprintln(&rows, "soil,rain,yield")
	for range 60 {
		soil := rng.NormFloat64()
		rain := 0.5*soil + rng.NormFloat64()
		fmt.Fprintf(&rows, "%.4f,%.4f,%.4f\n", soil, rain, 4+0.7*rain+0.5*soil+0.5*rng.NormFloat64())
	}
	write(t, dir, "plots.csv", rows.String())
	write(t, dir, "plots.arrowroot", `{"arrowroot": 1, "data": [{"name": "plots", "file": "plots.csv"}],
 "variables": [
  {"id": "soil", "scale": "real", "column": "soil", "range": [-2, 2]},
  {"id": "rain", "scale": "real", "column": "rain", "range": [-2, 2]},
  {"id": "yield", "scale": "real", "column": "yield", "range": [0, 8]}],
 "rivals": [
  {"name": "soil acts", "arrows": [{"from": "soil", "to": "rain"}, {"from": "soil", "to": "yield"}, {"from": "rain", "to": "yield"}]},
  {"name": "rain idle", "arrows": [{"from": "soil", "to": "yield"}, {"from": "soil", "to": "rain"}]}],
 "questions": [
  {"exposure": "rain", "outcome": "yield", "from": 0, "to": 1, "level": 0.5},
  {"exposure": "rain", "outcome": "yield"}]}`)
	return dir
}

func write(t *testing.T, dir, name, text string) {
	t.Helper()
	if err := os.WriteFile(filepath.Join(dir, name), []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
}

// batch runs a command line and gives status, JSON and messages.
func batch(ctx context.Context, t *testing.T, args ...string) (status int, answer map[string]any, messages string) {
	t.Helper()
	var stdout, stderr bytes.Buffer
	status = run(ctx, args, &stdout, &stderr)
	if stdout.Len() > 0 {
		if err := json.Unmarshal(stdout.Bytes(), &answer); err != nil {
			t.Fatalf("%v: %v\n%s", args, err, stdout.String())
		}
	}
	if strings.Contains(stdout.String()+stderr.String(), "NaN") {
		t.Errorf("%v says NaN", args)
	}
	return status, answer, stderr.String()
}

// A command line that makes no sense is refused before anything is sampled,
// with the range or the place in the user's words.
func TestWrongUse(t *testing.T) {
	dir := folder(t)
	file := filepath.Join(dir, "plots.arrowroot")
	absent := filepath.Join(dir, "absent", "draws.csv")
	for _, c := range []struct {
		args string
		says string
	}{
		{"", "no verb"}, {"fit", "no study file"}, {"fit FILE FILE", "one study at a time"}, {"guess FILE", `no verb "guess"`},
		{"fit FILE -question 0", "-question takes 1 to"}, {"fit FILE -draws 0", "-draws takes 1 to 1000000, not 0"},
		{"fit FILE -chains 0", "-chains takes 1 to 64"}, {"fit FILE -chains 65", "-chains takes 1 to 64"}, {"read FILE -paths 0", "-paths takes 1 to"},
		{"read FILE -sets -1", "-sets takes 1 to"}, {"read FILE -question 3", "no question 3"}, {"read FILE -rival feed", `no rival "feed"`},
		{"fit FILE -out " + absent, "there is no folder " + filepath.Dir(absent)}, {"report FILE -out " + dir, "is a folder"},
	} {
		args := strings.Fields(strings.ReplaceAll(c.args, "FILE", file))
		status, answer, messages := batch(context.Background(), t, args...)
		if status != wrongUse || answer != nil || !strings.Contains(messages, c.says) {
			t.Errorf("%s: status %d, %q does not say %q", c.args, status, messages, c.says)
		}
		if strings.Contains(messages, ".arrowroot-") {
			t.Errorf("%s names a temporary file: %s", c.args, messages)
		}
	}
}

func TestStudyWithoutARival(t *testing.T) {
	dir := t.TempDir()
	write(t, dir, "new.arrowroot", `{"arrowroot": 1}`)
	for _, verb := range []string{"read", "validate", "fit", "effect", "report"} {
		status, _, messages := batch(context.Background(), t, verb, filepath.Join(dir, "new.arrowroot"))
		if status != problems || !strings.HasPrefix(messages, "this study has no rival yet: ") {
			t.Errorf("%s: status %d, %q", verb, status, messages)
		}
	}
}

// Every field that FIELDS.md documents is printed, also where it is empty.
func TestFieldsAreAlwaysThere(t *testing.T) {
	file := filepath.Join(folder(t), "plots.arrowroot")
	number := "name centre spread low high level monteCarloError rHat ess trust reasons"
	for verb, fields := range map[string]string{
		"read": "rival question verdict way lacks identified heldIsEnough hold moreSets mostPrecise mostPreciseOfAll mostPreciseSmallest cheapest cost forbidden forbiddenWhy heldFaults wouldHelp wouldHelpTogether paths morePaths pathCount pathCountIsExact " +
			"asked.exposures asked.outcomes asked.given asked.held asked.fixed asked.effect asked.rowsChosenBy controls.soil.verdict controls.soil.sentence direct.fixed direct.effectDrawn direct.hold direct.identified direct.sentence " +
			"estimand.asks estimand.identified estimand.symbols estimand.words estimand.wholeThatFails estimand.partThatFails estimandByHolding.symbols frontDoors instruments instrumentsOfTheArrow laws.0.variable laws.0.parents laws.0.carried " +
			"simulation.case simulation.reason simulation.readObserved basis pairs.0.between pairs.0.separatedBy pairs.0.more functionalConstraints tetrads class.listed class.size class.reversible class.undecided " +
			"rivals.0.rival rivals.0.sameIndependences rivals.0.undecided rivals.0.sentence sections.0.name sections.0.summary sections.0.leftOut sections.0.findings.0.key sections.0.findings.0.kind sections.0.findings.0.sentence " +
			"sections.0.findings.0.why sections.0.findings.0.nodes sections.0.findings.0.path sections.0.findings.0.setAside done paths.0.roles " +
			"paths.0.path paths.0.nodes paths.0.kind paths.0.open paths.0.closedAt paths.0.closedWhy paths.0.openedAt " +
			"question.exposure question.outcome question.effect question.from question.to question.shift question.fixed question.held question.where question.over question.groups question.weigh question.as question.level mistakes setAside",
		"validate": "problems mistakes setAside",
		"arrows":   "rival arrows arrows.0.from arrows.0.to arrows.0.kind arrows.0.form arrows.0.variesBy arrows.0.why arrows.0.references arrows.0.tierFrom arrows.0.tierTo file",
		"check":    "rival summary method level rows contradicted independences functionalConstraints tetrads negativeControls neverTested leftOut",
		"fit": "rival question seed rows rows.used rows.read rows.outsideFilter rows.lost trust trust.verdict trust.reasons quantities run run.chains run.draws run.divergent run.gradients run.warmUpGradients given statement typed cut quantities.0.symbol quantities.0.readAs quantities.0.control " +
			under("quantities.0.", number),
		"effect": "rival question seed answer identified noEffectDrawn refusal heldSet heldProposed heldIsEnough lawsDisagree headline crudeRefusal heldRefusal rows trust run cut " +
			"howWrong.sentences howWrong.robustness howWrong.noRobustness howWrong.eValue howWrong.noEValue howWrong.benchmarks howWrong.noBenchmarks " +
			"full.association full.over " + under("crude.", number) + under("held.", number) + under("full.", number) + under("full.expectedFrom.", number) + under("full.expectedTo.", number),
	} {
		status, answer, messages := batch(context.Background(), t, verb, "-draws", "20", file)
		if status != done {
			t.Fatalf("%s: status %d, %s", verb, status, messages)
		}
		for _, f := range strings.Fields(fields) {
			if !has(answer, strings.Split(f, ".")) {
				t.Errorf("%s: there is no %s", verb, f)
			}
		}
	}
}

func under(prefix, fields string) string {
	out := ""
	for _, f := range strings.Fields(fields) {
		out += prefix + f + " "
	}
	return out
}

func has(value any, path []string) bool {
	if len(path) == 0 {
		return true
	}
	switch v := value.(type) {
	case map[string]any:
		below, ok := v[path[0]]
		return ok && has(below, path[1:])
	case []any:
		return len(v) > 0 && has(v[0], path[1:])
	}
	return false
}

// The question's level is that of every number.
func TestLevelIsPrinted(t *testing.T) {
	file := filepath.Join(folder(t), "plots.arrowroot")
	_, answer, _ := batch(context.Background(), t, "effect", "-draws", "200", file)
	for _, n := range []string{"crude", "held", "full"} {
		of := answer[n].(map[string]any)
		if half := (of["high"].(float64) - of["low"].(float64)) / 2 / of["spread"].(float64); of["level"] != 0.5 || half > 0.85 || half < 0.5 {
			t.Errorf("%s: level %v, half width of %.2f sds", n, of["level"], half) // 0.674 for a normal
		}
	}
}

// A question that compares nothing is no effect of 0, and keeps no fit back.
func TestQuestionWithoutValues(t *testing.T) {
	file := filepath.Join(folder(t), "plots.arrowroot")
	if status, answer, messages := batch(context.Background(), t, "effect", "-draws", "20", "-question", "2", file); status != problems || answer != nil || !strings.Contains(messages, "rain") {
		t.Errorf("effect: status %d, %v, %q", status, answer, messages)
	}
	if status, answer, messages := batch(context.Background(), t, "fit", "-draws", "20", "-question", "2", file); status != done || answer == nil {
		t.Errorf("fit: status %d, %q", status, messages)
	}
}

// A rival that draws no effect answers so, with associations beside it.
func TestNoEffectDrawn(t *testing.T) {
	file := filepath.Join(folder(t), "plots.arrowroot")
	status, answer, messages := batch(context.Background(), t, "effect", "-draws", "100", "-rival", "rain idle", file)
	if status != done {
		t.Fatalf("status %d, %s", status, messages)
	}
	full, crude := answer["full"].(map[string]any), answer["crude"].(map[string]any)
	if answer["noEffectDrawn"] != true || answer["identified"] != true || full["centre"] != 0.0 || full["high"] != 0.0 || crude["association"] != true || crude["centre"] == 0.0 {
		t.Errorf("%v", answer)
	}
	if first := answer["answer"].([]any)[0].(string); !strings.HasPrefix(first, "No arrows lead from rain to yield") {
		t.Errorf("answer: %q", first)
	}
}

// A run stopped by hand says so and headlines nothing; one stopped before it
// had a draw has no answer.
func TestStopped(t *testing.T) {
	file := filepath.Join(folder(t), "plots.arrowroot")
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if status, answer, _ := batch(ctx, t, "effect", file); status != problems || answer != nil {
		t.Errorf("stopped at once: status %d, %v", status, answer)
	}
}

func TestDrawsAsCSV(t *testing.T) {
	dir := folder(t)
	out := filepath.Join(dir, "draws.csv")
	if status, _, messages := batch(context.Background(), t, "fit", "-draws", "10", "-chains", "2", "-out", out, filepath.Join(dir, "plots.arrowroot")); status != done {
		t.Fatal(messages)
	}
	f, err := os.Open(out)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil || len(rows) != 21 || rows[0][0] != "chain" || rows[0][2] == "" {
		t.Errorf("%d rows, %v", len(rows), err)
	}
	if left, _ := filepath.Glob(filepath.Join(dir, ".arrowroot-*")); len(left) > 0 {
		t.Errorf("left behind: %v", left)
	}
}
