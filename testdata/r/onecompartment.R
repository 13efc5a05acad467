# One compartment, by numerical integration (deSolve, lsoda), as a check on
# closed forms. Reads CSV on standard input, one scenario a line:
#
#   id,ke,ka,input,tau,doses,infusion
#
# with rate constants per hour (ka 0: the dose is in the blood at once), input
# the concentration that one dose at once would add (per hour for an infusion),
# tau in hours, doses enough for steady state. Writes CSV:
#
#   id,what,x,value
#
# where what is "at" (x hours after the first dose, in the first five
# intervals) or, of the last interval, "cmax", "tmax", "cmin", "auc".

suppressPackageStartupMessages(library(deSolve))

model <- function(t, y, p) {
  into <- p$ka * y[["depot"]] + p$direct
  list(c(depot = p$todepot - p$ka * y[["depot"]],
         blood = into - p$ke * y[["blood"]],
         area  = y[["blood"]]))
}

run <- function(y, p, span, n) {
  lsoda(y, seq(0, span, length.out = n + 1), model, p, rtol = 1e-11, atol = 1e-13)
}

scenarios <- read.csv(file("stdin"), header = FALSE,
  col.names = c("id", "ke", "ka", "input", "tau", "doses", "infusion"))

for (i in seq_len(nrow(scenarios))) {
  s <- scenarios[i, ]
  say <- function(what, x, value) cat(sprintf("%s,%s,%.17g,%.17g\n", s$id, what, x, value), sep = "")
  absorbed <- s$ka > 0
  p <- list(ke = s$ke, ka = s$ka,
            direct  = if (s$infusion == 1 && !absorbed) s$input else 0,
            todepot = if (s$infusion == 1 && absorbed) s$input else 0)
  y <- c(depot = 0, blood = 0, area = 0)
  give <- function(y) {
    if (s$infusion == 1) return(y)
    into <- if (absorbed) "depot" else "blood"
    y[[into]] <- y[[into]] + s$input
    y
  }
  for (dose in seq_len(s$doses)) {
    y <- give(y)
    last <- dose == s$doses
    if (last) y[["area"]] <- 0
    out <- run(y, p, s$tau, if (last) 2000 else if (dose <= 5) 8 else 1)
    if (dose <= 5) {
      inside <- 2:8
      say("at", (dose - 1) * s$tau + out[inside, "time"], out[inside, "blood"])
    }
    if (last) {
      curve <- splinefun(out[, "time"], out[, "blood"])
      top <- which.max(out[, "blood"])
      if (top == 1 || top == nrow(out)) {
        best <- list(maximum = out[top, "time"], objective = out[top, "blood"])
      } else {
        best <- optimize(curve, out[c(top - 1, top + 1), "time"], maximum = TRUE, tol = 1e-10)
      }
      say("cmax", 0, best$objective)
      say("tmax", 0, best$maximum)
      say("cmin", 0, min(out[, "blood"]))
      say("auc", 0, out[nrow(out), "area"])
    }
    y <- setNames(out[nrow(out), c("depot", "blood", "area")], c("depot", "blood", "area"))
  }
}
