# Writes tests/reference/power_car.json: powers of responses given predictors by car's
# powerTransform, whose optimiser stops within about 1e-5 of the maximum.
#
#   Rscript tests/reference/power_car.R > tests/reference/power_car.json
suppressMessages(library(car))
read <- function(name) read.csv(file.path("tests/reference/boxcox", paste0(name, ".csv")))
entry <- function(label, fit) {
  test <- testTransform(fit, lambda = 1)
  sprintf('  "%s": {"lambda": %.15g, "lrt_lambda_1": %.15g}', label, coef(fit, round = FALSE)[[1]],
          test$LRT)
}
journals <- read("journals")
bondyield <- read("bondyield")
ornstein <- read("ornstein")
cat("{\n", sprintf('  "source": "R %s, car %s, powerTransform; tests/reference/power_car.R",\n',
                   getRversion(), packageVersion("car")), sep = "")
cat(paste(c(
  entry("journals", powerTransform(subs ~ price + citations, data = journals)),
  entry("bondyield", powerTransform(Y ~ MOOD + EPI + EXP + RUS, data = bondyield,
                                    family = "yjPower")),
  entry("ornstein", powerTransform(interlocks ~ assets + sector + nation, data = ornstein,
                                   family = "yjPower"))), collapse = ",\n"))
cat("\n}\n")
