# The bare formula over a table, in R: what a batch run is timed against.
#
# Written with R 4.2.2 (Debian package r-base-core); base R only.
#
#   Rscript bareformula.R IN.csv OUT.csv        reads, computes, writes
#   Rscript bareformula.R make ROWS FILE.csv    writes a table to run it on
#
# In: species, mass, model_species, model_mass, dose, interval (other columns
# are dropped); mass in kg or g, dose in mg/kg and interval in h, with the unit
# or as a plain number. Out: the table with S = (mass/model mass)^-0.25, the
# dose per kg at the model's interval, the amount, and the stretched interval.
# One constant for both animals: no lookup, no caution, no range, no checks.

arguments <- commandArgs(trailingOnly = TRUE)

if (arguments[1] == "make") {
  n <- as.integer(arguments[2])
  i <- seq_len(n)
  species <- c("giant anteater", "red panda", "capybara", "maned wolf", "meerkat")
  middle <- c(33, 4.5, 48, 24, 0.75)
  k <- (i - 1) %% length(species) + 1
  write.csv(data.frame(
    species = species[k],
    mass = paste(signif(middle[k] * (0.8 + 0.4 * ((i * 7919) %% 1000) / 1000), 4), "kg"),
    model_species = "dog", model_mass = "20 kg",
    dose = paste(c(2, 5, 12.5)[i %% 3 + 1], "mg/kg"),
    interval = paste(c(8, 12, 24)[i %% 3 + 1], "h"),
    source = "invented"),
    arguments[3], row.names = FALSE, quote = FALSE)
  quit()
}

d <- read.csv(arguments[1], colClasses = "character")
number <- function(text) as.numeric(sub(" *[a-z/]*$", "", text))
kg <- function(text) number(text) * ifelse(grepl("[0-9] *g$", text), 1e-3, 1)
mass <- kg(d$mass)
S <- (mass / kg(d$model_mass))^-0.25
dose <- number(d$dose)
interval <- number(d$interval)
write.csv(data.frame(
  species = d$species, mass = d$mass, model_species = d$model_species,
  model_mass = d$model_mass, dose = d$dose, interval = d$interval,
  s = S, dose_mg_per_kg = dose * S, amount_mg = dose * S * mass,
  stretched_interval_h = interval / S),
  arguments[2], row.names = FALSE)
