# Check values for the tests of residuals, from open data and one made-up set.
# Run in tests/reference: Rscript residual_tests.R > residual_tests_r.json
#
# lmtest where it speaks of the case; where it does not (weights, White's test, models whose columns
# repeat each other), the auxiliary regression by lm(), as written beside it.
suppressMessages({library(lmtest); library(e1071)})
num <- function(x) ifelse(is.na(x), "null", format(x, digits = 17, scientific = TRUE, trim = TRUE))
key <- function(name, value) paste0("   \"", name, "\": ", value)
test <- function(t) paste0("[", paste(num(c(unname(t$statistic), unname(t$parameter), t$p.value)),
                                      collapse = ", "), "]")
chi <- function(statistic, df) list(statistic = statistic, parameter = df,
                                    p.value = pchisq(statistic, df, lower.tail = FALSE))

# n R^2 of squared residuals on columns: lm() drops repeats, so that df is rank - 1.
spread <- function(e, columns) {
  aux <- lm(I(e^2) ~ as.matrix(columns))
  chi(length(e) * summary(aux)$r.squared, aux$rank - 1)
}
# The columns, their squares and products; with an intercept they may be measured from anywhere.
quadratic <- function(x) {
  x <- scale(x, scale = FALSE)
  pairs <- which(upper.tri(diag(ncol(x)), diag = TRUE), arr.ind = TRUE)
  cbind(x, x[, pairs[, 1], drop = FALSE] * x[, pairs[, 2], drop = FALSE])
}

describe <- function(name, fit, short = FALSE, order = NULL) {
  w <- weights(fit)
  x <- model.matrix(fit)
  y <- model.response(model.frame(fit))
  e <- if (is.null(w)) resid(fit) else resid(fit) * sqrt(w)
  n <- length(e)
  f <- fitted(fit)
  columns <- x[, colnames(x) != "(Intercept)", drop = FALSE]
  bp <- if (ncol(columns) == 0) NULL
        else if (is.null(w) && "(Intercept)" %in% colnames(x)) bptest(fit)
        else spread(e, columns)
  white <- if (ncol(columns) == 0) NULL else if (short) spread(e, cbind(f, f^2))
           else spread(e, quadratic(columns))
  reset <- if (ncol(columns) == 0) NULL else if (is.null(w)) resettest(fit, power = 2:3) else {
    s <- (f - mean(f)) / sd(f)
    a <- anova(lm(y ~ 0 + x, weights = w), lm(y ~ 0 + x + I(s^2) + I(s^3), weights = w))
    list(statistic = a$F[2], parameter = c(a$Df[2], a$Res.Df[2]), p.value = a$`Pr(>F)`[2])
  }
  xs <- if (is.null(w)) x else x * sqrt(w)
  lag <- c(0, e[-n])
  aux <- lm.fit(cbind(xs, lag), e)
  bg <- if (is.null(w)) bgtest(fit) else chi(n * sum(aux$fitted.values^2) / sum(e^2), 1)
  # Rows floor(j n / 5000), counted from 0, where there are more than 5000.
  normal <- shapiro.test(if (n > 5000) e[floor(0:4999 * n / 5000) + 1] else e)
  out <- c(
    if (!is.null(bp)) key("breusch_pagan", test(bp)),
    if (!is.null(white)) key("white", test(white)),
    if (!is.null(reset)) key("reset", test(reset)),
    key("breusch_godfrey", test(bg)),
    key("durbin_watson", num(sum(diff(e)^2) / sum(e^2))),
    key("skewness", num(skewness(e, type = 2))),
    key("skewness_pop", num(skewness(e, type = 1))),
    key("excess_kurtosis", num(kurtosis(e, type = 1))),
    key("jarque_bera", test(chi(n / 6 * (skewness(e, type = 1)^2 + kurtosis(e, type = 1)^2 / 4), 2))),
    key("shapiro_wilk", paste0("[", num(normal$statistic), ", ", num(normal$p.value), "]")),
    if (!is.null(order)) key("ordered_breusch_godfrey", test(bgtest(fit, order.by = order))),
    if (!is.null(order)) key("ordered_durbin_watson",
                             num(unname(dwtest(fit, order.by = order)$statistic))))
  paste0("  \"", name, "\": {\n", paste(out, collapse = ",\n"), "\n  }")
}

journals <- read.csv("boxcox/journals.csv")
journals$citeprice <- journals$price / journals$citations
currency <- read.csv("boxcox/currencysubstitution.csv")
bonds <- read.csv("boxcox/bondyield.csv")
ornstein <- read.csv("boxcox/ornstein.csv", stringsAsFactors = TRUE)
trees <- read.csv("boxcox/trees.csv")

# The made-up set: 7,000 rows from the generator of Park & Miller (1988), a residual that widens
# with x, a bent line, and residuals that follow the ones before.
state <- 1
draw <- function() { state <<- (16807 * state) %% 2147483647; state / 2147483647 }
x <- numeric(7000); noise <- numeric(7000); before <- 0
for (i in 1:7000) {
  x[i] <- draw()
  before <- 0.5 * before + (draw() + draw() + draw() - 1.5)
  noise[i] <- before
}
wide <- data.frame(x = x, y = 2 * x + 1.5 * x^2 + x * noise)

cat("{\n \"source\": \"residual_tests.R; ", R.version.string, ", lmtest ",
    as.character(packageVersion("lmtest")), ", e1071 ", as.character(packageVersion("e1071")),
    "; tests are [statistic, df, (df2,) p]\",\n \"models\": {\n", sep = "")
cat(paste(c(
  describe("journals", lm(log(subs) ~ log(citeprice), journals), order = journals$foundingyear),
  describe("currencysubstitution", lm(logCUS ~ I(Iu - Ic) + Ic + logY, currency)),
  describe("bondyield", lm(RAARUS ~ MOOD + EPI + EXP + RUS, bonds)),
  describe("ornstein", lm(interlocks ~ assets + sector + nation, ornstein), short = TRUE),
  describe("ornstein_nation", lm(interlocks ~ log(assets) + nation, ornstein)),
  describe("trees", lm(Volume ~ Girth + Height, trees), order = -trees$Height),
  describe("trees_weighted", lm(sqrt(Volume) ~ Girth + Height, trees, weights = Height / 50)),
  describe("trees_no_intercept", lm(Volume ~ 0 + Girth + Height, trees)),
  describe("trees_mean", lm(Volume ~ 1, trees)),
  describe("trees_one_alone", lm(Volume ~ Girth + I(as.numeric(seq_len(31) == 7)), trees)),
  describe("made_up", lm(y ~ x, wide))), collapse = ",\n"))
cat("\n }\n}\n")
