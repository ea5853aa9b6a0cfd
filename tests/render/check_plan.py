"""What the numbers of a plan's JSON must obey, whatever they are."""
import json
import math
import sys


def near(name, what, got, want, share=1e-9):
    if not math.isclose(got, want, rel_tol=share, abs_tol=1e-9):
        print(name, what, got, "is not", want)


for name in sys.argv[1:]:
    plan = json.load(open(name))
    if "time" not in plan:
        continue
    near(name, "mass fractions", sum(e["mass_fraction"] for e in plan["mixture"]["elements"]), 1)
    near(name, "time", plan["time"]["total"], plan["time"]["scanning"] + plan["time"]["overhead"])
    for r in plan["ranges"]:
        if r["steps"] != round((r["to"] - r["from"]) / r["step"]) + 1:
            print(name, "steps", r)
        if r["mode"] == "moving":
            near(name, "time per step", r["time_per_step"], r["step"] / r["speed"])
            run = (r["travel_to"] - r["travel_from"]) / r["speed"]
            if not run < r["wall_time"] < run + 120:
                print(name, "wall time", r)
            # exposure is all channels' time: (run-in + run-out) / pitch channels cross a bin
            window = (r["travel_to"] - r["travel_from"]) - (r["to"] - r["from"])
            if r["exposure"] < r["time_per_step"] or window <= 0:
                print(name, "exposure", r)
        if r["mode"] == "step":
            near(name, "exposure", r["exposure"], r["time_per_step"])
    for phase in {r["phase"] for r in plan["reflections"]}:
        rows = [r for r in plan["reflections"] if r["phase"] == phase and r["relative"] is not None]
        if any(r["relative"] > 100 + 1e-9 for r in rows):
            print(name, "relative above 100")
        spacings = [r["d"] for r in plan["reflections"] if r["phase"] == phase]
        if any(b > a * (1 + 1e-9) for a, b in zip(spacings, spacings[1:])):
            print(name, phase, "d does not fall")
    for p in plan["peaks"]:
        if not 0 <= p["reflection"] < len(plan["reflections"]):
            print(name, "peak without reflection")
    wavelength = {line["name"]: line["wavelength"] for line in plan["radiation"]["lines"]}
    for p in plan["peaks"]:  # Bragg, from the document alone
        d = plan["reflections"][p["reflection"]]["d"]
        near(name, "Bragg", p["two_theta"],
             2 * math.degrees(math.asin(wavelength[p["line"]] / 2 / d)), 1e-9)
    for b in plan["background"]:
        if b["total"] is not None:
            near(name, "background", b["total"], b["blank"] + b["fluorescence"] +
                 b["continuum"] + b["compton"] + b["diffuse"])
