"""The published sources of the methods, each under the short key that output and pages use."""

from __future__ import annotations

from dataclasses import dataclass

__all__ = ["Source", "sources"]


@dataclass(frozen=True, slots=True)
class Source:
    """One publication: a short key "Author year", the citation, and what netsize takes from it."""

    key: str
    citation: str
    used_for: str

    def to_dict(self) -> dict[str, str]:
        """The three fields as plain text."""
        return {"key": self.key, "citation": self.citation, "used_for": self.used_for}


def sources() -> tuple[Source, ...]:
    """Every source, in alphabetical order."""
    return tuple(sorted(_SOURCES, key=lambda s: s.key))


_SOURCES = (
    Source(
        "Hedges 1981",
        "Hedges, L. V. (1981). Distribution theory for Glass's estimator of effect size and "
        "related estimators. Journal of Educational Statistics, 6, 107-128.",
        "Hedges' g: the exact small-sample factor J(m).",
    ),
    Source(
        "DerSimonian & Laird 1986",
        "DerSimonian, R., & Laird, N. (1986). Meta-analysis in clinical trials. Controlled "
        "Clinical Trials, 7, 177-188.",
        "Moment estimator of between-study variance.",
    ),
    Source(
        "Paule & Mandel 1982",
        "Paule, R. C., & Mandel, J. (1982). Consensus values and weighting factors. Journal "
        "of Research of the National Bureau of Standards, 87, 377-385.",
        "Between-study variance from the generalised Q.",
    ),
    Source(
        "Raudenbush 2009",
        "Raudenbush, S. W. (2009). Analyzing effect sizes: Random-effects models. In H. "
        "Cooper, L. V. Hedges & J. C. Valentine (Eds.), The handbook of research synthesis "
        "and meta-analysis (2nd ed., pp. 295-315). Russell Sage Foundation.",
        "Likelihood and restricted likelihood for the random-effects model.",
    ),
    Source(
        "Sidik & Jonkman 2005",
        "Sidik, K., & Jonkman, J. N. (2005). Simple heterogeneity variance estimation for "
        "meta-analysis. Journal of the Royal Statistical Society, Series C, 54, 367-384.",
        "Between-study variance from variance ratios.",
    ),
    Source(
        "Hedges & Olkin 1985",
        "Hedges, L. V., & Olkin, I. (1985). Statistical methods for meta-analysis. Academic Press.",
        "Unweighted moment estimator of between-study variance.",
    ),
    Source(
        "Viechtbauer 2007",
        "Viechtbauer, W. (2007). Confidence intervals for the amount of heterogeneity in "
        "meta-analysis. Statistics in Medicine, 26, 37-52.",
        "Q-profile interval of the between-study variance.",
    ),
    Source(
        "Hartung & Knapp 2001",
        "Hartung, J., & Knapp, G. (2001). A refined method for the meta-analysis of "
        "controlled clinical trials with binary outcome. Statistics in Medicine, 20, "
        "3875-3889.",
        "t interval of the random-effects mean.",
    ),
    Source(
        "Sidik & Jonkman 2002",
        "Sidik, K., & Jonkman, J. N. (2002). A simple confidence interval for meta-analysis. "
        "Statistics in Medicine, 21, 3153-3159.",
        "t interval of the random-effects mean.",
    ),
    Source(
        "Higgins & Thompson 2002",
        "Higgins, J. P. T., & Thompson, S. G. (2002). Quantifying heterogeneity in a meta-"
        "analysis. Statistics in Medicine, 21, 1539-1558.",
        "I² and H².",
    ),
    Source(
        "Higgins et al. 2009",
        "Higgins, J. P. T., Thompson, S. G., & Spiegelhalter, D. J. (2009). A re-evaluation "
        "of random-effects meta-analysis. Journal of the Royal Statistical Society, Series A,"
        " 172, 137-159.",
        "Prediction interval for the effect of a new study.",
    ),
    Source(
        "Borenstein et al. 2009",
        "Borenstein, M., Hedges, L. V., Higgins, J. P. T., & Rothstein, H. R. (2009). "
        "Introduction to meta-analysis. Wiley.",
        "Composites of several results from one sample.",
    ),
    Source(
        "Liang & Zeger 1986",
        "Liang, K.-Y., & Zeger, S. L. (1986). Longitudinal data analysis using generalized "
        "linear models. Biometrika, 73, 13-22.",
        "Errors clustered by sample.",
    ),
    Source(
        "Stanley & Doucouliagos 2014",
        "Stanley, T. D., & Doucouliagos, H. (2014). Meta-regression approximations to reduce "
        "publication selection bias. Research Synthesis Methods, 5, 60-78.",
        "PET, PEESE and the rule that chooses between them.",
    ),
    Source(
        "Stanley 2017",
        "Stanley, T. D. (2017). Limitations of PET-PEESE and other meta-analysis methods. "
        "Social Psychological and Personality Science, 8, 581-591.",
        "When regressions on precision mislead.",
    ),
    Source(
        "Pustejovsky & Rodgers 2019",
        "Pustejovsky, J. E., & Rodgers, M. A. (2019). Testing for funnel plot asymmetry of "
        "standardized mean differences. Research Synthesis Methods, 10, 57-71.",
        "Effect-free standard errors in small-study methods.",
    ),
    Source(
        "Duval & Tweedie 2000a",
        'Duval, S., & Tweedie, R. (2000). A nonparametric "trim and fill" method of '
        "accounting for publication bias in meta-analysis. Journal of the American "
        "Statistical Association, 95, 89-98.",
        "Trim and fill: estimators L0 and R0.",
    ),
    Source(
        "Duval & Tweedie 2000b",
        "Duval, S., & Tweedie, R. (2000). Trim and fill: A simple funnel-plot-based method of"
        " testing and adjusting for publication bias in meta-analysis. Biometrics, 56, "
        "455-463.",
        "Trim and fill: the algorithm.",
    ),
    Source(
        "Stanley et al. 2017",
        "Stanley, T. D., Doucouliagos, H., & Ioannidis, J. P. A. (2017). Finding the power to"
        " reduce publication bias. Statistics in Medicine, 36, 1580-1598.",
        "Unrestricted weighted least squares; its adequately powered subset.",
    ),
    Source(
        "Hedges 1992",
        "Hedges, L. V. (1992). Modeling publication selection effects in meta-analysis. "
        "Statistical Science, 7, 246-255.",
        "Step-function selection model.",
    ),
    Source(
        "Vevea & Hedges 1995",
        "Vevea, J. L., & Hedges, L. V. (1995). A general linear model for estimating effect "
        "size in the presence of publication bias. Psychometrika, 60, 419-435.",
        "Step-function selection model by maximum likelihood and its likelihood-ratio test.",
    ),
    Source(
        "Rücker et al. 2011",
        "Rücker, G., Schwarzer, G., Carpenter, J. R., Binder, H., & Schumacher, M. (2011). "
        "Treatment-effect estimates adjusted for small-study effects via a limit meta-"
        "analysis. Biostatistics, 12, 122-142.",
        "Limit meta-analysis.",
    ),
    Source(
        "Hedges 1984",
        "Hedges, L. V. (1984). Estimation of effect size under nonrandom sampling: The "
        "effects of censoring studies yielding statistically insignificant mean differences. "
        "Journal of Educational Statistics, 9, 61-85.",
        "Likelihood conditional on significance.",
    ),
    Source(
        "Simonsohn et al. 2014",
        "Simonsohn, U., Nelson, L. D., & Simmons, J. P. (2014). P-curve: A key to the file-"
        "drawer. Journal of Experimental Psychology: General, 143, 534-547.",
        "Right skew and flatness of significant p-values.",
    ),
    Source(
        "van Assen et al. 2015",
        "van Assen, M. A. L. M., van Aert, R. C. M., & Wicherts, J. M. (2015). Meta-analysis "
        "using effect size distributions of only statistically significant studies. "
        "Psychological Methods, 20, 293-309.",
        "Uniform conditional p-values; estimates against the prediction shown as 0.",
    ),
    Source(
        "Egger et al. 1997",
        "Egger, M., Davey Smith, G., Schneider, M., & Minder, C. (1997). Bias in meta-"
        "analysis detected by a simple, graphical test. BMJ, 315, 629-634.",
        "Regression test of asymmetry.",
    ),
    Source(
        "Begg & Mazumdar 1994",
        "Begg, C. B., & Mazumdar, M. (1994). Operating characteristics of a rank correlation "
        "test for publication bias. Biometrics, 50, 1088-1101.",
        "Rank test of asymmetry.",
    ),
    Source(
        "Kendall 1970",
        "Kendall, M. G. (1970). Rank correlation methods (4th ed.). Griffin.",
        "Variance of the rank correlation with ties.",
    ),
    Source(
        "Sterne et al. 2000",
        "Sterne, J. A. C., Gavaghan, D., & Egger, M. (2000). Publication and related bias in "
        "meta-analysis: Power of statistical tests and prevalence in the literature. Journal "
        "of Clinical Epidemiology, 53, 1119-1129.",
        "What tests of asymmetry can show at a given number of results.",
    ),
    Source(
        "Sterne et al. 2011",
        "Sterne, J. A. C., Sutton, A. J., Ioannidis, J. P. A., et al. (2011). Recommendations"
        " for examining and interpreting funnel plot asymmetry in meta-analyses of randomised"
        " controlled trials. BMJ, 343, d4002.",
        "Ten results as the least for tests of asymmetry.",
    ),
    Source(
        "Ioannidis & Trikalinos 2007",
        "Ioannidis, J. P. A., & Trikalinos, T. A. (2007). An exploratory test for an excess "
        "of significant findings. Clinical Trials, 4, 245-253.",
        "Excess of significant results.",
    ),
    Source(
        "Belsley et al. 1980",
        "Belsley, D. A., Kuh, E., & Welsch, R. E. (1980). Regression diagnostics. Wiley.",
        "Shift of the mean when one sample is left out.",
    ),
    Source(
        "Cohen 1988",
        "Cohen, J. (1988). Statistical power analysis for the behavioral sciences (2nd ed.). "
        "Erlbaum.",
        "Effect sizes d, f, f², h, q, w and the noncentralities of their tests.",
    ),
    Source(
        "Welch 1938",
        "Welch, B. L. (1938). The significance of the difference between two means when the "
        "population variances are unequal. Biometrika, 29, 350-362.",
        "Two groups with unequal variances.",
    ),
    Source(
        "Hotelling 1953",
        "Hotelling, H. (1953). New light on the correlation coefficient and its transforms. "
        "Journal of the Royal Statistical Society B, 15, 193-232.",
        "Exact distribution of a correlation.",
    ),
    Source(
        "Abramowitz & Stegun 1964",
        "Abramowitz, M., & Stegun, I. A. (Eds.) (1964). Handbook of mathematical functions. "
        "National Bureau of Standards.",
        "Normal approximation to noncentral t, where searches start.",
    ),
    Source(
        "Muller & Barton 1989",
        "Muller, K. E., & Barton, C. N. (1989). Approximate power for repeated-measures ANOVA"
        " lacking sphericity. Journal of the American Statistical Association, 84, 549-555.",
        "Power of repeated measures without sphericity.",
    ),
    Source(
        "Fleiss et al. 2003",
        "Fleiss, J. L., Levin, B., & Paik, M. C. (2003). Statistical methods for rates and "
        "proportions (3rd ed.). Wiley.",
        "Two proportions, with and without continuity correction.",
    ),
    Source(
        "Schuirmann 1987",
        "Schuirmann, D. J. (1987). A comparison of the two one-sided tests procedure and the "
        "power approach for assessing the equivalence of average bioavailability. Journal of "
        "Pharmacokinetics and Biopharmaceutics, 15, 657-680.",
        "Equivalence by two one-sided tests.",
    ),
    Source(
        "Owen 1965",
        "Owen, D. B. (1965). A special case of a bivariate non-central t-distribution. "
        "Biometrika, 52, 437-446.",
        "Exact power of two one-sided tests.",
    ),
    Source(
        "Dunn 1961",
        "Dunn, O. J. (1961). Multiple comparisons among means. Journal of the American "
        "Statistical Association, 56, 52-64.",
        "Several tests sharing α (Bonferroni).",
    ),
    Source(
        "Kish 1965",
        "Kish, L. (1965). Survey sampling. Wiley.",
        "Design effect of clusters.",
    ),
    Source(
        "Donner & Klar 2000",
        "Donner, A., & Klar, N. (2000). Design and analysis of cluster randomization trials "
        "in health research. Arnold.",
        "Sizes of studies that allocate whole clusters.",
    ),
    Source(
        "Borm et al. 2007",
        "Borm, G. F., Fransen, J., & Lemmens, W. A. J. G. (2007). A simple sample size "
        "formula for analysis of covariance in randomized clinical trials. Journal of "
        "Clinical Epidemiology, 60, 1234-1238.",
        "Participants saved by a covariate.",
    ),
    Source(
        "O'Hagan et al. 2005",
        "O'Hagan, A., Stevens, J. W., & Campbell, M. J. (2005). Assurance in clinical trial "
        "design. Pharmaceutical Statistics, 4, 187-201.",
        "Expected power under an uncertain effect.",
    ),
    Source(
        "Gelman & Carlin 2014",
        "Gelman, A., & Carlin, J. (2014). Beyond power calculations: Assessing type S (sign) "
        "and type M (magnitude) errors. Perspectives on Psychological Science, 9, 641-651.",
        "Sign error and exaggeration of significant results.",
    ),
    Source(
        "Kelley & Rausch 2006",
        "Kelley, K., & Rausch, J. R. (2006). Sample size planning for the standardized mean "
        "difference: Accuracy in parameter estimation via narrow confidence intervals. "
        "Psychological Methods, 11, 363-385.",
        "Planning for the width of the interval.",
    ),
    Source(
        "Steiger & Fouladi 1997",
        "Steiger, J. H., & Fouladi, R. T. (1997). Noncentrality interval estimation and the "
        "evaluation of statistical models. In L. L. Harlow, S. A. Mulaik, & J. H. Steiger "
        "(Eds.), What if there were no significance tests? (pp. 221-257). Erlbaum.",
        "Exact intervals by inverting noncentral distributions.",
    ),
    Source(
        "Steiger 2004",
        "Steiger, J. H. (2004). Beyond the F test: Effect size confidence intervals and tests"
        " of close fit in the analysis of variance and contrast analysis. Psychological "
        "Methods, 9, 164-182.",
        "Exact intervals of f and f².",
    ),
    Source(
        "Bakker & Wicherts 2011",
        "Bakker, M., & Wicherts, J. M. (2011). The (mis)reporting of statistical results in "
        "psychology journals. Behavior Research Methods, 43, 666-678.",
        "Checking printed p-values against their statistics within rounding.",
    ),
    Source(
        "Hedges 1983",
        "Hedges, L. V. (1983). A random effects model for effect sizes. Psychological "
        "Bulletin, 93, 388-395.",
        "The unbiased variance of Hedges' g.",
    ),
    Source(
        "Olkin & Pratt 1958",
        "Olkin, I., & Pratt, J. W. (1958). Unbiased estimation of certain correlation "
        "coefficients. Annals of Mathematical Statistics, 29, 201-211.",
        "The unbiased correlation.",
    ),
    Source(
        "Kelley 1935",
        "Kelley, T. L. (1935). An unbiased correlation ratio measure. Proceedings of the "
        "National Academy of Sciences, 21, 554-559.",
        "ε², the nearly unbiased share of variance.",
    ),
    Source(
        "Hays 1963",
        "Hays, W. L. (1963). Statistics for psychologists. New York: Holt, Rinehart & Winston.",
        "ω², the nearly unbiased share of variance.",
    ),
    Source(
        "Okada 2017",
        "Okada, K. (2017). Negative estimate of variance-accounted-for effect size: How often"
        " it is obtained, and what happens if it is treated as zero. Behavior Research "
        "Methods, 49, 979-987.",
        "Keeping negative ε², ω² and f² before pooling.",
    ),
    Source(
        "Johnson, Kotz & Balakrishnan 1995",
        "Johnson, N. L., Kotz, S., & Balakrishnan, N. (1995). Continuous univariate "
        "distributions (2nd ed., Vol. 2). New York: Wiley.",
        "Noncentral t, F and chi-square; moments behind the unbiased f².",
    ),
    Source(
        "Hasselblad & Hedges 1995",
        "Hasselblad, V., & Hedges, L. V. (1995). Meta-analysis of screening and diagnostic "
        "tests. Psychological Bulletin, 117, 167-178.",
        "Odds ratio to d by the logistic law.",
    ),
    Source(
        "Chinn 2000",
        "Chinn, S. (2000). A simple method for converting an odds ratio to effect size for "
        "use in meta-analysis. Statistics in Medicine, 19, 3127-3131.",
        "Odds ratio to d by the logistic law.",
    ),
    Source(
        "Woolf 1955",
        "Woolf, B. (1955). On estimating the relation between blood group and disease. Annals"
        " of Human Genetics, 19, 251-253.",
        "The variance of a log odds ratio.",
    ),
    Source(
        "Haldane 1956",
        "Haldane, J. B. S. (1956). The estimation and significance of the logarithm of a "
        "ratio of frequencies. Annals of Human Genetics, 20, 309-311.",
        "Half an event added to each cell of a 2×2 table with an empty one.",
    ),
    Source(
        "Rosenthal & Rubin 2003",
        "Rosenthal, R., & Rubin, D. B. (2003). r(equivalent): A simple effect size indicator."
        " Psychological Methods, 8, 492-496.",
        "Effect sizes from p and n alone.",
    ),
    Source(
        "Chandrupatla 1997",
        "Chandrupatla, T. R. (1997). A new hybrid quadratic/bisection algorithm for finding "
        "the zero of a nonlinear function without using derivatives. Advances in Engineering "
        "Software, 28, 145-149.",
        "Roots behind exact intervals.",
    ),
    Source(
        "Perugini et al. 2014",
        "Perugini, M., Gallucci, M., & Costantini, G. (2014). Safeguard power as a protection "
        "against imprecise power estimates. Perspectives on Psychological Science, 9, 319-332.",
        "Planning for a lower limit of the pooled mean.",
    ),
    Source(
        "Taylor & Muller 1996",
        "Taylor, D. J., & Muller, K. E. (1996). Bias in linear model power and sample size "
        "calculation due to estimating noncentrality. Communications in Statistics - Theory and "
        "Methods, 25, 1595-1610.",
        "Bound of one study's effect given that it is significant.",
    ),
    Source(
        "Anderson et al. 2017",
        "Anderson, S. F., Kelley, K., & Maxwell, S. E. (2017). Sample-size planning for more "
        "accurate statistical power: A method adjusting sample effect sizes for publication bias "
        "and uncertainty. Psychological Science, 28, 1547-1562.",
        "Planning from the bound of one significant study.",
    ),
    Source(
        "Peters et al. 2008",
        "Peters, J. L., Sutton, A. J., Jones, D. R., Abrams, K. R., & Rushton, L. (2008). "
        "Contour-enhanced meta-analysis funnel plots help distinguish publication bias from other "
        "causes of asymmetry. Journal of Clinical Epidemiology, 61, 991-996.",
        "Regions of significance in the funnel plot.",
    ),
)
