# Makes baseline-regression.json: a negative-binomial regression (MASS::glm.nb) of simulated hourly counts, and
# maximum-likelihood dispersions (MASS::theta.ml). Run from this folder: Rscript make-baseline-regression.R
library(MASS)
set.seed(41)
weeks <- 30
first <- 17167 # local day 2017-01-01 counted from 1970-01-01
hours <- weeks * 168
local <- first * 24 + 0:(hours - 1)
how <- (local + 72) %% 168
day <- local %/% 24
angle <- 2 * pi * day / 365.2425
trend <- (day - first) / 365.2425
holidays <- c(17181, 17216, 17258, 17310, 17351)
holiday <- as.numeric(day %in% holidays)
exposure <- rep(1, hours)
exposure[500 + 1] <- 0 # R counts from 1
exposure[2000 + 1] <- 2
mean <- exposure * exp(1.6 + 0.6 * sin(2 * pi * (how %% 24 - 9) / 24) + 0.1 * (how < 24) + 0.1 * trend + 0.05 * sin(angle) - 0.2 * holiday)
y <- rnbinom(hours, size = 12, mu = mean)
d <- data.frame(y, how = factor(how), trend, s1 = sin(angle), c1 = cos(angle), s2 = sin(2 * angle), c2 = cos(2 * angle), holiday, exposure)
fit <- glm.nb(y ~ how + trend + s1 + c1 + s2 + c2 + holiday + offset(log(exposure)), data = d[d$exposure > 0, ],
  control = glm.control(epsilon = 1e-12, maxit = 100))
fitted <- rep(0, hours)
fitted[d$exposure > 0] <- fitted(fit)
number <- function(x) paste0("[", paste(format(x, digits = 12, trim = TRUE, scientific = FALSE), collapse = ","), "]")
means <- rep(c(4, 9, 15.5, 40), 200)
counts <- rnbinom(800, size = 1 / 0.06, mu = means)
phi <- 1 / as.numeric(theta.ml(counts, means, limit = 200, eps = 1e-10))
writeLines(c("{",
  sprintf("\"meta\": {\"R\": \"%s\", \"MASS\": \"%s\"},", getRversion(), packageVersion("MASS")),
  sprintf("\"firstLocalHour\": %d,", first * 24),
  sprintf("\"holidays\": %s,", number(holidays)),
  sprintf("\"exposure\": {\"500\": 0, \"2000\": 2},"),
  sprintf("\"counts\": %s,", number(y)),
  sprintf("\"phi\": %s,", format(1 / fit$theta, digits = 12)),
  sprintf("\"fitted\": %s,", number(fitted)),
  sprintf("\"dispersion\": {\"means\": [4, 9, 15.5, 40], \"counts\": %s, \"phi\": %s}", number(counts), format(phi, digits = 12)),
  "}"), "baseline-regression.json")
