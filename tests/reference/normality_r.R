# Tests of normality by R's shapiro.test and nortest's ad.test, on open data and on columns far from
# normal, written to normality_r.json beside this file.
# Run: Rscript tests/reference/normality_r.R   (R 4.2, package nortest)
suppressMessages(library(nortest))
here <- dirname(sub("--file=", "", grep("--file=", commandArgs(), value = TRUE)))
column <- function(file, name) as.numeric(read.csv(file.path(here, file))[[name]])
num <- function(x) sprintf("%.17g", x)

open_data <- list(
  c("nist/PiDigits.csv", "y"), c("nist/Lottery.csv", "y"), c("nist/Lew.csv", "y"),
  c("nist/Mavro.csv", "y"), c("nist/Michelso.csv", "y"), c("nist/NumAcc2.csv", "y"),
  c("nist/Norris.csv", "y"), c("nist/Longley.csv", "y"), c("nist/Pontius.csv", "y"),
  c("boxcox/trees.csv", "Volume"), c("boxcox/trees.csv", "Girth"),
  c("boxcox/ornstein.csv", "interlocks"), c("boxcox/journals.csv", "price"),
  c("boxcox/journals.csv", "citations"), c("boxcox/wool.csv", "cycles"),
  c("boxcox/poisons.csv", "time"))
figures <- function(x) {
  w <- shapiro.test(x)
  a <- if (length(x) >= 8) ad.test(x)
  paste0('"shapiro_wilk": [', num(w$statistic), ", ", num(w$p.value), "]",
         if (!is.null(a)) paste0(', "anderson_darling": [', num(a$statistic), ", ", num(a$p.value), "]"))
}
named <- sapply(open_data, function(key) {
  paste0('  {"file": "', key[1], '", "column": "', key[2], '", ', figures(column(key[1], key[2])), "}")
})

# The first rows of two columns: every branch of the small-sample formulas, 3 to 13 rows.
heads <- unlist(lapply(list(c("boxcox/trees.csv", "Volume"), c("boxcox/journals.csv", "price")), function(key) {
  x <- column(key[1], key[2])
  sapply(3:13, function(n) {
    paste0('  {"file": "', key[1], '", "column": "', key[2], '", "first": ', n, ", ", figures(x[1:n]), "}")
  })
}))

# Powers of a column move its p-value into the far tail. `power` is applied to integers by repeated
# multiplication, so that both sides hold the same doubles.
tails <- unlist(lapply(list(c("boxcox/journals.csv", "price"), c("boxcox/ornstein.csv", "interlocks"),
                            c("nist/Lottery.csv", "y"), c("nist/PiDigits.csv", "y")), function(key) {
  x <- column(key[1], key[2])
  sapply(c(2, 3, 5, 8), function(power) {
    y <- Reduce(`*`, rep(list(x), power))
    paste0('  {"file": "', key[1], '", "column": "', key[2], '", "power": ', power, ", ", figures(y), "}")
  })
}))

cat(file = file.path(here, "normality_r.json"), sep = "", "{\n",
    ' "about": "tests/reference/normality_r.R, ', R.version.string, ", shapiro.test and nortest ",
    as.character(packageVersion("nortest")), ' ad.test: [statistic, p-value]",\n',
    ' "cases": [\n', paste(c(named, heads, tails), collapse = ",\n"), "]\n}\n")
