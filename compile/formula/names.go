package formula

import (
	"strings"
	"unicode"
	"unicode/utf8"
)

// greek pairs each letter with its typed form, in the alphabet's order. Final
// sigma and the symbol forms that keyboards give read as the plain letter.
var greek = [...]struct {
	letter rune
	name   string
}{
	{'α', "alpha"}, {'β', "beta"}, {'γ', "gamma"}, {'δ', "delta"}, {'ε', "epsilon"},
	{'ζ', "zeta"}, {'η', "eta"}, {'θ', "theta"}, {'ι', "iota"}, {'κ', "kappa"},
	{'λ', "lambda"}, {'μ', "mu"}, {'ν', "nu"}, {'ξ', "xi"}, {'ο', "omicron"},
	{'π', "pi"}, {'ρ', "rho"}, {'σ', "sigma"}, {'τ', "tau"}, {'υ', "upsilon"},
	{'φ', "phi"}, {'χ', "chi"}, {'ψ', "psi"}, {'ω', "omega"},
	{'Γ', "Gamma"}, {'Δ', "Delta"}, {'Θ', "Theta"}, {'Λ', "Lambda"}, {'Ξ', "Xi"},
	{'Π', "Pi"}, {'Σ', "Sigma"}, {'Φ', "Phi"}, {'Ψ', "Psi"}, {'Ω', "Omega"},
	{'ς', "sigma"}, {'µ', "mu"}, {'ϕ', "phi"}, {'ϵ', "epsilon"}, {'ϑ', "theta"},
}

func greekName(letter rune) string {
	for _, g := range greek {
		if g.letter == letter {
			return g.name
		}
	}
	return ""
}

func greekLetter(name string) string {
	for _, g := range greek {
		if g.name == name {
			return string(g.letter)
		}
	}
	return ""
}

// Canonical gives the typed form of a name: "β_hedge→bees" is
// "beta_hedge_bees". Only parts that are one Greek letter change, so that a
// variable named in Greek, θερμοκρασία, keeps its name.
func Canonical(name string) string {
	plain := true
	for i := 0; i < len(name); i++ {
		if name[i] >= utf8.RuneSelf || name[i] == '>' {
			plain = false
			break
		}
	}
	if plain {
		return name
	}
	name = strings.ReplaceAll(strings.ReplaceAll(name, "→", "_"), "->", "_")
	parts := strings.Split(name, "_")
	for i, part := range parts {
		letter, size := utf8.DecodeRuneInString(part)
		if g := greekName(letter); g != "" && strings.Trim(part[size:], "0123456789") == "" {
			parts[i] = g + part[size:]
		}
	}
	return strings.Join(parts, "_")
}

// Symbol is the printed form of a typed name where nobody knows better:
// "sigma_bees" is "σ_bees", "alpha_bees by farm" is "α_farm". It cannot tell
// where the arrow stands in beta_hedge_bees; who knows the arrows can.
func Symbol(id string) string {
	name, plates, by := strings.Cut(id, " by ")
	stem, rest, long := strings.Cut(name, "_")
	digits := stem[len(strings.TrimRight(stem, "0123456789")):]
	if g := greekLetter(stem[:len(stem)-len(digits)]); g != "" {
		stem = g + digits
	}
	switch {
	case by:
		return stem + "_" + strings.ReplaceAll(plates, " and ", ",")
	case long:
		return stem + "_" + rest
	}
	return stem
}

// bare lists the functions that take a name or number without a bracket, which
// is also what makes their words unfit as names of variables.
var bare = [...]string{"log", "exp", "logit", "inverse logit", "sqrt", "abs"}

// links lists what may stand before the name on the left of "=".
var links = [...]string{"log", "logit", "softmax", "cumulative logit", "cumulative probit"}

// keywords are the words that join others.
var keywords = [...]string{"by", "of", "and", "with"}

func isKeyword(id string) bool {
	for _, k := range keywords {
		if id == k {
			return true
		}
	}
	return false
}

func isBare(id string) bool {
	for _, f := range bare {
		if id == f {
			return true
		}
	}
	return false
}

// Reserved reports whether a word has a meaning of its own in formulas, so
// that no variable, plate or parameter can have it as its name.
func Reserved(id string) bool { return isKeyword(id) || isBare(id) }

// IsName reports whether text can name a variable: a letter, then letters,
// digits, marks and underscores, and not a reserved word.
func IsName(text string) bool {
	for i, r := range text {
		if !unicode.IsLetter(r) && (i == 0 || !nameRune(r)) {
			return false
		}
	}
	return text != "" && utf8.ValidString(text) && !Reserved(text)
}

func nameRune(r rune) bool {
	return r == '_' || unicode.IsLetter(r) || unicode.IsDigit(r) || unicode.Is(unicode.M, r)
}
