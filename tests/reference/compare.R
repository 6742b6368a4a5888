# Pairs of fits to the same open data, compared by anova, AIC and BIC: compare.json.
# Run: Rscript tests/reference/compare.R > tests/reference/compare.json
#   (R 4.2, jsonlite; data: the CSV files of tests/reference/boxcox)
#
# AIC and BIC of a re-expressed response carry the logarithm of its Jacobian, -2 Σ ln|dz/dy|.
suppressMessages(library(jsonlite))
read <- function(name) read.csv(file.path("tests/reference/boxcox", paste0(name, ".csv")))
trees <- read("trees"); ornstein <- read("ornstein"); wool <- read("wool")
ornstein$sector <- factor(ornstein$sector)

criteria <- function(fit, log_slope) c(AIC(fit), BIC(fit)) - 2 * sum(log_slope)
pair <- function(data, first, second, a, b, slope_a = 0, slope_b = 0, nested = TRUE) {
  d <- criteria(b, slope_b) - criteria(a, slope_a)
  out <- list(data = data, first = first, second = second, aic_difference = d[1],
              bic_difference = d[2])
  if (nested) {
    small <- if (df.residual(a) > df.residual(b)) a else b
    large <- if (df.residual(a) > df.residual(b)) b else a
    f <- anova(small, large)
    out <- c(out, list(statistic = f$F[2], df1 = f$Df[2], df2 = f$Res.Df[2],
                       p_value = f$`Pr(>F)`[2]))
  }
  out
}
V <- trees$Volume
y <- ornstein$interlocks
cases <- list(
  pair("trees", "'Volume', Volume, 'Girth', Girth", "'Volume', Volume, 'Girth', Girth, 'Height', Height",
       lm(Volume ~ Girth, trees), lm(Volume ~ Girth + Height, trees)),
  pair("trees", "'Volume | log_offset', Volume, 'Girth | log_offset', Girth, 'Height', Height",
       "'Volume | log_offset', Volume, 'Height', Height",
       lm(log(Volume) ~ log(Girth) + Height, trees), lm(log(Volume) ~ Height, trees),
       -log(V), -log(V)),
  # Another reference level is the same column.
  pair("ornstein", "'interlocks | log_offset 1', interlocks, 'sector | category MIN', sector",
       "'interlocks | log_offset 1', interlocks, 'assets | log_offset', assets, 'sector | category AGR', sector",
       lm(log(interlocks + 1) ~ sector, ornstein),
       lm(log(interlocks + 1) ~ log(assets) + sector, ornstein), -log(y + 1), -log(y + 1)),
  pair("ornstein", "'interlocks | log_offset 1', interlocks, 'assets', assets",
       "'interlocks | log_offset 1', interlocks, 'assets', assets, 'sector', sector, 'nation', nation",
       lm(log(interlocks + 1) ~ assets, ornstein),
       lm(log(interlocks + 1) ~ assets + sector + nation, ornstein), -log(y + 1), -log(y + 1)),
  # Weighted.
  pair("trees", "'Volume', Volume, 'Girth', Girth, 'w | weight', Height",
       "'Volume', Volume, 'Girth', Girth, 'Height', Height, 'w | weight', Height",
       lm(Volume ~ Girth, trees, weights = Height), lm(Volume ~ Girth + Height, trees, weights = Height)),
  # A line in a curve, parts in their product.
  pair("trees", "'Volume', Volume, 'Girth', Girth", "'Volume', Volume, 'Girth | polynomial 3', Girth",
       lm(Volume ~ Girth, trees), lm(Volume ~ poly(Girth, 3), trees)),
  pair("ornstein", "'y', interlocks, 'assets | log_offset', assets, 'nation | category US', nation",
       "'y', interlocks, 'assets | log_offset', assets, 'nation | category CAN', nation, 'p | product nation assets', NULL",
       lm(interlocks ~ log(assets) + nation, ornstein), lm(interlocks ~ log(assets) * nation, ornstein)),
  # Not nested: other columns, other re-expressions of one, other responses.
  pair("trees", "'Volume', Volume, 'Girth', Girth", "'Volume', Volume, 'Height', Height",
       lm(Volume ~ Girth, trees), lm(Volume ~ Height, trees), nested = FALSE),
  pair("trees", "'Volume', Volume, 'Girth', Girth", "'Volume', Volume, 'Girth | log_offset', Girth, 'Height', Height",
       lm(Volume ~ Girth, trees), lm(Volume ~ log(Girth) + Height, trees), nested = FALSE),
  pair("trees", "'Volume', Volume, 'Girth', Girth", "'Volume | log_offset', Volume, 'Girth', Girth",
       lm(Volume ~ Girth, trees), lm(log(Volume) ~ Girth, trees), 0, -log(V), nested = FALSE),
  pair("trees", "'Volume | sqrt_offset', Volume, 'Girth', Girth", "'Volume | log_offset 3 10', Volume, 'Girth', Girth, 'Height', Height",
       lm(sqrt(Volume) ~ Girth, trees), lm(log10(Volume + 3) ~ Girth + Height, trees),
       -log(2 * sqrt(V)), -log((V + 3) * log(10)), nested = FALSE),
  pair("wool", "'cycles', cycles, 'load', load, 'len', len", "'cycles | reciprocal', cycles, 'len', len",
       lm(cycles ~ load + len, wool), lm(1 / cycles ~ len, wool), 0, -2 * log(wool$cycles), nested = FALSE)
)
cat(toJSON(list(about = paste("Made by compare.R with", R.version.string), cases = cases),
           auto_unbox = TRUE, digits = NA, pretty = 1), "\n")
