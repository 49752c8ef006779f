# Poisson regression of the arrivals of each area with R's own glm, on the counts that our fit takes: hour of week,
# level by quarter, and the same effects of the calendar, with the exposure as offset.
# Arguments: the CSV of the counts. Writes "seconds,S" of all fits, then "area,hour of week,log rate,standard error".
counts <- read.csv(commandArgs(trailingOnly = TRUE)[1])
counts <- counts[counts$exposure > 0, ]
counts$how <- factor(counts$how)
counts$quarter <- factor(counts$quarter)
effects <- grep("^effect", names(counts), value = TRUE)
model <- reformulate(c("0", "how", "quarter", effects, "offset(log(exposure))"), response = "n")
seconds <- 0
rows <- list()
for (area in unique(counts$area)) {
  own <- counts[counts$area == area, ]
  took <- system.time(fit <- glm(model, family = poisson, data = own))
  # Processor time of this process.
  seconds <- seconds + took[["user.self"]] + took[["sys.self"]]
  found <- summary(fit)$coefficients
  found <- found[grep("^how", rownames(found)), ]
  rows[[length(rows) + 1]] <- data.frame(area, how = sub("^how", "", rownames(found)), found[, 1:2])
}
cat(sprintf("version,%s.%s\n", R.version$major, R.version$minor))
cat(sprintf("seconds,%.3f\n", seconds))
write.table(do.call(rbind, rows), sep = ",", col.names = FALSE, row.names = FALSE, quote = FALSE)
