# What model_effects should say of models of open data: effects.json.
# Run: Rscript tests/reference/effects.R > tests/reference/effects.json
#   (R 4.2, sandwich 3.0, jsonlite; data: the CSV files of tests/reference/boxcox)
#
# Fits by lm, covariances by vcov and sandwich's vcovHC and vcovCL, steps and percents from their definitions,
# limits of changes in original units by the delta method with gradients written out here.
suppressMessages({library(sandwich); library(jsonlite)})
options(digits = 17)

read <- function(name) read.csv(file.path("tests/reference/boxcox", paste0(name, ".csv")))

# A re-expression: forward, back, derivative of the way back, and how it can be read.
straight <- function(spec, slope, origin) list(
  spec = spec, f = function(x) (x - origin) * slope, b = function(z) z / slope + origin,
  db = function(z) rep(1 / slope, length(z)), straight = TRUE, slope = slope)
identity_ <- straight("", 1, 0)
logs <- function(spec, edge, sign, k) list(  # ln(sign (x - edge)) = k z
  spec = spec, f = function(x) log(sign * (x - edge)) / k,
  b = function(z) edge + sign * exp(k * z), db = function(z) sign * k * exp(k * z),
  straight = FALSE, k = k, edge = edge, sign = sign)
log_offset <- function(o = 0, base = exp(1), spec = paste("log_offset", o))
  logs(spec, -o, 1, log(base))
log_reflected <- function(top) logs(paste("log_reflected", top), top, -1, -1)
curved <- function(spec, f, b, db) list(spec = spec, f = f, b = b, db = db, straight = FALSE)
sqrt_ <- curved("sqrt_offset", sqrt, function(z) z^2, function(z) 2 * z)
reciprocal <- curved("reciprocal", function(x) 1 / x, function(z) 1 / z, function(z) -1 / z^2)
box_cox <- function(l) curved(paste("box_cox", l), function(x) (x^l - 1) / l,
  function(z) (l * z + 1)^(1 / l), function(z) (l * z + 1)^(1 / l - 1))
asinh_ <- function(t) curved(paste("asinh_scaled", t), function(x) asinh(t * x) / t,
  function(z) sinh(t * z) / t, function(z) cosh(t * z))

number <- function(name, t = identity_) list(name = name, t = t, kind = "number")
category <- function(name, reference) list(name = name, kind = "category", reference = reference)

effects <- function(data, response, predictors, errors, level, weight = NULL, cluster = NULL) {
  d <- read(data)
  if (!is.null(weight)) d$w_ <- d[[weight]] else d$w_ <- 1
  y <- response$t$f(d[[response$name]])
  # The design row of a list of raw inputs.
  levels_of <- function(p) sort(unique(as.character(d[[p$name]])), method = "radix")
  row <- function(inputs) c(1, unlist(lapply(predictors, function(p) {
    v <- inputs[[p$name]]
    if (p$kind == "number") p$t$f(v)
    else as.numeric(setdiff(levels_of(p), p$reference) == v)
  })))
  X <- t(sapply(seq_len(nrow(d)), function(i)
    row(lapply(setNames(lapply(predictors, `[[`, "name"), sapply(predictors, `[[`, "name")),
               function(n) d[[n]][i]))))
  fit <- lm(y ~ 0 + X, weights = w_, data = d)
  b <- coef(fit)
  V <- if (errors == "classical") vcov(fit) else
    if (errors == "cluster") vcovCL(fit, cluster = d[[cluster]], type = "HC1") else
    vcovHC(fit, type = toupper(errors))
  t_ <- qt(1 - (1 - level) / 2, if (errors == "cluster") length(unique(d[[cluster]])) - 1 else fit$df.residual)
  held <- setNames(lapply(predictors, function(p)
    if (p$kind == "number") mean(d[[p$name]]) else p$reference), sapply(predictors, `[[`, "name"))
  out <- list()
  put <- function(column, kind, from, to, figures)
    out[[length(out) + 1]] <<- list(column = column, kind = kind, from = from, to = to,
                                    effect = figures[1], low = min(figures[2:3]),
                                    high = max(figures[2:3]))
  # Estimate and limits of c'b, carried through g.
  linear <- function(c, g = identity) {
    e <- sum(c * b); s <- sqrt(sum(c * (V %*% c)))
    g(c(e, e - t_ * s, e + t_ * s))
  }
  units <- function(r1, r2) {
    z1 <- sum(r1 * b); z2 <- sum(r2 * b)
    e <- response$t$b(z2) - response$t$b(z1)
    gradient <- response$t$db(z2) * r2 - response$t$db(z1) * r1
    s <- sqrt(sum(gradient * (V %*% gradient)))
    c(e, e - t_ * s, e + t_ * s)
  }
  k <- response$t$k
  percent <- function(z) 100 * expm1(k * z)
  at <- function(p, v) { held[[p$name]] <- v; row(held) }
  for (p in predictors) {
    if (p$kind == "category") {
      for (l in setdiff(levels_of(p), p$reference)) {
        figures <- if (!is.null(k)) linear(row(modifyList(held, setNames(list(l), p$name))) - row(held), percent)
                   else units(row(held), at(p, l))
        put(p$name, "level", p$reference, l, figures)
      }
      next
    }
    x <- d[[p$name]]
    q <- quantile(x, c(.25, .5, .75), type = 7, names = FALSE)
    j <- 1 + which(sapply(unlist(lapply(predictors, function(o)
      if (o$kind == "number") o$name else rep(o$name, length(levels_of(o)) - 1))), `==`, p$name))
    unit <- as.numeric(seq_along(b) == j)
    log_x <- !is.null(p$t$k)
    if (!is.null(k) && !log_x && !p$t$straight)
      put(p$name, "percent", q[1], q[3], linear(at(p, q[3]) - at(p, q[1]), percent))
    else if (!is.null(k) || (log_x && response$t$straight)) {
      to <- if (log_x) p$t$edge + p$t$sign * (1 + .01 * p$t$sign) * p$t$sign * (q[2] - p$t$edge)
            else q[2] + 1
      dz <- if (log_x) log(1 + .01 * p$t$sign) / p$t$k else p$t$slope
      rough <- if (log_x) .01 * p$t$sign / p$t$k else p$t$slope
      if (!is.null(k)) {
        put(p$name, "percent", q[2], to, linear(dz * unit, percent))
        put(p$name, "rule_of_thumb", q[2], to, linear(rough * unit, function(z) 100 * k * z))
      } else {
        put(p$name, "percent", q[2], to, linear(dz * unit, function(z) z / response$t$slope))
        put(p$name, "rule_of_thumb", q[2], to, linear(rough * unit, function(z) z / response$t$slope))
      }
    }
    put(p$name, "quartiles", q[1], q[3], units(at(p, q[1]), at(p, q[3])))
  }
  out
}

label <- function(p) if (p$kind == "category") paste0(p$name, " | category ", p$reference) else
  if (p$t$spec == "") p$name else paste0(p$name, " | ", p$t$spec)

case <- function(data, response, predictors, errors = "classical", level = 0.95, weight = NULL,
                 cluster = NULL) {
  columns <- c(list(response), predictors)
  labels <- lapply(columns, function(p) c(label(p), p$name))
  if (!is.null(weight)) labels <- c(labels, list(c(paste0("w | weight"), weight)))
  if (!is.null(cluster)) labels <- c(labels, list(c("c | cluster", cluster)))
  list(data = data, labels = labels, errors = errors, level = level,
       effects = effects(data, response, predictors, errors, level, weight, cluster))
}

cases <- list(
  case("trees", number("Volume", log_offset()), list(number("Girth", log_offset()), number("Height"))),
  case("trees", number("Volume"), list(number("Girth", log_offset(1)), number("Height")), "hc3", 0.9),
  case("trees", number("Volume", log_offset(5)), list(number("Girth", sqrt_), number("Height", log_offset(10))), "hc1"),
  case("trees", number("Volume", log_reflected(100)), list(number("Girth", log_reflected(30)), number("Height")), "hc0"),
  case("trees", number("Volume", reciprocal), list(number("Girth"), number("Height", reciprocal))),
  case("trees", number("Volume", straight("rescale 0 100 0 5", 0.05, 0)), list(number("Girth", log_offset(2)), number("Height")), "classical", 0.8, weight = "Height"),
  case("ornstein", number("interlocks", log_offset(1)),
       list(number("assets", log_offset()), category("sector", "MIN"), category("nation", "CAN")), "hc2"),
  case("ornstein", number("interlocks", sqrt_),
       list(number("assets", log_offset()), category("sector", "MIN"), category("nation", "US")), "classical", 0.99),
  case("ornstein", number("interlocks"),
       list(number("assets", asinh_(0.01)), category("sector", "AGR"), category("nation", "CAN")), "hc3"),
  case("wool", number("cycles", log_offset(0, 10, "log_offset 0 10")),
       list(number("len", straight("z_score 300 40", 1 / 40, 300)), number("amp", log_offset(0, 2, "log_offset 0 2")),
            number("load", straight("center 45", 1, 45)))),
  case("journals", number("subs", box_cox(0.25)),
       list(number("price", log_offset()), number("citations", asinh_(0.1)), number("foundingyear", reciprocal)), "hc3"),
  case("journals", number("subs", logs("box_cox 0 1", -1, 1, 1)),
       list(number("price", logs("box_cox 0", 0, 1, 1)), number("citations", box_cox(0.5)))),
  case("ornstein", number("interlocks", log_offset(1)),
       list(number("assets", log_offset()), category("nation", "CAN")), "cluster", cluster = "sector")
)
cat(toJSON(list(
  about = paste("Made by effects.R with", R.version.string, "and sandwich", packageVersion("sandwich")),
  cases = cases), auto_unbox = TRUE, digits = NA, pretty = 1), "\n")
