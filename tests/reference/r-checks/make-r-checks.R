# Reference values for tests/shared/statistics that the other folders lack. Rebuild: Rscript make-r-checks.R (R 4.2.2, MASS, sandwich, jsonlite).
suppressMessages({library(MASS); library(sandwich); library(jsonlite)})
args <- commandArgs(FALSE); base <- dirname(normalizePath(sub("--file=", "", grep("--file=", args, value=TRUE)))); p <- function(f) file.path(base, f)
write.csv(cement, p("hald_cement.csv"), row.names=FALSE); write.csv(stackloss, p("stackloss.csv"), row.names=FALSE); write.csv(longley, p("longley_of_r.csv"), row.names=FALSE)
g <- function(f, value, degrees, other=NA) data.frame(f=f, value=value, degrees=degrees, other=other)
grid <- rbind(
  expand.grid(f="qt", value=c(1e-12,1e-4,.025,.1,.4,.6,.975,.995), degrees=c(.5,1,2,3,3.7,9,14,94,1000,8918), other=NA),
  expand.grid(f="two_sided_t", value=c(1e-6,.1,.73,2.65,8.5,17.46,65.6), degrees=c(1,2,3.7,9,14,94,1000,8918), other=NA),
  expand.grid(f="chi_square_tail", value=c(.001,.5,2.5,12,28.6,98,898.7), degrees=c(1,2,6,13,18,100,1000), other=NA),
  expand.grid(f="f_tail", value=c(.1,.9,1,2,6.5,20.6), degrees=c(1,6,10,18), other=c(1,9,94,8918)),
  expand.grid(f="pnorm", value=c(-8,-5,-1.96,-.5,-1e-5,.3,1,3), degrees=NA, other=NA),
  expand.grid(f="qnorm", value=c(1e-300,1e-20,1e-9,.001,.07,.076,.2,.5,.7,.975,.999999), degrees=NA, other=NA))
grid$result <- mapply(function(f,v,d,o) switch(as.character(f), qt=qt(v,d), two_sided_t=2*pt(-v,d), chi_square_tail=pchisq(v,d,lower.tail=FALSE), f_tail=pf(v,d,o,lower.tail=FALSE), pnorm=pnorm(v), qnorm=qnorm(v)), grid$f, grid$value, grid$degrees, grid$other)
set.seed(4); n <- 40; week <- rep(1:10, 4); w <- round(runif(n, .5, 3), 2); w[c(7,23)] <- 0; x1 <- round(rnorm(n), 3); x2 <- round(x1*.4 + rnorm(n), 3); y <- round(1 + 2*x1 - x2 + rnorm(n)/sqrt(pmax(w,.1)), 3)
wm <- lm(y ~ x1 + x2, weights=w); s <- summary(wm); sel <- w > 0; wp <- lm(y ~ x1 + x2, weights=w, subset=sel)
weighted <- list(y=y, x1=x1, x2=x2, w=w, week=week, coefficients=unname(coef(wm)), se=unname(s$coefficients[,2]), sigma=s$sigma, r_squared=s$r.squared, adj_r_squared=s$adj.r.squared, F=unname(s$fstatistic[1]), logLik=as.numeric(logLik(wm)), AIC=AIC(wm), BIC=BIC(wm), fitted=unname(fitted(wm)), hat_of_weighted_rows=unname(hatvalues(wp)), se_HC0=unname(sqrt(diag(vcovHC(wp,"HC0")))), se_HC1=unname(sqrt(diag(vcovHC(wp,"HC1")))), se_HC3=unname(sqrt(diag(vcovHC(wp,"HC3")))), se_cluster_week=unname(sqrt(diag(vcovCL(wp,cluster=week[sel],type="HC1")))), se_panel_NW_lag2=unname(sqrt(diag(vcovPL(wp, cluster=rep(1:4,each=10)[sel], order.by=week[sel], lag=2, aggregate=TRUE, adjust=FALSE)))))
X <- model.matrix(~ ., read.csv(p("longley_of_r.csv"))[, c("GNP","Unemployed","Armed.Forces","Population","Year","Employed")]); Xs <- sweep(X, 2, sqrt(colSums(X^2)), "/"); sv <- svd(Xs); phi <- t(t(sv$v)/sv$d)^2
longley7 <- longley; names(longley7)[1] <- "y"
nist <- fromJSON(file.path(base, "../nist/nist_strd.json"))$Longley$data; N <- as.matrix(as.data.frame(nist)[,-1]); NX <- cbind(1, N); Ns <- sweep(NX, 2, sqrt(colSums(NX^2)), "/"); nsv <- svd(Ns); nphi <- t(t(nsv$v)/nsv$d)^2
lr <- lm.ridge(y ~ ., longley7, lambda=c(0, .0057, .02, 1)); gr <- lm.ridge(y ~ ., longley7, lambda=seq(0, .1, .0001))
h <- rlm(stack.loss ~ ., stackloss, psi=psi.huber, k=1.345, acc=1e-14, maxit=1000)
al <- lm(c(1,2,4,3,5,7,6) ~ a + b + c + d, data.frame(a=1:7, b=2*(1:7)+3, c=c(1,0,1,0,1,1,0), d=c(2,1,3,2,4,4,3)))
out <- list(made_with=R.version.string, distributions=grid, weighted=weighted,
  belsley_longley_nist=list(indices=max(nsv$d)/nsv$d, proportions=t(nphi/rowSums(nphi))),
  ridge_longley_of_r=list(HKB=lr$kHKB, LW=lr$kLW, lambda=lr$lambda, coefficients=unname(coef(lr)), GCV=unname(lr$GCV), lambda_of_smallest_GCV_on_0.0001_grid=gr$lambda[which.min(gr$GCV)]),
  huber_stackloss=list(coefficients=unname(coef(h)), scale=h$s), aliased=list(coefficients=unname(coef(al)), residuals=unname(resid(al))))
write_json(out, p("r_checks.json"), digits=NA, auto_unbox=TRUE, pretty=FALSE, na="null")
