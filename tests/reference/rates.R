# Exact limits and tests of counts by R's stats package, on small made-up counts.
# Run: Rscript tests/reference/rates.R > tests/reference/rates_r.csv
# poisson.test one-sample: Garwood; binom.test: Clopper-Pearson; poisson.test two-sample: conditional
# exact, two-sided p by minimum likelihood. The columns a, b, c, d are events and bases in that order.

cat("kind,a,b,c,d,level,estimate,low,high,p\n")
put <- function(kind, a, b, c, d, level, estimate, limits, p) {
  cat(kind, paste(sprintf("%.17g", c(a, b, c, d, level, estimate, limits, p)), collapse = ","),
      sep = ",")
  cat("\n")
}

for (level in c(0.95, 0.8, 0.999)) {
  for (k in c(0, 1, 2, 5, 17, 120, 3456)) {
    for (base in c(1, 12.5, 40000)) {
      test <- poisson.test(k, base, conf.level = level)
      put("rate", k, base, 0, 0, level, test$estimate, test$conf.int, 1)
    }
  }
  for (row in list(c(0, 5), c(1, 5), c(5, 5), c(3, 17), c(40, 90), c(999, 1000), c(2, 30000))) {
    test <- binom.test(row[1], row[2], conf.level = level)
    put("share", row[1], row[2], 0, 0, level, test$estimate, test$conf.int, 1)
  }
  for (row in list(c(3, 10, 7, 12), c(0, 5, 4, 9), c(12, 750, 6, 1040), c(25, 3.5, 25, 3.5),
                   c(2, 18000, 24, 16500), c(140, 1, 95, 1.25), c(2500, 30000, 2400, 31000),
                   c(7, 1, 7, 2), c(43, 27000, 16, 18500), c(1, 1, 60, 4))) {
    test <- poisson.test(row[c(1, 3)], row[c(2, 4)], conf.level = level)
    put("ratio", row[1], row[2], row[3], row[4], level, test$estimate, test$conf.int, test$p.value)
  }
}
