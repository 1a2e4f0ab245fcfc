# Random-intercept data of lme4 and their fits by maximum likelihood and
# restricted maximum likelihood. Run in this folder: Rscript make.R
suppressMessages(library(lme4))
digits <- function(x) formatC(x, digits = 15, width = 1, format = "g")
one <- function(name, data, formula, group) {
  write.csv(data, paste0(name, ".csv"), row.names = FALSE, quote = FALSE)
  do.call(rbind, lapply(c(FALSE, TRUE), function(reml) {
    tight <- lmerControl(optimizer = "bobyqa", optCtrl = list(rhobeg = 0.2, rhoend = 1e-12, maxfun = 1e5), calc.derivs = FALSE,
                         check.conv.singular = "ignore")
    f <- lmer(formula, data, REML = reml, control = tight)
    v <- as.data.frame(VarCorr(f))$vcov
    b <- fixef(f); se <- sqrt(diag(as.matrix(vcov(f))))
    data.frame(data = name, criterion = if (reml) "REML" else "ML", group = digits(v[1]), residual = digits(v[2]),
               deviance = digits(-2 * as.numeric(logLik(f))), term = names(b), estimate = digits(b), se = digits(se))
  }))
}
write.csv(rbind(
  one("dyestuff", data.frame(batch = Dyestuff$Batch, y = Dyestuff$Yield), y ~ 1 + (1 | batch)),
  one("dyestuff2", data.frame(batch = Dyestuff2$Batch, y = Dyestuff2$Yield), y ~ 1 + (1 | batch)),
  one("sleepstudy", data.frame(batch = sleepstudy$Subject, y = sleepstudy$Reaction, days = sleepstudy$Days), y ~ days + (1 | batch))),
  "reference.csv", row.names = FALSE, quote = FALSE)
