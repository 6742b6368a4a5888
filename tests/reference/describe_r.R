# Figures of R for the rooms of core/describe, written to describe_r.json beside this file.
# Run: Rscript tests/reference/describe_r.R   (R 4.2, package e1071)
suppressMessages(library(e1071))
here <- dirname(sub("--file=", "", grep("--file=", commandArgs(), value = TRUE)))
column <- function(file, name) read.csv(file.path(here, file))[[name]]

num <- function(x) ifelse(is.finite(x), sprintf("%.17g", x), "null")
list_of <- function(x) paste0("[", paste(num(x), collapse = ", "), "]")
object <- function(...) {
  parts <- c(...)
  paste0("{", paste0('"', names(parts), '": ', parts, collapse = ",\n   "), "}")
}

probabilities <- c(0, 0.1, 0.25, 1 / 3, 0.5, 0.75, 0.9, 0.99, 1)

columns <- list(
  c("nist/PiDigits.csv", "y"), c("nist/Lottery.csv", "y"), c("nist/Lew.csv", "y"),
  c("nist/Mavro.csv", "y"), c("nist/Michelso.csv", "y"), c("nist/NumAcc1.csv", "y"),
  c("nist/NumAcc2.csv", "y"),
  c("boxcox/trees.csv", "Volume"), c("boxcox/ornstein.csv", "interlocks"),
  c("boxcox/journals.csv", "price"), c("boxcox/wool.csv", "cycles"))
univariate <- sapply(columns, function(key) {
  x <- column(key[1], key[2])
  figures <- object(
    n = length(x), sum = num(sum(x)), mean = num(mean(x)),
    var_samp = num(var(x)), stddev_samp = num(sd(x)),
    skewness_pop = num(skewness(x, type = 1)), skewness = num(skewness(x, type = 2)),
    excess_kurtosis_pop = num(kurtosis(x, type = 1)), excess_kurtosis = if (length(x) > 3) num(kurtosis(x, type = 2)) else "null",
    median = num(median(x)), median_abs_dev = num(mad(x, constant = 1)),
    percentile_cont = list_of(quantile(x, probabilities, type = 7)),
    percentile_disc = list_of(quantile(x, probabilities, type = 1)),
    geometric_mean = if (all(x > 0)) num(exp(mean(log(x)))) else "null",
    harmonic_mean = if (all(x > 0)) num(1 / mean(1 / x)) else "null",
    zero_share = num(mean(x == 0)))
  paste0('  "', key[1], " ", key[2], '": ', figures)
})

pairs <- list(
  c("nist/Norris.csv", "y", "x"), c("nist/Longley.csv", "y", "x2"),
  c("nist/Longley.csv", "x5", "x6"), c("boxcox/trees.csv", "Volume", "Girth"),
  c("boxcox/journals.csv", "price", "citations"))
bivariate <- sapply(pairs, function(key) {
  y <- column(key[1], key[2])
  x <- column(key[1], key[3])
  fit <- lm(y ~ x)
  figures <- object(
    n = length(x), covar_samp = num(cov(y, x)), corr = num(cor(y, x)),
    regr_slope = num(coef(fit)[[2]]), regr_intercept = num(coef(fit)[[1]]),
    regr_r2 = num(summary(fit)$r.squared),
    regr_avgx = num(mean(x)), regr_avgy = num(mean(y)),
    regr_sxx = num(sum((x - mean(x))^2)), regr_syy = num(sum((y - mean(y))^2)),
    regr_sxy = num(sum((x - mean(x)) * (y - mean(y)))))
  paste0('  "', paste(key, collapse = " "), '": ', figures)
})

cat(file = file.path(here, "describe_r.json"), sep = "", "{\n",
    ' "about": "tests/reference/describe_r.R, ', R.version.string, ", e1071 ",
    as.character(packageVersion("e1071")), ": skewness and kurtosis types 1 and 2, quantile types ",
    '7 (percentile_cont) and 1 (percentile_disc), mad with constant 1, lm",\n',
    ' "probabilities": ', list_of(probabilities), ",\n",
    ' "univariate": {\n', paste(univariate, collapse = ",\n"), "},\n",
    ' "bivariate": {\n', paste(bivariate, collapse = ",\n"), "}\n}\n")
