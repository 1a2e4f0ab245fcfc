# Variance components of height in Galton's families, children and both parents,
# with a mean for each sex, by base R. Run in this folder: Rscript make.R
#
# The likelihood is one multivariate normal density a family. K is 1/2 between
# parent and child and between siblings, S is 1 between siblings. Siblings share
# a home in both ACE models; parents have one of their own in the first (so that
# everyone has the same variance) and none in ACE_siblings.
table <- read.csv("GaltonFamilies.csv", colClasses = c(family = "character"))
families <- lapply(split(table, factor(table$family, unique(table$family))), function(f) {
  k <- nrow(f)
  K <- matrix(0.5, k + 2, k + 2); diag(K) <- 1; K[1, 2] <- K[2, 1] <- 0
  S <- diag(k + 2); S[-(1:2), -(1:2)] <- 1
  own <- S; own[1, 1] <- own[2, 2] <- 0
  list(y = c(f$father[1], f$mother[1], f$childHeight), X = cbind(1, c(1, 0, f$gender == "male")), K = K, S = S, own = own)
})
n <- sum(sapply(families, function(f) length(f$y)))
deviance <- function(a, s, home = "S", parts = FALSE) {
  XX <- matrix(0, 2, 2); Xy <- c(0, 0); yy <- 0; ld <- 0
  for (f in families) {
    R <- chol(a * f$K + s * f[[home]] + (1 - a - s) * diag(length(f$y)))
    X <- backsolve(R, f$X, transpose = TRUE); y <- backsolve(R, f$y, transpose = TRUE)
    XX <- XX + crossprod(X); Xy <- Xy + crossprod(X, y); yy <- yy + sum(y^2); ld <- ld + 2 * sum(log(diag(R)))
  }
  b <- solve(XX, Xy); v <- (yy - sum(b * Xy)) / n
  d <- n * (log(2 * pi * v) + 1) + ld
  if (parts) c(A = a * v, S = s * v, E = (1 - a - s) * v, log_likelihood = -d / 2, female = b[1], male = b[2],
               female_se = sqrt(v * solve(XX)[1, 1]), male_se = sqrt(v * solve(XX)[2, 2])) else d
}
# Newton's method on differences of the fourth order brings the optimum to the
# digits that the deviance itself has.
polish <- function(f, p, h = 2e-3) {
  unit <- diag(length(p)) * h
  for (round in 1:4) {
    g <- sapply(seq_along(p), function(j) (8 * (f(p + unit[j, ]) - f(p - unit[j, ])) - f(p + 2 * unit[j, ]) + f(p - 2 * unit[j, ])) / (12 * h))
    H <- outer(seq_along(p), seq_along(p), Vectorize(function(i, j)
      (f(p + unit[i, ] + unit[j, ]) - f(p + unit[i, ] - unit[j, ]) - f(p - unit[i, ] + unit[j, ]) + f(p - unit[i, ] - unit[j, ])) / (4 * h^2)))
    p <- p - solve(H, g)
  }
  p
}
ae <- polish(function(a) deviance(a, 0), optimize(function(a) deviance(a, 0), c(0.2, 0.95), tol = 1e-12)$minimum)
ase <- function(home) {
  f <- function(p) deviance(p[1], p[2], home)
  p <- polish(f, optim(c(0.6, 0.05), f, control = list(reltol = 1e-16, maxit = 5000))$par)
  deviance(p[1], p[2], home, TRUE)
}
rows <- rbind(deviance(0, 0, parts = TRUE), deviance(ae, 0, parts = TRUE), ase("S"), ase("own"))
write.csv(data.frame(model = c("E", "AE", "ACE", "ACE_siblings"), people = n,
                     apply(rows, 2, function(x) formatC(x, digits = 15, width = 1, format = "g"))),
          "reference.csv", row.names = FALSE, quote = FALSE)

# Correlations. Parents and children, and spouses, over all pairs, after the mean
# of each sex on each side. Siblings: one mean for each sex, one variance and one
# correlation r in families with two children or more, by maximum likelihood, with
# the 95 % limits of the profile likelihood; only sums and deviations of a family
# count, V having the eigenvalues 1 + (k - 1) r and 1 - r.
pairs <- do.call(rbind, lapply(families, function(f) {
  children <- f$y[-(1:2)]; male <- f$X[-(1:2), 2]
  data.frame(parent = rep(f$y[1:2], each = length(children)), father = rep(1:0, each = length(children)),
             child = rep(children, 2), male = rep(male, 2))
}))
parent_child <- cor(resid(lm(parent ~ father, pairs)), resid(lm(child ~ male, pairs)))
spouse <- cor(sapply(families, function(f) f$y[1]), sapply(families, function(f) f$y[2]))
sibships <- Filter(function(f) length(f$y) > 3, families)
sibling <- function(r) {
  XX <- matrix(0, 2, 2); Xy <- c(0, 0); yy <- 0; ld <- 0; n <- 0
  for (f in sibships) {
    y <- f$y[-(1:2)]; X <- f$X[-(1:2), ]; k <- length(y)
    w <- function(a) list(mean = colMeans(cbind(a)), rest = sweep(cbind(a), 2, colMeans(cbind(a))))
    u <- w(X); v <- w(y)
    b <- k / (1 + (k - 1) * r); i <- 1 / (1 - r)
    XX <- XX + b * tcrossprod(u$mean) + i * crossprod(u$rest)
    Xy <- Xy + b * u$mean * v$mean + i * crossprod(u$rest, v$rest)
    yy <- yy + b * v$mean^2 + i * sum(v$rest^2)
    ld <- ld + log(1 + (k - 1) * r) + (k - 1) * log(1 - r); n <- n + k
  }
  n * log((yy - sum(Xy * solve(XX, Xy))) / n) + ld
}
r <- polish(sibling, optimize(sibling, c(0, 0.9), tol = 1e-12)$minimum)
rise <- function(x) sibling(x) - sibling(r) - qchisq(0.95, 1)
limits <- c(uniroot(rise, c(0, r), tol = 1e-13)$root, uniroot(rise, c(r, 0.9), tol = 1e-13)$root)
write.csv(data.frame(relation = c("parent_child", "spouse", "full_sibling"),
                     pairs = c(nrow(pairs), length(families), sum(sapply(sibships, function(f) choose(length(f$y) - 2, 2)))),
                     families = c(length(families), length(families), length(sibships)),
                     correlation = formatC(c(parent_child, spouse, r), digits = 15, width = 1, format = "g"),
                     low = c("", "", formatC(limits[1], digits = 15, width = 1, format = "g")),
                     high = c("", "", formatC(limits[2], digits = 15, width = 1, format = "g"))),
          "correlations.csv", row.names = FALSE, quote = FALSE)
