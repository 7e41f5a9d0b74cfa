package kernel

// Densities lists every kernel once. Tests walk it.
func Densities() []*Density {
	return []*Density{
		Normal, StudentT, LogNormal, Gamma, Exponential, Beta, Uniform, HalfNormal, HalfT,
		Bernoulli, Binomial, Poisson, NegativeBinomial, Categorical, Ordered,
		LogNormalLog, GammaLog, ExponentialLog, BetaLogit, BernoulliLogit, BinomialLogit,
		PoissonLog, NegativeBinomialLog, CategoricalSoftmax, OrderedLogit,
	}
}

// ByName returns the kernel of that name, or nil.
func ByName(name string) *Density {
	for _, d := range Densities() {
		if d.Name == name {
			return d
		}
	}
	return nil
}
