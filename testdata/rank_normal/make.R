# Rank-based normal scores by R's own rank and qnorm.
# Run in this folder:  Rscript make.R
score <- function(x) {
  n <- sum(!is.na(x))
  qnorm((rank(x, ties.method = "average", na.last = "keep") - 0.375) / (n + 0.25))
}
set.seed(20260112)
cases <- list(
  one = 4.2,
  two = c(3, -1),
  ties = c(5, 1, 5, 2, 2, 2, 9, 1),
  constant = c(7, 7, 7),
  missing = c(NA, 0.3, 0.1, NA, 0.2, 0.3),
  skewed = round(rexp(40), 2),
  many = sample(2000) + 0
)
rows <- do.call(rbind, lapply(names(cases), function(name) {
  x <- cases[[name]]
  data.frame(case = name, value = sprintf("%.17g", x), score = sprintf("%.17g", score(x)))
}))
write.csv(rows, "scores.csv", row.names = FALSE, quote = FALSE, eol = "\n")
