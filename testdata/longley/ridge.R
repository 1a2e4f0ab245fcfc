# Ridge weights of Longley's regression by the closed form, in base R:
#   Rscript ridge.R        writes ridge.csv here (made with R 4.2.2)
# Measures have mean 0 and standard deviation 1 with divisor n; weights are per
# that deviation and minimise sum (y - b0 - X b)^2 + penalty * sum b^2.
data <- read.csv("longley.csv")
y <- data$Employed - mean(data$Employed)
x <- scale(as.matrix(data[, -1])) * sqrt(16 / 15)
out <- NULL
for (penalty in c(0.01, 0.1, 1, 10, 100)) {
  d <- svd(x)
  b <- d$v %*% ((d$d / (d$d^2 + penalty)) * crossprod(d$u, y))
  closed <- solve(crossprod(x) + penalty * diag(6), crossprod(x, y))
  stopifnot(max(abs(b - closed)) < 1e-10)
  df <- sum(d$d^2 / (d$d^2 + penalty))
  out <- rbind(out, data.frame(penalty, measure = colnames(x), weight = sprintf("%.14g", b), df = sprintf("%.14g", df)))
}
write.csv(out, "ridge.csv", row.names = FALSE, quote = FALSE)
