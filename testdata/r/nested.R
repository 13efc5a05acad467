# Random intercepts of genus within family within order, in R.
#
# Written with R 4.2.2 (Debian package r-base-core) and nlme 3.1-162
# (r-cran-nlme). Run here:
#
#   Rscript nested.R [output folder, default .]
#
# writes nested-figures.csv (one figure a row) and nested-predictions.csv (one
# species a row), which the Go tests read. The call, for each class,
#
#   lme(log(rate_w) ~ log(mass_kg) [+ temperature_c],
#       random = ~1|order/family/genus, method = "REML")
#
# with more steps than the defaults, which stop where the variances still change
# in their fourth digit. lme gives no standard deviation for a new species, nor
# what is predicted without a row: these come from the dense covariance matrix
# of all rows, at the variances that lme found. Nothing is shared with the
# program's way, which forms no such matrix.

library(nlme)
out <- c(commandArgs(trailingOnly = TRUE), ".")[1]
digits <- function(x) sprintf("%.12g", x)

rates <- read.csv("../../species/data/measured-rates.csv")
rates <- rates[rates$flag == "", ]
asked <- read.csv("nested-species.csv")
warm <- c("Mammalia", "Aves")

figures <- predictions <- NULL
figure <- function(class, what, value)
  figures <<- rbind(figures, data.frame(class = class, figure = what, value = digits(value)))

for (class in c("Mammalia", "Aves", "Reptilia", "Amphibia")) {
  d <- rates[rates$class == class, ]
  fixed <- if (class %in% warm) log(rate_w) ~ log(mass_kg) else log(rate_w) ~ log(mass_kg) + temperature_c
  m <- lme(fixed, data = d, random = ~ 1 | order/family/genus, method = "REML",
           control = lmeControl(niterEM = 3000, tolerance = 1e-15, msTol = 1e-15,
                                msMaxIter = 1000, msMaxEval = 5000))
  s2 <- sigma(m)^2
  var <- sapply(c("order", "family", "genus"),
                function(l) s2 * as.matrix(m$modelStruct$reStruct[[l]])[1, 1])
  beta <- fixef(m)

  # A genus or family is known by its whole path.
  path <- function(x) list(order = x$order,
                           family = paste(x$order, x$family, sep = "/"),
                           genus = paste(x$order, x$family, x$genus, sep = "/"))
  shared <- function(a, b) {  # covariance through the levels that two tables share
    v <- 0
    for (l in names(var)) v <- v + var[[l]] * outer(path(a)[[l]], path(b)[[l]], "==")
    v
  }
  X <- model.matrix(fixed, d)
  y <- log(d$rate_w)
  V <- shared(d, d) + s2 * diag(nrow(d))

  # Mean and standard deviation of new rows from some of the rows.
  kriging <- function(keep, new, Xnew) {
    W <- solve(V[keep, keep])
    C <- solve(t(X[keep, ]) %*% W %*% X[keep, ])
    b <- C %*% t(X[keep, ]) %*% W %*% y[keep]
    r <- y[keep] - X[keep, ] %*% b
    cov <- shared(new, d[keep, ])
    gap <- Xnew - cov %*% W %*% X[keep, ]
    list(mean = drop(Xnew %*% b + cov %*% W %*% r),
         sd = sqrt(sum(var) + s2 - rowSums((cov %*% W) * cov) + rowSums((gap %*% C) * gap)),
         beta = drop(b), cov = C)
  }
  all <- seq_len(nrow(d))

  figure(class, "n", nrow(d))
  for (l in c("order", "family", "genus")) figure(class, paste0("n_", l), length(unique(path(d)[[l]])))
  for (i in seq_along(beta)) figure(class, paste0("beta_", i - 1), beta[[i]])
  for (i in seq_along(beta)) figure(class, paste0("se_beta_", i - 1), sqrt(vcov(m)[i, i]))
  figure(class, "cov_beta_0_1", vcov(m)[1, 2])
  for (l in names(var)) figure(class, paste0("var_", l), var[[l]])
  figure(class, "var_residual", s2)
  figure(class, "log_likelihood", as.numeric(logLik(m)))

  # Leaving each row out, variances held: P = W - WX(X'WX)^-1X'W.
  W <- solve(V)
  P <- W - W %*% X %*% solve(t(X) %*% W %*% X) %*% t(X) %*% W
  left <- drop(P %*% y) / diag(P)
  figure(class, "leave_one_out_rms", sqrt(mean(left^2)))
  figure(class, "leave_one_out_mean_square_standardised", mean(left^2 * diag(P)))
  figure(class, "leave_one_out_within_90", sum(abs(left) * sqrt(diag(P)) < qnorm(0.95)))

  a <- asked[asked$class == class, ]
  newX <- model.matrix(fixed[-2], a)
  k <- kriging(all, a, newX)
  stopifnot(max(abs(k$beta - beta)) < 1e-8, max(abs(k$cov - vcov(m))) < 1e-8)
  # lme's own predictions stand at the level that a species shares.
  own <- predict(m, a, level = 0:3)
  level <- rep("", nrow(a))
  mean <- beta[[1]] + newX[, -1, drop = FALSE] %*% beta[-1]
  for (l in c("order", "family", "genus")) {
    has <- path(a)[[l]] %in% path(d)[[l]]
    level[has] <- l
    mean[has] <- own[[paste0("predict.", l)]][has]
  }
  stopifnot(!anyNA(mean), max(abs(mean - k$mean)) < 1e-7)
  predictions <- rbind(predictions, data.frame(
    class = class, scientific_name = a$scientific_name, level = level,
    mean = digits(k$mean), sd = digits(k$sd)))

  # Some rows left out for good: deleted, not by the formula.
  for (i in match(a$scientific_name, d$scientific_name)) if (!is.na(i)) {
    one <- kriging(all[-i], d[i, ], X[i, , drop = FALSE])
    stopifnot(abs(y[i] - one$mean - left[i]) < 1e-8)
    figure(class, paste0("left_out_mean_", sub(" ", "_", d$scientific_name[i])), one$mean)
    figure(class, paste0("left_out_sd_", sub(" ", "_", d$scientific_name[i])), one$sd)
  }
}

write.csv(figures, file.path(out, "nested-figures.csv"), row.names = FALSE, quote = FALSE)
write.csv(predictions, file.path(out, "nested-predictions.csv"), row.names = FALSE, quote = FALSE)
