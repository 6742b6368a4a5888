# Check values for labelled models, from open data: R 4.2 (base), car, sandwich.
# Run in tests/reference: Rscript labelled_models.R > labelled_models.json
suppressMessages({library(car); library(sandwich)})
num <- function(x) ifelse(is.na(x), "null", format(x, digits = 17, scientific = TRUE, trim = TRUE))
arr <- function(x) paste0("[", paste(num(x), collapse = ", "), "]")
key <- function(name, value) paste0("   \"", name, "\": ", value)
describe <- function(name, fit, jacobian, back, y) {
  s <- summary(fit)
  w <- if (is.null(weights(fit))) rep(1, length(resid(fit))) else weights(fit)
  e <- resid(fit) * sqrt(w)
  h <- hatvalues(fit)
  ll <- as.numeric(logLik(fit))
  k <- length(coef(fit)) + 1
  f <- if (is.null(s$fstatistic)) c(NA, NA, NA) else s$fstatistic
  d1 <- drop1(fit, test = "F")[-1, , drop = FALSE]
  v <- tryCatch(vif(fit), error = function(e) NULL)
  inflation <- if (is.null(v)) NA else if (is.matrix(v)) v[, 1]^(1 / v[, 2]) else v
  top <- order(-cooks.distance(fit))[1:5]
  out <- c(
    key("coefficients", arr(coef(fit))),
    key("standard_error", arr(sqrt(diag(vcov(fit))))),
    key("hc0", arr(sqrt(diag(vcovHC(fit, type = "HC0"))))),
    key("hc1", arr(sqrt(diag(vcovHC(fit, type = "HC1"))))),
    key("hc2", arr(sqrt(diag(vcovHC(fit, type = "HC2"))))),
    key("hc3", arr(sqrt(diag(vcovHC(fit, type = "HC3"))))),
    key("rows_fitted", length(e)), key("residual_df", df.residual(fit)),
    key("residual_sd", num(s$sigma)), key("r_squared", num(s$r.squared)),
    key("adjusted_r_squared", num(s$adj.r.squared)),
    key("f", num(f[1])), key("f_df1", num(f[2])), key("f_df2", num(f[3])),
    key("f_p", num(pf(f[1], f[2], f[3], lower.tail = FALSE))),
    key("log_likelihood", num(ll)), key("aic", num(AIC(fit))), key("bic", num(BIC(fit))),
    key("log_likelihood_original", num(ll + jacobian)),
    key("aic_original", num(2 * k - 2 * (ll + jacobian))),
    key("press", num(sum((e / (1 - h))^2))),
    key("median_absolute_error", num(median(abs(y - back(fitted(fit)))))),
    key("test_parameters", arr(d1$Df)), key("test_sum_of_squares", arr(d1$`Sum of Sq`)),
    key("test_f", arr(d1$`F value`)), key("test_p", arr(d1$`Pr(>F)`)),
    key("inflation", arr(inflation)),
    key("influential_rows", arr(top)), key("cooks_distance", arr(cooks.distance(fit)[top])),
    key("leverage", arr(h[top])), key("studentized_residual", arr(rstudent(fit)[top])))
  paste0("  \"", name, "\": {\n", paste(out, collapse = ",\n"), "\n  }")
}
ornstein <- read.csv("boxcox/ornstein.csv", stringsAsFactors = TRUE)
ornstein$sector <- relevel(ornstein$sector, ref = names(which.max(table(ornstein$sector))))
ornstein$nation <- relevel(ornstein$nation, ref = names(which.max(table(ornstein$nation))))
logged <- lm(log(interlocks + 1) ~ log(assets) + sector + nation, ornstein)
trees <- read.csv("boxcox/trees.csv")
weighted <- lm(sqrt(Volume) ~ Girth + Height, trees, weights = Height / 50)
origin <- lm(Volume ~ 0 + Girth + Height, trees)
poisons <- read.csv("boxcox/poisons.csv", stringsAsFactors = TRUE)
poisons$poison <- factor(poisons$poison)
cells <- lm(-1 / time ~ 0 + poison + treat, poisons)
cat("{\n \"source\": \"labelled_models.R; ", R.version.string, ", car ",
    as.character(packageVersion("car")), ", sandwich ", as.character(packageVersion("sandwich")),
    "; quartiles by quantile(type = 7)\",\n \"models\": {\n", sep = "")
cat(describe("ornstein_log", logged, -sum(log(ornstein$interlocks + 1)),
             function(z) exp(z) - 1, ornstein$interlocks), ",\n", sep = "")
cat(describe("trees_weighted", weighted, sum(log(0.5 / sqrt(trees$Volume))),
             function(z) z^2, trees$Volume), ",\n", sep = "")
cat(describe("trees_no_intercept", origin, 0, identity, trees$Volume), ",\n", sep = "")
cat(describe("poisons_no_intercept", cells, sum(-2 * log(poisons$time)),
             function(z) -1 / z, poisons$time), "\n", sep = "")
q <- function(x) arr(c(min(x), quantile(x, c(.25, .75)), max(x), mean(x), sd(x)))
cat(" },\n \"columns\": {\n", key("assets", q(ornstein$assets)), ",\n",
    key("Girth", q(trees$Girth)), ",\n", key("time", q(poisons$time)), "\n },\n", sep = "")
cat(" \"smearing\": {", "\"ornstein_log\": ", num(mean(exp(resid(logged)))), "}\n}\n", sep = "")
