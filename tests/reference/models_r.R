# Models as texts built from R's lm, and what R says of rows put to them: models_r.json.
# Run: Rscript tests/reference/models_r.R > tests/reference/models_r.json   (R 4.2, sandwich, jsonlite)
#
# Each case holds a model text in the documented format (ext/model_text.h), made here from
# lm, qr and vcovHC alone; the fitted rows with hatvalues, rstudent, cooks.distance and
# residuals; new rows with fits and limits by predict() (robust ones: d'Vd by hand); and the
# coefficients with limits at the case's level, classical and HC3. Data: R's package datasets.
suppressMessages({library(sandwich); library(jsonlite)})
options(warn = -1)  # predict() reminds that weights of new rows are taken as 1

num <- function(x) ifelse(is.finite(x), sprintf("%.17g", x), "null")
rounded <- function(x) num(signif(x, 14))
str <- function(x) paste0('"', x, '"')
arr <- function(x) paste0("[", paste(x, collapse = ","), "]")
nums <- function(x) arr(num(x))
packed <- function(x)
  str(gsub("\n", "", base64_enc(writeBin(as.double(x), raw(), endian = "little"))))
obj <- function(...) {
  parts <- list(...)
  parts <- parts[!sapply(parts, is.null)]
  paste0("{", paste0('"', names(parts), '":', unlist(parts), collapse = ","), "}")
}
optional <- function(condition, value) if (condition) value else NULL

log_offset <- function(o = 0) list(spec = if (o == 0) "log_offset" else paste("log_offset", o), f = function(x) log(x + o),
                                   b = function(z) exp(z) - o)
identity_ <- list(spec = "identity", f = identity, b = identity)
sqrt_ <- list(spec = "sqrt_offset", f = sqrt, b = function(z) pmax(z, 0)^2)
reciprocal <- list(spec = "reciprocal", f = function(x) 1 / x, b = function(z) 1 / z)

number <- function(name, x, t = identity_, unit = NULL) list(name = name, x = x, t = t, unit = unit)
category <- function(name, x, reference) {
  levels <- sort(unique(as.character(x)), method = "radix")
  list(name = name, x = as.character(x), levels = levels, reference = reference)
}

# The design of raw inputs (one list element per predictor).
design <- function(predictors, inputs, intercept) {
  X <- if (intercept) cbind(intercept = rep(1, length(inputs[[1]]))) else NULL
  for (i in seq_along(predictors)) {
    p <- predictors[[i]]
    if (is.null(p$levels)) {
      X <- cbind(X, p$t$f(inputs[[i]]))
      colnames(X)[ncol(X)] <- p$name
    } else for (level in setdiff(p$levels, p$reference)) {
      X <- cbind(X, as.numeric(inputs[[i]] == level))
      colnames(X)[ncol(X)] <- paste(p$name, "is", level)
    }
  }
  X
}

make_case <- function(name, response, predictors, new, weight = NULL, errors = "classical",
                      intercept = TRUE, level = 0.9) {
  z <- response$t$f(response$x)
  n <- length(z)
  w <- if (is.null(weight)) rep(1, n) else weight$x
  X <- design(predictors, lapply(predictors, `[[`, "x"), intercept)
  k <- ncol(X)
  fit <- lm(z ~ 0 + X, weights = w)
  e <- z - as.vector(X %*% coef(fit))
  df <- n - k
  s <- summary(fit)$sigma
  kinds <- c("HC0", "HC1", "HC2", "HC3")
  V <- lapply(kinds, function(type) vcovHC(fit, type = type))
  names(V) <- kinds
  se <- c(list(sqrt(diag(vcov(fit)))), lapply(V, function(v) sqrt(diag(v))))
  names(se) <- c("standard_error", "hc0", "hc1", "hc2", "hc3")

  # The basis: columns measured from their weighted means (from 0 without an intercept).
  centre <- if (intercept) c(0, colSums(w * X[, -1, drop = FALSE]) / sum(w)) else rep(0, k)
  D <- sweep(X, 2, centre)
  R <- qr.R(qr(sqrt(w) * D))
  R <- R * sign(diag(R))
  beta <- coef(fit)
  if (intercept) beta[1] <- beta[1] + sum(centre * coef(fit))
  q <- t(backsolve(R, t(sqrt(w) * D), transpose = TRUE))
  h <- rowSums(q^2)
  triangle <- function(m) unlist(lapply(seq_len(k), function(j) m[seq_len(j), j]))
  robust <- NULL
  if (errors != "classical") {
    stopifnot(errors == "hc3")
    f <- w * e^2 / (1 - h)^2
    robust <- obj(scale = "1", matrix = packed(triangle(t(q * f) %*% q)))
  }

  column <- function(c, role) {
    kind <- if (is.null(c$levels)) NULL else str("category")
    obj(name = str(c$name), unit = optional(!is.null(c$unit), str(c$unit)),
        role = optional(role != "predictor", str(role)), kind = kind,
        transform = optional(!is.null(c$t) && c$t$spec != "identity", str(c$t$spec)),
        values = optional(is.null(kind),
                          nums(c(quantile(c$x, (0:4) / 4, type = 7), mean(c$x), sd(c$x)))),
        levels = optional(!is.null(kind), arr(sapply(c$levels, function(l)
          arr(c(str(l), sum(c$x == l)))))),
        reference = optional(!is.null(kind) && c$reference %in% c$levels,
                             match(c$reference, c$levels) - 1),
        reference_given = optional(!is.null(kind) && c$reference %in% c$levels, "true"))
  }
  columns <- c(column(response, "response"), sapply(predictors, column, "predictor"),
               if (!is.null(weight)) column(weight, "weight"))
  factors <- if (intercept) list(NULL) else list()
  for (i in seq_along(predictors)) {
    p <- predictors[[i]]
    if (is.null(p$levels)) factors <- c(factors, list(NULL))
    else for (l in setdiff(p$levels, p$reference))
      factors <- c(factors, list(arr(arr(c(i, 0, match(l, p$levels) - 1)))))
  }
  terms <- sapply(seq_len(k), function(j) obj(
    name = str(colnames(X)[j]), factors = factors[[j]], coefficient = num(coef(fit)[j]),
    standard_error = num(se$standard_error[j]), hc0 = rounded(se$hc0[j]), hc1 = rounded(se$hc1[j]),
    hc2 = rounded(se$hc2[j]), hc3 = rounded(se$hc3[j])))
  kind <- switch(strsplit(response$t$spec, " ")[[1]][1], identity = "none", log_offset = "factor",
                 sqrt_offset = "moments", reciprocal = "points")
  mean_e <- function(x) sum(w * x) / sum(w)
  smearing <- switch(kind, none = NULL,
    factor = obj(kind = str(kind), values = nums(mean_e(exp(e)))),
    moments = obj(kind = str(kind), values = nums(c(min(e), mean_e(e), mean_e(e^2)))),
    points = obj(kind = str(kind), points = packed(rbind(e, w))))
  ll <- as.numeric(logLik(fit))
  summary_fit <- summary(fit)
  model <- obj(
    ladderline_model = "1", status = str("fitted"), family = str("ols"), name = str(name),
    intercept = optional(!intercept, "false"),
    errors = optional(errors != "classical", str(errors)), level = num(level),
    rows = obj(offered = n + 3, fitted = n, with_gaps = 2, outside = 1), columns = arr(columns),
    terms = arr(terms),
    facts = obj(residual_df = df, residual_sd = num(s),
                log_likelihood = optional(!is.null(weight), num(ll))),
    smearing = smearing,
    basis = obj(centre = packed(centre), origin = optional(intercept, nums(c(beta[1], 0))),
                factor = packed(triangle(R)),
                robust = robust, largest_leverage = num(max(h / w))),
    digest = str("0123456789abcdef0123456789abcdef"))

  in_json <- function(inputs, i) arr(sapply(inputs, function(x)
    if (is.character(x)) str(x[i]) else num(x[i])))
  inputs <- lapply(predictors, `[[`, "x")
  rows <- sapply(seq_len(n), function(i) obj(
    inputs = in_json(inputs, i), y = num(response$x[i]), weight = num(w[i]),
    residual = num(e[i]), leverage = num(hatvalues(fit)[i]),
    studentized_residual = num(rstudent(fit)[i]), cooks_distance = num(cooks.distance(fit)[i])))

  Xn <- design(predictors, new, intercept)
  fits <- as.vector(Xn %*% coef(fit))
  t_crit <- qt((1 + level) / 2, df)
  if (errors == "classical") {
    limits <- predict(fit, list(X = Xn), interval = "confidence", level = level)[, 2:3, drop = FALSE]
    cases <- predict(fit, list(X = Xn), interval = "prediction", level = level)[, 2:3, drop = FALSE]
  } else {
    v <- rowSums((Xn %*% V$HC3) * Xn)
    limits <- cbind(fits - t_crit * sqrt(v), fits + t_crit * sqrt(v))
    cases <- cbind(fits - t_crit * sqrt(v + s^2), fits + t_crit * sqrt(v + s^2))
  }
  back <- response$t$b
  smeared <- function(z) if (kind == "none") z else sapply(z, function(f) mean_e(back(f + e)))
  ordered <- function(m) t(apply(m, 1, sort))
  lim <- ordered(matrix(back(limits), ncol = 2))
  mean_lim <- ordered(matrix(smeared(limits), ncol = 2))
  case_lim <- ordered(matrix(back(cases), ncol = 2))
  unscaled <- summary_fit$cov.unscaled
  news <- sapply(seq_along(fits), function(i) obj(
    inputs = in_json(new, i), scale = num(fits[i]), typical = num(back(fits[i])),
    mean = num(smeared(fits[i])), typical_low = num(lim[i, 1]), typical_high = num(lim[i, 2]),
    mean_low = num(mean_lim[i, 1]), mean_high = num(mean_lim[i, 2]),
    case_low = num(case_lim[i, 1]), case_high = num(case_lim[i, 2]),
    leverage = num(sum((Xn[i, ] %*% unscaled) * Xn[i, ]))))
  coefficient_rows <- function(se) sapply(seq_len(k), function(j) {
    b <- coef(fit)[j]
    obj(term = str(colnames(X)[j]), coefficient = num(b), standard_error = num(se[j]),
        low = num(b - t_crit * se[j]), high = num(b + t_crit * se[j]), t = num(b / se[j]),
        p_value = num(2 * pt(-abs(b / se[j]), df)))
  })
  obj(name = str(name), level = num(level), model = model, rows = arr(paste0("\n  ", rows)),
      new = arr(paste0("\n  ", news)), classical = arr(paste0("\n  ", coefficient_rows(se$standard_error))),
      hc3 = arr(paste0("\n  ", coefficient_rows(se$hc3))))
}

cases <- c(
  make_case("tree volume", number("volume", trees$Volume, log_offset(0), "cubic feet"),
            list(number("girth", trees$Girth, log_offset(0), "inches"),
                 number("height", trees$Height, unit = "feet")),
            list(c(8.3, 12, 20), c(70, 75, 87))),
  make_case("tree volume, robust", number("volume", trees$Volume, log_offset(1), "cubic feet"),
            list(number("girth", trees$Girth, log_offset(0), "inches"),
                 number("height", trees$Height, unit = "feet")),
            list(c(8.3, 12, 20), c(70, 75, 87)), errors = "hc3"),
  make_case("miles per gallon", number("mpg", mtcars$mpg),
            list(number("weight of car", mtcars$wt),
                 category("cylinders", mtcars$cyl, "6"), number("power", mtcars$hp, log_offset(10))),
            list(c(1.6, 3, 5.4), c("4", "8", "6"), c(60, 150, 300)),
            weight = number("w", mtcars$carb)),
  make_case("stopping distance", number("dist", cars$dist, sqrt_),
            list(number("speed", cars$speed)), list(c(9, 17, 25)), level = 0.8),
  make_case("fuel use", number("mpg", mtcars$mpg, reciprocal),
            list(number("weight", mtcars$wt), number("power", mtcars$hp)),
            list(c(1.6, 3, 5.4), c(60, 150, 300)), errors = "hc3", level = 0.99),
  make_case("insects by spray", number("count", InsectSprays$count, log_offset(1)),
            list(category("spray", InsectSprays$spray, "")), list(c("A", "C", "F")),
            intercept = FALSE))
cat("{\"source\":\"tests/reference/models_r.R, ", R.version.string, ", sandwich ",
    as.character(packageVersion("sandwich")), "\",\n\"cases\":[\n", sep = "")
cat(cases, sep = ",\n")
cat("\n]}\n")
