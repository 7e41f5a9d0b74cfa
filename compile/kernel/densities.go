package kernel

// Densities lists every kernel once. Tests walk it.
func Densities() []*Density {
	return []*Density{
		Normal, StudentT, LogNormal, Gamma, Exponential, Beta, Uniform, HalfNormal, HalfT,
		Cauchy, Laplace, Logistic, Gumbel, SkewNormal, HalfCauchy, Weibull, InverseGamma, Pareto, Triangular, VonMises,
		Bernoulli, Binomial, Poisson, NegativeBinomial, Categorical, Ordered,
		Geometric, BetaBinomial,
		LogNormalLog, GammaLog, ExponentialLog, BetaLogit, BernoulliLogit, BinomialLogit,
		PoissonLog, NegativeBinomialLog, CategoricalSoftmax, OrderedLogit,
		WeibullLog, GeometricLog, BetaBinomialLogit, OrderedProbit,
	}
}
