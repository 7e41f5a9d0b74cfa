package formula

import (
	"errors"
	"slices"
	"strings"
	"testing"
)

// Each text parses and is printed, typed and pretty, as given.
func TestParse(t *testing.T) {
	for _, c := range []struct{ text, typed, pretty string }{
		{"log rate = alpha_bees by farm + beta_hedge_bees * (hedge - 90) + log hours", "", "α_farm + β_hedge_bees (hedge − 90) + log hours"},
		{"logit(μ) = α + β·x", "logit mu = alpha + beta * x", "α + β x"},
		{"mean = 1", "", "1"},
		{"cumulative logit predictor = b * x", "", "b x"},
		{"cumulative probit predictor = b * x", "", "b x"},
		{"α_bees + β_hedge→bees × hedge", "alpha_bees + beta_hedge_bees * hedge", "α_bees + β_hedge_bees hedge"},
		{"β_hedge->bees * x", "beta_hedge_bees * x", "β_hedge_bees x"},
		{"θερμοκρασία + μ2", "θερμοκρασία + mu2", "θερμοκρασία + μ2"},
		{"a - b - c", "", "a − b − c"},
		{"a - (b - c)", "", "a − (b − c)"},
		{"(a - b) - c", "a - b - c", "a − b − c"},
		{"a / b * c", "", "a / b · c"},
		{"a / (b * c)", "", "a / (b c)"},
		{"a * b * (c + 1)", "", "a b (c + 1)"},
		{"2 * 3 * x", "", "2 · 3 · x"},
		{"2 * x", "", "2 x"},
		{"x * 2", "", "x · 2"},
		{"-x^2", "", "−x²"},
		{"(-3)^2", "", "(−3)²"},
		{"-3^2", "", "−3²"},
		{"- -x", "--x", "−−x"},
		{"a^b^c", "", "a^b^c"},
		{"(a^b)^c", "", "(a^b)^c"},
		{"x² + y³", "x^2 + y^3", "x² + y³"},
		{"x^-1.5", "", "x^−1.5"},
		{"log(rate + 1)", "", "log(rate + 1)"},
		{"log(rate)", "log rate", "log rate"},
		{"log(rate)^2", "(log rate)^2", "(log rate)²"},
		{"log exp x", "log(exp x)", "log(exp x)"},
		{"log 2", "log(2)", "log(2)"},
		{"log x by farm", "log(x by farm)", "log x_farm"},
		{"inverse logit eta", "", "inverse logit η"},
		{"inverse logit(a + b) * 2", "", "inverse logit(a + b) · 2"},
		{"max(a, log(b), 1e-7)", "max(a, log b, 1e-7)", "max(a, log b, 1·10⁻⁷)"},
		{"nosuch(a)", "", "nosuch(a)"},
		{"a by farm and year + b", "", "a_farm,year + b"},
		{"(a by farm)^2", "", "(a_farm)²"},
		{"step_soil_flowers of soil", "", "step_soil_flowers(soil)"},
		{"a # the baseline\n + b", "a + b", "a + b"},
		{"  .5 + 5. + 1.50e2 ", "0.5 + 5 + 150", "0.5 + 5 + 150"},
		{"1e300 * x", "", "1·10³⁰⁰ x"},
		{"maximum + byte + offset", "", "maximum + byte + offset"},
	} {
		p, err := Parse(c.text)
		if err != nil {
			t.Errorf("%s", Caret(c.text, err.(*Error)))
			continue
		}
		if c.typed == "" {
			c.typed = c.text
		}
		if got := p.String(); got != c.typed {
			t.Errorf("%s\nis typed %s\nwant     %s", c.text, got, c.typed)
		}
		if got := Pretty(p.Right, nil); got != c.pretty {
			t.Errorf("%s\nis printed %s\nwant       %s", c.text, got, c.pretty)
		}
	}
}

func TestParsePhraseAndSentence(t *testing.T) {
	for _, c := range []struct{ text, typed string }{
		{"normal with mean 0, sd 1", ""},
		{"normal, mean 0, sd 1", "normal with mean 0, sd 1"},
		{"normal with mean 0 and sd 1", "normal with mean 0, sd 1"},
		{"uniform", ""},
		{"half-normal with scale 0.5", ""},
		{"half - normal with scale .5", "half-normal with scale 0.5"},
		{"Student  t with degrees of freedom 4, mean a by farm and year, scale sigma", "Student t with degrees of freedom 4, mean a by farm and year, scale sigma"},
		{"log-normal with median exp(a + b), sd of logs s", ""},
		{"gamma with mean log mu, shape 2 * k", ""},
		{"x ~ negative binomial with mean rate, overdispersion k_bees", ""},
		{"σ_bees ~ half-normal with scale 1", "sigma_bees ~ half-normal with scale 1"},
		{"k ~ Poisson", ""},
	} {
		var got string
		if strings.Contains(c.text, "~") {
			s, err := ParseSentence(c.text)
			if err != nil {
				t.Error(Caret(c.text, err.(*Error)))
				continue
			}
			got = s.String()
		} else {
			p, err := ParsePhrase(c.text)
			if err != nil {
				t.Error(Caret(c.text, err.(*Error)))
				continue
			}
			got = p.String()
		}
		if c.typed == "" {
			c.typed = c.text
		}
		if got != c.typed {
			t.Errorf("%s\nis typed %s\nwant     %s", c.text, got, c.typed)
		}
	}
}

// An error test is the two lines that a person sees, and the repair.
func TestErrors(t *testing.T) {
	formula := func(text string) error { _, err := Parse(text); return err }
	phrase := func(text string) error { _, err := ParsePhrase(text); return err }
	sentence := func(text string) error { _, err := ParseSentence(text); return err }
	for _, c := range []struct {
		parse           func(string) error
		display, repair string
	}{
		{formula, "\n^ there is no formula yet", ""},
		{formula, "a +\n  ^ a name or a number is missing after “+”", ""},
		{formula, "a + * b\n  ^ a name or a number is missing after “+”", ""},
		{formula, "* b\n^ a name or a number is missing before “*”", ""},
		{formula, "(a + b\n^ this bracket is not closed", ""},
		{formula, "a + b)\n     ^ this bracket closes nothing", ""},
		{formula, "2 * [x]\n    ^ brackets are round here", "("},
		{formula, "x**2\n ^^ a power is written with ^, as in x^2", "^"},
		{formula, "3x\n ^ a sign is missing before “x”; a product is written with *", "* x"},
		{formula, "β_a→b (x - 1)\n      ^ a sign is missing before “(”; a product is written with *", "* ("},
		{formula, "log x^2\n^^^^^^^ this can be read in two ways: write log(x^2) or (log x)^2", "log(x^2)"},
		{formula, "log -x\n^^^ log needs a name or a bracket behind it, as in log(x)", ""},
		{formula, "x - 1,5\n     ^ a comma stands only between the arguments of a function; a decimal takes a point", "."},
		{formula, "a = b = c\n      ^ there is a second =", ""},
		{formula, "a + b = c\n  ^ only a name, or log or logit of it, can stand before =", ""},
		{formula, "root mean = c\n^^^^ “root” cannot stand before =; what can is a name, log or logit", ""},
		{formula, "bees ~ Poisson\n     ^ ~ joins a variable to its distribution; a formula takes =", ""},
		{formula, "a by\n  ^^ a name is missing after “by”", ""},
		{formula, "(a + b) by farm\n        ^^ “by” can only follow a name", ""},
		{formula, "by + 1\n^^ “by” joins words and cannot stand for a value", ""},
		{formula, "a $ b\n  ^ \"$\" has no meaning in a formula", ""},
		{formula, "élan $ b\n     ^ \"$\" has no meaning in a formula", ""},
		{formula, "1e999\n^^^^^ 1e999 is too large a number", ""},
		{phrase, "normal with mean\n            ^^^^ a name or a number is missing after “mean”", ""},
		{phrase, "normal with mean 0 sd 1\n                   ^^ a sign is missing before “sd”; a product is written with *", "* sd"},
		{phrase, "normal with\n           ^ the name of an argument is missing, as in “mean 0”", ""},
		{phrase, "normal with 0\n            ^ the name of an argument is missing, as in “mean 0”", ""},
		{phrase, "normal mean 0\n            ^ “with” is missing between the distribution and its arguments", "with 0"},
		{phrase, "with mean 0\n^^^^ the name of a distribution is missing, as in “normal with mean 0, sd 1”", ""},
		{phrase, "a + b\n  ^ “+” has no place here", ""},
		{sentence, "bees = 3\n     ^ ~ is missing between bees and its distribution", ""},
		{sentence, "3 ~ normal\n^ a law begins with a variable, as in “bees ~ Poisson with rate r”", ""},
	} {
		text, _, _ := strings.Cut(c.display, "\n")
		err := c.parse(text)
		var e *Error
		if !errors.As(err, &e) {
			t.Errorf("%s: no error", text)
			continue
		}
		if got := Caret(text, e); got != c.display || e.Repair != c.repair {
			t.Errorf("got\n%s [%s]\nwant\n%s [%s]", got, e.Repair, c.display, c.repair)
		}
	}
	deep := strings.Repeat("(", 100_000)
	if err := formula(deep); err == nil || !strings.Contains(err.Error(), "nested more than") {
		t.Errorf("%v", err)
	}
	if err := formula(strings.Repeat("-", 100_000) + "x"); err == nil {
		t.Error("too many signs were taken")
	}
}

func TestNames(t *testing.T) {
	p, err := Parse("log rate = α by farm + step_s of soil + max(x, x) * x^y")
	if err != nil {
		t.Fatal(err)
	}
	if got := Names(p.Right); !slices.Equal(got, []string{"alpha", "step_s", "soil", "x", "y"}) {
		t.Errorf("%q", got)
	}
	outer := 0
	Walk(p.Right, func(e Expr) bool {
		_, by := e.(*By)
		if _, name := e.(*Name); name {
			outer++
		}
		return !by
	})
	if outer != 6 { // step_s, soil, x, x, x, y; alpha is below its By
		t.Errorf("%d names outside of a by", outer)
	}
	for _, c := range []struct {
		name string
		ok   bool
	}{{"bees", true}, {"blé", true}, {"_x", false}, {"3a", false}, {"a b", false}, {"log", false}, {"by", false}, {"", false}, {"a→b", false}, {"x\xff", false}} {
		if IsName(c.name) != c.ok {
			t.Errorf("IsName(%q) = %t", c.name, !c.ok)
		}
	}
}

func TestSpansPointIntoTheText(t *testing.T) {
	text := "  log rate = α_bees by farm + max(β_a→b, 2)"
	p, err := Parse(text)
	if err != nil {
		t.Fatal(err)
	}
	var got []string
	Walk(p.Right, func(e Expr) bool {
		got = append(got, text[e.Where().Start:e.Where().End])
		return true
	})
	want := []string{"α_bees by farm + max(β_a→b, 2)", "α_bees by farm", "α_bees", "max(β_a→b, 2)", "β_a→b", "2"}
	if !slices.Equal(got, want) {
		t.Errorf("got  %q\nwant %q", got, want)
	}
}

// renamed gives one name, of a variable or of a plate, another.
func renamed(text, old, new string) string {
	one := func(id string) string {
		if id == Canonical(old) {
			return new
		}
		return id
	}
	return Replace(text, one, one)
}

func TestReplace(t *testing.T) {
	for _, c := range []struct{ text, old, new, want string }{
		{"log rate = alpha + rate * hedge", "rate", "speed", "log rate = alpha + speed * hedge"},
		{"hedge + hedges + log hedge", "hedge", "rows", "rows + hedges + log rows"},
		{"β_a→b * x", "beta_a_b", "beta_c_b", "beta_c_b * x"},
		{"alpha * x", "α", "base", "base * x"},
		{"a by farm and year # farm", "farm", "holding", "a by holding and year # farm"},
		{"farm + a by farm", "farm", "holding", "holding + a by holding"},
		{"a +  (b", "b", "c", "a +  (c"},
		{"max(max, 1)", "max", "top", "max(top, 1)"},
		{"", "a", "b", ""},
	} {
		if got := renamed(c.text, c.old, c.new); got != c.want {
			t.Errorf("%s with %s → %s: %s, want %s", c.text, c.old, c.new, got, c.want)
		}
	}
	one := func(id string) string { return strings.ReplaceAll(id, "mean", "centre") }
	if got := ReplacePhrase("normal with mean mean, sd 2 * a by mean", one, nil); got != "normal with mean centre, sd 2 * a by mean" {
		t.Error(got)
	}
	if got := ReplacePhrase("normal with mean mean, sd (a by mean)", nil, one); got != "normal with mean mean, sd (a by centre)" {
		t.Error(got)
	}
	if got := Replace("mean by mean", one, nil); got != "centre by mean" {
		t.Error(got)
	}
}

func TestPrettyWithSymbols(t *testing.T) {
	e, err := ParseExpr("alpha_bees by farm + beta_hedge_bees * (hedge - 90)")
	if err != nil {
		t.Fatal(err)
	}
	symbols := map[string]string{"alpha_bees by farm": "α_f", "beta_hedge_bees": "β_hedge→bees", "hedge": "hedge_i"}
	got := Pretty(e, func(id string) string { return symbols[id] })
	if want := "α_f + β_hedge→bees (hedge_i − 90)"; got != want {
		t.Errorf("%s, want %s", got, want)
	}
}
