# ---
# jupyter:
#   jupytext:
#     text_representation:
#       extension: .py
#       format_name: percent
# ---

# %% [markdown]
# # Three batches before release
#
# A quality-control afternoon as a notebook. Three batches of a hull varnish were dropped through
# one tube with the same four balls. The specification asks for 950 to 1050 mPa.s at 25 °C. Which
# batch may go out?
#
# The file is plain Python: run it as it is, or open it as a notebook in an editor or in Jupyter
# with jupytext. All data are invented; paths are those of the project's folder.

# %%
import plumbfall as pf

report = pf.reduce("sample_runs/three_batches/drops.csv")  # bench.toml beside it

# %% [markdown]
# ## The verdict first
#
# A report shows itself: verdict of the data, value, bounds, and what the specification says of
# the product.

# %%
report

# %% [markdown]
# The same as numbers, one row a run set, the unit in each column's name, ready for a database:

# %%
table = report.table().set_index("set")
table[["status", "viscosity_at_reference_mPa_s", "n_drops", "n_balls", "findings"]]

# %% [markdown]
# ## Is the product within its limits?
#
# `status` judges the data, never the product. The product is judged by the probability that its
# viscosity lies within the limits: it conforms from 95 % up, does not conform from 5 % down, and
# is undecided between (JCGM 106). Batch 232 is measured inside the limits, yet by less than its
# uncertainty: nobody can tell.

# %%
for view in report:
    judged = view.result.conformity
    print(f"{view.name}: {judged.decision}, probability {judged.probability:.3f}")

# %%
report.plot("sets")

# %% [markdown]
# ## Would more drops settle batch 232?
#
# Look at what its uncertainty is made of before you drop another ball.

# %%
budget = report["batch 232"].budget()
budget[["input", "standard_uncertainty", "unit", "share", "scope"]].head(5)

# %% [markdown]
# Nearly all of it is `shared`: one error for all drops, which no number of drops averages down.
# The thermometer alone makes most of it. A better thermometer settles the batch, more drops do
# not:

# %%
by_scope = budget.groupby("scope")["share"].sum()
print(by_scope.round(3).to_string())

# %%
report["batch 232"].halving()

# %% [markdown]
# ## Is batch 232 thicker than batch 231?
#
# That question has a much surer answer than either value, since the thermometer, the tube and the
# balls were the same. The viscosities come out as correlated numbers, so plain division cancels
# what they share.

# %%
ratio = report["batch 232"].viscosity / report["batch 231"].viscosity
alone = report["batch 232"].viscosity
print(f"ratio {ratio:.2u}: relative standard uncertainty {ratio.s / ratio.n:.3%}")
print(f"batch 232 alone: {alone.s / alone.n:.3%}")

# %% [markdown]
# ## Does anything look wrong?
#
# Drops in order, the spread of single drops (dashed) and the bounds of the result (solid): the
# spread is smaller than the bounds, as most of the uncertainty is shared.

# %%
report.plot("drops", "batch 233")

# %% [markdown]
# Residuals should not follow anything. With three marks the speeds of both halves of the fall can
# be held against each other too.

# %%
report.plot("residuals", "batch 233")

# %%
report.plot("intervals", "batch 233")

# %% [markdown]
# Every row is accounted for, the void one with its reason:

# %%
drops = report["batch 233"].drops()
drops.loc[~drops["used"], ["drop", "status", "note"]]

# %% [markdown]
# ## For the file
#
# One page that needs no other file, the numbers with every digit, and two tables. Figures save
# themselves as PNG, SVG or PDF.
#
# ```python
# report.write("release_2026-03-04")
# report.plot("sets").savefig("sets.pdf")
# ```
