/** What the method rests on, as cited on the page. */
export const sources: readonly string[] = [
  'Garwood, F. (1936). Fiducial limits for the Poisson distribution. Biometrika 28. Exact limits of a raw rate.',
  'Lewis, P. A. W. & Shedler, G. S. (1979). Simulation of nonhomogeneous Poisson processes by thinning. Naval Research Logistics Quarterly 26.',
  'Eick, S. G., Massey, W. A. & Whitt, W. (1993). The physics of the M(t)/G/∞ queue. Operations Research 41. The exact law of need.',
  'Brown, L. et al. (2005). Statistical analysis of a telephone call center. Journal of the American Statistical Association 100. Tests of arrivals.',
  'Kim, S.-H. & Whitt, W. (2014). Are call center and hospital arrivals well modeled by nonhomogeneous Poisson processes? Manufacturing & Service Operations Management 16.',
  'Gneiting, T. & Raftery, A. E. (2007). Strictly proper scoring rules, prediction, and estimation. Journal of the American Statistical Association 102.',
  'Czado, C., Gneiting, T. & Held, L. (2009). Predictive model assessment for count data. Biometrics 65.',
];
