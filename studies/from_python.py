# %% [markdown]
# # A study from Python
# Cells of a notebook (open this file as one, or run it as a script): search the rooftop study, look at its
# front, ask which class needs the least inductor mass for 98.5 %, let a shortlist be told in words. The
# search is kept short; leave `with_effort` out for the study's own.

# %%
from pathlib import Path

from optimizer import Study, search

study = Study.read(Path(__file__).with_name("rooftop_5kw.toml")).with_effort(population=40, generations=60)
run = search(study, seed=1)

# %% The front is a pandas table, units in the names of its columns.
front = run.front[run.front.overall_front]
print(
    front[["design_id", "concept", "loss_weighted_percent", "volume_l", "price", "cost_of_ownership"]].head()
)

# %% What does 98.5 % weighted efficiency take, by concept?
efficient = run.front[run.front.efficiency_weighted >= 0.985]
inductors = efficient.mass_inverter_inductor_kg + efficient.mass_grid_inductor_kg
print(inductors.groupby(efficient.concept).min().rename("least inductor mass [kg]"))

# %% Where lost energy is dear, the front is looked at over another pair of axes.
chart = run.charts.front(across="volume", upwards="cost of ownership")
print(
    f"{len(chart.to_json()):,} characters of chart; in a notebook `chart` as the last line of a cell draws it"
)

# %% A few designs in plain words; the weights are yours.
for entry in run.shortlist({"volume": 2, "price": 1}).entries:
    print(f"{entry.role}: {entry.design_id}, {entry.headline}")
    print("   ", entry.sentences[1])
