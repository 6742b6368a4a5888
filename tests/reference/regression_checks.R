# Regression figures on open data by R (base, car, sandwich), for tests/core/*_test.cc.
# Run from tests/reference: Rscript regression_checks.R > regression_checks.json
#   trees       Ryan, Joiner & Ryan 1976 (base R)      longley  Longley 1967 (NIST StRD copy)
#   journals    Bergstrom 2001 (Ecdat, AER)            wool     Box & Cox 1964 (carData)
#   ornstein    Fox & Weisberg, Ornstein 1976 (carData)
suppressMessages({library(car); library(sandwich)})
options(contrasts = c("contr.treatment", "contr.poly"))

number <- function(x) {
  text <- sprintf("%.17g", x)
  text[!is.finite(x)] <- "null"
  if (length(x) == 1) text else paste0("[", paste(text, collapse = ", "), "]")
}
object <- function(...) {
  parts <- c(...)
  paste0("{", paste(sprintf("\"%s\": %s", names(parts), parts), collapse = ",\n "), "}")
}
as_list <- function(x) if (length(x) == 1) paste0("[", number(x), "]") else number(x)

figures <- function(fit) {
  s <- summary(fit)
  w <- if (is.null(weights(fit))) rep(1, nobs(fit)) else weights(fit)
  x <- model.matrix(fit) * sqrt(w)
  scaled <- sweep(x, 2, sqrt(colSums(x^2)), "/")
  values <- svd(scaled)$d
  error <- function(type) as_list(sqrt(diag(vcovHC(fit, type = type))))
  joint <- drop1(fit, test = "F")[-1, ]
  parts <- c(
    coefficient = as_list(coef(fit)),
    standard_error = as_list(s$coefficients[, 2]),
    hc0 = error("HC0"), hc1 = error("HC1"), hc2 = error("HC2"), hc3 = error("HC3"),
    residual_sd = number(s$sigma), r_squared = number(s$r.squared),
    adjusted_r_squared = number(s$adj.r.squared),
    f = number(s$fstatistic[[1]]), f_df1 = number(s$fstatistic[[2]]),
    f_p = number(pf(s$fstatistic[[1]], s$fstatistic[[2]], s$fstatistic[[3]], lower.tail = FALSE)),
    log_likelihood = number(as.numeric(logLik(fit))), aic = number(AIC(fit)), bic = number(BIC(fit)),
    residual = as_list(residuals(fit) * sqrt(w)), leverage = as_list(hatvalues(fit)),
    studentized = as_list(rstudent(fit)), cooks_distance = as_list(cooks.distance(fit)),
    press = number(sum((residuals(fit) * sqrt(w) / (1 - hatvalues(fit)))^2)),
    condition_number = number(max(values) / min(values)),
    joint_df = as_list(joint$Df), joint_ss = as_list(joint$`Sum of Sq`),
    joint_f = as_list(joint$`F value`), joint_p = as_list(joint$`Pr(>F)`))
  if ("(Intercept)" %in% names(coef(fit))) {
    inflation <- vif(fit)
    per_dimension <- if (is.matrix(inflation)) inflation[, 3]^2 else inflation
    parts <- c(parts, inflation = as_list(per_dimension))
  }
  object(parts)
}

trees <- read.csv("boxcox/trees.csv")
journals <- read.csv("boxcox/journals.csv")
wool <- read.csv("boxcox/wool.csv")
longley <- read.csv("nist/Longley.csv")
ornstein <- read.csv("boxcox/ornstein.csv", stringsAsFactors = TRUE)

cat(object(
  about = sprintf("\"tests/reference/regression_checks.R; R %s, car %s, sandwich %s\"",
                  getRversion(), packageVersion("car"), packageVersion("sandwich")),
  trees = figures(lm(Volume ~ Girth + Height, trees)),
  trees_weighted = figures(lm(Volume ~ Girth + Height, trees, weights = 1 / Girth^2)),
  journals = figures(lm(log(subs) ~ log(price) + log(citations) + foundingyear, journals)),
  wool_no_intercept = figures(lm(log(cycles) ~ 0 + len + amp + load, wool)),
  longley = figures(lm(y ~ x1 + x2 + x3 + x4 + x5 + x6, longley)),
  ornstein = figures(lm(log(interlocks + 1) ~ log(assets) + nation + sector, ornstein)),
  ornstein_weighted = figures(lm(log(interlocks + 1) ~ log(assets) + nation + sector, ornstein,
                                 weights = sqrt(assets)))))
cat("\n")
