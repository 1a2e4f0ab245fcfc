# Sire and residual variance of the lambs by lme4. Run in this folder: Rscript make.R
suppressMessages(library(lme4))
lambs <- read.csv("harville_lamb.csv")
lambs[c("line", "sire", "damage")] <- lapply(lambs[c("line", "sire", "damage")], factor)
lambs$sire <- interaction(lambs$line, lambs$sire, drop = TRUE)
digits <- function(x) formatC(x, digits = 15, width = 1, format = "g")
rows <- lapply(c(FALSE, TRUE), function(reml) {
  tight <- lmerControl(optimizer = "bobyqa", optCtrl = list(rhobeg = 0.2, rhoend = 1e-12, maxfun = 1e5), calc.derivs = FALSE,
                       check.conv.singular = "ignore")
  f <- lmer(weight ~ line + damage + (1 | sire), lambs, REML = reml, control = tight)
  v <- as.data.frame(VarCorr(f))$vcov
  data.frame(criterion = if (reml) "REML" else "ML", sire = digits(v[1]), residual = digits(v[2]),
             deviance = digits(-2 * as.numeric(logLik(f))))
})
write.csv(do.call(rbind, rows), "reference.csv", row.names = FALSE, quote = FALSE)
