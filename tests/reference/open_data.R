# Writes the series of examples/open_data and the values that tests/published/open_data.rs expects of them.
#
# Rscript tests/reference/open_data.R
#
# Base R alone. Series: package datasets. Values: binom.test, cor.test, glm with Rao's score test, prop.trend.test, choose,
# and the published formulas written out.
options(digits = 17)
cases <- character()
number <- function(x) format(x, digits = 17, trim = TRUE)
expect <- function(file, column, method, parameters, key, value, by) {
  cases[[length(cases) + 1]] <<- sprintf('{"file": "%s", "column": "%s", "method": "%s", "parameters": %s, "key": "%s", "value": %s, "made_by": "%s"}',
    file, column, method, parameters, key, number(value), by)
}
save <- function(file, frame) write.csv(frame, file.path("examples/open_data", file), row.names = FALSE, quote = FALSE, na = "")

rank_tests <- function(file, column, x) {
  x <- x[!is.na(x)]
  n <- length(x)
  put <- function(method, key, value, by, parameters = "{}") expect(file, column, method, parameters, key, value, by)
  lag <- ceiling(n / 2)
  steps <- x[(lag + 1):n] - x[1:(n - lag)]
  rises <- sum(steps > 0)
  untied <- sum(steps != 0)
  put("cox-stuart", "rises", rises, "counting")
  put("cox-stuart", "p", binom.test(rises, untied)$p.value, "binom.test")
  put("cox-stuart", "p_rising", binom.test(rises, untied, alternative = "greater")$p.value, "binom.test")
  interval <- binom.test(rises, untied)$conf.int
  put("cox-stuart", "share_low", interval[1], "binom.test")
  put("cox-stuart", "share_high", interval[2], "binom.test")
  rho <- cor.test(seq_len(n), x, method = "spearman", exact = FALSE)
  put("spearman", "rho", unname(rho$estimate), "cor.test")
  # Beyond 1e-300 base R gives 0.
  if (rho$p.value > 0) put("spearman", "p", rho$p.value, "cor.test, exact = FALSE", '{"p_by": "t"}')
  side <- x[x != median(x)] > median(x)
  runs <- length(rle(side)$lengths)
  a <- sum(side)
  b <- sum(!side)
  chance <- function(r) {
    k <- r %/% 2
    if (r %% 2 == 0) 2 * choose(a - 1, k - 1) * choose(b - 1, k - 1) / choose(a + b, a)
    else (choose(a - 1, k) * choose(b - 1, k - 1) + choose(a - 1, k - 1) * choose(b - 1, k)) / choose(a + b, a)
  }
  put("runs-about-median", "runs", runs, "rle")
  put("runs-about-median", "p_smooth", sum(sapply(2:runs, chance)), "choose (Wald and Wolfowitz 1940)")
  put("difference-signs", "rises", sum(diff(x) > 0), "diff")
  r <- rank(x)
  put("rank-von-neumann", "squared_steps", sum(diff(r)^2), "rank")
  walk <- (2 * cumsum(r) - seq_len(n) * (n + 1))[-n]
  put("pettitt", "k", max(abs(walk)), "rank and cumsum")
  put("pettitt", "readings_before", which.max(abs(walk)), "rank and cumsum")
  sums <- cumsum(x - mean(x))[-n]
  put("buishand-range", "q", max(abs(sums)) / sqrt(mean((x - mean(x))^2)) / sqrt(n), "cumsum (Buishand 1982)", '{"p_by": "bound"}')
  z <- (x - mean(x)) / sd(x)
  k <- seq_len(n - 1)
  t <- k * (cumsum(z)[-n] / k)^2 + (n - k) * ((sum(z) - cumsum(z)[-n]) / (n - k))^2
  put("normal-homogeneity", "t0", max(t), "cumsum (Alexandersson 1986)", '{"p_by": "bound", "deviation": "sample"}')
}

yearly <- function(file, column, x) {
  frame <- data.frame(year = as.integer(time(x)), value = as.numeric(x))
  names(frame)[2] <- column
  save(file, frame)
  rank_tests(file, column, as.numeric(x))
}
monthly <- function(file, column, x) {
  frame <- data.frame(month = sprintf("%d-%02d", as.integer(floor(time(x) + 1e-6)), as.integer(cycle(x))), value = as.numeric(x))
  names(frame)[2] <- column
  save(file, frame)
  rank_tests(file, column, as.numeric(x))
}

yearly("nile.csv", "flow", Nile)
yearly("lake_huron.csv", "level", LakeHuron)
yearly("new_haven.csv", "temperature", nhtemp)
yearly("lynx.csv", "trapped", lynx)
monthly("mauna_loa.csv", "co2", co2)
monthly("nottingham.csv", "temperature", nottem)
monthly("road_casualties.csv", "drivers", UKDriverDeaths)
days <- with(airquality, sprintf("1973-%02d-%02d", Month, Day))
save("new_york_ozone.csv", data.frame(day = days, ozone = airquality$Ozone))
rank_tests("new_york_ozone.csv", "ozone", airquality$Ozone)

# Counts a year, and how many years of each decade had many: a trend in rates and one in shares.
yearly("discoveries.csv", "count", discoveries)
count <- as.numeric(discoveries)
place <- seq_along(count)
score <- sum((place - mean(place)) * count)^2 / (mean(count) * sum((place - mean(place))^2))
fit <- anova(glm(count ~ place, family = poisson), test = "Rao")
# The null fit stops near its maximum, so Rao's score test of glm has seven digits.
stopifnot(abs(score / fit[2, "Rao"] - 1) < 1e-6)
expect("discoveries.csv", "count", "poisson-trend", "{}", "chi2_trend", score, "score test, to seven digits also glm's")
events <- tapply(count >= 4, (place - 1) %/% 10, sum)
trials <- rep(10, length(events))
tens <- paste(trials, collapse = ", ")
save("discovery_decades.csv", data.frame(decade = as.integer(seq(1860, 1950, 10)), years_with_many = as.integer(events), years = 10L))
trend <- prop.trend.test(events, trials)
expect("discovery_decades.csv", "years_with_many", "cochran-armitage", sprintf('{"trials": [%s]}', tens), "chi2_trend", unname(trend$statistic), "prop.trend.test")
expect("discovery_decades.csv", "years_with_many", "cochran-armitage", sprintf('{"trials": [%s], "p_by": "normal"}', tens), "p", trend$p.value, "prop.trend.test")
writeLines(c("[", paste(cases, collapse = ",\n"), "]"), "tests/published/reference/open_data.json")
