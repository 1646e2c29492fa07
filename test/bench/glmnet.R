# One path of 100 λ by glmnet (Friedman, Hastie & Tibshirani 2010, J. Stat. Softw. 33(1)), called by known-recapture.mjs:
#   Rscript glmnet.R folder threshold repeats
# Reads x.csv (intervals × covariates), y.csv (died, survived) and lambda.csv (total scale), writes coef.csv; prints the
# median CPU time of a path in ms, warm.
suppressMessages(library(glmnet))
argument <- commandArgs(TRUE)
folder <- argument[1]; threshold <- as.numeric(argument[2]); repeats <- as.integer(argument[3])
x <- as.matrix(read.csv(file.path(folder, "x.csv"), header = FALSE))
y <- as.matrix(read.csv(file.path(folder, "y.csv"), header = FALSE))
lambda <- scan(file.path(folder, "lambda.csv"), quiet = TRUE) / sum(y)
glmnet.control(fdev = 0, devmax = 1, epsnr = threshold, mxitnr = 1000)
path <- function() suppressWarnings(glmnet(x, y, family = "binomial", lambda = lambda, standardize = FALSE,
  thresh = threshold, maxit = 1e8))
for (i in 1:3) fit <- path()
times <- sapply(1:repeats, function(i) { gc(FALSE); t <- system.time(fit <<- path()); sum(t[1:2]) })
if (median(times) < 0.02) {
  times <- sapply(1:repeats, function(i) { t <- system.time(for (j in 1:20) path()); sum(t[1:2]) / 20 })
}
write.table(as.matrix(coef(fit)), file.path(folder, "coef.csv"), sep = ",", row.names = FALSE, col.names = FALSE)
cat(1000 * median(times), length(fit$lambda), "\n")
