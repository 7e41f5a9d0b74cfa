package catalog

import (
	"math"

	"arrowroot/compile/kernel"
)

// Families returns every family, in the order in which a menu lists them:
// by scale of the variable, the default of the scale first.
func Families() []*Family { return families }

var families = withZeros([]*Family{
	{
		Name: "normal", Support: Reals,
		Arguments: []Argument{
			{Name: "mean", Greek: "mu", Support: Reals, Doc: "expected value"},
			{Name: "sd", Also: []string{"standard deviation"}, Greek: "sigma", Support: Positives, Doc: "spread around the mean"},
		},
		Predicted: 0, Link: Identity, Centred: true,
		Natural: kernel.Normal, Linked: kernel.Normal,
		Quantile: normalQuantile, CDF: normalCDF,
		Mean: func(a []float64) float64 { return a[0] },
		SD:   func(a []float64) float64 { return a[1] },
		Doc:  "a measurement that can take any value, with errors of the same size everywhere",
		Source: "N. L. Johnson, S. Kotz & N. Balakrishnan, Continuous Univariate Distributions, vol. 1, " +
			"2nd ed., Wiley 1994, ch. 13",
	},
	{
		Name: "Student t", Support: Reals,
		Arguments: []Argument{
			{Name: "mean", Also: []string{"location"}, Greek: "mu", Support: Reals, Doc: "center; the expected value when there are more than 1 degrees of freedom"},
			{Name: "scale", Also: []string{"sd"}, Greek: "sigma", Support: Positives, Doc: "spread; the sd is larger than this, and infinite up to 2 degrees of freedom"},
			{Name: "degrees of freedom", Also: []string{"df"}, Greek: "nu", Support: Positives, Doc: "the fewer, the heavier the tails"},
		},
		Predicted: 0, Link: Identity, Centred: true,
		Natural: kernel.StudentT, Linked: kernel.StudentT,
		Quantile: studentQuantile, CDF: studentCDF, Mean: studentMean, SD: studentSD,
		Doc: "a measurement that can take any value, with outliers now and then",
		Source: "N. L. Johnson, S. Kotz & N. Balakrishnan, Continuous Univariate Distributions, vol. 2, " +
			"2nd ed., Wiley 1995, ch. 28; K. L. Lange, R. J. A. Little & J. M. G. Taylor, JASA 84 (1989)",
	},
	{
		Name: "Laplace", Support: Reals,
		Arguments: []Argument{
			{Name: "mean", Also: []string{"location"}, Greek: "mu", Support: Reals, Doc: "expected value, and the peak"},
			{Name: "scale", Greek: "sigma", Support: Positives, Doc: "mean distance from the mean; the sd is √2 of it"},
		},
		Predicted: 0, Link: Identity, Centred: true,
		Natural: kernel.Laplace, Linked: kernel.Laplace,
		Quantile: laplaceQuantile, CDF: laplaceCDF,
		Mean: func(a []float64) float64 { return a[0] },
		SD:   func(a []float64) float64 { return math.Sqrt2 * a[1] },
		Doc:  "a measurement that is mostly close to its middle and sometimes far from it; its fit follows the median",
		Source: "N. L. Johnson, S. Kotz & N. Balakrishnan, Continuous Univariate Distributions, vol. 2, " +
			"2nd ed., Wiley 1995, ch. 24",
	},
	{
		Name: "logistic", Support: Reals,
		Arguments: []Argument{
			{Name: "mean", Also: []string{"location"}, Greek: "mu", Support: Reals, Doc: "expected value"},
			{Name: "scale", Greek: "sigma", Support: Positives, Doc: "spread; the sd is 1.81 of it"},
		},
		Predicted: 0, Link: Identity, Centred: true,
		Natural: kernel.Logistic, Linked: kernel.Logistic,
		Quantile: logisticQuantile, CDF: logisticCDF,
		Mean: func(a []float64) float64 { return a[0] },
		SD:   func(a []float64) float64 { return math.Pi / math.Sqrt(3) * a[1] },
		Doc:  "a measurement that can take any value, with somewhat heavier tails than the normal",
		Source: "N. L. Johnson, S. Kotz & N. Balakrishnan, Continuous Univariate Distributions, vol. 2, " +
			"2nd ed., Wiley 1995, ch. 23",
	},
	{
		Name: "skew normal", Support: Reals,
		Arguments: []Argument{
			{Name: "location", Greek: "mu", Support: Reals, Doc: "where the normal would be centered; the mean lies on the side of the longer tail"},
			{Name: "scale", Greek: "sigma", Support: Positives, Doc: "sd that the normal would have"},
			{Name: "skew", Greek: "skew", Support: Reals, Doc: "0 for none; positive for a longer tail to the right"},
		},
		Predicted: 0, Link: Identity,
		Natural: kernel.SkewNormal, Linked: kernel.SkewNormal,
		Quantile: skewNormalQuantile, CDF: skewNormalCDF, Mean: skewNormalMean, SD: skewNormalSD,
		Doc:    "a measurement that can take any value, with one tail longer than the other",
		Source: "A. Azzalini, A class of distributions which includes the normal ones, Scandinavian J. Statistics 12 (1985)",
	},
	{
		Name: "Gumbel", Support: Reals,
		Arguments: []Argument{
			{Name: "location", Also: []string{"mode"}, Greek: "mu", Support: Reals, Doc: "most likely value; the mean is 0.577 scales above"},
			{Name: "scale", Greek: "sigma", Support: Positives, Doc: "spread; the sd is 1.28 of it"},
		},
		Predicted: 0, Link: Identity,
		Natural: kernel.Gumbel, Linked: kernel.Gumbel,
		Quantile: gumbelQuantile, CDF: gumbelCDF,
		Mean: func(a []float64) float64 { return a[0] + eulerGamma*a[1] },
		SD:   func(a []float64) float64 { return math.Pi / math.Sqrt(6) * a[1] },
		Doc:  "the largest of many values, such as the highest flood of a year",
		Source: "N. L. Johnson, S. Kotz & N. Balakrishnan, Continuous Univariate Distributions, vol. 2, " +
			"2nd ed., Wiley 1995, ch. 22",
	},
	{
		Name: "Cauchy", Support: Reals,
		Arguments: []Argument{
			{Name: "center", Also: []string{"location", "median"}, Greek: "mu", Support: Reals, Doc: "the median; there is no expected value"},
			{Name: "scale", Greek: "sigma", Support: Positives, Doc: "half of the values lie within this of the center"},
		},
		Predicted: 0, Link: Identity, Centred: true,
		Natural: kernel.Cauchy, Linked: kernel.Cauchy,
		Quantile: cauchyQuantile, CDF: cauchyCDF, Mean: none, SD: none,
		Doc: "a quantity whose outliers know no bounds; as a prior, one that hardly rules anything out",
		Source: "N. L. Johnson, S. Kotz & N. Balakrishnan, Continuous Univariate Distributions, vol. 1, " +
			"2nd ed., Wiley 1994, ch. 16",
	},
	{
		Name: "von Mises", Support: Turn,
		Arguments: []Argument{
			{Name: "direction", Greek: "mu", Support: Reals, Doc: "mean direction, in radians"},
			{Name: "concentration", Greek: "kappa", Support: Positives, Doc: "0 for all directions alike; when large, 1 / sd²"},
		},
		Predicted: 0, Link: Identity, Centred: true,
		Natural: kernel.VonMises, Linked: kernel.VonMises,
		Quantile: vonMisesQuantile, CDF: vonMisesCDF,
		Mean: func(a []float64) float64 { return a[0] }, SD: vonMisesSD,
		Doc:    "a direction or a time of day, as an angle in radians",
		Source: "K. V. Mardia & P. E. Jupp, Directional Statistics, Wiley 2000, section 3.5.4",
	},
	{
		Name: "gamma", Support: Positives,
		Arguments: []Argument{
			{Name: "mean", Greek: "mu", Support: Positives, Doc: "expected value"},
			{Name: "shape", Greek: "shape", Support: Positives, Doc: "the variance is mean² / shape"},
		},
		Predicted: 0, Link: Log, Centred: true,
		Natural: kernel.Gamma, Linked: kernel.GammaLog,
		Quantile: gammaQuantile, CDF: gammaCDF,
		Mean: func(a []float64) float64 { return a[0] }, SD: gammaSD,
		Doc:    "a positive amount whose spread grows with its mean",
		Source: "P. McCullagh & J. A. Nelder, Generalized Linear Models, 2nd ed., Chapman & Hall 1989, ch. 8",
	},
	{
		Name: "log-normal", Support: Positives,
		Arguments: []Argument{
			{Name: "median", Greek: "mu", Support: Positives, Doc: "half of the values lie below; its log is the mean of the logs"},
			{Name: "sd of logs", Also: []string{"sd"}, Greek: "sigma", Support: Positives, Doc: "sd of the logs"},
		},
		Predicted: 0, Link: Log,
		Natural: kernel.LogNormal, Linked: kernel.LogNormalLog,
		Quantile: logNormalQuantile, CDF: logNormalCDF, Mean: logNormalMean, SD: logNormalSD,
		Doc: "a positive amount made by multiplying many influences",
		Source: "N. L. Johnson, S. Kotz & N. Balakrishnan, Continuous Univariate Distributions, vol. 1, " +
			"2nd ed., Wiley 1994, ch. 14",
	},
	{
		Name: "Weibull", Support: Positives,
		Arguments: []Argument{
			{Name: "scale", Greek: "lambda", Support: Positives, Doc: "63 % of the values lie below"},
			{Name: "shape", Greek: "shape", Support: Positives, Doc: "above 1 things wear out, below 1 those that last go on lasting"},
		},
		Predicted: 0, Link: Log,
		Natural: kernel.Weibull, Linked: kernel.WeibullLog,
		Quantile: weibullQuantile, CDF: weibullCDF, Mean: weibullMean, SD: weibullSD,
		Doc: "a time until something fails or happens, whose risk rises or falls with age",
		Source: "N. L. Johnson, S. Kotz & N. Balakrishnan, Continuous Univariate Distributions, vol. 1, " +
			"2nd ed., Wiley 1994, ch. 21",
	},
	{
		Name: "inverse gamma", Support: Positives,
		Arguments: []Argument{
			{Name: "scale", Greek: "sigma", Support: Positives, Doc: "the mean is scale / (shape - 1)"},
			{Name: "shape", Greek: "shape", Support: Positives, Doc: "the smaller, the heavier the tail"},
		},
		Predicted: -1,
		Natural:   kernel.InverseGamma,
		Quantile:  inverseGammaQuantile, CDF: inverseGammaCDF, Mean: inverseGammaMean, SD: inverseGammaSD,
		Doc: "prior of a variance or of a length scale that must not be near zero",
		Source: "N. L. Johnson, S. Kotz & N. Balakrishnan, Continuous Univariate Distributions, vol. 1, " +
			"2nd ed., Wiley 1994, ch. 17",
	},
	{
		Name: "Pareto", Support: Above,
		Arguments: []Argument{
			{Name: "minimum", Greek: "low", Support: Positives, Doc: "smallest possible value"},
			{Name: "shape", Greek: "shape", Support: Positives, Doc: "the smaller, the heavier the tail"},
		},
		Predicted: -1,
		Natural:   kernel.Pareto,
		Quantile:  paretoQuantile, CDF: paretoCDF, Mean: paretoMean, SD: paretoSD,
		Doc: "a size above a known minimum, with a few very large ones",
		Source: "N. L. Johnson, S. Kotz & N. Balakrishnan, Continuous Univariate Distributions, vol. 1, " +
			"2nd ed., Wiley 1994, ch. 20",
	},
	{
		Name: "exponential", Support: NonNegatives,
		Arguments: []Argument{
			{Name: "mean", Greek: "mu", Support: Positives, Doc: "expected value; 1 / rate"},
		},
		Predicted: 0, Link: Log, Centred: true,
		Natural: kernel.Exponential, Linked: kernel.ExponentialLog,
		Quantile: exponentialQuantile, CDF: exponentialCDF,
		Mean: func(a []float64) float64 { return a[0] },
		SD:   func(a []float64) float64 { return a[0] },
		Doc:  "a waiting time when nothing ages; as a prior, a spread that may well be near zero",
		Source: "N. L. Johnson, S. Kotz & N. Balakrishnan, Continuous Univariate Distributions, vol. 1, " +
			"2nd ed., Wiley 1994, ch. 19",
	},
	{
		Name: "half-normal", Support: NonNegatives,
		Arguments: []Argument{
			{Name: "scale", Also: []string{"sd"}, Greek: "sigma", Support: Positives, Doc: "sd of the normal that is folded at zero"},
		},
		Predicted: -1,
		Natural:   kernel.HalfNormal,
		Quantile:  halfNormalQuantile, CDF: halfNormalCDF, Mean: halfNormalMean, SD: halfNormalSD,
		Doc:    "prior of a spread: near zero is plausible, beyond twice the scale is not",
		Source: "F. C. Leone, L. S. Nelson & R. B. Nottingham, The folded normal distribution, Technometrics 3 (1961)",
	},
	{
		Name: "half-t", Support: NonNegatives,
		Arguments: []Argument{
			{Name: "scale", Also: []string{"sd"}, Greek: "sigma", Support: Positives, Doc: "scale of the Student t that is folded at zero"},
			{Name: "degrees of freedom", Also: []string{"df"}, Greek: "nu", Support: Positives, Doc: "the fewer, the heavier the tail"},
		},
		Predicted: -1,
		Natural:   kernel.HalfT,
		Quantile:  halfTQuantile, CDF: halfTCDF, Mean: halfTMean, SD: halfTSD,
		Doc:    "prior of a spread that may turn out much larger than expected",
		Source: "A. Gelman, Prior distributions for variance parameters in hierarchical models, Bayesian Analysis 1 (2006)",
	},
	{
		Name: "half-Cauchy", Support: NonNegatives,
		Arguments: []Argument{
			{Name: "scale", Greek: "sigma", Support: Positives, Doc: "its median"},
		},
		Predicted: -1,
		Natural:   kernel.HalfCauchy,
		Quantile:  halfCauchyQuantile, CDF: halfCauchyCDF, Mean: endless, SD: none,
		Doc:    "prior of a spread that may be near zero or far larger than expected",
		Source: "N. G. Polson & J. G. Scott, On the half-Cauchy prior for a global scale parameter, Bayesian Analysis 7 (2012)",
	},
	{
		Name: "beta", Support: Unit,
		Arguments: []Argument{
			{Name: "mean", Greek: "mu", Support: Unit, Doc: "expected value"},
			{Name: "precision", Greek: "kappa", Support: Positives, Doc: "the variance is mean (1 - mean) / (1 + precision)"},
		},
		Predicted: 0, Link: Logit, Centred: true,
		Natural: kernel.Beta, Linked: kernel.BetaLogit,
		Quantile: betaQuantile, CDF: betaCDF,
		Mean: func(a []float64) float64 { return a[0] }, SD: betaSD,
		Doc:    "a proportion strictly between 0 and 1 that is not a count out of trials",
		Source: "S. Ferrari & F. Cribari-Neto, Beta regression for modelling rates and proportions, J. Applied Statistics 31 (2004)",
	},
	{
		Name: "uniform", Support: Between,
		Arguments: []Argument{
			{Name: "low", Greek: "low", Support: Reals, Doc: "lower end"},
			{Name: "high", Greek: "high", Support: Reals, Doc: "upper end"},
		},
		Predicted: -1,
		Natural:   kernel.Uniform,
		Quantile:  uniformQuantile, CDF: uniformCDF, Mean: uniformMean, SD: uniformSD,
		Doc: "prior of a quantity with hard limits, any value between them as plausible as another",
		Source: "N. L. Johnson, S. Kotz & N. Balakrishnan, Continuous Univariate Distributions, vol. 2, " +
			"2nd ed., Wiley 1995, ch. 26",
	},
	{
		Name: "triangular", Support: Between,
		Arguments: []Argument{
			{Name: "low", Greek: "low", Support: Reals, Doc: "lower end"},
			{Name: "high", Greek: "high", Support: Reals, Doc: "upper end"},
			{Name: "mode", Also: []string{"likely"}, Greek: "mode", Support: Reals, Doc: "most likely value"},
		},
		Predicted: -1,
		Natural:   kernel.Triangular,
		Quantile:  triangularQuantile, CDF: triangularCDF, Mean: triangularMean, SD: triangularSD,
		Doc:    "prior of a quantity with hard limits and a most likely value",
		Source: "S. Kotz & J. R. van Dorp, Beyond Beta, World Scientific 2004, ch. 1",
	},
	{
		Name: "negative binomial", Support: Counts, Discrete: true,
		Arguments: []Argument{
			{Name: "mean", Also: []string{"rate"}, Greek: "lambda", Support: Positives, Doc: "expected count"},
			{Name: "overdispersion", Greek: "k", Support: Positives, Doc: "the variance is mean + mean² / k: the smaller k, the more clumped"},
		},
		Predicted: 0, Link: Log, Centred: true,
		Natural: kernel.NegativeBinomial, Linked: kernel.NegativeBinomialLog,
		Quantile: negBinomialQuantile, CDF: negBinomialCDF,
		Mean: func(a []float64) float64 { return a[0] }, SD: negBinomialSD,
		Doc:    "a count that varies more than chance alone would make it",
		Source: "R. A. Fisher, The negative binomial distribution, Annals of Eugenics 11 (1941)",
	},
	{
		Name: "Poisson", Support: Counts, Discrete: true,
		Arguments: []Argument{
			{Name: "rate", Also: []string{"mean"}, Greek: "lambda", Support: Positives, Doc: "expected count"},
		},
		Predicted: 0, Link: Log, Centred: true,
		Natural: kernel.Poisson, Linked: kernel.PoissonLog,
		Quantile: poissonQuantile, CDF: poissonCDF,
		Mean: func(a []float64) float64 { return a[0] }, SD: poissonSD,
		Doc: "a count of events that happen independently at one rate",
		Source: "N. L. Johnson, A. W. Kemp & S. Kotz, Univariate Discrete Distributions, 3rd ed., Wiley 2005, ch. 4; " +
			"C. Loader, Fast and accurate computation of binomial probabilities, 2000",
	},
	{
		Name: "geometric", Support: Counts, Discrete: true,
		Arguments: []Argument{
			{Name: "mean", Greek: "lambda", Support: Positives, Doc: "expected number of failures; the chance of success is 1 / (1 + mean)"},
		},
		Predicted: 0, Link: Log, Centred: true,
		Natural: kernel.Geometric, Linked: kernel.GeometricLog,
		Quantile: geometricQuantile, CDF: geometricCDF,
		Mean: func(a []float64) float64 { return a[0] }, SD: geometricSD,
		Doc:    "a number of failures before the first success",
		Source: "N. L. Johnson, A. W. Kemp & S. Kotz, Univariate Discrete Distributions, 3rd ed., Wiley 2005, ch. 5",
	},
	{
		Name: "binomial", Support: UpTo, Discrete: true,
		Arguments: []Argument{
			{Name: "probability", Greek: "p", Support: Unit, Doc: "chance of success in one trial"},
			{Name: "trials", Greek: "n", Support: Counts, Given: true, Doc: "number of trials, known"},
		},
		Predicted: 0, Link: Logit, Centred: true,
		Natural: kernel.Binomial, Linked: kernel.BinomialLogit,
		Quantile: binomialQuantile, CDF: binomialCDF, Mean: binomialMean, SD: binomialSD,
		Doc: "a number of successes out of a known number of trials",
		Source: "N. L. Johnson, A. W. Kemp & S. Kotz, Univariate Discrete Distributions, 3rd ed., Wiley 2005, ch. 3; " +
			"C. Loader, Fast and accurate computation of binomial probabilities, 2000",
	},
	{
		Name: "beta-binomial", Support: UpTo, Discrete: true,
		Arguments: []Argument{
			{Name: "probability", Also: []string{"mean"}, Greek: "p", Support: Unit, Doc: "mean chance of success in one trial"},
			{Name: "precision", Greek: "kappa", Support: Positives, Doc: "how alike the chances of different rows are: at infinity a binomial"},
			{Name: "trials", Greek: "n", Support: Counts, Given: true, Doc: "number of trials, known"},
		},
		Predicted: 0, Link: Logit, Centred: true,
		Natural: kernel.BetaBinomial, Linked: kernel.BetaBinomialLogit,
		Quantile: betaBinomialQuantile, CDF: betaBinomialCDF, Mean: betaBinomialMean, SD: betaBinomialSD,
		Doc:    "a number of successes out of a known number of trials, when rows differ more than chance alone would make them",
		Source: "J. G. Skellam, A probability distribution derived from the binomial distribution, J. Royal Statistical Society B 10 (1948)",
	},
	{
		Name: "Bernoulli", Support: ZeroOne, Discrete: true,
		Arguments: []Argument{
			{Name: "probability", Greek: "p", Support: Unit, Doc: "chance of a 1"},
		},
		Predicted: 0, Link: Logit, Centred: true,
		Natural: kernel.Bernoulli, Linked: kernel.BernoulliLogit,
		Quantile: bernoulliQuantile, CDF: bernoulliCDF,
		Mean: func(a []float64) float64 { return a[0] }, SD: bernoulliSD,
		Doc:    "yes or no",
		Source: "D. R. Cox, The regression analysis of binary sequences, J. Royal Statistical Society B 20 (1958)",
	},
	{
		Name: "categorical", Support: Levels, Discrete: true,
		Arguments: []Argument{
			{Name: "probabilities", Greek: "p", Support: Unit, Doc: "one for each level, with sum 1"},
		},
		Predicted: 0, Link: Softmax,
		Natural: kernel.Categorical, Linked: kernel.CategoricalSoftmax,
		Quantile: levelQuantile, CDF: levelCDF, Mean: levelMean, SD: levelSD,
		Doc:    "one of several levels without an order",
		Source: "A. Agresti, Categorical Data Analysis, 3rd ed., Wiley 2013, ch. 8",
	},
	{
		Name: "ordered", Support: Levels, Discrete: true,
		Arguments: []Argument{
			{Name: "predictor", Greek: "eta", Support: Reals, Doc: "raises the chance of the higher levels"},
			{Name: "cut points", Greek: "cut", Support: Reals, Doc: "log odds of staying below each step when the predictor is 0, ascending"},
		},
		Predicted: 0, Link: Cumulate,
		Natural: kernel.Ordered, Linked: kernel.OrderedLogit,
		Quantile: levelQuantile, CDF: levelCDF, Mean: levelMean, SD: levelSD,
		Doc:    "one of several levels in order, such as answers from never to always",
		Source: "P. McCullagh, Regression models for ordinal data, J. Royal Statistical Society B 42 (1980)",
	},
	{
		Name: "ordered probit", Support: Levels, Discrete: true,
		Arguments: []Argument{
			{Name: "predictor", Greek: "eta", Support: Reals, Doc: "raises the chance of the higher levels, in sds of what lies behind them"},
			{Name: "cut points", Greek: "cut", Support: Reals, Doc: "where each step lies when the predictor is 0, ascending"},
		},
		Predicted: 0, Link: Probit,
		Natural: kernel.Ordered, Linked: kernel.OrderedProbit,
		Quantile: levelQuantile, CDF: levelCDF, Mean: levelMean, SD: levelSD,
		Doc:    "one of several levels in order, read as steps of a normal quantity that was not seen",
		Source: "J. Aitchison & S. D. Silvey, The generalization of probit analysis to the case of multiple responses, Biometrika 44 (1957)",
	},
})
