# Fits the four classes of a measured-rates table with nlme and predicts a few
# animals; run as: Rscript relatives.R measured-rates.csv
# predict.lme gives no standard errors, so the prediction's sd is computed from
# the covariance matrix, written out in full.
suppressPackageStartupMessages(library(nlme))
args <- commandArgs(TRUE)
d <- read.csv(args[1])
d$flag[is.na(d$flag)] <- ""
d <- d[d$flag == "", ]
probe <- read.csv(text="class,order,family,genus,mass,temperature
Mammalia,Pilosa,Myrmecophagidae,Myrmecophaga,41,37
Mammalia,Carnivora,Canidae,Canis,18,37
Mammalia,Artiodactyla,Giraffidae,Giraffa,800,37
Mammalia,Proboscidea,Nowhere,Nobody,3000,37
Aves,Psittaciformes,Strigopidae,Strigops,2,40
Aves,Passeriformes,Corvidae,Corvus,0.5,40
Reptilia,Squamata,Pythonidae,Python,1.5,30
Reptilia,Testudines,Testudinidae,Testudo,1,30
Amphibia,Anura,Ranidae,Rana,0.03,20
Amphibia,Caudata,Ambystomatidae,Ambystoma,0.06,18")
for (cl in c("Amphibia","Aves","Mammalia","Reptilia")) {
  x <- d[d$class == cl, ]
  x$o <- x$order; x$f <- paste(x$order, x$family); x$g <- paste(x$f, x$genus)
  ecto <- cl %in% c("Amphibia","Reptilia")
  form <- if (ecto) log(rate_w) ~ log(mass_kg) + temperature_c else log(rate_w) ~ log(mass_kg)
  m <- lme(form, random = ~1|o/f/g, data = x, method = "REML", control = lmeControl(maxIter=500, msMaxIter=500, tolerance=1e-12, msTol=1e-12, opt="optim"))
  vc <- suppressWarnings(as.numeric(VarCorr(m)[, "Variance"])); vc <- vc[!is.na(vc)]
  cat(sprintf("fit %s %d beta %s var %s\n", cl, nrow(x), paste(sprintf("%.10g", fixef(m)), collapse=" "), paste(sprintf("%.10g", vc), collapse=" ")))
  X <- model.matrix(form, x)
  same <- function(a, b) outer(a, b, "==") * 1
  V <- vc[1]*same(x$o,x$o) + vc[2]*same(x$f,x$f) + vc[3]*same(x$g,x$g) + vc[4]*diag(nrow(x))
  Vi <- solve(V); y <- log(x$rate_w)
  C <- solve(t(X) %*% Vi %*% X)
  b <- C %*% t(X) %*% Vi %*% y
  p <- probe[probe$class == cl, ]
  for (i in seq_len(nrow(p))) {
    q <- p[i, ]; qo <- q$order; qf <- paste(qo, q$family); qg <- paste(qf, q$genus)
    cc <- vc[1]*(x$o==qo) + vc[2]*(x$f==qf) + vc[3]*(x$g==qg)
    x0 <- c(1, log(q$mass), if (ecto) q$temperature)
    mean <- sum(x0*b) + t(cc) %*% Vi %*% (y - X %*% b)
    u <- x0 - t(X) %*% Vi %*% cc
    sd <- sqrt(sum(vc) - t(cc) %*% Vi %*% cc + t(u) %*% C %*% u)
    cat(sprintf("%s %s %s %s %g %g %.8g %.8g\n", cl, q$order, q$family, q$genus, q$mass, q$temperature, mean, sd))
  }
}
