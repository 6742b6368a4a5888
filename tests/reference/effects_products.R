# What model_effects should say of polynomials and products: effects_products.json.
# Run: Rscript tests/reference/effects_products.R > tests/reference/effects_products.json
#   (R 4.2, sandwich 3.0, jsonlite; data: the CSV files of tests/reference/boxcox)
#
# Fits by lm on raw powers and products, covariances by vcov and vcovHC. A contrast is the
# difference of two whole design rows, so that every term a column is in moves with it.
suppressMessages({library(sandwich); library(jsonlite)})
read <- function(name) read.csv(file.path("tests/reference/boxcox", paste0(name, ".csv")))

same <- list(f = identity, spec = "")
ln <- function(o = 0) list(f = function(x) log(x + o), spec = paste("log_offset", o), offset = o)
number <- function(name, t = same, degree = 1)
  list(name = name, t = t, degree = degree, kind = "number")
category <- function(name, reference) list(name = name, reference = reference, kind = "category")

case <- function(data, response, predictors, products = list(), errors = "classical",
                 level = 0.95) {
  d <- read(data)
  names(predictors) <- sapply(predictors, `[[`, "name")
  levels_of <- function(p) sort(unique(as.character(d[[p$name]])), method = "radix")
  part <- function(p, v) if (p$kind == "number") p$t$f(v)^seq_len(p$degree) else
    as.numeric(setdiff(levels_of(p), p$reference) == v)
  row <- function(inputs) {
    parts <- lapply(predictors, function(p) part(p, inputs[[p$name]]))
    c(1, unlist(parts),
      unlist(lapply(products, function(ab) as.vector(t(outer(parts[[ab[1]]], parts[[ab[2]]]))))))
  }
  X <- t(sapply(seq_len(nrow(d)), function(i) row(lapply(predictors, function(p) d[[p$name]][i]))))
  z <- response$t$f(d[[response$name]])
  fit <- lm(z ~ 0 + X)
  b <- coef(fit)
  V <- if (errors == "classical") vcov(fit) else vcovHC(fit, type = toupper(errors))
  tq <- qt(1 - (1 - level) / 2, fit$df.residual)
  logged <- !is.null(response$t$offset)
  limits <- function(c) { e <- sum(c * b); s <- sqrt(sum(c * (V %*% c))); c(e, e - tq * s, e + tq * s) }
  held <- lapply(predictors, function(p) if (p$kind == "number") mean(d[[p$name]]) else p$reference)
  out <- list()
  put <- function(column, kind, from, to, figures)
    out[[length(out) + 1]] <<- list(column = column, kind = kind, from = from, to = to,
                                    effect = figures[1], low = figures[2], high = figures[3])
  describe <- function(p, held, column) {
    at <- function(v) { held[[p$name]] <- v; row(held) }
    percent <- function(from, to) 100 * expm1(limits(at(to) - at(from)))
    units <- function(from, to) {
      if (!logged) return(limits(at(to) - at(from)))
      y1 <- exp(sum(at(from) * b)); y2 <- exp(sum(at(to) * b))
      g <- y2 * at(to) - y1 * at(from); s <- sqrt(sum(g * (V %*% g)))
      y2 - y1 + c(0, -tq, tq) * s
    }
    if (p$kind == "category") {
      for (l in setdiff(levels_of(p), p$reference))
        put(column, "level", p$reference, l,
            if (logged) percent(p$reference, l) else limits(at(l) - at(p$reference)))
      return()
    }
    q <- quantile(d[[p$name]], c(.25, .5, .75), names = FALSE)
    o <- p$t$offset
    if (p$degree > 1) {
      if (logged) put(column, "percent", q[1], q[3], percent(q[1], q[3]))
    } else if (logged || !is.null(o)) {
      to <- if (is.null(o)) q[2] + 1 else (q[2] + o) * 1.01 - o
      c <- at(to) - at(q[2])
      rough <- if (is.null(o)) 1 else .01 / log(1.01)
      put(column, "percent", q[2], to, if (logged) 100 * expm1(limits(c)) else limits(c))
      put(column, "rule_of_thumb", q[2], to, (if (logged) 100 else 1) * rough * limits(c))
    }
    put(column, "quartiles", q[1], q[3], units(q[1], q[3]))
    if (p$degree > 1) {
      put(column, "quartiles", q[1], q[2], units(q[1], q[2]))
      put(column, "quartiles", q[2], q[3], units(q[2], q[3]))
    }
  }
  for (p in predictors) describe(p, held, p$name)
  for (p in predictors) for (o in predictors) {
    if (!any(sapply(products, function(ab) setequal(ab, c(p$name, o$name)))) || p$name == o$name) next
    places <- if (o$kind == "category") setdiff(levels_of(o), o$reference) else
      quantile(d[[o$name]], c(.25, .75), names = FALSE)
    for (v in places) {
      h <- held; h[[o$name]] <- v
      describe(p, h, paste(p$name, "by", o$name))
    }
  }
  label <- function(p) paste0(p$name, if (p$kind == "category") paste(" | category", p$reference)
    else if (p$degree > 1) paste(" | polynomial", p$degree)
    else if (p$t$spec != "") paste(" |", p$t$spec) else "")
  labels <- c(lapply(c(list(response), unname(predictors)), function(p) c(label(p), p$name)),
              lapply(products, function(ab) c(paste0("p", ab[1], ab[2], " | product ", ab[1], " ", ab[2]), "NULL")))
  list(data = data, labels = labels, errors = errors, level = level, effects = out)
}

cases <- list(
  case("trees", number("Volume"), list(number("Girth", degree = 3), number("Height"))),
  case("trees", number("Volume", ln()), list(number("Girth", degree = 2), number("Height")),
       errors = "hc3", level = 0.9),
  case("trees", number("Volume", ln()), list(number("Girth", ln(-5)), number("Height")),
       list(c("Girth", "Height"))),
  case("ornstein", number("interlocks", ln(1)), list(number("assets", ln()), category("nation", "CAN")),
       list(c("assets", "nation")), errors = "hc2"),
  case("poisons", number("time"), list(category("poison", "1"), category("treat", "A")),
       list(c("poison", "treat"))),
  case("trees", number("Volume"), list(number("Girth"), number("Height", ln(1))),
       list(c("Girth", "Height")))
)
cat(toJSON(list(
  about = paste("Made by effects_products.R with", R.version.string, "and sandwich", packageVersion("sandwich")),
  cases = cases), auto_unbox = TRUE, digits = NA, pretty = 1), "\n")
