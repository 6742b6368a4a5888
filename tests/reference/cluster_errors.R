# Check values for cluster errors, from open data: R 4.2, sandwich's vcovCL, type HC1 with cadjust,
# which is G/(G-1) (n-1)/(n-k).
# Run in tests/reference: Rscript cluster_errors.R > cluster_errors.json
#   each case: standard errors, and t, p (G - 1 degrees of freedom) and 90% limits of the terms;
#   where asked for, the limits of the fitted curve at the first row
suppressMessages(library(sandwich))
num <- function(x) ifelse(is.na(x), "null", format(x, digits = 17, scientific = TRUE, trim = TRUE))
arr <- function(x) paste0("[", paste(num(unname(x)), collapse = ", "), "]")
key <- function(name, value) paste0("   \"", name, "\": ", value)
describe <- function(name, fit, cluster) {
  groups <- length(unique(cluster))
  v <- vcovCL(fit, cluster = cluster, type = "HC1", cadjust = TRUE)
  b <- coef(fit)
  se <- sqrt(diag(v))
  t <- b / se
  reach <- qt(0.95, groups - 1) * se
  x <- model.matrix(fit)[1, ]
  at <- sum(x * b) + c(-1, 1) * qt(0.95, groups - 1) * sqrt(drop(x %*% v %*% x))
  out <- c(key("clusters", groups), key("coefficient", arr(b)), key("standard_error", arr(se)),
           key("t", arr(t)), key("p_value", arr(2 * pt(-abs(t), groups - 1))),
           key("low", arr(b - reach)), key("high", arr(b + reach)), key("first_row", arr(at)))
  paste0("  \"", name, "\": {\n", paste(out, collapse = ",\n"), "\n  }")
}
ornstein <- read.csv("boxcox/ornstein.csv", stringsAsFactors = TRUE)
ornstein$nation <- relevel(ornstein$nation, ref = names(which.max(table(ornstein$nation))))
trees <- read.csv("boxcox/trees.csv")
journals <- read.csv("boxcox/journals.csv")
cat("{\n \"source\": \"cluster_errors.R; ", R.version.string, ", sandwich ",
    as.character(packageVersion("sandwich")), "\",\n \"cases\": {\n", sep = "")
cat(paste(c(
  describe("ornstein", lm(log(interlocks + 1) ~ log(assets) + nation, ornstein), ornstein$sector),
  describe("trees", lm(Volume ~ Girth + Height, trees), trees$Height),
  describe("trees_weighted", lm(sqrt(Volume) ~ Girth + Height, trees, weights = Height / 50),
           floor(trees$Girth)),
  describe("trees_no_intercept", lm(Volume ~ 0 + Girth + Height, trees), trees$Height),
  describe("journals", lm(log(subs) ~ log(price) + log(citations) + foundingyear, journals),
           journals$foundingyear %/% 10)),
  collapse = ",\n"), "\n }\n}\n", sep = "")
