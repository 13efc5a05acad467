# Ordinary least squares on logs, in R.
#
# Written with R 4.2.2 (Debian package r-base-core); base R only. Run here:
#
#   Rscript powerfit.R [output folder, default .]
#
# writes powerfit-lines.csv (one figure a row) and powerfit-points.csv (one
# point a row), which the Go tests read. Calls: lm, confint, predict, residuals,
# hatvalues, rstandard, rstudent, cooks.distance, qt. Leaving one out refits.

out <- c(commandArgs(trailingOnly = TRUE), ".")[1]
digits <- function(x) sprintf("%.16g", x)

kleiber <- read.csv("../published/kleiber-1947.csv")
pk <- read.csv("../published/pharmacokinetics.csv")
avian <- function(drug) {
  d <- pk[pk$data_set == "hunter2008_avian" & pk$drug == drug & pk$parameter == "CL", ]
  data.frame(name = d$species_common, x = as.numeric(d$mass_kg), y = as.numeric(d$value))
}
sets <- list(
  kleiber = data.frame(name = kleiber$animal, x = kleiber$mass_kg, y = kleiber$rate_kcal_day),
  meloxicam = avian("meloxicam"),
  enrofloxacin = avian("enrofloxacin"),
  sulphadimidine = avian("sulphadimidine"))  # three points: one degree of freedom

lines <- points <- NULL
line <- function(set, what, value)
  lines <<- rbind(lines, data.frame(set = set, figure = what, value = digits(value)))

for (set in names(sets)) {
  d <- sets[[set]]
  m <- lm(log(y) ~ log(x), data = d)
  s <- summary(m)
  line(set, "n", nrow(d))
  line(set, "df", m$df.residual)
  line(set, "ln_a", coef(m)[[1]])
  line(set, "a", exp(coef(m)[[1]]))
  line(set, "b", coef(m)[[2]])
  line(set, "se_ln_a", s$coefficients[1, 2])
  line(set, "se_b", s$coefficients[2, 2])
  line(set, "residual_sd_ln", s$sigma)
  line(set, "r_squared", s$r.squared)
  line(set, "ci95_b_low", confint(m)[2, 1])
  line(set, "ci95_b_high", confint(m)[2, 2])
  line(set, "t_975", qt(0.975, m$df.residual))
  for (at in c(0.05, 3.3, 900)) {
    new <- data.frame(x = at)
    ci <- predict(m, new, interval = "confidence", level = 0.95)
    pi <- predict(m, new, interval = "prediction", level = 0.95)
    se <- predict(m, new, se.fit = TRUE)
    key <- function(what) paste0("at_", at, "_", what)
    line(set, key("value"), exp(ci[1, "fit"]))
    line(set, key("ci95_low"), exp(ci[1, "lwr"]))
    line(set, key("ci95_high"), exp(ci[1, "upr"]))
    line(set, key("pi95_low"), exp(pi[1, "lwr"]))
    line(set, key("pi95_high"), exp(pi[1, "upr"]))
    line(set, key("se_mean_ln"), se$se.fit)
    line(set, key("se_prediction_ln"), sqrt(se$se.fit^2 + se$residual.scale^2))
  }

  # The exponent given: lm with an offset.
  fixed <- lm(log(y) ~ 1 + offset(0.75 * log(x)), data = d)
  line(set, "fixed_ln_a", coef(fixed)[[1]])
  line(set, "fixed_se_ln_a", summary(fixed)$coefficients[1, 2])
  line(set, "fixed_residual_sd_ln", summary(fixed)$sigma)
  new <- data.frame(x = 3.3)
  ci <- predict(fixed, new, interval = "confidence")
  pi <- predict(fixed, new, interval = "prediction")
  line(set, "fixed_at_3.3_value", exp(ci[1, "fit"]))
  line(set, "fixed_at_3.3_ci95_low", exp(ci[1, "lwr"]))
  line(set, "fixed_at_3.3_ci95_high", exp(ci[1, "upr"]))
  line(set, "fixed_at_3.3_pi95_low", exp(pi[1, "lwr"]))
  line(set, "fixed_at_3.3_pi95_high", exp(pi[1, "upr"]))

  fold <- sapply(seq_len(nrow(d)), function(i) {
    without <- lm(log(y) ~ log(x), data = d[-i, ])
    exp(predict(without, d[i, ])) / d$y[i]
  })
  student <- suppressWarnings(rstudent(m))
  points <- rbind(points, data.frame(
    set = set, name = d$name, x = digits(d$x), y = digits(d$y),
    residual = digits(residuals(m)), leverage = digits(hatvalues(m)),
    cooks_distance = digits(cooks.distance(m)),
    standardized = digits(rstandard(m)),
    studentized = if (m$df.residual > 1) digits(student) else "",
    left_out_fold = digits(fold)))
}

for (p in c(0.6, 0.9, 0.95, 0.975, 0.995, 0.9995))
  for (df in c(1, 2, 3, 4, 7, 24, 120, 1004))
    line(paste0("t_df_", df), digits(p), qt(p, df))

write.csv(lines, file.path(out, "powerfit-lines.csv"), row.names = FALSE, quote = FALSE)
write.csv(points, file.path(out, "powerfit-points.csv"), row.names = FALSE, quote = FALSE)
