# Fits with levels of few rows put together by hand, for models made for release: release.json.
# Run: Rscript tests/reference/release.R > tests/reference/release.json
#   (R 4.2, jsonlite; data: tests/reference/boxcox/ornstein.csv)
suppressMessages(library(jsonlite))
firms <- read.csv("tests/reference/boxcox/ornstein.csv")

merged <- function(x, few, reference) {
  x[x %in% few] <- "other levels"
  relevel(factor(x), ref = reference)
}
case <- function(labels, floor, fit, names) {
  s <- summary(fit)
  stopifnot(length(names) == length(coef(fit)))
  list(labels = labels, floor = floor, terms = I(unname(names)),
       coefficient = I(unname(s$coefficients[, 1])), standard_error = I(unname(s$coefficients[, 2])),
       residual_sd = s$sigma, r_squared = s$r.squared, adjusted_r_squared = s$adj.r.squared,
       f = unname(s$fstatistic[1]), log_likelihood = as.numeric(logLik(fit)))
}
levels_of <- function(x, column) paste(column, "is", levels(x)[-1])

# Rows by sector: AGR 47, BNK 8, CON 5, FIN 22, HLD 7, MAN 48, MER 20, MIN 54, TRN 18, WOD 19; by
# nation: CAN 117, OTH 18, UK 17, US 96.
few19 <- c("BNK", "CON", "HLD", "TRN")
firms$s19 <- merged(firms$sector, few19, "MIN")
firms$s8 <- merged(firms$sector, c("CON", "HLD"), "MIN")
firms$s9 <- merged(firms$sector, c("BNK", "CON", "HLD"), "MIN")
firms$n19 <- merged(firms$nation, c("OTH", "UK"), "CAN")

products <- function(x, column) paste("assets by", column, "is", levels(x)[-1])
cat(toJSON(list(
  source = paste("R", getRversion()),
  cases = list(
    case("'interlocks | log_offset 1', interlocks, 'assets | log_offset', assets, 'sector', sector, 'nation', nation", 19,
         lm(log(interlocks + 1) ~ log(assets) + s19 + n19, firms),
         c("intercept", "assets", levels_of(firms$s19, "sector"), levels_of(firms$n19, "nation"))),
    case("'interlocks', interlocks, 'sector', sector, 'size | weight', assets", 8,
         lm(interlocks ~ s8, firms, weights = assets),
         c("intercept", levels_of(firms$s8, "sector"))),
    # 5 rows alone are too few: the next smallest goes with them.
    case("'interlocks', interlocks, 'sector', sector", 6,
         lm(interlocks ~ s8, firms), c("intercept", levels_of(firms$s8, "sector"))),
    case("'interlocks', interlocks, 'assets | log_offset', assets, 'sector', sector, 'p | product assets sector', NULL", 9,
         lm(interlocks ~ log(assets) * s9, firms),
         c("intercept", "assets", levels_of(firms$s9, "sector"), products(firms$s9, "sector"))),
    # A reference of few rows gives way to the commonest level.
    case("'interlocks', interlocks, 'assets | log_offset', assets, 'sector | category CON', sector, 'p | product assets sector', NULL", 9,
         lm(interlocks ~ log(assets) * s9, firms),
         c("intercept", "assets", levels_of(firms$s9, "sector"), products(firms$s9, "sector"))),
    case("'interlocks', interlocks, 'nation', nation, 'assets | log_offset', assets, 'intercept | option', 'none'", 19,
         lm(interlocks ~ 0 + n19 + log(assets), firms),
         c(paste("nation is", levels(firms$n19)), "assets"))
  )), digits = NA, auto_unbox = TRUE, pretty = TRUE))
cat("\n")
