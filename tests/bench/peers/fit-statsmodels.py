# Poisson regression of the arrivals of each area with statsmodels, on the counts that our fit takes: hour of week,
# level by quarter, and the same effects of the calendar, with the exposure as offset.
# Debian: python3-statsmodels. Arguments: the CSV of the counts.
# Writes "seconds,S" of all fits, then "area,hour of week,log rate,standard error".
import sys
import time

import numpy
import pandas
import statsmodels
import statsmodels.api
import statsmodels.formula.api

counts = pandas.read_csv(sys.argv[1])
counts = counts[counts["exposure"] > 0]
effects = [name for name in counts.columns if name.startswith("effect")]
model = "n ~ 0 + C(how) + C(quarter) + " + " + ".join(effects)
seconds = 0.0
lines = []
for area, own in counts.groupby("area"):
    # Processor time of this process.
    started = time.process_time()
    fit = statsmodels.formula.api.glm(
        model, data=own, family=statsmodels.api.families.Poisson(), offset=numpy.log(own["exposure"])
    ).fit()
    seconds += time.process_time() - started
    for name, rate, error in zip(fit.params.index, fit.params, fit.bse):
        if name.startswith("C(how)"):
            lines.append(f"{area},{name[7:-1]},{rate},{error}")
print(f"version,{statsmodels.__version__}")
print(f"seconds,{seconds:.3f}")
print("\n".join(lines))
