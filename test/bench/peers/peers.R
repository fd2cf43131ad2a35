# General-purpose R on the data of one task: Rscript peers.R TASK FOLDER TIMES. FOLDER holds little-endian doubles, columns one after
# another. Prints one JSON line a peer: its name, every run's milliseconds and those of the processor, and the numbers that it found.
given <- commandArgs(TRUE)
folder <- given[2]
times <- as.integer(given[3])
column <- function(name) {
  file <- file.path(folder, name)
  readBin(file, "double", file.size(file) / 8, endian = "little")
}
y <- column("y")
G <- length(y)
X <- matrix(column("x"), nrow = G)
k <- ncol(X)

tell <- function(peer, work, runs = times) {
  ms <- busy <- numeric(runs)
  for (i in seq_len(runs)) {
    gc(FALSE)
    clock <- Sys.time()
    used <- proc.time()
    values <- work()
    ms[i] <- as.numeric(difftime(Sys.time(), clock, units = "secs")) * 1e3
    busy[i] <- sum((proc.time() - used)[c("user.self", "sys.self")]) * 1e3
  }
  list <- function(format, numbers) paste(sprintf(format, numbers), collapse = ", ")
  cat(sprintf('{"peer": "%s", "ms": [%s], "busy": [%s], "values": [%s]}\n',
    peer, list("%.4f", ms), list("%.1f", busy), list("%.17g", values)))
}

tasks <- list(
  wls = function() {
    n <- column("n")
    tell("R lm.wfit", function() {
      fit <- lm.wfit(X, y, n)
      c(fit$coefficients, sqrt(diag(chol2inv(fit$qr$qr[1:k, ])) * sum(n * fit$residuals^2) / (G - k)))
    })
  },
  hc3 = function() {
    tell("R lm.fit and HC3", function() {
      fit <- lm.fit(X, y)
      inverse <- chol2inv(fit$qr$qr[1:k, ])
      H <- X %*% inverse
      S <- H * (fit$residuals / (1 - rowSums(H * X)))
      c(fit$coefficients, sqrt(diag(crossprod(S))))
    })
  },
  likelihood = function() {
    n <- column("n")
    # Restricted likelihood with sigma^2 profiled out, in the ratio tau^2 / sigma^2.
    ends <- function(ratio) {
      v <- ratio + 1 / n
      fit <- lm.wfit(X, y, 1 / v)
      rss <- sum(fit$residuals^2 / v)
      R <- fit$qr$qr[1:k, ]
      list(height = -0.5 * ((G - k) * (log(2 * pi * rss / (G - k)) + 1) + sum(log(v)) + 2 * sum(log(abs(diag(R))))),
        scale = rss / (G - k), b = fit$coefficients)
    }
    tell("R, optimize over lm.wfit", function() {
      best <- optimize(function(l) ends(exp(l))$height, c(-12, 8), maximum = TRUE, tol = 1e-8)
      at <- ends(exp(best$maximum))
      c(at$b, at$scale, exp(best$maximum) * at$scale)
    })
    if (G <= 1e5) {
      library(nlme)
      frame <- data.frame(y = y, root = 1 / sqrt(n), X[, -1])
      model <- as.formula(paste("y ~", paste(names(frame)[-(1:2)], collapse = " + ")))
      tell("nlme gls", function() {
        fit <- gls(model, frame, weights = varConstProp(form = ~root))
        parts <- coef(fit$modelStruct$varStruct, unconstrained = FALSE)
        c(coef(fit), fit$sigma^2 * parts[["prop"]]^2, fit$sigma^2 * parts[["const"]]^2)
      }, 1)
    }
  }
)
tasks[[given[1]]]()
