# Estimates of E, CE, AE and ACE for twin pairs by lavaan, and profile limits by
# base R. Run in this folder: Rscript make.R
#
# lavaan fits two groups of pairs. DZ twins share one genetic factor and have one
# each of their own, with loadings of the root of a half; MZ twins share all.
# lavaan does not bound variances. The bounded ACE optimum is the best of the
# unbounded ACE, AE, CE and E optima that has no negative variance.
suppressMessages(library(lavaan))
people <- read.csv("people.csv", colClasses = c(person = "character", family = "character"))
values <- read.csv("dynamics.csv")
measures <- setdiff(names(values), "person")
table <- merge(people, values, by = "person", sort = FALSE)

model <- function(components) {
  variance <- function(n) if (n %in% components) sprintf("c(%s, %s)", n, n) else "c(0, 0)"
  paste(c("
  shared =~ c(1, 0.70710678118654757) * first + c(1, 0.70710678118654757) * second
  own1 =~ c(0, 0.70710678118654757) * first
  own2 =~ c(0, 0.70710678118654757) * second
  home =~ 1 * first + 1 * second
  first ~ c(m, m) * 1
  second ~ c(m, m) * 1
  first ~~ c(E, E) * first
  second ~~ c(E, E) * second",
    sprintf("%s ~~ %s * %s", c("shared", "own1", "own2"), variance("A"), c("shared", "own1", "own2")),
    sprintf("home ~~ %s * home", variance("C"))), collapse = "\n")
}
models <- list(ACE = c("A", "C"), AE = "A", CE = "C", E = character(0))

fit <- function(pairs, name) {
  # It warns of negative variances, which are wanted here.
  f <- suppressWarnings(lavaan(model(models[[name]]), data = pairs, group = "zygosity", group.label = c("MZ", "DZ"),
              meanstructure = TRUE, likelihood = "normal", se = "none", test = "standard",
              control = list(rel.tol = 1e-14, x.tol = 1e-12, abs.tol = 0, eval.max = 5000, iter.max = 5000)))
  p <- c(coef(f), A = 0, C = 0)
  c(sapply(c(A = "A", C = "C", E = "E", mean = "m"), function(n) p[names(p) == n][[1]]),
    log_likelihood = as.numeric(logLik(f)))
}

# -2 lnL at shares a and c with mean and total variance at their best: sums and
# differences of a pair are independent.
deviance <- function(pairs, a, c) {
  r <- ifelse(pairs$zygosity == "MZ", a + c, a / 2 + c)
  s <- (pairs$first + pairs$second) / sqrt(2); d <- (pairs$first - pairs$second) / sqrt(2)
  m <- sum(s / (1 + r)) / sum(sqrt(2) / (1 + r))
  n <- 2 * nrow(pairs)
  v <- (sum((s - sqrt(2) * m)^2 / (1 + r)) + sum(d^2 / (1 - r))) / n
  n * log(2 * pi) + n * log(v) + sum(log(1 + r) + log(1 - r)) + n
}
inner <- function(f, high) {
  if (high <= 0) return(f(0))
  grid <- seq(0, high, length.out = 21)
  at <- which.min(sapply(grid, f))
  o <- optimize(f, c(grid[max(at - 1, 1)], grid[min(at + 1, 21)]), tol = 1e-12)
  min(o$objective, f(0), f(high))
}
limits <- function(pairs, a, c) {
  least <- deviance(pairs, a, c)
  crit <- qchisq(0.95, 1)
  profile <- list(
    a2 = function(t) inner(function(x) deviance(pairs, t, x), max(0, 1 - t - 1e-9)),
    c2 = function(t) inner(function(x) deviance(pairs, x, t), max(0, 1 - t - 1e-9)),
    e2 = function(t) inner(function(x) deviance(pairs, x, 1 - t - x), 1 - t))
  share <- c(a2 = a, c2 = c, e2 = 1 - a - c)
  unlist(lapply(names(share), function(n) {
    g <- function(t) profile[[n]](t) - least - crit
    low <- if (share[[n]] < 1e-9 || (n != "e2" && g(0) < 0)) 0 else uniroot(g, c(if (n == "e2") 1e-6 else 0, share[[n]]), tol = 1e-13)$root
    high <- if (share[[n]] > 1 - 1e-9 || g(1 - 1e-6) < 0) 1 else uniroot(g, c(share[[n]], 1 - 1e-6), tol = 1e-13)$root
    setNames(c(low, high), paste(n, c("low", "high"), sep = "_"))
  }))
}

rows <- do.call(rbind, lapply(measures, function(measure) {
  pairs <- do.call(rbind, lapply(split(table, table$family), function(f)
    data.frame(zygosity = f$zygosity[1], first = f[[measure]][1], second = f[[measure]][2])))
  fits <- sapply(names(models), function(n) fit(pairs, n))
  feasible <- colSums(fits[c("A", "C", "E"), ] < 0) == 0
  best <- names(which.max(ifelse(feasible, fits["log_likelihood", ], -Inf)))
  total <- sum(fits[c("A", "C", "E"), best])
  one <- function(n, low) if (fits[low, n] < 0) "E" else n
  all <- data.frame(measure = measure,
                    model = c("ACE_signed", "AE_signed", "CE_signed", "E", "AE", "CE", "ACE"),
                    t(fits[, c("ACE", "AE", "CE", "E", one("AE", "A"), one("CE", "C"), best)]), row.names = NULL)
  l <- limits(pairs, fits["A", best] / total, fits["C", best] / total)
  all[names(l)] <- NA
  all[7, names(l)] <- l
  all
}))
numbers <- sapply(rows, is.numeric)
rows[numbers] <- lapply(rows[numbers], function(x) ifelse(is.na(x), "", formatC(x, digits = 15, width = 1, format = "g")))
write.csv(rows, "reference.csv", row.names = FALSE, quote = FALSE)
