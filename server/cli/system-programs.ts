/** Programs of Debian's packages that tests and the bench run; another system names its own by these variables. */
export const chromiumPath = process.env.FAIRWEEK_CHROMIUM ?? '/usr/bin/chromium';
export const officePath = process.env.FAIRWEEK_SOFFICE ?? '/usr/bin/soffice';
export const systemPythonPath = process.env.FAIRWEEK_PYTHON ?? '/usr/bin/python3';
export const rscriptPath = process.env.FAIRWEEK_RSCRIPT ?? '/usr/bin/Rscript';
