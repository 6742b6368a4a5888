# Check values for polynomials and products, from open data: R 4.2 (base), car, sandwich.
# Raw powers of low degree, where double precision keeps the digits compared (9).
# Run in tests/reference: Rscript roles.R > roles.json
suppressMessages({library(car); library(sandwich)})
num <- function(x) ifelse(is.na(x), "null", format(x, digits = 17, scientific = TRUE, trim = TRUE))
arr <- function(x) paste0("[", paste(num(x), collapse = ", "), "]")
key <- function(name, value) paste0("   \"", name, "\": ", value)
# GVIF^(1/df) of groups of coefficients (Fox & Monette 1992), from the coefficients' correlations;
# from their own covariance about 0 where there is no intercept.
inflation <- function(fit, groups) {
  v <- vcov(fit)
  x <- model.matrix(fit)
  if ("(Intercept)" %in% colnames(v)) {
    keep <- colnames(v) != "(Intercept)"
    v <- v[keep, keep, drop = FALSE]
  }
  r <- cov2cor(v)
  unlist(lapply(groups, function(g) {
    i <- match(g, colnames(r))
    rest <- if (length(i) == ncol(r)) 1 else det(r[-i, -i, drop = FALSE])
    (det(r[i, i, drop = FALSE]) * rest / det(r))^(1 / length(i))
  }))
}
# `tests`: the coefficients of each predictor; `inflated`: those judged together.
describe <- function(name, fit, tests, inflated, rows) {
  s <- summary(fit)
  joint <- lapply(tests, function(g) {
    h <- linearHypothesis(fit, g)
    list(df = h$Df[2], ss = h$`Sum of Sq`[2], f = h$F[2], p = h$`Pr(>F)`[2])
  })
  p <- predict(fit, rows, se.fit = TRUE)
  x <- model.matrix(fit)
  unit <- svd(sweep(x, 2, sqrt(colSums(x^2)), "/"))$d
  top <- order(-cooks.distance(fit))[1:5]
  out <- c(
    key("coefficients", arr(coef(fit))),
    key("standard_error", arr(sqrt(diag(vcov(fit))))),
    key("hc0", arr(sqrt(diag(vcovHC(fit, type = "HC0"))))),
    key("hc3", arr(sqrt(diag(vcovHC(fit, type = "HC3"))))),
    key("residual_sd", num(s$sigma)), key("r_squared", num(s$r.squared)),
    key("press", num(sum((resid(fit) / (1 - hatvalues(fit)))^2))),
    key("test_parameters", arr(sapply(joint, `[[`, "df"))),
    key("test_sum_of_squares", arr(sapply(joint, `[[`, "ss"))),
    key("test_f", arr(sapply(joint, `[[`, "f"))), key("test_p", arr(sapply(joint, `[[`, "p"))),
    key("inflation", arr(inflation(fit, inflated))),
    key("condition_number", num(max(unit) / min(unit))),
    key("predictions", arr(p$fit)), key("leverages", arr((p$se.fit / s$sigma)^2)),
    key("cooks_distance", arr(cooks.distance(fit)[top])))
  paste0("  \"", name, "\": {\n", paste(out, collapse = ",\n"), "\n  }")
}
each <- function(x) as.list(x)
trees <- read.csv("boxcox/trees.csv")
new_trees <- data.frame(Girth = c(9, 13.5, 25), Height = c(70, 82, 60))
cubic <- lm(Volume ~ Girth + I(Girth^2) + I(Girth^3) + Height, trees)
powers <- c("Girth", "I(Girth^2)", "I(Girth^3)")
origin <- lm(Volume ~ 0 + Girth + I(Girth^2) + Height, trees)
crossed <- lm(log(Volume) ~ log(Girth - 5) + Height + log(Girth - 5):Height, trees)
poisons <- read.csv("boxcox/poisons.csv", stringsAsFactors = TRUE)
poisons$poison <- factor(poisons$poison)
p <- paste0("poison", 2:3); t <- paste0("treat", c("B", "C", "D"))
ornstein <- read.csv("boxcox/ornstein.csv", stringsAsFactors = TRUE)
ornstein$nation <- relevel(ornstein$nation, ref = "CAN")
slopes <- lm(log(interlocks + 1) ~ log(assets) * nation, ornstein)
n <- paste0("nation", c("OTH", "UK", "US")); a <- "log(assets)"
by <- paste0("log(assets):", n)
cat("{\n \"source\": \"roles.R; ", R.version.string, ", car ",
    as.character(packageVersion("car")), ", sandwich ", as.character(packageVersion("sandwich")),
    "\",\n \"models\": {\n", sep = "")
cat(describe("trees_cubic", cubic, list(powers, "Height"), each(c(powers, "Height")), new_trees),
    ",\n", sep = "")
cat(describe("trees_origin", origin, list(powers[1:2], "Height"),
             each(c(powers[1:2], "Height")), new_trees), ",\n", sep = "")
cat(describe("trees_product", crossed, each(names(coef(crossed))[-1]),
             each(names(coef(crossed))[-1]), new_trees), ",\n", sep = "")
# treat first, so that R's poison:treat runs as `product treat poison` does here.
cells <- lm(-1 / time ~ poison + treat + poison:treat, poisons)
cat(describe("poisons_product", cells, list(p, t, names(coef(cells))[7:12]),
             list(p, t, names(coef(cells))[7:12]),
             data.frame(poison = c("1", "3", "2"), treat = c("A", "D", "B"))), ",\n", sep = "")
cat(describe("ornstein_slopes", slopes, list(a, n, by), list(a, n, by),
             data.frame(assets = c(1e4, 5e3, 2e5), nation = c("CAN", "US", "UK"))), "\n", sep = "")
cat(" }\n}\n")
