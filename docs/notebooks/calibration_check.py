# ---
# jupyter:
#   jupytext:
#     text_representation:
#       extension: .py
#       format_name: percent
# ---

# %% [markdown]
# # Calibration check with a certified liquid
#
# Once a week a certified oil is dropped as if it were unknown. Does the bench still measure what
# the certificate says? And has it begun to drift before a check fails?
#
# The file is plain Python: run it as it is, or open it as a notebook. All data are invented;
# paths are those of the project's folder.

# %%
import tomllib

import plumbfall as pf

FOLDER = "sample_runs/certified_oil_check"

# %% [markdown]
# ## This week's check
#
# The tolerance is what the laboratory allows itself: a bias of half a percent. With a tolerance a
# check passes where the bias lies within it with a probability of at least 95 %.

# %%
check = pf.check(f"{FOLDER}/drops.csv", reference="bottle-3", tolerance="0.5 %")
check

# %%
print(check.text())

# %% [markdown]
# The bias and its uncertainty hold every part of both, the certificate's too. E_n is the
# difference over its expanded uncertainty: within 1 the two agree.

# %%
(result,) = check.checks
print(f"bias {result.bias.value:+.2%}, standard uncertainty {result.bias.u:.2%}")
print(
    f"E_n {result.e_n:+.2f}, within tolerance with probability {result.conformance_probability:.3f}"
)

# %% [markdown]
# ## Could the check have failed at all?
#
# A check that nothing can fail is worth nothing. Invent the same drops in a tube that is a tenth
# narrower than its bench sheet says, and check again. `pf.simulate` puts in every error that the
# bench sheet states.

# %%
with open(f"{FOLDER}/bench.toml", "rb") as file:
    sheet = tomllib.load(file)
true_sheet = {**sheet, "tube": {"long": {**sheet["tube"]["long"], "bore": "45.00(2) mm"}}}
drops = pf.simulate(true_sheet, viscosity="947.2 mPa.s", run_set="narrow tube", seed=3)
wrong = pf.check(drops, sheet, reference="bottle-3", tolerance="0.5 %", date="2026-03-05")
wrong

# %% [markdown]
# The walls of the narrow tube brake the ball, the bench sheet knows nothing of it, and the check
# finds the percent that it makes. Two errors that happen to cancel each other it would not find.
#
# ## What the history says
#
# One point a week says more than its own verdict. The limits come from the differences of
# successive checks while the bench was known to be in order, here the first 18.

# %%
chart = pf.chart("sample_runs/check_history/history.csv", baseline=18)
chart

# %%
chart.plot()

# %% [markdown]
# One check failed on 12 January and the next passed: perhaps a bad day. On 2 February the check
# passed once more, but the moving average had left its limits: a small lasting shift, a week
# before the checks failed for good. That was the day to look at the thermometer.

# %%
signals = chart.table()
signals[signals["signals"] != ""][["when", "bias_percent", "decision", "signals"]].head()

# %% [markdown]
# ## For the file
#
# ```python
# pf.check(..., history="checks.csv")     # appends one line, once
# check.to_json("check.json")
# chart.write("chart.png")
# ```
