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
